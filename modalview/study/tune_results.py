"""What is asked of tuning to measured peaks, and what window and command line are given."""

from collections.abc import Callable
from dataclasses import dataclass

from modalview.assembly.chosen import Chosen
from modalview.model.differences import Rewrite
from modalview.model.parts import Model
from modalview.study.results import Solution, never


@dataclass(frozen=True, slots=True)
class TuneRequest:
    """Which values are to be tuned; captures all its inputs.

    Parameters
    ----------
    model : Model
        With measured peaks.
    values : tuple of str
        Names such as "k3" or "sole.stiffness.rz", or with a range that goes before the tolerance,
        "k3=50 to 500 kN/mm". Empty: every value is tried alone, and nothing is tuned.
    pairs : tuple of (str, int)
        Peaks and the numbers of the modes that they are to be taken for.
    number : int
        Of the request; results of an older number are dropped by who asked.
    cancelled : callable
        Asked between steps.
    progress : callable or None
        Told (what is done, share done 0..1).
    """

    model: Model
    values: tuple[str, ...] = ()
    pairs: tuple[tuple[str, int], ...] = ()
    number: int = 0
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None


@dataclass(frozen=True, slots=True)
class PeakFit:
    """A measured peak and the mode it is taken for.

    Parameters
    ----------
    id : str
    measured_hz, uncertainty_hz : float
        The uncertainty is taken as one standard deviation.
    assumed : bool
        Whether the uncertainty was not given.
    mode : int or None
        Its number at the values as typed; None where no mode fits, see ``reason``.
    mode_name : str
    before_hz : float or None
    likeness : float or None
        MAC with the measured shape at the values as typed; None without one.
    others : tuple of int
        Numbers of modes that may be meant as well.
    wanted : bool
        Whether the person chose the mode.
    reason : str
        Why it is not paired, or what of it could not be used; mostly empty.
    tuned_mode : int or None
        Number of the same mode at the tuned values; None where nothing was tuned.
    after_hz : float or None
    missed_by : float or None
        (tuned - measured) / uncertainty.
    """

    id: str
    measured_hz: float
    uncertainty_hz: float
    assumed: bool
    mode: int | None
    mode_name: str
    before_hz: float | None
    likeness: float | None
    others: tuple[int, ...]
    wanted: bool
    reason: str
    tuned_mode: int | None = None
    after_hz: float | None = None
    missed_by: float | None = None


@dataclass(frozen=True, slots=True)
class TunedValue:
    """A value and what the peaks make of it.

    Parameters
    ----------
    chosen : Chosen
        With the range it was tuned in.
    after : float
        SI, as typed in the edit.
    interval : pair of float
        95 %, from the uncertainties of the peaks alone, by the covariance linearised at the tuned values, SI.
    with_others : pair of float
        The interval moved by what the other values within their tolerances can do at worst (linearised).
    at_end : str
        "", or "low" or "high" where it ran into an end of its range.
    """

    chosen: Chosen
    after: float
    interval: tuple[float, float]
    with_others: tuple[float, float]
    at_end: str


@dataclass(frozen=True, slots=True)
class ToldCombination:
    """Values that move together, and how well the peaks tell how far.

    Parameters
    ----------
    values : tuple of (str, float)
        Names and shares; signs that differ mean that one rises while the other falls.
    singular : float
        Standard deviations of the peaks that the combination's half range is worth.
    told : str
        "determined", "hardly determined" or "not determined".
    """

    values: tuple[tuple[str, float], ...]
    singular: float
    told: str


@dataclass(frozen=True, slots=True)
class Alone:
    """One value tuned by itself, or one other pairing tried.

    Parameters
    ----------
    label : str
        The value; of a pairing "peak as mode 3".
    values : tuple of (Chosen, float)
        What the values become, SI.
    worst : float
        The largest |tuned - measured| / uncertainty that is left.
    met : bool
        Whether every peak is met within 1.96 standard deviations.
    at_end : bool
        Whether a value ran into an end of its range.
    needed : float or None
        What one value alone would have to be to meet the peaks, in its range or not, SI; None where nothing
        from a thousandth to a thousandfold does.
    """

    label: str
    values: tuple[tuple[Chosen, float], ...]
    worst: float
    met: bool
    at_end: bool
    needed: float | None = None


@dataclass(frozen=True, slots=True, eq=False)
class TuneResult:
    """Values tuned to measured peaks, or why not.

    Parameters
    ----------
    request : TuneRequest
    peaks : tuple of PeakFit
    values : tuple of TunedValue
        Empty where nothing was tuned.
    combinations : tuple of ToldCombination
        What the peaks tell of the chosen values, best first.
    alone : tuple of Alone
        Without chosen values: every value tuned by itself, best first.
    otherwise : tuple of Alone
        The same tuning with a peak taken for another mode that may be meant.
    edit : Rewrite or None
        All tuned values as one edit; None where the peaks do not determine them within their ranges.
    before : Solution
    after : Solution or None
        Of the edited model, solved and proven anew.
    refused : str
        Why there is no edit; empty where there is one.
    sentence : str
        The result in words.
    notes : tuple of str
    seconds : float
    """

    request: TuneRequest
    peaks: tuple[PeakFit, ...]
    before: Solution
    notes: tuple[str, ...]
    values: tuple[TunedValue, ...] = ()
    combinations: tuple[ToldCombination, ...] = ()
    alone: tuple[Alone, ...] = ()
    otherwise: tuple[Alone, ...] = ()
    edit: Rewrite | None = None
    after: Solution | None = None
    refused: str = ""
    sentence: str = ""
    seconds: float = 0.0
