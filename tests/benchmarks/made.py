"""Invented models of a given size, for timing only."""

import json
from typing import Any

import numpy as np

from modalview.model.parts import Model
from modalview.store import parse_model

CHECKS = [{"id": "1x", "order": 1}, {"id": "2x", "order": 2}, {"id": "12x", "order": 12}]


def plane_model(bodies: int = 60, links: int = 150, seed: int = 7) -> Model:
    """Return a plane model: rows of bodies on mounts, three checks of a speed range, all with tolerances."""
    rng = np.random.default_rng(seed)
    side = int(np.ceil(np.sqrt(bodies)))
    pairs = [(i, i + 1) for i in range(bodies - 1)] + [(i, i + side) for i in range(bodies - side)]
    feet = range(max(3, links - len(pairs)))
    between = [
        _mount(f"k{n}", _end(a, "0.2 m", "-0.3 m"), _end(b, "-0.25 m", "0.3 m"), rng)
        for n, (a, b) in enumerate(pairs)
    ]
    below = [
        _mount(
            f"g{n}", _end(n % side, f"{0.1 * (n // side) - 0.2:.2f} m", "-0.4 m"), {"support": f"s{n}"}, rng
        )
        for n in feet
    ]
    document = {
        "format": "keepclear",
        "version": 1,
        "title": "timing",
        "motion": "plane",
        "bodies": [_body(i, side, rng) for i in range(bodies)],
        "supports": [
            {"id": f"s{n}", "position": [f"{1.5 * (n % side) + 0.3 * (n // side):.2f} m", "0 m"]}
            for n in feet
        ],
        "links": [*between, *below],
        "machines": [
            {
                "id": "m",
                "speed": {"from": "600 rpm", "to": "1800 rpm"},
                "margin": "10 %",
                "excitations": CHECKS,
            }
        ],
    }
    return parse_model(json.dumps(document))


def _body(i: int, side: int, rng: np.random.Generator) -> dict[str, Any]:
    return {
        "id": f"b{i}",
        "mass": f"{rng.uniform(50, 900):.1f} kg",
        "inertia": f"{rng.uniform(5, 200):.2f} kg m2",
        "tolerance": "5 %",
        "position": [f"{1.5 * (i % side)} m", f"{1 + 1.2 * (i // side):.1f} m"],
    }


def _end(body: int, x: str, y: str) -> dict[str, Any]:
    return {"body": f"b{body}", "offset": [x, y]}


def _mount(name: str, start: dict[str, Any], end: dict[str, Any], rng: np.random.Generator) -> dict[str, Any]:
    stiffness = 10 ** rng.uniform(5, 8)
    return {
        "id": name,
        "kind": "mount",
        "from": start,
        "to": end,
        "tolerance": "10 %",
        "stiffness": {"x": f"{stiffness:.4e} N/m", "y": f"{1.7 * stiffness:.4e} N/m"},
    }


def chain_text(bodies: int, seed: int = 1) -> str:
    """Return the file of a chain along one axis: each mass on a spring to the one before, all toleranced."""
    rng = np.random.default_rng(seed)
    masses, stiffnesses = rng.uniform(10, 1000, bodies), 10 ** rng.uniform(5, 8, bodies)
    document = {
        "format": "keepclear",
        "version": 1,
        "title": "timing",
        "motion": "single axis",
        "bodies": [
            {"id": f"b{i}", "mass": f"{mass:.1f} kg", "tolerance": "5 %", "position": ["0 m", f"{i + 1} m"]}
            for i, mass in enumerate(masses)
        ],
        "supports": [{"id": "s", "position": ["0 m", "0 m"]}],
        "links": [
            {
                "id": f"k{i}",
                "kind": "spring",
                "from": {"body": f"b{i - 1}"} if i else {"support": "s"},
                "to": {"body": f"b{i}"},
                "stiffness": f"{stiffness:.4e} N/m",
                "tolerance": "10 %",
            }
            for i, stiffness in enumerate(stiffnesses)
        ],
        "machines": [
            {
                "id": "m",
                "speed": {"from": "600 rpm", "to": "1800 rpm"},
                "margin": "10 %",
                "excitations": CHECKS,
            }
        ],
    }
    return json.dumps(document, indent=1)


def braced_chain(bodies: int = 1000, links: int = 3000, seed: int = 3) -> Model:
    """Return a chain along one axis whose bodies have springs to the next few, too."""
    rng = np.random.default_rng(seed)
    document = json.loads(chain_text(bodies))
    for number in range(links - len(document["links"])):
        first = int(rng.integers(0, bodies - 5))
        document["links"].append(
            {
                "id": f"x{number}",
                "kind": "spring",
                "from": {"body": f"b{first}"},
                "to": {"body": f"b{first + int(rng.integers(1, 5))}"},
                "stiffness": f"{10 ** rng.uniform(5, 7):.4e} N/m",
                "tolerance": "10 %",
            }
        )
    return parse_model(json.dumps(document))
