"""Group G of the check bank: bounds and counts without solving, tolerance ranges, instability."""

import itertools
import json
import math
from dataclasses import replace
from functools import cache, partial
from typing import Any

import bank_models
import numpy as np
import pytest
import scipy.sparse as sp
from bank_solved import GENERIC, Solved, solve_text, solved
from check_bank import Figure, cases, figures

from modalview.assembly.assemble import assemble
from modalview.assembly.parameters import Case
from modalview.assembly.pencil import Pencil, pencil_of_terms
from modalview.bounds.before import before_solve
from modalview.bounds.discs import Discs
from modalview.eigen.intervals import _Run, _tightened
from modalview.eigen.modes import Modes
from modalview.eigen.rayleigh import ROOT_SLACK, Energy, Rayleigh
from modalview.eigen.solve import all_eigenvalues, find_modes
from modalview.errors import FileFaultsError
from modalview.factor.counts import count_at_most, count_below, count_negative
from modalview.store import parse_model

ROWS, COLUMNS, SYMMETRIC = "rows", "columns", "symmetric"

# --- discs -------------------------------------------------------------------------------------------


def discs(found: Solved, kind: str) -> Discs:
    """By rows or by columns of M^-1 K, or of the symmetric form."""
    given = getattr(before_solve(found.pencil), kind)
    assert isinstance(given, Discs)
    return given


def intervals(kind: str, found: Solved, _: Any) -> list[list[float]]:
    each = discs(found, kind)
    ends = zip(each.centres - each.radii, each.centres + each.radii, strict=True)
    return [[float(low), float(high)] for low, high in ends]


def all_inside(kinds: tuple[str, ...], found: Solved, _: Any) -> bool:
    """Every eigenvalue lies in a group, and each group holds as many as it has discs."""
    values = found.modes.eigenvalues
    return all(
        int(np.sum((group.low <= values) & (values <= group.high))) == group.number
        for kind in kinds
        for group in discs(found, kind).groups
    )


# --- counts ------------------------------------------------------------------------------------------


def below(pencil: Pencil, lam: float) -> int:
    """Eigenvalues below lam, by counts on both sides of it; no case has one at lam itself."""
    under, upto = count_below(pencil.shifted, lam), count_at_most(pencil.shifted, lam)
    assert under.number == upto.number, (under, upto)
    assert under.number is not None
    return under.number


def number_below_shifts(found: Solved, _: Any) -> list[int]:
    return [below(found.pencil, shift) for shift in (4.0, 6.0)]


def number_below_speeds(found: Solved, _: Any) -> list[int]:
    return [below(found.pencil, speed**2) for speed in (100.0, 150.0, 250.0)]


def leading_minors(shift: float, found: Solved, _: Any) -> list[float]:
    """Of the program's K - shift M: what a count without pivoting would divide by."""
    matrix = (found.pencil.K - shift * found.pencil.M).toarray()
    return [1.0, *(float(np.linalg.det(matrix[:size, :size])) for size in range(1, len(matrix) + 1))]


# --- Dunkerley, Rayleigh, Temple ---------------------------------------------------------------------


@cache
def rotors() -> Solved:
    """Two unit masses on one line: with the other taken away they would lie at 100 and 200 Hz (G04)."""
    near, far = (1 / (2 * math.pi * single) ** 2 for single in (200.0, 100.0))
    bodies = [{"id": name, "mass": "1 kg"} for name in ("near", "far")]
    ends = [{"support": "ground"}, {"body": "near"}, {"body": "far"}]
    links = [
        {
            "id": f"k{n}",
            "kind": "spring",
            "from": ends[n],
            "to": ends[n + 1],
            "stiffness": f"{1 / soft!r} N/m",
        }
        for n, soft in enumerate((near, far - near))
    ]
    return solve_text(bank_models.text("G04", "single axis", bodies, links, [{"id": "ground"}]))


def dunkerley_hz(found: Solved) -> float:
    """The program's lower bound of the lowest mode, which is Dunkerley's where a trace is formed."""
    bounds = before_solve(found.pencil)
    assert bounds.lowest_hz is not None
    assert "Lowest mode from below: Dunkerley." in bounds.notes
    return bounds.lowest_hz[0]


