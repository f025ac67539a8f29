"""Cases I13 and I16 of the check bank: published keep-out rules, and clear speeds of several orders.

The program's margins refer to the excitation: a mode fn is kept out of [fe (1 - below), fe (1 + above)].
A rule that keeps the excitation out of [a fn, b fn] is the same as keeping fn out of [fe/b, fe/a], so
that below = 1 - 1/b and above = 1/a - 1.
"""

import json
import math
from functools import cache, partial
from itertools import pairwise
from typing import Any

import bank_models
import numpy as np
import pytest
from check_bank import Figure, cases, figures

from modalview.eigen.solve import find_modes
from modalview.resonance.results import Verdict
from modalview.resonance.separation import separation
from modalview.store import parse_model
from modalview.study import Outlook, Request, look

RAD_PER_HZ = 2 * math.pi
Tree = dict[str, Any]

I13, I16 = (cases()[name]["inputs"] for name in ("I13", "I16"))
RPM = I13["excitation"]["value"] * 60


def looked_at(natural: list[float], *machines: Tree) -> Outlook:
    """Look at one mass on its own spring for each natural frequency (Hz), and machines."""
    bodies = [{"id": f"m{n}", "mass": "1 kg"} for n in range(len(natural))]
    links = [
        {
            "id": f"k{n}",
            "kind": "spring",
            "from": {"body": f"m{n}"},
            "to": {"support": "ground"},
            "stiffness": f"{(RAD_PER_HZ * value) ** 2!r} N/m",
        }
        for n, value in enumerate(natural)
    ]
    tree = json.loads(bank_models.text("rules", "single axis", bodies, links, [{"id": "ground"}]))
    tree["machines"] = [{"id": f"machine {n}", **machine} for n, machine in enumerate(machines)]
    outlook = look(Request(parse_model(json.dumps(tree))))
    assert not any(check.undecided for check in outlook.checks)
    return outlook


def order(number: float, below: float, above: float) -> Tree:
    margin = {"below": f"{100 * below!r} %", "above": f"{100 * above!r} %"}
    return {"id": f"{number}x", "order": number, "margin": margin}


# --- I13 ---------------------------------------------------------------------------------------------

OPERATING = f"{RPM!r} rpm"
# Each rule as a machine of the program.
RULES: dict[str, Tree] = {
    # Natural frequency outside 80 to 120 % of the operating frequency.
    "passes_20_percent": {"speed": OPERATING, "excitations": [order(1, 0.2, 0.2)]},
    # Natural frequency above 125 % of the top speed: every speed up to the top is run.
    "passes_rigid_125_percent": {
        "speed": {"from": "0 rpm", "to": OPERATING},
        "excitations": [order(1, 0.0, 0.25)],
    },
    # Excitation outside 50 to 150 % of the natural frequency: fn outside fe/1.5 to 2 fe. The file refuses a
    # margin of 100 %, so the band is given in two halves that meet: fe/1.5 to 1.5 fe, and 1.5 fe to 2 fe.
    "passes_50_150_rule": {
        "speed": OPERATING,
        "excitations": [order(1, 1 - 1 / 1.5, 0.5), order(2, 0.25, 0.0)],
    },
}


def passes(rule: str) -> list[bool]:
    return [looked_at([natural], RULES[rule]).verdict is Verdict.CLEAR for natural in I13["natural"]["value"]]


def excitation_over_natural() -> list[float]:
    """From the program's separation (fn - fe)/fe."""
    outlook = looked_at(I13["natural"]["value"], RULES["passes_20_percent"])
    (check,) = outlook.checks
    modes = find_modes(outlook.assembly.pencil())
    omega = np.sqrt(modes.eigenvalues)
    return [1 / (1 + separation((float(one), float(one)), check.band.excitation)) for one in omega]


# --- I16 ---------------------------------------------------------------------------------------------

