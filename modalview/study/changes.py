"""Changes that clear a model: what is asked and what is found."""

from dataclasses import dataclass

from modalview.advice.changes.results import (
    LeastChange,
    Narrowing,
    Option,
    Placement,
    ValueWindows,
)
from modalview.study.results import Request


@dataclass(frozen=True, slots=True)
class Place:
    """A wish to put a mode at a frequency by one value.

    Parameters
    ----------
    mode : int
        From 1, rigid-body modes included.
    frequency_hz : float
    value : str
        Id as in `ValueWindows`.
    """

    mode: int
    frequency_hz: float
    value: str


@dataclass(frozen=True, slots=True)
class ChangesRequest:
    """What is to be changed, and how.

    Parameters
    ----------
    request : Request
        The model, with its cancel token and its progress.
    values : tuple of str
        Ids of the values that may change: "k3.stiffness", "sole.stiffness" for a whole mount,
        "k1.stiffness+k2.stiffness" for several by one factor. Empty: all that make sense.
    together : tuple of str
        Values that may change together, each by its own factor, for the least change: up to four for a proof
        that none exists. Empty: pairs of the values that matter most are tried.
    weights : tuple of (str, float)
        How dear a change of a value is; 1 where none is given.
    places : tuple of Place
        Modes to be put at frequencies.
    """

    request: Request
    values: tuple[str, ...] = ()
    together: tuple[str, ...] = ()
    weights: tuple[tuple[str, float], ...] = ()
    places: tuple[Place, ...] = ()


@dataclass(frozen=True, slots=True)
class Changes:
    """What clears a model.

    Parameters
    ----------
    asked : ChangesRequest
    clear_now : bool
        Every check of every load case is clear over all tolerances.
    options : tuple of Option
        Every option that clears everything, the smallest amount first; then placed modes.
    windows : tuple of ValueWindows
        Of every value asked for, in the order of the model.
    least : tuple of LeastChange
        Of the values asked for together, or of the pairs tried.
    narrowing : Narrowing or None
        None where no check is clear at nominal only.
    placements : tuple of Placement
    sentence : str
    notes : tuple of str
        Load cases, limits, and what was not looked at.
    seconds : float
    """

    asked: ChangesRequest
    clear_now: bool
    options: tuple[Option, ...]
    windows: tuple[ValueWindows, ...]
    least: tuple[LeastChange, ...]
    narrowing: Narrowing | None
    placements: tuple[Placement, ...]
    sentence: str
    notes: tuple[str, ...]
    seconds: float
