"""The complex-plane view: regions and roots at their places, labels that keep apart."""

import sys
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.drawing.axislinear import round_ticks, tick_text
from modalview.drawing.complexplane import plane_drawing
from modalview.drawing.complexplanecontent import (
    ROW_TITLES,
    SEPARATED,
    LambdaContent,
    PlaneContent,
    plane_content,
)
from modalview.drawing.labels import extent
from modalview.drawing.legend import Entry, Mark, legend_items, legend_size
from modalview.drawing.primitives import Box, Circles, Drawing, Lines, Polygons, Role, Text
from modalview.model.parts import Model
from modalview.store import parse_model
from modalview.study import Request, solve
from modalview.study.damped import damped
from modalview.study.look import look

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made

SIZES = [(1200, 800), (420, 520), (900, 400)]


def content_of(text):
    model = parse_model(text)
    solution = solve(Request(model))
    return plane_content(solution.outlook, solution, damped(Request(model), solution))


def chain(size):
    links = [made.spring(f"k{i}", f"b{i}", f"b{i - 1}" if i else "g", 1000.0 + 50 * i) for i in range(size)]
    links += [made.dashpot(f"c{i}", f"b{i}", f"b{i - 1}" if i else "g", 1 + 0.3 * i) for i in range(size)]
    return made.line([made.mass(f"b{i}", 1 + 0.1 * i) for i in range(size)], links)


OVERDAMPED = made.line(
    [made.mass("a", 1.0), made.mass("b", 1.0)],
    [
        made.spring("k1", "a", "g", 100.0),
        made.spring("k2", "b", "g", 200.0),
        made.dashpot("x", "a", "g", 200.0),
        made.dashpot("y", "a", "b", 50.0),
    ],
)
FREE = made.line(
    [made.mass("a", 2.0), made.mass("b", 3.0), made.mass("j", 0.0), made.mass("c", 1.0)],
    [
        made.spring("k", "a", "b", 500.0),
        made.spring("k2", "b", "j", 300.0),
        made.dashpot("d", "j", "c", 40.0),
        made.dashpot("d2", "a", "b", 2.0),
    ],
)
APART = made.line(
    [made.mass("a", 1.0), made.mass("b", 1.0), made.mass("c", 1.0)],
    [
        made.spring("k1", "a", "g", 100.0),
        made.spring("k2", "b", "g", 2000.0),
        made.spring("k3", "c", "g", 3000.0),
        made.spring("ab", "a", "b", 30.0),
        made.spring("bc", "b", "c", 200.0),
    ],
)
NO_SCALE = made.line([made.mass("a", 1.0)], [made.dashpot("c", "a", "g", 3.0)])


def texts(drawing: Drawing) -> list[Text]:
    return [item for item in drawing.items if isinstance(item, Text)]


def assert_apart(drawing: Drawing, size) -> None:
    boxes = [extent([text], drawing.text_scale) for text in texts(drawing)]
    for number, (x1, y1, x2, y2) in enumerate(boxes):
        assert min(x1, y1) >= -1
        assert x2 <= size[0] + 1
        assert y2 <= size[1] + 1
        for a1, b1, a2, b2 in boxes[number + 1 :]:
            assert not (x1 < a2 - 1 and a1 < x2 - 1 and y1 + 1 < b2 and b1 < y2 - 1)


@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize("text", [chain(4), chain(25), OVERDAMPED, FREE, APART, NO_SCALE])
def test_labels_never_overlap(text, size):
    assert_apart(plane_drawing(content_of(text), *size), size)


@pytest.mark.parametrize("text", [chain(4), OVERDAMPED, FREE, APART])
def test_labels_never_overlap_in_large_texts(text):
    size = (1000, 800)
    assert_apart(plane_drawing(content_of(text), *size, text_scale=2.0), size)


def test_roots_lie_in_the_rectangle_of_the_picture():
    content = content_of(chain(6))
    drawing = plane_drawing(content, 1200, 800)
    (box,) = (
        item for item in drawing.items if isinstance(item, Box) and item.fill is Role.GOOD and item.width > 30
    )
    crosses = next(item for item in drawing.items if isinstance(item, Lines) and item.role is Role.BAD)
    middles = (crosses.segments[:6, :2] + crosses.segments[:6, 2:]) / 2
    assert np.all(middles[:, 0] >= box.x)
    assert np.all(middles[:, 0] <= box.x + box.width + 1e-9)
    assert np.all(middles[:, 1] >= box.y)
    assert np.all(middles[:, 1] <= box.y + box.height)


def test_both_axes_have_one_scale():
    """A circle about the origin is one on the sheet: as wide as it is high."""
    content = content_of(OVERDAMPED)
    drawing = plane_drawing(content, 1200, 800)
    union = next(item for item in drawing.items if isinstance(item, Polygons)).points[0]
    wide, high = np.ptp(union, axis=0)
    scaled = content.regions.scaled
    reach = np.ptp([(scaled.centres - scaled.radii).min(), (scaled.centres + scaled.radii).max()])
    assert wide / high == pytest.approx(reach / scaled.radii.max(), rel=1e-3)


