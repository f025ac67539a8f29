"""Peaks are paired by frequency, by direction and by shape; what is ambiguous is told."""

import json

import numpy as np
import pytest

from modalview.advice.measured import paired, peaks_of, shape_likeness
from modalview.assembly.assemble import assemble
from modalview.eigen.solve import find_modes
from modalview.store import parse_model


def table(peaks, right=4000.0):
    """Return a 2 kg table with J = 0.5 kg m2 on two upright springs at x = -0.5 and 0.5 m, and one across.

    Alike springs give bounce (10.1 Hz), rocking (10.1 Hz) and sway; unlike ones couple bounce and rocking.
    """
    body = {"id": "t", "mass": "2 kg", "inertia": "0.3 kg m2", "position": ["0 m", "1 m"]}
    feet = [("l", "-0.5 m", 4000.0, "y"), ("r", "0.5 m", right, "y"), ("s", "0 m", 1e4, "x")]
    links = [
        {
            "id": f"k{name}",
            "kind": "spring",
            "from": {"body": "t", "offset": [x, "0 m"]},
            "to": {"support": "g"},
            "direction": direction,
            "stiffness": f"{k!r} N/m",
        }
        for name, x, k, direction in feet
    ]
    tree = {"format": "keepclear", "version": 1, "motion": "plane", "bodies": [body], "links": links}
    tree |= {"supports": [{"id": "g", "position": ["0 m", "0 m"]}], "measured": peaks}
    return assemble(parse_model(json.dumps(tree)))


def at(x, direction):
    return {"at": {"body": "t", "offset": [x, "0 m"]}, "direction": direction}


def pairs(assembly, **wanted):
    return paired(assembly, find_modes(assembly.pencil()), peaks_of(assembly), wanted)


HZ = [np.sqrt(k / m) / (2 * np.pi) for k, m in ((1e4, 2), (8000, 2), (2000, 0.3))]
SWAY, BOUNCE, ROCKING = HZ


def test_direction_decides_between_modes():
    """Sway lies nearer to the peak, but does not move upward."""
    peaks = [{"id": "up", "frequency": f"{SWAY} Hz", **at("0 m", "y")}]
    (pair,) = pairs(table(peaks))
    order = sorted(HZ)
    assert pair.taken.mode == order.index(BOUNCE) + 1
    assert order.index(SWAY) + 1 in pair.ruled_out
    assert order.index(ROCKING) + 1 in pair.ruled_out


def test_point_on_a_node_rules_the_mode_out():
    peaks = [{"id": "end", "frequency": f"{ROCKING} Hz", **at("0.5 m", "y")}]
    (pair,) = pairs(table(peaks))
    assert pair.taken.mode == sorted(HZ).index(ROCKING) + 1


def test_shape_decides_where_frequency_would_mislead():
    """The peak lies on bounce, but both ends moved against each other: it is rocking."""
    shape = [{**at(x, "y"), "amplitude": size} for x, size in (("-0.5 m", -1.0), ("0.5 m", 0.9))]
    peaks = [{"id": "p", "frequency": f"{BOUNCE} Hz", **at("0.5 m", "y"), "shape": shape}]
    (pair,) = pairs(table(peaks))
    assert pair.taken.mode == sorted(HZ).index(ROCKING) + 1
    assert pair.taken.likeness == pytest.approx(1.9**2 / (2 * (1 + 0.81)), rel=1e-12)
    assert sorted(HZ).index(BOUNCE) + 1 in pair.ruled_out
    assert pair.others == ()


def test_mac_of_a_shape_with_itself_is_one():
    shape = [{**at(x, "y"), "amplitude": 1.0} for x in ("-0.5 m", "0.5 m")]
    assembly = table([{"id": "p", "frequency": "10 Hz", "shape": shape}])
    (peak,) = peaks_of(assembly)
    found = shape_likeness(peak, np.array([[0.0, 0.0], [0.7, 0.0], [0.0, 0.3]]))
    assert found.tolist() == pytest.approx([1.0, 0.0])


def test_shape_of_one_point_says_nothing():
    shape = [{**at("0.5 m", "y"), "amplitude": 1.0}]
    (peak,) = peaks_of(table([{"id": "p", "frequency": "10 Hz", "shape": shape}]))
    assert shape_likeness(peak, np.eye(3)) is None


def test_two_peaks_share_two_modes_and_a_third_stays_alone():
    peaks = [
        {"id": name, "frequency": f"{hertz} Hz", **at("0 m", "x" if name == "c" else "y")}
        for name, hertz in (("a", BOUNCE), ("b", 1.02 * BOUNCE), ("c", SWAY))
    ]
    first, second, third = pairs(table(peaks))
    assert first.taken.mode == sorted(HZ).index(BOUNCE) + 1
    assert second.taken is None
    assert second.reason == "every mode that fits is taken by another peak"
    assert third.taken.mode == sorted(HZ).index(SWAY) + 1


def test_modes_that_lie_close_are_told_as_ambiguous():
    """Unlike springs mix bounce and rocking: both move at the end, either side of the peak."""
    assembly = table([{"id": "p", "frequency": "12.1 Hz", **at("0.5 m", "y")}], right=5000.0)
    (pair,) = pairs(assembly)
    assert len(pair.others) == 1


def test_peak_on_ground_is_paired_by_frequency_alone():
    peaks = [{"id": "p", "frequency": f"{SWAY} Hz", "at": {"support": "g"}, "direction": "y"}]
    assembly = table(peaks)
    assert peaks_of(assembly)[0].point is None
    assert pairs(assembly)[0].taken.mode == sorted(HZ).index(SWAY) + 1
