"""The axis of one value: windows, today's value, its tolerance, and what is read of it."""

from dataclasses import replace

import pytest

from modalview.drawing.changescontent import Clear, ValueAxis
from modalview.drawing.primitives import Box, Role, Text
from modalview.drawing.windowschart import axis_ends, reading_line, windows_chart

AXIS = ValueAxis(
    value="k3.stiffness",
    label="stiffness of base support",
    now=1.75e8,
    now_text="175 kN/mm",
    tolerance=(1.3125e8, 2.1875e8),
    per=1e6,
    unit="kN/mm",
    windows=(
        Clear(0.0, 8.6e7, "", "86 kN/mm", ("", "pump set/1x, stiff-light")),
        Clear(3.07e8, 4.35e8, "307 kN/mm", "435 kN/mm", ("pump set/1x, soft-heavy", "pump set/2x")),
    ),
    limits=(0.0, float("inf")),
    clear_now=False,
    ceilings=(),
)


def bars(chart, role):
    return [
        one for one in chart.drawing.items if isinstance(one, Box) and one.fill is role and one.height > 12
    ]


def texts(chart):
    return [one.text for one in chart.drawing.items if isinstance(one, Text)]


@pytest.mark.parametrize("scale", [1.0, 2.0])
def test_windows_stand_where_their_values_are(scale):
    chart = windows_chart(AXIS, 700.0, 160.0 * scale, text_scale=scale)
    low, middle = bars(chart, Role.GOOD)
    assert low.x == pytest.approx(chart.pixels[0])
    assert low.x + low.width == pytest.approx(chart.x_of(8.6e7))
    assert middle.x == pytest.approx(chart.x_of(3.07e8))
    assert {"not clear at 175 kN/mm", "kN/mm"} <= set(texts(chart))


def test_ends_of_windows_are_written_where_there_is_room():
    assert {"86", "307", "435"} <= set(texts(windows_chart(AXIS, 500.0, 160.0)))


def test_nothing_is_written_beyond_the_edges():
    for width in (300.0, 420.0, 900.0):
        chart = windows_chart(AXIS, width, 170.0)
        assert all(0 <= one.x <= width for one in chart.drawing.items if isinstance(one, Text))


def test_axis_holds_what_matters_and_no_far_end():
    far = replace(AXIS, windows=(Clear(9e12, float("inf"), "9e6 kN/mm", "", ("", "")),))
    low, high = axis_ends(far)
    assert low < AXIS.tolerance[0]
    assert AXIS.tolerance[1] < high < 1e9


def test_without_a_window_there_is_no_sample_of_one():
    chart = windows_chart(replace(AXIS, windows=()), 700.0, 160.0)
    assert bars(chart, Role.GOOD) == []
    assert "every check clear" not in texts(chart)


def test_limits_of_the_user_end_what_was_asked():
    chart = windows_chart(replace(AXIS, limits=(5e7, 5e9)), 700.0, 160.0)
    assert "your limits" in texts(chart)
    (asked,) = bars(chart, Role.BAD)
    assert (asked.x, asked.x + asked.width) == pytest.approx((chart.x_of(5e7), chart.x_of(5e9)))


def test_values_are_read_off():
    chart = windows_chart(AXIS, 700.0, 160.0)
    assert chart.value_at(chart.x_of(3e8)) == pytest.approx(3e8)
    assert AXIS.is_clear(4e8)
    assert not AXIS.is_clear(AXIS.now)
    assert AXIS.text_of(4e8) == "400 kN/mm"
    assert replace(AXIS, unit="", per=1.0).text_of(1.5) == "× 1.5"
    (line,) = reading_line(chart, 3e8)
    assert line.segments[0][0] == pytest.approx(chart.x_of(3e8))


def test_windows_without_proof_say_so():
    chart = windows_chart(replace(AXIS, proven=False), 700.0, 160.0)
    assert "every check clear (not proven)" in texts(chart)
