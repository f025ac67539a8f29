"""What window and command line are given."""

from collections.abc import Callable
from dataclasses import dataclass, fields

import numpy as np
import numpy.typing as npt

from modalview.advice.assembled import doubts_of
from modalview.advice.doubt import Doubt
from modalview.advice.drawn import doubts
from modalview.assembly.assemble import Assembly
from modalview.bounds.before import Bounds
from modalview.eigen.modes import Modes
from modalview.model.parts import Model
from modalview.resonance.results import Check, Verdict


def never() -> bool:
    """Never cancelled."""
    return False


@dataclass(frozen=True, slots=True)
class Request:
    """What is to be studied; captures all its inputs, so that it can run anywhere.

    Parameters
    ----------
    model : Model
    number : int
        Of the request; results of an older number are dropped by who asked.
    cancelled : callable
        Asked between steps.
    progress : callable or None
        Told (what is done, share done 0..1).
    exact : bool
        Prove the checks by counts without rounding; for models of up to a few hundred degrees of freedom.
    """

    model: Model
    number: int = 0
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None
    exact: bool = False


@dataclass(frozen=True, slots=True)
class Interval:
    """Number of modes between two frequencies, for the scale.

    Parameters
    ----------
    low_hz, high_hz : float
        Ends; the last interval is open (infinity).
    number : int or None
        Modes inside at nominal values; None is undecided.
    check : str or None
        The check whose band this is; None between bands.
    """

    low_hz: float
    high_hz: float
    number: int | None
    check: str | None = None


@dataclass(frozen=True, slots=True)
class Known:
    """What is known before any solve, as it is shown: plain data that is quick to send to another process.

    Parameters
    ----------
    request : Request
    bounds : Bounds
        Discs, norms, lowest and highest mode.
    checks : tuple of Check
        Proven by counts; without modes.
    verdict : Verdict or None
        The worst of the checks; None when there is nothing to check.
    sentence : str
        The verdict in words, for the top of the window.
    intervals : tuple of Interval
        Counts on the scale, ascending.
    not_checked : tuple of str
        Directions not modelled, orders not listed.
    notes : tuple of str
        What the program did with the model: dropped directions, values taken as exact.
    coordinates : int
        Independent coordinates of the model.
    toleranced : bool
        Whether any value has a tolerance.
    dashpots : bool
        Whether the model has any.
    seconds : float
        Time it took.
    """

    request: Request
    bounds: Bounds
    checks: tuple[Check, ...]
    verdict: Verdict | None
    sentence: str
    intervals: tuple[Interval, ...]
    not_checked: tuple[str, ...]
    notes: tuple[str, ...]
    coordinates: int
    toleranced: bool
    dashpots: bool
    seconds: float


@dataclass(frozen=True, slots=True)
class Outlook(Known):
    """What is known before any solve, with what a solve goes on from.

    Parameters
    ----------
    assembly : Assembly
    """

    assembly: Assembly

    @property
    def doubts(self) -> tuple[Doubt, ...]:
        """What an engineer would doubt about the model; they block nothing, so no verdict waits for them."""
        return (*doubts(self.request.model), *doubts_of(self.assembly, self.bounds))

    def known(self) -> Known:
        """Return it without the assembly."""
        return Known(**{one.name: getattr(self, one.name) for one in fields(Known)})


@dataclass(frozen=True, slots=True)
class Share:
    """What one part, value or direction has in a mode."""

    id: str
    label: str
    fraction: float


@dataclass(frozen=True, slots=True, eq=False)
class FoundMode:
    """One mode as it is shown.

    Parameters
    ----------
    number : int
        From 1, rigid-body modes included.
    name : str
        In words: "baseplate against both".
    frequency_hz, numerical_error_hz : float
    range_hz : pair of float
        Over all tolerances.
    kind : str
        "elastic", "rigid-body" or "unstable".
    repeated_with : tuple of int
        Numbers of the modes of the same frequency, itself included; empty when alone.
    strain, kinetic : tuple of Share
        Largest first; of links and of bodies, summed over what each contributes.
    sensitivity : tuple of Share
        d(ln f) / d(ln value) for every typed value, largest first; ids such as "k3.stiffness".
    effective_mass : tuple of Share
        Share of the whole mass that takes part along each direction ("x", "y", ...).
    motion : array (bodies, 6)
        x, y, z, rx, ry, rz of every body in the order of the model, largest motion 1 (rotations in
        radians on the same factor).
    """

    number: int
    name: str
    frequency_hz: float
    numerical_error_hz: float
    range_hz: tuple[float, float]
    kind: str
    repeated_with: tuple[int, ...]
    strain: tuple[Share, ...]
    kinetic: tuple[Share, ...]
    sensitivity: tuple[Share, ...]
    effective_mass: tuple[Share, ...]
    motion: npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Solution:
    """The modes, and the checks with what the modes add to them.

    Parameters
    ----------
    outlook : Outlook
        Of the same model.
    raw : Modes
        Eigenvalues, shapes and evidence.
    modes : tuple of FoundMode
    modal_mass : tuple of float
        Mass that each mode moves when its largest motion is 1 m; kg.
    checks : tuple of Check
        With nearest modes, separations and drives.
    sentence : str
        The verdict in words with the mode that decides it.
    evidence : tuple of str
        Why the result can be believed: "3 of 3 found, none missed (proven by counts)".
    seconds : float
    """

    outlook: Outlook
    raw: Modes
    modes: tuple[FoundMode, ...]
    modal_mass: tuple[float, ...]
    checks: tuple[Check, ...]
    sentence: str
    evidence: tuple[str, ...]
    seconds: float
