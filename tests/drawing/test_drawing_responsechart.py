import math
from dataclasses import replace

import numpy as np
import pytest
from forced import NATURAL_RPM, fan, response

from modalview.drawing.labels import extent
from modalview.drawing.primitives import Lines, Role, Text
from modalview.drawing.responsechart import (
    reading_items,
    reading_text,
    response_chart,
    stops,
)
from modalview.drawing.responsechartcontent import (
    FORCE,
    Choice,
    force_places,
    machine_of,
    response_content,
    unit_of,
    widest_margin,
)
from modalview.drawing.responsecharttable import (
    NO_STEADY,
    ResponseTable,
    amplitude_table,
    at_speed,
    support_table,
    worst_of,
)
from modalview.model.parts import Model, Motion
from modalview.model.values import Entry
from modalview.study.response_results import (
    ACCELERATION,
    DISPLACEMENT,
    PEAK_TO_PEAK,
    QUANTITIES,
    VELOCITY,
    ResponseResult,
)
from modalview.units import quantities as q

FAN = Choice("drive", "fan")
SIZES = (
    (640.0, 190.0, 1.0),
    (640.0, 260.0, 1.0),
    (660.0, 340.0, 1.5),
    (1400.0, 700.0, 1.0),
    (900.0, 560.0, 2.0),
)


def content(ratio: float = 0.02, orders: int = 2, choice: Choice = FAN, model: Model | None = None):
    found = response_content(response(model, ratio, orders), choice)
    assert found is not None
    return found


def texts(chart) -> list[Text]:
    return [item for item in chart.drawing.items if isinstance(item, Text)]


def table_of(result: ResponseResult) -> ResponseTable:
    found, shown = machine_of(result, "drive"), response_content(result, FAN)
    assert found is not None
    assert shown is not None
    return amplitude_table(found, shown)


def fixed(rpm: str = "2950 rpm") -> Model:
    return fan(Entry.typed(rpm, q.SPEED))


def test_units_tell_rms_or_peak():
    words = [
        unit_of(Model(), one, system)[1] for one in QUANTITIES for system in ("SI", "mm-t", "inch-pound")
    ]
    words += [unit_of(Model(motion=Motion.SHAFT_TRAIN), one, "SI")[1] for one in QUANTITIES]
    assert all("rms" in word or "peak" in word for word in words)


def test_units_are_those_of_their_systems():
    assert unit_of(Model(), DISPLACEMENT, "SI") == (1e6, "um peak")
    per, unit = unit_of(Model(), VELOCITY, "inch-pound")
    assert unit == "in/s rms"
    assert per * 0.0254 == pytest.approx(1.0)
    per, unit = unit_of(Model(), FORCE, "inch-pound", "N m")
    assert unit == "lbf in peak"
    assert per * 4.4482216152605 * 0.0254 == pytest.approx(1.0)


def test_peak_to_peak_is_twice_the_peak():
    one, double = (content(choice=Choice("drive", "fan", name)) for name in (DISPLACEMENT, PEAK_TO_PEAK))
    assert double.total.values == pytest.approx(2 * one.total.values)
    assert [peak.value for peak in double.peaks] == pytest.approx([2 * peak.value for peak in one.peaks])


def test_the_sum_comes_last_and_a_single_curve_is_its_own_sum():
    assert [one.label for one in content().series][-1] == "all, summed"
    alone = content(orders=1).series
    assert [(one.label, one.total) for one in alone] == [("1× unbalance", True)]


def test_nothing_where_machine_or_place_is_not_known():
    assert response_content(response(), Choice("other", "fan")) is None
    assert response_content(response(), Choice("drive", "nowhere")) is None


def test_margin_is_the_widest_and_ranges_barred_by_the_user_are_taken():
    found = content()
    assert found.margin == (0.2, 0.2)
    assert found.barred_rpm == ((1000.0, 1100.0),)
    assert widest_margin(fan().machines[0]) == (0.2, 0.2)


@pytest.mark.parametrize(("width", "height", "scale"), SIZES)
@pytest.mark.parametrize("ratio", [0.02, 0.0])
@pytest.mark.parametrize("logarithmic", [False, True])
def test_no_texts_overlap_and_all_lie_on_the_picture(width, height, scale, ratio, logarithmic):
    chart = response_chart(content(ratio, 3), width, height, text_scale=scale, logarithmic=logarithmic)
    found = texts(chart)
    boxes = [extent([one], scale) for one in found]
    for number, (x1, y1, x2, y2) in enumerate(boxes):
        assert x1 >= 0, found[number]
        assert x2 <= width + 1, found[number]
        assert y1 >= 0, found[number]
        assert y2 <= height, found[number]
        for other in range(number):
            a1, b1, a2, b2 = boxes[other]
            meets = x1 < a2 - 1 and x2 > a1 + 1 and y1 < b2 - 2 and y2 > b1 + 2
            assert not meets, (found[number].text, found[other].text)


def test_the_chart_says_unit_damping_and_place():
    said = " ".join(one.text for one in texts(response_chart(content(), 660, 300)))
    assert "Damping: 2 % of critical in every mode, given for the whole model." in said
    assert "velocity of fan, y, mm/s rms" in said
    assert "your limit: 4.5 mm/s" in said
    assert {"rpm", "Hz", "mm/s rms"} <= {one.text for one in texts(response_chart(content(), 660, 300))}


