"""Grids: closed forms of two oscillators, curves that keep to their modes, verdicts of each model alone."""

import json
import math
from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace

import numpy as np
import pytest
from measured_models import HZ, line, oscillators, spring

from modalview.assembly.chosen import chosen, values_of, with_numbers
from modalview.errors import CancelledError, InputError
from modalview.places import demo_models
from modalview.resonance.results import Verdict
from modalview.store import dump_model, parse_model, read_model
from modalview.study import Request, look
from modalview.study.vary import aligned, vary
from modalview.study.vary_results import RATIO, GridRequest

PUMP = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
SET = read_model(demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear")


def coupled(kc):
    """Return two masses of 1 kg on 1000 N/m each, joined by kc."""
    springs = [spring("k1", "a", "g", 1000.0), spring("k2", "b", "g", 1000.0), spring("kc", "a", "b", kc)]
    return line({"a": 1.0, "b": 1.0}, springs, [])


def exact(k1, kc):
    """Closed form: eigenvalues of [[k1 + kc, -kc], [-kc, 1000 + kc]], Hz."""
    middle, half = (k1 + 1000) / 2 + kc, (k1 - 1000) / 2
    root = np.sqrt(half**2 + kc**2)
    return np.sqrt(np.array([middle - root, middle + root]).T) / HZ


@pytest.mark.parametrize("kc", [20.0, 2.0])
def test_coupled_curves_veer_and_never_swap(kc):
    grid = vary(GridRequest(coupled(kc), ("k1=500 to 1500 N/m",), points=21))
    assert grid.frequencies_hz == pytest.approx(exact(grid.axes[0][1], kc), rel=1e-12)
    (meet,) = grid.meets
    assert (meet.lines, meet.crossing, meet.value) == ((1, 2), False, 1000.0)
    gap = (math.sqrt(1000 + 2 * kc) - math.sqrt(1000)) / HZ
    assert meet.gap_hz == pytest.approx(gap, rel=1e-9)


def test_curves_that_do_not_touch_cross():
    grid = vary(GridRequest(oscillators([10.0, 12.0], []), ("ka=3000 to 7000 N/m",), points=14))
    first, second = grid.frequencies_hz.T
    assert first == pytest.approx(np.sqrt(grid.axes[0][1]) / HZ)
    assert second == pytest.approx(np.full(14, 12.0))
    (meet,) = grid.meets
    assert meet.crossing
    assert meet.frequency_hz == pytest.approx(12.0, rel=1e-3)
    assert meet.value == pytest.approx((HZ * 12) ** 2, rel=2e-3)


def test_curves_cross_at_a_point_of_the_grid():
    """At the very point both are one frequency, with any shapes."""
    k = (HZ * 10.0) ** 2
    model = oscillators([9.0, 10.0], [])
    grid = vary(GridRequest(model, (f"ka={0.8 * k!r} to {1.2 * k!r} N/m",), points=5))
    assert grid.frequencies_hz[:, 0] == pytest.approx(np.sqrt(grid.axes[0][1]) / HZ)
    assert [meet.crossing for meet in grid.meets] == [True]


def test_vectors_of_one_frequency_are_turned_back():
    turn = np.array([[0.6, -0.8, 0], [0.8, 0.6, 0], [0, 0, 1.0]])
    before = np.eye(3)
    assert aligned(np.array([4.0, 4.0, 9.0]), before, before @ turn) == pytest.approx(before)
    assert aligned(np.array([4.0, 5.0, 9.0]), before, turn) is turn


def test_verdicts_are_those_of_each_model_alone():
    grid = vary(GridRequest(PUMP, ("k3=50 to 500 kN/mm",), points=10))
    known = chosen(values_of(PUMP, look(Request(PUMP)).assembly.parameters), "k3")
    for value, verdicts, worst in zip(grid.axes[0][1], grid.verdicts, grid.worst, strict=True):
        alone = look(Request(with_numbers(PUMP, [(known, float(value))])))
        assert verdicts == tuple(check.verdict for check in alone.checks)
        assert worst == alone.verdict
    assert grid.clear == ((5e7, 5e7), (3.5e8, 4e8))
    assert {Verdict(one) for one in grid.worst} == set(Verdict)


def test_without_a_range_the_tolerance_is_taken():
    grid = vary(GridRequest(PUMP, ("k3",), points=3))
    assert grid.axes[0][1] == pytest.approx([0.75 * 1.75e8, 1.75e8, 1.25 * 1.75e8])
    assert [round(f, 2) for f in grid.frequencies_hz[1]] == [51.26, 140.99, 249.45]


def test_equal_ratios():
    grid = vary(GridRequest(PUMP, ("k3=50 to 5000 kN/mm",), points=3, spacing=RATIO))
    assert grid.axes[0][1] == pytest.approx([5e7, 5e8, 5e9])


def test_two_values_by_threads_are_the_same():
    values = ("ka=3000 to 7000 N/m", "kb=3000 to 7000 N/m")
    model = oscillators([10.0, 12.0], [])
    alone = vary(GridRequest(model, values, points=4))
    with ThreadPoolExecutor(2) as executor:
        beside = vary(GridRequest(model, values, points=4, executor=executor))
    assert np.array_equal(alone.frequencies_hz, beside.frequencies_hz)
    side = np.sqrt(alone.axes[0][1]) / HZ
    # In the first corner both are one frequency; which line is which is chosen there.
    assert np.sort(alone.frequencies_hz, axis=2) == pytest.approx(
        np.sort(np.stack(np.meshgrid(side, side, indexing="ij"), axis=-1), axis=2)
    )


def test_lines_of_two_values_keep_to_their_modes():
    model = oscillators([10.0, 12.0], [])
    grid = vary(GridRequest(model, ("ka=3000 to 9000 N/m", "kb=4000 to 8000 N/m"), points=5))
    first, second = (np.sqrt(numbers) / HZ for _, numbers in grid.axes)
    assert grid.frequencies_hz[:, :, 0] == pytest.approx(np.tile(first[:, None], (1, 5)))
    assert grid.frequencies_hz[:, :, 1] == pytest.approx(np.tile(second, (5, 1)))


def test_height_of_a_mount():
    """A coordinate is varied as it is edited: the model with the other number has these frequencies."""
    grid = vary(GridRequest(SET, ("m1.from.offset.z=-0.6 to -0.1 m",), points=3))
    tree = json.loads(dump_model(SET))
    mount = next(one for one in tree["links"] if one["id"] == "m1")
    mount["from"]["offset"][2] = "-0.6 m"
    alone = vary(GridRequest(parse_model(json.dumps(tree)), ("m2.stiffness.z",), points=3))
    assert grid.frequencies_hz[0] == pytest.approx(alone.frequencies_hz[1], rel=1e-12)
    assert any("tolerances do not cover coordinates" in note for note in grid.notes)


def test_tolerance_as_limits_is_told():
    tree = json.loads(dump_model(PUMP))
    k3 = next(one for one in tree["links"] if one["id"] == "k3")
    k3["stiffness"]["tolerance"] = {"from": "150 kN/mm", "to": "200 kN/mm"}
    grid = vary(GridRequest(parse_model(json.dumps(tree)), ("k3=50 to 500 kN/mm",), points=2))
    assert any("its tolerance as limits does not go along" in note for note in grid.notes)


@pytest.mark.parametrize(
    ("request_", "told"),
    [
        (GridRequest(PUMP, ()), "One or two values"),
        (GridRequest(PUMP, ("k1", "k2", "k3")), "One or two values"),
        (GridRequest(PUMP, ("k3", "k3")), "chosen twice"),
        (GridRequest(PUMP, ("k3",), points=1), "2 to 2001 points"),
        (GridRequest(PUMP, ("k3",), spacing="odd"), 'spacing is "even" or "ratio"'),
        (GridRequest(SET, ("m1.from.offset.z",)), "has no tolerance: give its range"),
        (GridRequest(SET, ("m1.from.offset.z=-1 to 1 m",), spacing=RATIO), "equal ratios starts above zero"),
    ],
)
def test_requests_that_cannot_be(request_, told):
    with pytest.raises(InputError, match=told):
        vary(request_)


def test_cancel_stops_it():
    request = GridRequest(PUMP, ("k3", "k1"), points=3)
    asked = iter([False, False, True])
    with pytest.raises(CancelledError):
        vary(replace(request, cancelled=lambda: next(asked)))