LOW, HIGH = I16["speed_range"]["value"]
A, B = I16["keep_out"]


def running_at(rpm: float) -> Tree:
    orders = [order(number, 1 - 1 / B, 1 / A - 1) for number in I16["orders"]]
    return {"speed": f"{rpm!r} rpm", "excitations": orders}


def blocked(speeds: list[float]) -> list[bool]:
    """Whether any order at each of these speeds has a mode in its band; one machine for each speed."""
    outlook = looked_at(I16["natural"]["value"], *(running_at(rpm) for rpm in speeds))
    stopped = {check.band.machine for check in outlook.checks if check.verdict is not Verdict.CLEAR}
    return [f"machine {n}" in stopped for n in range(len(speeds))]


@cache
def natural_omega() -> tuple[float, ...]:
    outlook = looked_at(I16["natural"]["value"], running_at(LOW))
    return tuple(np.sqrt(find_modes(outlook.assembly.pencil()).eigenvalues).tolist())


@cache
def stretches() -> tuple[tuple[float, float, bool], ...]:
    """Runs of speeds of one verdict: it changes only where the edge of a band passes a mode.

    Band edges are proportional to the speed; the verdict between two such speeds is the program's.
    """
    checks = looked_at(I16["natural"]["value"], running_at(LOW)).checks
    edges = [edge / LOW for check in checks for edge in check.band.nominal]
    passing = {omega / edge for omega in natural_omega() for edge in edges}
    speeds = [float(LOW), *sorted(rpm for rpm in passing if LOW < rpm < HIGH), float(HIGH)]
    parts = list(pairwise(speeds))
    runs: list[tuple[float, float, bool]] = []
    for (low, high), stopped in zip(parts, blocked([(low + high) / 2 for low, high in parts]), strict=True):
        joined = bool(runs) and runs[-1][2] == stopped
        start = runs.pop()[0] if joined else low
        runs.append((start, high, stopped))
    return tuple(runs)


def speed_bands(*, wanted_blocked: bool) -> list[list[float]]:
    return [[low, high] for low, high, stopped in stretches() if stopped == wanted_blocked]


def crossing_speeds() -> list[float]:
    """Speeds in the range at which an order meets one of the program's frequencies."""
    natural = [omega / RAD_PER_HZ for omega in natural_omega()]
    speeds = sorted((60 * f / p, p, f) for f in natural for p in I16["orders"])
    inside = [one for one in speeds if LOW <= one[0] <= HIGH]
    for rpm, number, f in inside:
        assert separation((f, f), (number * rpm / 60, number * rpm / 60)) == pytest.approx(0, abs=1e-12)
    return [rpm for rpm, _, _ in inside]


OWN = {
    "I13-ratio_excitation_to_natural": excitation_over_natural,
    "I16-crossing_speeds": crossing_speeds,
    "I16-blocked_bands": partial(speed_bands, wanted_blocked=True),
    "I16-clear_bands": partial(speed_bands, wanted_blocked=False),
}
OWN |= {f"I13-{rule}": partial(passes, rule) for rule in RULES}


# The other cases of the group, orders and grades, are the handbook's: test_reference_handbook.
KEEP_OUT = [figure for figure in figures("I") if figure.case["id"] in {"I13", "I16"}]


@pytest.mark.parametrize("figure", KEEP_OUT, ids=lambda figure: figure.id)
def test_figure(figure: Figure):
    figure.check(OWN[figure.id]())


@pytest.mark.parametrize(("above", "verdict"), [(0.135, Verdict.CLEAR), (0.136, Verdict.IN_BAND)])
def test_a_margin_refers_to_the_excitation_not_to_the_mode(above, verdict):
    """The trap of I13: 28 Hz is 13.5 % above the excitation, which is 11.9 % below 28 Hz."""
    machine = {"speed": OPERATING, "excitations": [order(1, 0.2, above)]}
    assert looked_at([28.0], machine).verdict is verdict
