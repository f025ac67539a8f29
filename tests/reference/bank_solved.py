"""A case of the bank through the public path: text, model, assembly, pencil, modes."""

from dataclasses import dataclass
from functools import cache
from typing import Any

import bank_models
import check_bank
import numpy as np

from modalview.assembly.assemble import Assembly, assemble
from modalview.assembly.parameters import Case
from modalview.assembly.pencil import Pencil
from modalview.eigen.modes import Modes
from modalview.eigen.solve import find_modes
from modalview.model.parts import FREEDOMS, Model, Motion
from modalview.store import parse_model


@dataclass(frozen=True, slots=True)
class Solved:
    """A model with its nominal pencil and modes."""

    model: Model
    assembly: Assembly
    pencil: Pencil
    modes: Modes

    @property
    def omega(self) -> list[float]:
        """Natural angular frequencies of all modes, rigid-body ones included, rad/s."""
        return (2 * np.pi * self.modes.frequency_hz).tolist()

    @property
    def elastic(self) -> slice:
        return self.modes.elastic

    def motion(self, body: str, freedom: str) -> np.ndarray:
        """Motion of one freedom of a body in every mode."""
        place = [one.id for one in self.model.bodies].index(body)
        return self.assembly.body_motion(self.modes.shapes)[:, place, FREEDOMS[Motion.SPACE].index(freedom)]


@cache
def solved(case: str) -> Solved:
    """Solve the model of a case."""
    return solve_text(bank_models.document(check_bank.cases()[case]))


def solve_text(text: str) -> Solved:
    """Solve a model document."""
    model = parse_model(text)
    assembly = assemble(model)
    pencil = assembly.pencil(Case.NOMINAL)
    modes = find_modes(pencil)
    assert modes.complete is True, modes.warnings
    return Solved(model, assembly, pencil, modes)


def _fitting(values: list[float], expected: Any, found: Solved) -> Any:
    """All values, or the elastic ones where the case lists only those; a single one by itself."""
    if not isinstance(expected, list):
        (single,) = values[found.elastic]
        return single
    return values if len(expected) == len(values) else values[found.elastic]


def omega(found: Solved, expected: Any) -> Any:
    return _fitting(found.omega, expected, found)


def frequency(found: Solved, expected: Any) -> Any:
    return _fitting(found.modes.frequency_hz.tolist(), expected, found)


def omega_squared(found: Solved, expected: Any) -> Any:
    return _fitting(found.modes.eigenvalues.tolist(), expected, found)


def first(found: Solved, _: Any) -> float:
    return found.omega[0]


def ratio(upper: str, lower: str, freedom: str = "y") -> Any:
    """Amplitude of one body over that of another, in every mode."""

    def of(found: Solved, _: Any) -> list[float]:
        return (found.motion(upper, freedom) / found.motion(lower, freedom)).tolist()

    return of


def multiplicities(found: Solved, _: Any) -> list[int]:
    return [stop - start for start, stop in found.modes.groups]


# Figures that mean the same in every case; the unit of cases in sqrt(k/m) is 1 rad/s, as k = m = 1 there.
GENERIC = {
    "omega": omega,
    "omega_exact": omega,
    "omega_all": omega,
    "omega_finite": omega,
    "omega_elastic": omega,
    "omega_sqrt_m_over_k": omega,
    "omega1": first,
    "omega1_printed": first,
    "frequency": frequency,
    "frequency_printed": frequency,
    "omega_squared": omega_squared,
    "omega_squared_exact": omega_squared,
    "omega_squared_m_over_k": omega_squared,
    "omega_squared_m_over_k_exact": omega_squared,
    "eigenvalues": omega_squared,
    "mode_ratio_x1_over_x2": ratio("m1", "m2"),
    "mode_ratio_x2_over_x1": ratio("m2", "m1"),
    "rigid_body_modes": lambda found, _: found.modes.rigid_body_modes,
    "number_of_finite_frequencies": lambda found, _: found.modes.number,
    "multiplicities": multiplicities,
}
