from dataclasses import replace
from functools import cache

import pytest

from modalview.drawing.labels import extent
from modalview.drawing.mountschart import mounts_chart
from modalview.drawing.mountschartcontent import MountsContent, mounts_content
from modalview.drawing.primitives import Box, Lines, Role, Text
from modalview.model.parts import Motion
from modalview.places import demo_models
from modalview.store.reading import read_model
from modalview.study.isolators import mounts_at_rest
from modalview.study.results import Request

FILES = (
    "1-cooling-water-pump/as-built",
    "2-supply-fan/steel-springs",
    "4-standby-generator-set/raised-mounts",
    "6-vacuum-pump-absorber/no-absorber",
)
SIZES = ((640.0, 280.0, 1.0), (660.0, 400.0, 1.5), (1400.0, 700.0, 1.0), (900.0, 560.0, 2.0))


@cache
def shown(name: str, system: str = "SI") -> MountsContent:
    return mounts_content(mounts_at_rest(Request(read_model(demo_models() / f"{name}.keepclear"))), system)


@pytest.fixture(scope="module", autouse=True)
def _computed():
    """Compute once, outside of any test's time."""
    for name in FILES:
        shown(name)


def words(content: MountsContent, width: float = 660, height: float = 340) -> list[str]:
    return [item.text for item in mounts_chart(content, width, height).items if isinstance(item, Text)]


@pytest.mark.parametrize("name", FILES)
@pytest.mark.parametrize(("width", "height", "scale"), SIZES)
def test_no_texts_overlap_and_all_lie_on_the_picture(name, width, height, scale):
    drawing = mounts_chart(shown(name), width, height, text_scale=scale)
    found = [item for item in drawing.items if isinstance(item, Text)]
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


def test_every_mount_tells_load_deflection_and_share():
    content = shown(FILES[2])
    assert content.rows[0] == ("rear right mount", "5.94 kN", "6.6 mm", "9 kN", "66.0 %")
    said = words(content)
    assert {"rear right mount", "5.94 kN, 66.0 % of rated", "6.6 mm", "engine and alternator"} <= set(said)


def test_rounding_is_no_offset():
    assert "y 0;" in shown(FILES[2]).centres[0].text


def test_units_follow_the_system():
    assert shown(FILES[2], "inch-pound").rows[0][1].endswith("lbf")


def test_overload_and_pull_are_marked_in_the_picture_and_the_legend():
    content = shown(FILES[2])
    first, second, *rest = content.mounts
    bad = replace(first, overloaded=True, share=1.2), replace(second, lifted=True, load=-200.0)
    drawing = mounts_chart(replace(content, mounts=(*bad, *rest)), 660, 340)
    said = [item.text for item in drawing.items if isinstance(item, Text)]
    assert {"over its rated load", "pulled upward"} <= set(said)
    assert sum(isinstance(i, Box) and i.stroke is Role.BAD for i in drawing.items) == 2 + 2


def test_a_plane_model_is_seen_from_the_side():
    content = shown(FILES[1])
    assert content.motion is Motion.PLANE
    centre = content.centres[0]
    assert centre.centre[1] > centre.centroid[1]


def test_loads_of_a_single_axis_are_bars_with_their_figures():
    assert "14.9 kN, 85.2 um" in words(shown(FILES[0]))


def test_bars_with_rated_loads_end_at_one_line():
    content = shown(FILES[0])
    rated = replace(content, mounts=tuple(replace(one, share=0.5) for one in content.mounts))
    items = mounts_chart(rated, 660, 340).items
    assert any(isinstance(i, Lines) and i.role is Role.INK and i.width == 2.0 for i in items[4:])
    bars = [item for item in items if isinstance(item, Box)]
    assert len({round(one.width, 6) for one in bars[1:]}) == 1