def test_figures_of_every_root_and_region_are_told():
    words = {text.text for text in texts(plane_drawing(content_of(FREE), 1200, 800))}
    assert {
        "Bendixson's rectangle",
        "discs by rows",
        "discs by columns",
        "discs, scaled",
        "norm circle",
    } <= words
    assert "2 pairs of roots found" in words
    assert "3 roots at 0: free motion" in words
    assert {"rad/s", "Hz", "real part of the root, 1/s (left: decays)"} <= words
    assert any(word.endswith(" %") and "Hz, " in word for word in words)


def test_decays_are_told_as_such():
    words = [text.text for text in texts(plane_drawing(content_of(OVERDAMPED), 1200, 800))]
    assert sum("decays" in word and "1/s" in word for word in words) == 4 + 1
    assert "4 real roots found" in words


def test_an_undamped_root_is_told():
    links = [made.spring("k", "a", "g", 100.0), made.spring("l", "b", "g", 50.0)]
    links += [made.dashpot("c", "a", "g", 1.0)]
    content = content_of(made.line([made.mass("a", 1.0), made.mass("b", 1.0)], links))
    assert isinstance(content, PlaneContent)
    assert [root.text.endswith("undamped") for root in content.roots] == [True, False]


def test_regions_are_drawn_before_a_solve():
    content = plane_content(look(Request(parse_model(chain(3)))))
    assert isinstance(content, PlaneContent)
    assert content.roots == ()
    drawing = plane_drawing(content, 800, 600)
    assert not any(isinstance(item, Lines) and item.role is Role.BAD for item in drawing.items)


def test_groups_tell_the_counts_they_prove():
    content = content_of(APART)
    assert isinstance(content, LambdaContent)
    assert [row.title for row in content.rows] == [*ROW_TITLES.values(), SEPARATED]
    words = [text.text for text in texts(plane_drawing(content, 1000, 700))]
    assert sum(word.startswith("1 mode, ") for word in words) == 12
    assert sum("3 groups apart" in word for word in words) == 4


def test_eigenvalues_lie_at_their_places_on_the_lambda_axis():
    content = content_of(APART)
    drawing = plane_drawing(content, 1000, 700)
    dots = next(item for item in drawing.items if isinstance(item, Circles)).centres[:, 0]
    ticks = next(
        item for item in drawing.items if isinstance(item, Lines) and item.role is Role.BAD
    ).segments[:, 0]
    slope = np.diff(dots)[[0]] / np.diff(content.rows[0].centres)[[0]]
    expected = dots[0] + slope * (content.eigenvalues - content.rows[0].centres[0])
    assert ticks == pytest.approx(expected, abs=1e-6)


def test_without_discs_it_says_so():
    drawing = plane_drawing(LambdaContent(()), 600, 400)
    assert [text.text for text in texts(drawing)] == [
        "No discs: the mass matrix couples its coordinates. Counts give the bounds."
    ]


def test_every_demonstration_model_has_a_view(demo_model: Model):
    solution = solve(Request(demo_model))
    content = plane_content(solution.outlook, solution)
    assert_apart(plane_drawing(content, 1000, 700), (1000, 700))


@settings(derandomize=True, max_examples=40)
@given(st.floats(-1e6, 1e6), st.floats(1e-3, 1e6), st.integers(2, 40))
def test_round_ticks_are_inside_and_apart(low, span, pieces):
    ticks = round_ticks(low, low + span, span / pieces)
    assert all(low - 1e-5 * span <= tick <= low + span * (1 + 1e-5) for tick in ticks)
    assert all(b - a >= span / pieces * (1 - 1e-3) for a, b in pairwise(ticks))
    assert round_ticks(1.0, 1.0, 0.1) == ()


def test_ticks_have_a_true_minus_sign():
    assert [tick_text(value) for value in (-2.5, 0.0, 120000.0, 2e-5)] == [
        "−2.5",
        "0",
        "120 000",
        "2·10⁻⁵",
    ]


def test_a_legend_stays_in_its_room():
    entries = tuple(
        Entry(mark, Role.INK, (str(mark), "more")[: 1 + number % 2]) for number, mark in enumerate(Mark)
    )
    for columns in (1, 2, 5):
        wide, high = legend_size(entries, columns, 1.0)
        items = [item for item in legend_items(entries, 0.0, 0.0, columns, 1.0) if isinstance(item, Text)]
        assert len(items) == sum(len(entry.lines) for entry in entries)
        x1, y1, x2, y2 = extent(items, 1.0)
        assert min(x1, y1) >= 0
        assert x2 <= wide
        assert y2 <= high + 1
