"""Lumped rods and beams of any fineness, as model documents for the convergence cases of the bank."""

from itertools import pairwise
from typing import Any

import bank_models
from bank_solved import Solved, solve_text

Tree = dict[str, Any]


def rod(inputs: Tree, pieces: int, tip: float = 0.5) -> Solved:
    """Fixed-free rod of equal springs EA/h, masses rho A h, and ``tip`` of a mass at the end (A14)."""
    modulus, area, length, density = (inputs[key]["value"] for key in ("E", "A", "L", "rho"))
    step = length / pieces
    mass, stiffness = density * area * step, modulus * area / step
    bodies = [
        {"id": f"m{number}", "mass": f"{mass * (tip if number == pieces else 1)!r} kg"}
        for number in range(1, pieces + 1)
    ]
    ends = [{"support": "ground"}, *({"body": body["id"]} for body in bodies)]
    links = [
        {
            "id": f"k{n}",
            "kind": "spring",
            "from": ends[n],
            "to": ends[n + 1],
            "stiffness": f"{stiffness!r} N/m",
        }
        for n in range(pieces)
    ]
    return solve_text(bank_models.text("rod", "single axis", bodies, links, [{"id": "ground"}]))


def pinned_beam(pieces: int) -> Solved:
    """Simply supported beam of EI = mass per length = length = 1: masses 1/N at the inner nodes (A16).

    The exact flexibility comes from slender massless beams between the nodes; their rotations and the
    two pinned ends carry no inertia.
    """
    nodes = [_node(0, 0.0, ["rz"], pieces)]
    nodes += [_node(n, 1 / pieces, ["y", "rz"], pieces) for n in range(1, pieces)]
    nodes.append(_node(pieces, 0.0, ["rz"], pieces))
    return _beam([{"body": node["id"]} for node in nodes], nodes, [])


def cantilever(pieces: int) -> Solved:
    """Cantilever of the same values: masses 1/N at the nodes, half a mass at the tip (A18)."""
    nodes = [_node(n, 1 / pieces / (1 + (n == pieces)), ["y", "rz"], pieces) for n in range(1, pieces + 1)]
    root = {"id": "wall", "position": ["0 m", "0 m"]}
    return _beam([{"support": "wall"}, *({"body": node["id"]} for node in nodes)], nodes, [root])


def _node(number: int, mass: float, dof: list[str], pieces: int) -> Tree:
    return {
        "id": f"n{number}",
        "mass": f"{mass!r} kg",
        "position": [f"{number / pieces!r} m", "0 m"],
        "dof": dof,
    }


def _beam(ends: list[Tree], nodes: list[Tree], supports: list[Tree]) -> Solved:
    section = {"E": "1 Pa", "A": "1 m2", "I": "1 m4"}
    links = [
        {"id": f"b{n}", "kind": "beam", "from": ends[n], "to": ends[n + 1], **section}
        for n in range(len(ends) - 1)
    ]
    return solve_text(bank_models.text("beam", "plane", nodes, links, supports))


def limit(values: list[float], order: int, step: int = 2) -> float:
    """Extrapolate values of halved spacing to spacing zero.

    The error is a series in h**order, h**(order + step), ...: L. F. Richardson (1911), Phil. Trans. R.
    Soc. A 210, 307; repeated after W. Romberg (1955).
    """
    while len(values) > 1:
        values = [fine + (fine - coarse) / (2**order - 1) for coarse, fine in pairwise(values)]
        order += step
    return values[0]
