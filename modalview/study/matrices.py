"""Matrices of others as a model: bounds, modes and verdicts without terms."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from time import perf_counter

import numpy as np
import scipy.sparse as sp

from modalview.assembly.pencil import Pencil, pencil_of_matrices
from modalview.bounds.bands import Cases
from modalview.bounds.before import Bounds, before_solve
from modalview.eigen.modes import Modes
from modalview.eigen.solve import LARGEST, find_modes
from modalview.errors import CancelledError, InputError
from modalview.factor.parts import PencilParts
from modalview.factor.rounding import gamma
from modalview.factor.shifted import ShiftedPencil, shifted_pencil
from modalview.model.parts import Machine, Model, Motion
from modalview.resonance.bands import bands, excitation_label
from modalview.resonance.results import Check, ModeDrive, Verdict
from modalview.resonance.verdict import Exactness, judge, worst
from modalview.store.matrices import MatrixPair
from modalview.study.completed import ELASTIC, RIGID, UNSTABLE, completed
from modalview.study.matrices_sound import require_mass, require_stiffness
from modalview.study.results import FoundMode, never
from modalview.study.sentence import sentence
from modalview.study.solve import evidence

RAD_PER_HZ = 2 * math.pi

# What a model of parts tells and matrices cannot.
ABSENT = (
    "names of the modes, of their directions and of rigid-body modes",
    "energy shares and sensitivities by part",
    "effective masses",
    "whether an excitation drives a mode",
    "a tolerance of its own for each spring and mass",
)
LACKING = "matrices name no parts, so these are absent: " + "; ".join(ABSENT)
UNITS = "SI is assumed: N/m and kg, N m/rad and kg m² (eigenvalues in rad²/s²)"


@dataclass(frozen=True, slots=True, eq=False)
class MatrixRequest:
    """Matrices to be studied, and what must stay clear of their modes.

    Parameters
    ----------
    pair : MatrixPair
    machines : tuple of Machine
        Speeds, orders, margins.
    tolerance_k, tolerance_m : float
        Share, 0 to below 1, by which the whole of K and the whole of M may lie off to either side.
    cancelled : callable
        Asked between steps.
    progress : callable or None
        Told (what is done, share done 0..1).
    """

    pair: MatrixPair
    machines: tuple[Machine, ...] = ()
    tolerance_k: float = 0.0
    tolerance_m: float = 0.0
    cancelled: Callable[[], bool] = never
    progress: Callable[[str, float], None] | None = None

    @property
    def model(self) -> Model:
        """A model of no part, which carries the machines."""
        return Model(motion=Motion.SPACE, machines=self.machines)

    @property
    def toleranced(self) -> bool:
        """Whether any value may lie off."""
        return self.tolerance_k > 0 or self.tolerance_m > 0

    @property
    def factors(self) -> tuple[float, float]:
        """Eigenvalues at the soft-heavy and at the stiff-light case over nominal ones, rounded outward."""
        low = (1 - self.tolerance_k) / (1 + self.tolerance_m)
        high = (1 + self.tolerance_k) / (1 - self.tolerance_m)
        return (low * (1 - gamma(4)), high * (1 + gamma(4))) if self.toleranced else (1.0, 1.0)


@dataclass(frozen=True, slots=True, eq=False)
class MatrixOutlook:
    """What is known of matrices before any solve; fields as in `Outlook`."""

    request: MatrixRequest
    pencil: Pencil
    bounds: Bounds
    checks: tuple[Check, ...]
    verdict: Verdict | None
    sentence: str
    not_checked: tuple[str, ...]
    notes: tuple[str, ...]
    seconds: float


@dataclass(frozen=True, slots=True, eq=False)
class MatrixSolution:
    """The modes of matrices, and the checks with what they add; fields as in `Solution`.

    ``raw`` is None and ``modes`` empty beyond the number of modes that are found all at once.
    """

    outlook: MatrixOutlook
    raw: Modes | None
    modes: tuple[FoundMode, ...]
    checks: tuple[Check, ...]
    sentence: str
    evidence: tuple[str, ...]
    seconds: float


@dataclass(frozen=True, slots=True)
class _Wholes(Exactness):
    """Which of K and M is taken as exact."""

    exact_names: tuple[str, ...] = ()

    @property
    def words(self) -> str:
        """What is added to "clear"."""
        if self.exact == self.values:
            return " (values taken as exact)"
        return f" ({self.exact_names[0]} taken as exact)" if self.exact_names else ""


def look_at_matrices(request: MatrixRequest) -> MatrixOutlook:
    """Tell what is known of matrices before any solve, verdicts included.

    Raises
    ------
    FileFaultsError
        M is not positive (semi)definite or K is indefinite; names the file and the measure.
    CancelledError
    """
    start = perf_counter()
    pair = request.pair
    require_mass(pair.M, str(pair.mass_file or "the mass matrix"))
    pencil = pencil_of_matrices(pair.K, pair.M)
    doubts = require_stiffness(pencil, str(pair.stiffness_file))
    _stop_if(request)
    bounds = before_solve(pencil)
    checks = _checks(request, pencil)
    return MatrixOutlook(
        request=request,
        pencil=pencil,
        bounds=bounds,
        checks=checks,
        verdict=worst(checks),
        sentence=sentence(request.model, checks),
        not_checked=_not_checked(request.machines),
        notes=(
            UNITS,
            *pair.notes,
            *_massless(pencil),
            *_zeros(bounds),
            *tolerance_notes(request),
            *doubts,
            LACKING,
        ),
        seconds=perf_counter() - start,
    )


def solve_matrices(request: MatrixRequest, outlook: MatrixOutlook | None = None) -> MatrixSolution:
    """Find all modes of matrices and complete their checks; without modes beyond 6000.

    Raises
    ------
    FileFaultsError
        As `look_at_matrices`.
    CancelledError
    NumericalError
        An iteration did not converge.
    """
    start = perf_counter()
    outlook = outlook or look_at_matrices(request)
    if outlook.pencil.modes > LARGEST:
        too_many = f"{outlook.pencil.modes} modes: more than the {LARGEST} that are found all at once"
        return MatrixSolution(
            outlook, None, (), outlook.checks, outlook.sentence, (too_many,), perf_counter() - start
        )
    raw = find_modes(outlook.pencil, cancelled=request.cancelled, progress=request.progress)
    modes = _found(raw, request.factors)
    checks = tuple(completed(check, modes, _unknown_drives) for check in outlook.checks)
    return MatrixSolution(
        outlook=outlook,
        raw=raw,
        modes=modes,
        checks=checks,
        sentence=sentence(request.model, checks, modes),
        evidence=evidence(raw, modes),
        seconds=perf_counter() - start,
    )


def require_modes(solution: MatrixSolution) -> Modes:
    """Return the modes found, or raise InputError where there are too many to be found all at once."""
    if solution.raw is None:
        raise InputError(
            f"The matrices have {solution.evidence[0]}. bounds and check work by counts, without modes."
        )
    return solution.raw


def tolerance_notes(request: MatrixRequest) -> tuple[str, ...]:
    """Say what a tolerance of a whole matrix covers and what it does not.

    Notes
    -----
    For K = sum k_i a_i a_i^T with every k_i > 0, and each k_i by itself within its share t of nominal,
    (1 - t) x^T K x <= x^T K' x <= (1 + t) x^T K x at every x, so that Courant-Fischer encloses each mode by
    the two scaled matrices. The same for M. Nothing else is enclosed.
    """
    if not request.toleranced:
        return ("K and M are taken as exact, without tolerance",)
    given = (("K", request.tolerance_k, "stiffness"), ("M", request.tolerance_m, "mass"))
    found = [f"{name} is taken as exact, without tolerance" for name, share, _ in given if not share]
    return (*found, *(_covered(name, share, word) for name, share, word in given if share))


def _covered(name: str, share: float, word: str) -> str:
    percent = f"±{100 * share:.4g} %"
    return (
        f"tolerance of {name}: the whole matrix by one common factor, {1 - share:.4g} to {1 + share:.4g}. It "
        f"encloses every mode also where each {word} that {name} is a sum of lies off by itself, none by "
        f"more than {percent} and none negative. It does not cover one that lies off by more, dimensions, or "
        f"entries of {name} changed one by one"
    )


def _checks(request: MatrixRequest, pencil: Pencil) -> tuple[Check, ...]:
    wanted = bands(request.model)
    if not wanted:
        return ()
    names = (("K", request.tolerance_k), ("M", request.tolerance_m))
    exact = tuple(name for name, share in names if not share)
    exactness = _Wholes(len(exact), len(names), exact)
    cases = _cases(pencil, request)
    found = []
    for band in wanted:
        _stop_if(request)
        found.append(judge(band, cases, exactness))
    return tuple(found)


def _cases(pencil: Pencil, request: MatrixRequest) -> Cases:
    """Return the pencil with K scaled to the eigenvalues of each case; M and the pattern stay."""
    nominal = pencil.shifted
    if not request.toleranced:
        return Cases(nominal, nominal, nominal)
    low, high = request.factors
    return Cases(nominal, _scaled(pencil, low), _scaled(pencil, high))


def _scaled(pencil: Pencil, factor: float) -> ShiftedPencil:
    stiffness = sp.csc_array(factor * pencil.K)
    parts = PencilParts(
        K=stiffness,
        M=pencil.M,
        basis=pencil.basis,
        formation=sp.csc_array(abs(stiffness)),
        massless=pencil.massless,
        terms=1,  # scaling rounds each entry once
    )
    return shifted_pencil(parts, pencil.shifted.pattern)


def _found(raw: Modes, factors: tuple[float, float]) -> tuple[FoundMode, ...]:
    repeated = {i: (start, stop) for start, stop in raw.repeated for i in range(start, stop)}
    nothing = np.zeros((0, 6))
    nothing.setflags(write=False)
    found = []
    for i in range(raw.number):
        kind = _kind(raw, i)
        start, stop = repeated.get(i, (0, 0))
        found.append(
            FoundMode(
                number=i + 1,
                name="" if kind == ELASTIC else kind,
                frequency_hz=float(raw.frequency_hz[i]),
                numerical_error_hz=float(raw.numerical_error_hz[i]),
                range_hz=_range(raw, i, factors) if kind == ELASTIC else (0.0, 0.0),
                kind=kind,
                repeated_with=tuple(range(start + 1, stop + 1)) if kind == ELASTIC else (),
                strain=(),
                kinetic=(),
                sensitivity=(),
                effective_mass=(),
                motion=nothing,
            )
        )
    return tuple(found)


def _range(raw: Modes, i: int, factors: tuple[float, float]) -> tuple[float, float]:
    """Return the frequencies at the two cases: the eigenvalue scaled, its numerical interval included."""
    if factors == (1.0, 1.0):
        return float(raw.frequency_hz[i]), float(raw.frequency_hz[i])
    low = math.sqrt(max(float(raw.lower[i]), 0.0) * factors[0]) * (1 - gamma(3))
    high = math.sqrt(max(float(raw.upper[i]), 0.0) * factors[1]) * (1 + gamma(3))
    return low / RAD_PER_HZ, high / RAD_PER_HZ


def _kind(raw: Modes, i: int) -> str:
    if i < raw.unstable:
        return UNSTABLE
    return RIGID if i < raw.unstable + raw.rigid_body_modes else ELASTIC


def _unknown_drives(numbers: Sequence[int]) -> tuple[ModeDrive, ...]:
    del numbers  # a force has no place to act without parts
    return ()


def _not_checked(machines: Sequence[Machine]) -> tuple[str, ...]:
    found = [
        f"{machine.id}: orders and frequencies other than "
        + ", ".join(excitation_label(excitation) for excitation in machine.excitations)
        for machine in machines
    ]
    return (*found, "whatever the matrices leave out: they are taken as the whole model")


def _massless(pencil: Pencil) -> tuple[str, ...]:
    number = pencil.n - pencil.modes
    if number == 0:
        return ()
    which = "1 coordinate has" if number == 1 else f"{number} coordinates have"
    return (f"{which} no mass and follow the others statically: {pencil.modes} modes",)


def _zeros(bounds: Bounds) -> tuple[str, ...]:
    number = bounds.rigid_body_modes
    if not number:
        return ()
    modes = "1 mode" if number == 1 else f"{number} modes"
    return (f"{modes} at 0 Hz, told by counts: motion that nothing resists; left out of every band",)


def _stop_if(request: MatrixRequest) -> None:
    if request.cancelled():
        raise CancelledError("Stopped by the user.")