def test_a_peak_is_named_with_value_and_speed():
    found = content(orders=1)
    top = max(found.peaks, key=lambda one: one.value)
    said = [one.text for one in texts(response_chart(found, 660, 300))]
    assert f"{top.value:.1f} at 2 382 rpm" in said


def test_an_undamped_peak_is_said_never_drawn_as_a_number():
    found = content(ratio=0.0)
    peaks = tuple(replace(one, value=math.inf) for one in found.peaks)
    found = replace(found, peaks=peaks)
    chart = response_chart(found, 660, 300)
    said = [one.text for one in texts(chart)]
    assert "without bound at 2 382 rpm" in said
    assert math.isfinite(chart.frame.high)
    lines = np.vstack([item.segments for item in chart.drawing.items if isinstance(item, Lines)])
    assert np.isfinite(lines).all()
    curve = [
        item
        for item in chart.drawing.items
        if isinstance(item, Lines) and item.role is Role.ACCENT and item.width == 2.0
    ]
    assert curve[-1].segments[:, [1, 3]].min() >= chart.frame.top - 1e-6


def test_the_axis_reads_back():
    chart = response_chart(content(), 660, 300)
    for rpm in (chart.frame.low_rpm, 1234.5, chart.frame.high_rpm):
        assert chart.frame.rpm_at(chart.frame.x_of(rpm)) == pytest.approx(rpm)
    top, bottom = chart.frame.y_of(chart.frame.high), chart.frame.y_of(0.0)
    assert (top, bottom) == pytest.approx((chart.frame.top, chart.frame.bottom))


def test_reading_gives_every_curve_and_its_unit():
    found = content()
    assert reading_text(found, 1480.0).startswith("1 480 rpm (24.67 Hz): 1× unbalance ")
    assert reading_text(found, 1480.0).endswith("mm/s rms")
    assert len(reading_items(response_chart(found, 660, 300), 1480.0)) == 1 + 3


def test_stops_are_peaks_half_power_speeds_and_running_speeds():
    found = stops(content(orders=1))
    assert found == tuple(sorted(found))
    assert {600.0, 1480.0} <= {round(one, 6) for one in found}
    assert any(one == pytest.approx(NATURAL_RPM) for one in found)
    assert any(one == pytest.approx(0.98 * NATURAL_RPM) for one in found)


def test_worst_of_a_range_is_the_largest_in_it():
    found = content()
    inside = (found.speeds_rpm >= 600) & (found.speeds_rpm <= 1480.0000001)
    worst, at = worst_of(found, found.total)
    assert worst >= found.total.values[inside].max() * (1 - 1e-9)
    assert 600 <= at <= 1480


def test_between_samples_the_curve_is_read_and_infinity_only_at_its_own_speed():
    speeds, values = np.array([100.0, 200.0, 300.0]), np.array([1.0, math.inf, 3.0])
    assert at_speed(speeds, values, 200.0) == math.inf
    assert at_speed(speeds, values, 150.0) == pytest.approx(1.5)


def test_table_of_a_single_speed_tells_the_spread_of_damping():
    table = table_of(response(fixed()))
    assert table.headings == ("excitation", "at 2950 rpm, mm/s rms", "half to double damping")
    assert [row.label for row in table.rows][-1] == "all, summed"
    assert table.rows[-1].cells[1].count(" to ") == 1
    assert table.rows[0].detail == "3 kg mm, typed"


def test_table_of_a_range_tells_the_worst_and_where():
    table = table_of(response())
    assert table.headings == ("excitation", "worst of 600 to 1480 rpm, mm/s rms", "at rpm")
    assert all(len(row.cells) == 2 for row in table.rows)


def test_table_says_unbounded():
    running = fan(Entry(f"{NATURAL_RPM} rpm", NATURAL_RPM * math.pi / 30))
    table = table_of(response(running, ratio=0.0, orders=1))
    assert table.rows[0].infinite
    assert table.rows[0].cells[0] == NO_STEADY
    supports = support_table(response(running, ratio=0.0, orders=1), "drive", NATURAL_RPM, "SI")
    assert supports.rows[0].cells == (NO_STEADY,)


def test_supports_have_their_force_and_transmissibility():
    table = support_table(response(fixed()), "drive", 2950.0, "SI")
    assert table.headings == ("support, at 2950 rpm, N peak", "1× unbalance", "2× misalignment")
    assert [(row.label, row.cells) for row in table.rows] == [
        ("ground", ("420", "420")),
        ("transmissibility", ("1.40", "1.40")),
    ]


def test_forces_are_a_chart_of_their_own():
    result = response(fixed(), orders=1)
    found = machine_of(result, "drive")
    assert found is not None
    ((place, label),) = force_places(found)
    assert label == "ground, force"
    shown = response_content(result, Choice("drive", place, FORCE))
    assert shown is not None
    assert (shown.quantity, shown.unit) == ("force", "N peak")
    assert shown.peaks


def test_acceleration_keeps_its_own_peaks():
    assert content(choice=Choice("drive", "fan", ACCELERATION)).unit == "m/s2 rms"
