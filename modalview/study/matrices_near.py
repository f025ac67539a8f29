"""Modes of large matrices: those near a frequency, and the neighbours of an excitation."""

from collections.abc import Sequence
from dataclasses import dataclass

from modalview.assembly.pencil import Pencil
from modalview.eigen.near import MOST, NearModes, find_near
from modalview.errors import NumericalError
from modalview.factor.counts import count_zero
from modalview.resonance.results import Check
from modalview.study.completed import ELASTIC, RAD_PER_HZ, completed
from modalview.study.matrices_request import MatrixRequest, found_modes, unknown_drives
from modalview.study.results import FoundMode

# Modes asked for at each end of an excitation, until one lies on either side.
FIRST_ASKED = 2


@dataclass(frozen=True, slots=True, eq=False)
class MatrixNear:
    """The modes of matrices near a frequency.

    Parameters
    ----------
    near : NearModes
        With its certificate and the history of its residuals.
    modes : tuple of FoundMode
        Numbered among all; 0 where counts leave the number undecided.
    """

    near: NearModes
    modes: tuple[FoundMode, ...]


def modes_near(request: MatrixRequest, pencil: Pencil, frequency_hz: float, count: int) -> MatrixNear:
    """Find the modes nearest to a frequency, proven complete by counts where rounding lets them.

    Raises
    ------
    InputError
        A count or frequency out of range.
    CancelledError, NumericalError
    """
    sigma = (frequency_hz * RAD_PER_HZ) ** 2
    near = find_near(pencil, sigma, count, cancelled=request.cancelled, progress=request.progress)
    return MatrixNear(
        near, found_modes(near.modes, request.factors, near.numbers or (0,) * near.modes.number)
    )


def completed_near(
    request: MatrixRequest, pencil: Pencil, check: Check
) -> tuple[Check, tuple[FoundMode, ...]]:
    """Complete a check by the modes on either side of its excitation, and return these.

    The check stays as it is where counts do not prove that none between was missed.
    """
    found: dict[int, FoundMode] = {}
    for edge in dict.fromkeys(check.band.excitation):
        modes = _around(request, pencil, edge)
        if modes is None:
            return check, ()
        found.update((mode.number, mode) for mode in modes)
    modes = tuple(found[number] for number in sorted(found))
    return completed(check, modes, unknown_drives), modes


def _around(request: MatrixRequest, pencil: Pencil, omega: float) -> Sequence[FoundMode] | None:
    """Return all modes nearest to an angular frequency, one of them on either side where there is one."""
    hertz = omega / RAD_PER_HZ
    asked = FIRST_ASKED
    while asked <= MOST:
        try:
            found = modes_near(request, pencil, hertz, asked)
        except NumericalError:
            return None
        if not found.near.modes.complete or found.near.numbers is None:
            return None
        elastic = [mode for mode in found.modes if mode.kind == ELASTIC]
        below = any(mode.frequency_hz <= hertz for mode in elastic) or _first(pencil, elastic)
        above = any(mode.frequency_hz >= hertz for mode in elastic) or found.near.numbers[-1] == pencil.modes
        if below and above:
            return elastic
        asked *= 2
    return None


def _first(pencil: Pencil, elastic: Sequence[FoundMode]) -> bool:
    zeros = count_zero(pencil.shifted).number
    return bool(elastic) and zeros is not None and elastic[0].number == zeros + 1
