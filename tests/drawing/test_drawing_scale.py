from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.drawing.axis import Axis, spread
from modalview.drawing.labels import extent
from modalview.drawing.primitives import Box, Circles, Item, Lines, Role, Text
from modalview.drawing.scale import axis_range, scale_drawing
from modalview.drawing.scalecontent import ScaleBand, ScaleContent, ScaleCount, ScaleMode, scale_content
from modalview.model.parts import Model
from modalview.resonance.results import Verdict
from modalview.study.results import Request
from modalview.study.solve import solve


def band(label: str, hz: float, margin: float = 0.15, verdict: Verdict = Verdict.CLEAR) -> ScaleBand:
    return ScaleBand(label, hz * (1 - margin), hz * (1 + margin), hz, hz, verdict)


# Demonstration model 1 as built.
PUMP = ScaleContent(
    bands=(band("1×", 49.17, verdict=Verdict.IN_BAND), band("2×", 98.3), band("7× vane pass", 344.2)),
    counts=(
        ScaleCount(0.0, 41.8, 0, in_band=False),
        ScaleCount(41.8, 56.5, 1, in_band=True),
        ScaleCount(56.5, 83.6, 0, in_band=False),
        ScaleCount(83.6, 113.1, None, in_band=True),
        ScaleCount(113.1, np.inf, 2, in_band=False),
    ),
    lowest=(47.3, 51.3),
    highest=(212.3, 249.5),
    discs=np.array([[0.0, 128.0, 186.0], [60.0, 153.0, 207.0]]),
    modes=(
        ScaleMode(1, 51.26, 44.1, 57.8, Verdict.IN_BAND),
        ScaleMode(2, 140.99, 131.7, 150.2, Verdict.CLEAR),
    ),
    rigid_body_modes=1,
)


def texts(items: tuple[Item, ...]) -> list[Text]:
    return [item for item in items if isinstance(item, Text)]


def assert_apart(items: tuple[Item, ...], size: tuple[float, float], text_scale: float = 1.0) -> None:
    boxes = [extent([text], text_scale) for text in texts(items)]
    for number, (x1, y1, x2, y2) in enumerate(boxes):
        assert min(x1, y1) >= 0
        assert x2 <= size[0] + 1
        assert y2 <= size[1]
        for a1, b1, a2, b2 in boxes[number + 1 :]:
            assert not (x1 < a2 and a1 < x2 and y1 + 1 < b2 and b1 < y2 - 1)


@settings(derandomize=True, max_examples=50)
@given(st.floats(0.01, 1e4), st.floats(1.5, 1e4), st.floats(0, 1))
def test_axis_goes_there_and_back(low: float, ratio: float, share: float):
    axis = Axis(low, low * ratio, 30.0, 700.0)
    hz = low * ratio**share
    assert axis.hz_at(axis.y_of(hz)) == pytest.approx(hz, rel=1e-9)


def test_axis_rises_and_keeps_what_is_beyond_at_its_ends():
    axis = Axis(10, 1000, 0, 200)
    assert axis.y_of(1000) < axis.y_of(10)
    assert (axis.y_of(1), axis.y_of(1e6)) == (200, 0)


@settings(derandomize=True, max_examples=50)
@given(st.floats(0.01, 1e4), st.floats(1.5, 1e6), st.floats(10, 60))
def test_ticks_stay_apart(low: float, ratio: float, apart: float):
    axis = Axis(low, low * ratio, 30.0, 700.0)
    places = [axis.y_of(hz) for hz in axis.ticks(apart)]
    assert all(one - other >= apart for one, other in pairwise(places))


@settings(derandomize=True, max_examples=50)
@given(st.lists(st.floats(0, 500), min_size=1, max_size=20))
def test_spread_keeps_order_and_distance(wanted: list[float]):
    placed = spread(sorted(wanted), 20.0, 0.0, 500.0)
    assert all(other - one >= 20.0 - 1e-6 for one, other in pairwise(placed))
    assert min(placed) >= -1e-6
    assert max(placed) <= 500.0 + 1e-6


