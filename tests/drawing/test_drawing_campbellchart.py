from dataclasses import replace
from functools import cache

import pytest

from modalview.drawing.campbellchart import chosen_items, speeds_chart
from modalview.drawing.campbellchartcontent import SpeedsContent, SpeedsMode, run_cells, speeds_content
from modalview.drawing.labels import extent
from modalview.drawing.primitives import Box, Circles, Role, Text
from modalview.places import demo_models
from modalview.store.reading import read_model
from modalview.study.campbell import campbell
from modalview.study.results import Request
from modalview.study.runup import passed_on_run_up
from modalview.study.solve import solve

FILES = (
    "1-cooling-water-pump/as-built",
    "2-supply-fan/steel-springs",
    "3-air-compressor-train/as-built",
    "4-standby-generator-set/raised-mounts",
    "5-raw-water-vertical-pump/design",
)
SIZES = ((640.0, 280.0, 1.0), (660.0, 400.0, 1.5), (1400.0, 700.0, 1.0), (900.0, 560.0, 2.0))


@cache
def shown(name: str) -> SpeedsContent:
    solution = solve(Request(read_model(demo_models() / f"{name}.keepclear")))
    return speeds_content(campbell(solution)[0], passed_on_run_up(solution))


@pytest.fixture(scope="module", autouse=True)
def _computed():
    """Solve once, outside of any test's time."""
    for name in FILES:
        shown(name)


@pytest.mark.parametrize("name", FILES)
@pytest.mark.parametrize(("width", "height", "scale"), SIZES)
def test_no_texts_overlap_and_all_lie_on_the_picture(name, width, height, scale):
    chart = speeds_chart(shown(name), width, height, text_scale=scale)
    found = [item for item in chart.drawing.items if isinstance(item, Text)]
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


def test_every_order_and_mode_is_named():
    content = shown(FILES[0])
    said = {item.text for item in speeds_chart(content, 660, 340).drawing.items if isinstance(item, Text)}
    assert {"1× unbalance", "2× misalignment", "7× vane pass"} <= said
    assert {"mode 1: 51.26 Hz", "mode 2: 141.0 Hz", "mode 3: 249.5 Hz"} <= said
    assert {"Hz", "rpm", "runs at 2 950 rpm"} <= said


def test_meetings_lie_on_their_order_and_their_mode():
    content = shown(FILES[0])
    orders = {one.label: one.hz_per_rpm for one in content.orders}
    for one in content.meetings:
        label = next(label for label in orders if one.text.startswith(label))
        assert orders[label] * one.rpm == pytest.approx(one.hz)


def test_a_meeting_is_found_where_it_is_drawn_and_nowhere_else():
    chart = speeds_chart(shown(FILES[0]), 660, 340)
    one = next(meeting for meeting in chart.content.meetings if meeting.inside)
    x, y = chart.frame.x_of(one.rpm), chart.frame.y_of(one.hz)
    assert chart.nearest(x + 3, y - 3) is one
    assert chart.nearest(x + 40, y + 25) is None
    assert len(chosen_items(chart, one)) == 2


def test_what_reaches_running_speeds_is_filled_the_rest_hollow():
    chart = speeds_chart(shown(FILES[1]), 660, 340)
    marks = [item for item in chart.drawing.items if isinstance(item, Circles)]
    filled = sum(len(one.centres) for one in marks if one.fill is Role.BAD)
    hollow = sum(len(one.centres) for one in marks if one.fill is Role.PAPER)
    inside = sum(one.inside for one in chart.content.meetings)
    assert filled == inside + 1  # and the sample of the legend
    assert hollow == len(chart.content.meetings) - inside + 1


def test_runs_cover_what_is_looked_at_and_tell_what_remains():
    content = shown(FILES[1])
    cells = [run_cells(one) for one in content.runs]
    assert cells[0] == ("600", "676", "remains: clear in this model", "")
    assert cells[1] == ("676", "1376", "meets a mode", "1× unbalance on mode 4")
    green = [
        i for i in speeds_chart(content, 660, 340).drawing.items if isinstance(i, Box) and i.fill is Role.GOOD
    ]
    assert len(green) == 2 + 1


def test_a_mode_met_within_tolerance_only_is_told_so():
    assert run_cells(shown(FILES[4]).runs[-1])[2] == "meets a mode within tolerance"


def test_modes_passed_on_run_up_are_lines_of_a_table():
    passage = shown(FILES[0]).passages[0]
    assert passage.cells[:3] == ("1× unbalance", "1 at 51.26 Hz", "3075.6")


def test_many_modes_are_thinned_not_crowded():
    content = shown(FILES[0])
    modes = tuple(SpeedsMode(n, 1.0 + n, 1.0 + n, 1.0 + n) for n in range(300))
    chart = speeds_chart(replace(content, modes=modes), 660, 340)
    named = [i for i in chart.drawing.items if isinstance(i, Text) and i.text.startswith("mode ")]
    assert 3 <= len(named) <= 24


def test_a_fixed_frequency_is_a_level_line():
    content = shown(FILES[2])
    assert [one.fixed_hz for one in content.orders if not one.hz_per_rpm] == pytest.approx([100.0])
