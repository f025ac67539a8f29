"""Uncoupled oscillators of known frequency with one machine beside them."""

import json
import math

from modalview.store import parse_model
from modalview.study import Request, look, solve


def stiffness(hz, tolerance=None):
    """Stiffness that gives 1 kg this frequency."""
    text = f"{(2 * math.pi * hz) ** 2!r} N/m"
    return {"value": text, "tolerance": tolerance} if tolerance else text


def document(modes, machine, *, mass_tolerance=None):
    """One body of 1 kg for each (frequency in Hz, stiffness tolerance or None)."""
    mass = {"value": "1 kg", "tolerance": mass_tolerance} if mass_tolerance else "1 kg"
    return {
        "format": "keepclear",
        "version": 1,
        "title": "oscillators",
        "motion": "single axis",
        "bodies": [{"id": f"b{i}", "mass": mass} for i in range(len(modes))],
        "supports": [{"id": "ground"}],
        "links": [
            {
                "id": f"k{i}",
                "kind": "spring",
                "from": {"body": f"b{i}"},
                "to": {"support": "ground"},
                "stiffness": stiffness(*mode),
            }
            for i, mode in enumerate(modes)
        ],
        "machines": [machine],
    }


def machine(speed="1500 rpm", margin="20 %", excitations=None, **more):
    return {
        "id": "fan",
        "speed": speed,
        "margin": margin,
        "excitations": excitations or [{"id": "1x", "order": 1}],
        **more,
    }


def model_of(given):
    return parse_model(json.dumps(given))


def looked(given):
    return look(Request(model_of(given)))


def solved(given):
    return solve(Request(model_of(given)))


def nearly_parallel(machine_speed):
    """1 kg on two springs at an angle of 5e-8 to each other: 8e14 N/m along them, 1 N/m across (1 rad/s)."""
    far = {"s": ["1 m", "1 m"], "r": ["1 m", "1.0000001 m"]}
    return {
        "format": "keepclear",
        "version": 1,
        "title": "nearly parallel",
        "motion": "plane",
        "bodies": [{"id": "b", "mass": "1 kg", "dof": ["x", "y"], "position": ["0 m", "0 m"]}],
        "supports": [{"id": name, "position": place} for name, place in far.items()],
        "links": [
            {
                "id": f"k{name}",
                "kind": "spring",
                "from": {"body": "b"},
                "to": {"support": name},
                "stiffness": "8e14 N/m",
            }
            for name in far
        ],
        "machines": [machine(machine_speed, "10 %")],
    }