def test_spread_leaves_alone_what_is_apart():
    assert spread([10.0, 50.0, 90.0], 20.0, 0.0, 100.0) == [10.0, 50.0, 90.0]


@pytest.mark.parametrize("size", [(320, 760), (280, 500), (420, 900)])
def test_labels_never_overlap(size: tuple[int, int]):
    assert_apart(scale_drawing(PUMP, *size).drawing.items, size)


@pytest.mark.parametrize("text_scale", [1.5, 2.0])
def test_labels_never_overlap_in_large_texts(text_scale: float):
    size = (420, 900)
    assert_apart(scale_drawing(PUMP, *size, text_scale=text_scale).drawing.items, size, text_scale)


def test_everything_known_is_on_the_axis():
    low, high = axis_range(PUMP)
    assert low < 41.8
    assert high > 344.2 * 1.15


def test_a_count_in_a_band_is_told_by_colour_weight_and_number():
    drawing = scale_drawing(PUMP, 320, 760).drawing
    rings = [item for item in drawing.items if isinstance(item, Circles) and item.stroke is not None]
    assert [ring.stroke for ring in rings] == [Role.INK, Role.BAD, Role.INK, Role.WARN, Role.INK]
    assert rings[1].width > rings[0].width
    numbers = [text for text in texts(drawing.items) if text.text in ("1", "?") and text.bold]
    assert {text.text for text in numbers} == {"1", "?"}


def test_bounds_and_modes_are_written():
    words = {text.text for text in texts(scale_drawing(PUMP, 320, 760).drawing.items)}
    assert {"lowest mode", "47.30 to 51.30", "highest mode", "212.3 to 249.5", "7× vane pass"} <= words
    assert "and 1 rigid-body mode at 0 Hz" in words


@pytest.mark.parametrize("size", [(320, 700), (300, 420), (520, 480)])
@pytest.mark.parametrize("text_scale", [1.0, 2.0])
def test_the_name_of_a_band_stands_in_it_or_on_its_line(size: tuple[int, int], text_scale: float):
    scale = scale_drawing(PUMP, *size, text_scale=text_scale)
    for one in PUMP.bands:
        label = next(
            t for t in texts(scale.drawing.items) if t.text.split()[0].rstrip("…") == one.label.split()[0]
        )
        _, top, _, bottom = extent([label], text_scale)
        assert top < scale.axis.y_of(one.low)
        assert bottom > scale.axis.y_of(one.high)


def test_bounds_are_written_with_the_digits_of_the_modes_they_enclose():
    content = ScaleContent(lowest=(47.3, 51.26), highest=(212.2, 249.45), modes=PUMP.modes)
    words = {text.text for text in texts(scale_drawing(content, 320, 760).drawing.items)}
    assert {"47.30 to 51.26", "212.2 to 249.4"} & words
    assert "212 to 249" not in words


def test_a_label_of_a_bound_stands_near_its_bar_or_falls_away():
    content = ScaleContent(
        bands=tuple(band(f"{n}×", 10.0 * 1.3**n, 0.12) for n in range(12)),
        lowest=(11, 12),
        highest=(190, 200),
    )
    scale = scale_drawing(content, 320, 500, text_scale=1.5)
    for text in texts(scale.drawing.items):
        if text.text == "lowest mode":
            assert abs(text.y - scale.axis.y_of(11)) < 240


def test_orders_far_from_the_modes_are_marked_at_the_edge():
    content = ScaleContent(
        bands=(band("1×", 10.0), band("40×", 4000.0), band("0.01×", 0.1)),
        lowest=(9.0, 9.5),
        highest=(20.0, 22.0),
    )
    scale = scale_drawing(content, 320, 760)
    assert scale.axis.high_hz < 4000
    marks = {text.text: text.y for text in texts(scale.drawing.items) if text.text.endswith(" Hz")}
    assert marks["40× 4 000 Hz"] < scale.axis.top + 30
    assert marks["0.01× 0.1 Hz"] > scale.axis.bottom - 30


