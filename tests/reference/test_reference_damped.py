"""Group E of the check bank: damping ratios, decrements and roots with dashpots.

Figures of a case with a model come from its damped roots; those of a case without one from the program's
arithmetic of damping, and where a dashpot follows from it, from the roots of the model with that dashpot.
"""

import math
from functools import cache, partial
from typing import Any

import bank_models
import numpy as np
import pytest
from check_bank import Figure, cases, figures

from modalview.eigen.dampedratio import (
    decrement_of_peaks,
    proportional_coefficients,
    proportional_ratios,
    ratio_of_decrement,
)
from modalview.model.parts import Damper
from modalview.store import parse_model
from modalview.study.damped import DampedSolution, damped
from modalview.study.results import Request


def inputs(case: str) -> dict[str, Any]:
    given = cases()[case]["inputs"]
    return {key: one["value"] if isinstance(one, dict) else one for key, one in given.items()}


@cache
def solved(case: str) -> DampedSolution:
    return damped(Request(parse_model(bank_models.document(cases()[case]))))


def oscillator(mass: float, stiffness: float, damping: float) -> DampedSolution:
    bodies = [{"id": "m", "mass": f"{mass!r} kg"}]
    ends = {"from": {"support": "ground"}, "to": {"body": "m"}}
    links = [
        {"id": "k", "kind": "spring", **ends, "stiffness": f"{stiffness!r} N/m"},
        {"id": "c", "kind": "damper", **ends, "damping": f"{damping!r} N s/m"},
    ]
    text = bank_models.text("oscillator", "single axis", bodies, links, [{"id": "ground"}])
    return damped(Request(parse_model(text)))


def raw(found: DampedSolution) -> Any:
    assert found.raw is not None
    assert found.raw.warnings == ()
    return found.raw


def single(values: np.ndarray) -> float:
    (value,) = set(values.tolist())
    return value


def dashpot(found: DampedSolution) -> float:
    (link,) = (one for one in found.outlook.request.model.links if isinstance(one, Damper))
    return link.damping.si


def critical(found: DampedSolution) -> float:
    """The dashpot that would just not oscillate: the one there over its ratio, N s/m."""
    return dashpot(found) / single(raw(found).damping_ratio)


def natural(found: DampedSolution) -> list[float]:
    return (2 * np.pi * raw(found).natural_hz).tolist()


def ratios(found: DampedSolution) -> list[float]:
    return raw(found).damping_ratio.tolist()


def peaks_after_a_cycle(found: DampedSolution) -> float:
    return math.exp(single(raw(found).log_decrement))


OF_ROOTS = {
    "damping_ratio": lambda found: ratios(found) if len(ratios(found)) > 1 else ratios(found)[0],
    "log_decrement": lambda found: single(raw(found).log_decrement),
    "amplitude_ratio_per_cycle": peaks_after_a_cycle,
    "critical_damping": critical,
    "omega_n": lambda found: natural(found)[0],
    "omega_undamped": natural,
    "omega_damped": lambda found: (2 * np.pi * raw(found).damped_hz).tolist(),
    "roots_real": lambda found: sorted(raw(found).roots.real.tolist()),
    "oscillating_modes": lambda found: raw(found).oscillating,
}


def in_pounds(found: DampedSolution) -> float:
    """Critical damping in lbf s/in."""
    given = inputs("E01")
    return critical(found) * given["inch"] / given["pound_force"]


def overdamped_ratio(found: DampedSolution) -> float:
    """Both roots belong to one mode and tell one ratio."""
    return single(raw(found).damping_ratio)


@cache
def peaks(case: str) -> tuple[float, DampedSolution]:
    """Logarithmic decrement of the peaks seen, and the model with the dashpot that it means."""
    given = inputs(case)
    if case == "E05":
        mass, stiffness = given["mass"], given["stiffness"]
        decrement = decrement_of_peaks(given["peak_ratio"], 1.0, 1)
    else:
        mass, stiffness = given["mass"], given["springs"] * given["spring_each"]
        decrement = decrement_of_peaks(given["x0"], given["x2"], 2)
    damping = 2 * ratio_of_decrement(decrement) * math.sqrt(mass * stiffness)
    return decrement, oscillator(mass, stiffness, damping)


def decrement(case: str) -> float:
    """From the roots of the model, which give back the decrement of the peaks."""
    seen, found = peaks(case)
    told = single(raw(found).log_decrement)
    assert told == pytest.approx(seen, rel=1e-12)
    return told


def modal_ratios() -> list[float]:
    given = inputs("E10")
    alpha, beta = proportional_coefficients(*given["omega"], given["damping_ratio"])
    return proportional_ratios(alpha, beta, np.array(given["check_omega"], dtype=float)).tolist()


OWN = {
    "E01-critical_damping": lambda: in_pounds(solved("E01")),
    "E06-damping_ratio": lambda: overdamped_ratio(solved("E06")),
    "E05-log_decrement": partial(decrement, "E05"),
    "E05-ratio_fifth_to_seventh": lambda: math.exp(2 * decrement("E05")),
    "E05-damping_ratio": lambda: ratio_of_decrement(decrement("E05")),
    "E05-damping": lambda: dashpot(peaks("E05")[1]),
    "E05-damping_ratio_small_shortcut": lambda: decrement("E05") / (2 * math.pi),
    "E10-alpha": lambda: proportional_coefficients(*inputs("E10")["omega"], inputs("E10")["damping_ratio"])[
        0
    ],
    "E10-beta": lambda: proportional_coefficients(*inputs("E10")["omega"], inputs("E10")["damping_ratio"])[1],
    "E10-damping_ratio_at_check": modal_ratios,
    "E15-log_decrement": partial(decrement, "E15"),
    "E15-damping": lambda: dashpot(peaks("E15")[1]),
    "E15-frequency_ratio_damped_to_undamped": lambda: single(
        raw(peaks("E15")[1]).damped_hz / raw(peaks("E15")[1]).natural_hz
    ),
    "E15-period_damped": lambda: 1 / single(raw(peaks("E15")[1]).damped_hz),
}


# E12 is steady motion with a loss factor: test_reference_response.
FIGURES = [figure for figure in figures("E") if figure.case["id"] != "E12"]


@pytest.mark.parametrize("figure", FIGURES, ids=lambda figure: figure.id)
def test_figure(figure: Figure):
    if figure.id in OWN:
        figure.check(OWN[figure.id]())
    else:
        figure.check(OF_ROOTS[figure.name](solved(figure.case["id"])))


def test_every_figure_of_its_own_is_in_the_bank():
    assert set(OWN) <= {figure.id for figure in FIGURES}
