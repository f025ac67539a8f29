import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.drawing.curves import chained, clipped, dashed_along
from modalview.drawing.flowing import Sample, flowing
from modalview.drawing.primitives import Lines, Text
from modalview.drawing.speedaxes import SpeedFrame, axes_items, value_ticks

BOX = (10.0, 20.0, 110.0, 80.0)
PLACES = st.floats(-500, 500, allow_nan=False)


@given(st.lists(st.tuples(PLACES, PLACES, PLACES, PLACES), min_size=1, max_size=20))
@settings(deadline=None, max_examples=50)
def test_clipped_segments_lie_within_and_on_their_line(rows):
    segments = np.array(rows)
    found = clipped(segments, BOX)
    assert len(found) <= len(segments)
    assert (found[:, [0, 2]] >= BOX[0] - 1e-6).all()
    assert (found[:, [0, 2]] <= BOX[2] + 1e-6).all()
    assert (found[:, [1, 3]] >= BOX[1] - 1e-6).all()
    assert (found[:, [1, 3]] <= BOX[3] + 1e-6).all()


def test_a_segment_inside_is_kept_whole():
    segments = np.array([[20.0, 30.0, 60.0, 70.0]])
    assert clipped(segments, BOX).tolist() == segments.tolist()


def test_a_level_segment_outside_is_dropped():
    assert not len(clipped(np.array([[20.0, 90.0, 60.0, 90.0]]), BOX))


def test_infinite_values_lie_far_above():
    found = chained(np.array([0.0, 1.0, 2.0]), np.array([5.0, -np.inf, 5.0]))
    assert np.isfinite(found).all()
    assert found[0, 3] < -1e4


def test_dashes_go_on_over_short_segments():
    xs = np.linspace(0.0, 100.0, 1001)
    segments = chained(xs, 0 * xs)
    found = dashed_along(segments, (6.0, 4.0))
    drawn = (found[:, 2] - found[:, 0]).sum()
    assert drawn == pytest.approx(60.0, abs=2.0)
    assert dashed_along(segments, ()) is segments


def test_logarithmic_ticks_are_round_and_few():
    assert value_ticks(0.01, 100.0, 5, logarithmic=True) == (0.01, 0.1, 1.0, 10.0, 100.0)
    assert len(value_ticks(1e-12, 1.0, 4, logarithmic=True)) <= 5


@pytest.mark.parametrize("logarithmic", [False, True])
def test_pixels_and_values_agree(logarithmic):
    frame = SpeedFrame(50, 450, 20, 220, 0, 3000, 0.01, 10.0, logarithmic)
    assert frame.y_of(0.01) == pytest.approx(220)
    assert frame.y_of(10.0) == pytest.approx(20)
    assert frame.x_of(1500.0) == pytest.approx(250)


def test_both_axes_have_their_unit():
    frame = SpeedFrame(50, 450, 40, 220, 0, 3000, 0.0, 10.0)
    units = {item.text for item in axes_items(frame, "mm/s rms", 1.0) if isinstance(item, Text) and item.bold}
    assert units == {"rpm", "Hz", "mm/s rms"}


def test_a_legend_flows_into_rows():
    samples = [Sample(f"name {n}", (Lines(np.array([[0.0, 0.0, 20.0, 0.0]])),)) for n in range(6)]
    wide, y_wide = flowing(samples, 2000.0, 10.0, 1.0)
    narrow, y_narrow = flowing(samples, 200.0, 10.0, 1.0)
    assert y_wide == 10.0
    assert y_narrow > 30.0
    assert len(wide) == len(narrow) == 12