def test_too_many_modes_are_numbered_in_part():
    modes = tuple(ScaleMode(n, 10 * 1.02**n, 10 * 1.02**n, 10 * 1.02**n) for n in range(1, 200))
    items = scale_drawing(
        ScaleContent(lowest=(10, 10), highest=(524, 525), modes=modes), 320, 500
    ).drawing.items
    assert_apart(items, (320, 500))
    ticks = [item for item in items if isinstance(item, Lines) and item.role is Role.ACCENT]
    assert sum(len(item.segments) for item in ticks) == 199


def test_discs_fold_away():
    shown, folded = (
        sum(
            len(item.segments)
            for item in scale_drawing(PUMP, 320, 760, discs=discs).drawing.items
            if isinstance(item, Lines)
        )
        for discs in (True, False)
    )
    assert shown == folded + len(PUMP.discs)


def test_bands_lie_at_their_frequencies():
    scale = scale_drawing(PUMP, 320, 760)
    frames = [item for item in scale.drawing.items if isinstance(item, Box) and item.stroke is Role.WARN]
    for box, one in zip(frames, PUMP.bands, strict=True):
        assert box.y == pytest.approx(scale.axis.y_of(one.high))
        assert box.y + box.height == pytest.approx(scale.axis.y_of(one.low))


def test_an_empty_content_still_has_an_axis():
    scale = scale_drawing(ScaleContent(), 320, 760)
    assert scale.axis.low_hz < scale.axis.high_hz


def test_very_stiff_bounds_do_not_crush_the_bands():
    content = ScaleContent(bands=(band("1×", 25.0),), lowest=(1e-3, 20.0), highest=(1e6, 1e7))
    low, high = axis_range(content)
    assert high / low < 5000


def test_content_of_a_studied_model_fits_the_scale(demo_model: Model):
    solution = solve(Request(demo_model))
    content = scale_content(solution.outlook, solution)
    assert len(content.bands) == len(solution.checks)
    assert len(content.modes) == sum(mode.kind == "elastic" for mode in solution.modes)
    assert_apart(scale_drawing(content, 320, 760).drawing.items, (320, 760))


def test_foretold_modes_are_dashed_pale_and_named_so(demo_model: Model):
    solution = solve(Request(demo_model))
    number, hz = next((one.number, one.frequency_hz) for one in solution.modes if one.kind == "elastic")
    content = scale_content(solution.outlook, foretold={0: 0.0, number: hz})
    assert content.modes == ()
    assert [mode.number for mode in content.foretold] == [number]  # rigid-body modes are left out
    bare = scale_drawing(scale_content(solution.outlook), 320, 760).drawing.items
    items = scale_drawing(content, 320, 760).drawing.items
    more = [one for one in items if isinstance(one, Lines) and one.role is Role.MUTED]
    less = [one for one in bare if isinstance(one, Lines) and one.role is Role.MUTED]
    assert len(more) == len(less) + 1
    assert "foretold" in [text.text for text in texts(items)]
    assert_apart(items, (320, 760))


def test_foretold_modes_are_numbered_at_their_ticks():
    found = tuple(ScaleMode(number, hz, hz, hz) for number, hz in enumerate((20.0, 45.0, 110.0), start=1))
    scale = scale_drawing(ScaleContent(bands=(band("1×", 50.0),), foretold=found), 320, 760)
    numbers = {one.text: one.y for one in texts(scale.drawing.items) if one.text in ("1", "2", "3")}
    for mode in found:
        assert numbers[str(mode.number)] == pytest.approx(scale.axis.y_of(mode.hz), abs=1.0)
