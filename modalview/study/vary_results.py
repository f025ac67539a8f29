"""What is asked when values are varied, and what window and command line are given."""

from collections.abc import Callable
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.chosen import Chosen
from modalview.model.parts import Model
from modalview.study.results import never

Array = npt.NDArray[np.float64]

EVEN, RATIO = "even", "ratio"
UNIFORM, TRIANGULAR = "uniform", "triangular"
SPREADS = (UNIFORM, TRIANGULAR)
VELOCITY = "velocity rms"


@dataclass(frozen=True, slots=True)
class GridRequest:
    """One or two values over ranges; captures all its inputs.

    Parameters
    ----------
    model : Model
    values : tuple of str
        One or two, such as "k3=50 to 500 kN/mm" or "m1.from.offset.z=-0.6 to -0.1 m"; without a range over
        the tolerance.
    points : int
        Along each.
    spacing : str
        "even" or "ratio": the same step, or the same ratio, from point to point.
    executor : Executor or None
        Works on the rows of two values side by side; None: here.
    number, cancelled, progress
        As in ``Request``.
    """

    model: Model
    values: tuple[str, ...]
    points: int = 21
    spacing: str = EVEN
    executor: Executor | None = None
    number: int = 0
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None


@dataclass(frozen=True, slots=True)
class Meet:
    """Where two curves of frequency come together.

    Parameters
    ----------
    lines : pair of int
        Numbers of the modes at the first point, from 1.
    value : float
        Of the value that is varied, SI.
    frequency_hz, gap_hz : float
        Midway between the two, and what is between them; 0 where they cross.
    crossing : bool
        They cross, shapes unchanged; otherwise they veer: the curves turn away and swap their shapes.
    """

    lines: tuple[int, int]
    value: float
    frequency_hz: float
    gap_hz: float
    crossing: bool


@dataclass(frozen=True, slots=True, eq=False)
class Grid:
    """Frequencies and verdicts over one or two values.

    Parameters
    ----------
    request : GridRequest
    axes : tuple of (Chosen, array)
        Each value with the numbers it takes, SI, ascending.
    frequencies_hz : array (p, modes) or (p, q, modes)
        Column i follows, by its shape, the mode that is number i + 1 where all values are lowest.
    checks : tuple of (str, str)
        Check and label of every order.
    verdicts : tuple of tuple of str
        For every point, the last value running fastest, the verdict of each check, proven by counts over the
        tolerances of all values.
    worst : tuple of str
        For every point, the worst of them; empty without checks.
    meets : tuple of Meet
        Of one value: where curves cross or veer.
    clear : tuple of (float, float)
        Of one value: first and last of the neighbouring points at which every check is clear, SI.
    coordinates : int
    notes : tuple of str
    seconds : float
    """

    request: GridRequest
    axes: tuple[tuple[Chosen, Array], ...]
    frequencies_hz: Array
    checks: tuple[tuple[str, str], ...]
    verdicts: tuple[tuple[str, ...], ...]
    worst: tuple[str, ...]
    meets: tuple[Meet, ...]
    clear: tuple[tuple[float, float], ...]
    coordinates: int
    notes: tuple[str, ...]
    seconds: float


@dataclass(frozen=True, slots=True)
class SampleRequest:
    """Values drawn at random within their tolerances; captures all its inputs.

    Parameters
    ----------
    model : Model
    values : tuple of str
        Ranges that go before the tolerances, and coordinates, which have none: "m1.from.offset.z=-0.6 to
        -0.1 m". All other values are drawn within their tolerances.
    samples : int
    seed : int
        The same seed gives the same samples, whatever works on them.
    spread : str
        "uniform" or "triangular", which is most frequent at the value as typed.
    response : bool
        Whether the motion at the running speeds is computed, too.
    executor : Executor or None
        Works on chunks side by side: of threads, processes or a cluster; None: here.
    number, cancelled, progress
        As in ``Request``.
    """

    model: Model
    values: tuple[str, ...] = ()
    samples: int = 10_000
    seed: int = 0
    spread: str = UNIFORM
    response: bool = False
    executor: Executor | None = None
    number: int = 0
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None


@dataclass(frozen=True, slots=True)
class InBand:
    """How often a mode lay in a check's band.

    Parameters
    ----------
    check, label : str
    samples : int
        With a mode in the band at nominal speed.
    share : float
        Of all samples.
    """

    check: str
    label: str
    samples: int
    share: float


@dataclass(frozen=True, slots=True, eq=False)
class Amplitudes:
    """The largest motion of a point over the running speeds of a machine, the sum of all excitations.

    Parameters
    ----------
    machine, watch : str
    nominal, sampled : float, array (samples,)
        Velocity, m/s rms (rad/s in a shaft train); infinite where nothing damps a resonance.
    """

    machine: str
    watch: str
    nominal: float
    sampled: Array


@dataclass(frozen=True, slots=True, eq=False)
class Samples:
    """Frequencies, and motion, at values drawn at random.

    Parameters
    ----------
    request : SampleRequest
    drawn : tuple of (str, str)
        Name and label of each value that was drawn.
    values : array (samples, drawn)
        SI.
    frequencies_hz : array (samples, modes)
        In their order at each sample.
    nominal_hz : array (modes,)
    proven_hz : array (modes, 2) or None
        Over the same ranges by the two cases; None where coordinates vary, for which there is no such proof.
    in_band : tuple of InBand
    amplitudes : tuple of Amplitudes
    coordinates : int
    notes : tuple of str
    seconds : float
    """

    request: SampleRequest
    drawn: tuple[tuple[str, str], ...]
    values: Array
    frequencies_hz: Array
    nominal_hz: Array
    proven_hz: Array | None
    in_band: tuple[InBand, ...]
    amplitudes: tuple[Amplitudes, ...]
    coordinates: int
    notes: tuple[str, ...]
    seconds: float
