"""Models with measured peaks for the tests of pairing and tuning: springs and masses along one axis."""

import json
import math

from modalview.store import parse_model

HZ = 2 * math.pi


def spring(name, start, end, stiffness, tolerance="60 %"):
    ends = [{"support": "g"} if one == "g" else {"body": one} for one in (start, end)]
    value = {"value": f"{stiffness!r} N/m", **({"tolerance": tolerance} if tolerance else {})}
    return {"id": name, "kind": "spring", "from": ends[0], "to": ends[1], "stiffness": value}


def peak(name, hertz, at=None, uncertainty="0.1 Hz", shape=()):
    found = {"id": name, "frequency": f"{hertz!r} Hz"}
    if uncertainty:
        found["uncertainty"] = uncertainty
    if at:
        found |= {"at": {"body": at}, "direction": "y"}
    if shape:
        found["shape"] = [{"at": {"body": one}, "direction": "y", "amplitude": size} for one, size in shape]
    return found


def line(masses, springs, peaks, mass_tolerance=None):
    """Return a single-axis model of masses by name, springs and peaks."""
    bodies = [
        {
            "id": name,
            "mass": {"value": f"{mass!r} kg", **({"tolerance": mass_tolerance} if mass_tolerance else {})},
        }
        for name, mass in masses.items()
    ]
    tree = {"format": "keepclear", "version": 1, "motion": "single axis", "bodies": bodies}
    return parse_model(
        json.dumps({**tree, "supports": [{"id": "g"}], "links": list(springs), "measured": list(peaks)})
    )


def oscillators(hertz, peaks, tolerance="60 %"):
    """Return 1 kg on a spring of its own for each frequency, named a, b, ...; springs ka, kb, ..."""
    names = "abcdefgh"[: len(hertz)]
    springs = [spring(f"k{n}", n, "g", (HZ * f) ** 2, tolerance) for n, f in zip(names, hertz, strict=True)]
    return line(dict.fromkeys(names, 1.0), springs, peaks)


def two_in_line(k1, k2, peaks, tolerance="60 %"):
    """Return two masses of 1 kg: ground - k1 - a - k2 - b."""
    springs = [spring("k1", "g", "a", k1, tolerance), spring("k2", "a", "b", k2, tolerance)]
    return line({"a": 1.0, "b": 1.0}, springs, peaks)


def two_in_line_hz(k1, k2):
    """Closed form: the roots of x^2 - (k1 + 2 k2) x + k1 k2 = 0 for masses of 1 kg."""
    half = (k1 + 2 * k2) / 2
    root = math.sqrt(half**2 - k1 * k2)
    return math.sqrt(half - root) / HZ, math.sqrt(half + root) / HZ