def dunkerley(found: Solved, _: Any) -> float:
    return 2 * math.pi * dunkerley_hz(found)


def quotients(found: Solved, shapes: list[list[float]]) -> Rayleigh:
    return Energy.of(found.pencil).rayleigh(np.array(shapes, dtype=float).T)


def rayleigh(found: Solved, _: Any) -> list[float]:
    return np.sqrt(quotients(found, cases()["G06"]["inputs"]["shapes"]).quotient).tolist()


def trial(found: Solved) -> Rayleigh:
    """The trial shape of G15; the program's slack for its mass root is taken off the residual."""
    given = quotients(found, [cases()["G15"]["inputs"]["trial"]])
    return replace(given, residual=given.residual / (1 + ROOT_SLACK))


def residual_interval(found: Solved, _: Any) -> list[float]:
    given = trial(found)
    centre, radius = float(given.quotient[0]), float(given.residual[0])
    return [centre - radius, centre + radius]


def temple(found: Solved, _: Any) -> float:
    """The lowest eigenvalue from below, once a count has proven that the second lies above 4."""
    separator = cases()["G15"]["inputs"]["separator"]
    assert below(found.pencil, separator) == 1
    given = trial(found)
    centre, radius = float(given.quotient[0]), float(given.residual[0])
    run = _Run(0, 1, centre - radius, centre + radius, radius, 0.0)
    lower, _upper = _tightened(given, run, -np.inf, separator)
    return float(lower[0])


def bounds_hold(found: Solved, _: Any) -> bool:
    low, high = residual_interval(found, _)
    values = found.modes.eigenvalues
    return bool(np.any((low <= values) & (values <= high)) and temple(found, _) <= values[0])


# --- tolerances --------------------------------------------------------------------------------------

TOLERANCES = {"stiffness": "10 %", "mass": "5 %"}


@cache
def toleranced() -> Solved:
    tree = json.loads(bank_models.document(cases()["G12"]))
    return solve_text(json.dumps({**tree, "default_tolerance": TOLERANCES}))


def band(case: Case, *_: Any) -> list[float]:
    return (2 * np.pi * find_modes(toleranced().assembly.pencil(case)).frequency_hz).tolist()


def varied(factors: tuple[float, ...]) -> np.ndarray:
    """Frequencies of G12 with every stiffness, then every mass, multiplied."""
    tree = json.loads(bank_models.document(cases()["G12"]))
    tree["default_tolerance"] = TOLERANCES  # the same structure as ``toleranced``
    parts = [(link, "stiffness") for link in tree["links"]] + [(body, "mass") for body in tree["bodies"]]
    for (part, key), factor in zip(parts, factors, strict=True):
        number, unit = part[key].split(" ")
        part[key] = f"{float(number) * factor!r} {unit}"
    assembly = assemble(parse_model(json.dumps(tree)), toleranced().assembly)
    return np.sqrt(all_eigenvalues(assembly.pencil()))


def all_corners_inside(*_: Any) -> bool:
    low, high = np.array(band(Case.SOFT_HEAVY)), np.array(band(Case.STIFF_LIGHT))
    slack = 1e-12 * high
    sides = [(0.9, 1.1)] * 3 + [(0.95, 1.05)] * 2
    corners = (varied(corner) for corner in itertools.product(*sides))
    return all(bool(np.all((low - slack <= omega) & (omega <= high + slack))) for omega in corners)


def monotone(*_: Any) -> bool:
    """Raise each of the three stiffnesses and lower each of the two masses by itself."""
    steps = [tuple(1.05 if i == j else 1.0 for j in range(5)) for i in range(3)]
    steps += [tuple(0.95 if i == j else 1.0 for j in range(5)) for i in (3, 4)]
    nominal = varied((1.0,) * 5)
    return all(bool(np.all(varied(step) >= nominal * (1 - 1e-12))) for step in steps)


