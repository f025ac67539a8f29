"""Invented models of a given size, for timing only."""

import json

import numpy as np

from modalview.model.parts import Model
from modalview.store import parse_model


def plane_model(bodies: int = 60, links: int = 150, seed: int = 7) -> Model:
    """Return a plane model on springs: a skid of many machines, three checks, all with tolerances."""
    rng = np.random.default_rng(seed)
    side = int(np.ceil(np.sqrt(bodies)))
    places = [(i % side * 1.5, 1 + i // side * 1.2) for i in range(bodies)]
    parts = ",\n".join(
        f'{{"id": "b{i}", "mass": "{rng.uniform(50, 900):.1f} kg", "inertia": "{rng.uniform(5, 200):.2f} kg m2",'
        f' "tolerance": "5 %", "position": ["{x} m", "{y} m"]}}'
        for i, (x, y) in enumerate(places)
    )
    pairs = [(i, i + 1) for i in range(bodies - 1)] + [(i, i + side) for i in range(bodies - side)]
    springs = [
        _mount(
            f"k{n}",
            {"body": f"b{a}", "offset": ["0.2 m", "-0.3 m"]},
            {"body": f"b{b}", "offset": ["-0.25 m", "0.3 m"]},
            rng,
        )
        for n, (a, b) in enumerate(pairs)
    ]
    grounded = max(3, links - len(springs))
    springs += [
        _mount(
            f"g{n}",
            {"body": f"b{n % side}", "offset": [f"{0.1 * (n // side) - 0.2:.2f} m", "-0.4 m"]},
            {"support": f"s{n}"},
            rng,
        )
        for n in range(grounded)
    ]
    supports = ", ".join(
        f'{{"id": "s{n}", "position": ["{n % side * 1.5 + 0.3 * (n // side)} m", "0 m"]}}'
        for n in range(grounded)
    )
    return parse_model(
        f'{{"format": "keepclear", "version": 1, "title": "timing", "motion": "plane", "bodies": [{parts}],'
        f' "supports": [{supports}], "links": [{", ".join(springs)}],'
        ' "machines": [{"id": "m", "speed": {"from": "600 rpm", "to": "1800 rpm"}, "margin": "10 %", "excitations": ['
        '{"id": "1x", "order": 1}, {"id": "2x", "order": 2}, {"id": "12x", "order": 12}]}]}'
    )


def _end(end: dict[str, object]) -> str:
    return json.dumps(end)


def _mount(name: str, start: dict[str, object], end: dict[str, object], rng: np.random.Generator) -> str:
    stiffness = 10 ** rng.uniform(5, 8)
    return (
        f'{{"id": "{name}", "kind": "mount", "from": {_end(start)}, "to": {_end(end)}, "tolerance": "10 %",'
        f' "stiffness": {{"x": "{stiffness:.4e} N/m", "y": "{1.7 * stiffness:.4e} N/m"}}}}'
    )