# --- instability: the file refuses a negative spring, the core's pencil takes it ----------------------


@cache
def pendulum(stiffness: float) -> Modes:
    given = {key: one["value"] for key, one in cases()["G16"]["inputs"].items()}
    spring = stiffness * given["arm"] ** 2
    gravity = -given["mass"] * given["g"] * given["length"]
    inertia = given["mass"] * given["length"] ** 2
    rows = sp.csr_array(np.ones((2, 1)))
    pencil = pencil_of_terms(rows, np.array([spring, gravity]), np.array([inertia]))
    modes = find_modes(pencil)
    assert modes.unstable == count_negative(pencil.shifted).number
    return modes


OWN = {
    "G01-lower": lambda found, _: min(low for low, _high in intervals(ROWS, found, _)),
    "G01-upper": lambda found, _: max(high for _low, high in intervals(ROWS, found, _)),
    "G01-all_inside": partial(all_inside, (ROWS, COLUMNS, SYMMETRIC)),
    "G09-rows_of_MinvK": partial(intervals, ROWS),
    "G09-symmetric_scaling": partial(intervals, SYMMETRIC),
    "G09-all_inside_both": partial(all_inside, (ROWS, SYMMETRIC)),
    "G02-number_below": number_below_shifts,
    "G02-leading_minors_at_4": partial(leading_minors, 4.0),
    "G02-leading_minors_at_6": partial(leading_minors, 6.0),
    "G04-critical_speed": lambda *_: 60 * dunkerley_hz(rotors()),
    "G05-dunkerley": dunkerley,
    "G05-dunkerley_printed": dunkerley,
    "G05-is_lower_bound": lambda found, _: dunkerley(found, _) < found.omega[0],
    "G05-exact": lambda found, _: found.omega[0],
    "G06-rayleigh": rayleigh,
    "G06-rayleigh_123_printed": lambda found, _: rayleigh(found, _)[0],
    "G06-is_upper_bound": lambda found, _: all(value > found.omega[0] for value in rayleigh(found, _)),
    "G10-number_below": number_below_speeds,
    "G12-band_lower": partial(band, Case.SOFT_HEAVY),
    "G12-band_upper": partial(band, Case.STIFF_LIGHT),
    "G12-all_corners_inside": all_corners_inside,
    "G12-monotone_in_each_parameter": monotone,
    "G15-rayleigh_quotient": lambda found, _: float(trial(found).quotient[0]),
    "G15-residual_interval": residual_interval,
    "G15-temple_lower_bound": temple,
    "G15-bounds_hold": bounds_hold,
    "G16-negative_eigenvalues": lambda *_: [pendulum(40.0).unstable, pendulum(100.0).unstable],
    "G16-growth_rate_40": lambda *_: float(pendulum(40.0).growth_rate[0]),
    "G16-omega_100": lambda *_: float(2 * np.pi * pendulum(100.0).frequency_hz[0]),
}


@pytest.mark.parametrize("figure", figures("G"), ids=lambda figure: figure.id)
def test_figure(figure: Figure):
    compute = OWN.get(figure.id) or GENERIC[figure.name]
    with_file = "model" in figure.case and figure.case["id"] != "G16"
    found = solved(figure.case["id"]) if with_file else None
    figure.check(compute(found, figure.expected))


def test_the_programs_own_residual_interval_holds_the_tight_one():
    found = solved("G15")
    given = quotients(found, [cases()["G15"]["inputs"]["trial"]])
    low, high = residual_interval(found, None)
    assert given.quotient[0] - given.residual[0] <= low
    assert given.quotient[0] + given.residual[0] >= high


def test_the_file_refuses_the_negative_spring_of_the_pendulum():
    with pytest.raises(FileFaultsError, match=r'"gravity" \. stiffness: must be above zero'):
        parse_model(bank_models.document(cases()["G16"]))


def test_an_unstable_mode_has_no_frequency():
    """The trap of G16."""
    assert pendulum(40.0).frequency_hz[0] == 0.0
    assert pendulum(40.0).eigenvalues[0] < 0
