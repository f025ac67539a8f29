"""Matrices of others as a model: bounds, modes and verdicts without terms."""

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from time import perf_counter

import scipy.sparse as sp

from modalview.assembly.pencil import Pencil, pencil_of_matrices
from modalview.bounds.bands import Cases
from modalview.bounds.before import Bounds, before_solve
from modalview.eigen.modes import Modes
from modalview.eigen.near import NearModes
from modalview.eigen.solve import LARGEST, find_modes
from modalview.errors import CancelledError, InputError
from modalview.factor.parts import PencilParts
from modalview.factor.shifted import ShiftedPencil, shifted_pencil
from modalview.model.parts import Machine
from modalview.resonance.bands import bands, excitation_label
from modalview.resonance.results import Check, Verdict
from modalview.resonance.verdict import Exactness, judge, worst
from modalview.study.completed import completed
from modalview.study.matrices_near import completed_near, modes_near
from modalview.study.matrices_request import MatrixRequest, found_modes, unknown_drives
from modalview.study.matrices_sound import require_mass, require_stiffness
from modalview.study.results import FoundMode
from modalview.study.sentence import sentence
from modalview.study.solve import evidence
from modalview.units.show import short

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

    Beyond the number of modes that are found all at once ``raw`` is None, and ``modes`` are those beside the
    excitations.
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
    """Find all modes of matrices and complete their checks; beyond 6000 those beside the excitations.

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
        return _solved_near(request, outlook, start)
    raw = find_modes(outlook.pencil, cancelled=request.cancelled, progress=request.progress)
    modes = found_modes(raw, request.factors)
    checks = tuple(completed(check, modes, unknown_drives) for check in outlook.checks)
    return MatrixSolution(
        outlook=outlook,
        raw=raw,
        modes=modes,
        checks=checks,
        sentence=sentence(request.model, checks, modes),
        evidence=evidence(raw, modes),
        seconds=perf_counter() - start,
    )


def _solved_near(request: MatrixRequest, outlook: MatrixOutlook, start: float) -> MatrixSolution:
    """Complete the checks by the modes beside each excitation: there are too many to find all."""
    found: dict[int, FoundMode] = {}
    checks = []
    for check in outlook.checks:
        done, modes = completed_near(request, outlook.pencil, check)
        found.update((mode.number, mode) for mode in modes)
        checks.append(done)
    modes = tuple(found[number] for number in sorted(found))
    too_many = f"{outlook.pencil.modes} modes: more than the {LARGEST} that are found all at once"
    untold = ", ".join(check.band.label for check in checks if check.nearest_mode is None)
    if untold:
        note = f"nearest mode of {untold} not told: counts do not prove which it is, among {too_many}"
        outlook = replace(outlook, notes=(*outlook.notes, note))
    return MatrixSolution(
        outlook=outlook,
        raw=None,
        modes=modes,
        checks=tuple(checks),
        sentence=sentence(request.model, checks, modes),
        evidence=(too_many,),
        seconds=perf_counter() - start,
    )


def solve_matrices_near(
    request: MatrixRequest, frequency_hz: float, count: int
) -> tuple[MatrixSolution, NearModes]:
    """Find the modes nearest to a frequency, of matrices of any size; a number of 0 is undecided.

    Raises
    ------
    FileFaultsError
        As `look_at_matrices`.
    InputError
        A count or frequency out of range.
    CancelledError, NumericalError
    """
    start = perf_counter()
    outlook = look_at_matrices(request)
    found = modes_near(request, outlook.pencil, frequency_hz, count)
    solution = MatrixSolution(
        outlook=outlook,
        raw=found.near.modes,
        modes=found.modes,
        checks=outlook.checks,
        sentence=outlook.sentence,
        evidence=_near_evidence(found.near),
        seconds=perf_counter() - start,
    )
    return solution, found.near


def _near_evidence(near: NearModes) -> tuple[str, ...]:
    low, high = (
        math.sqrt(max(edge, 0.0)) / RAD_PER_HZ for edge in (near.certificate.low, near.certificate.high)
    )
    number = near.modes.number
    place = f"{number} modes between {short(low)} and {short(high)} Hz"
    proven = {
        True: f"{place}, none missed (proven by counts)",
        False: f"{place}; counts disagree: do not rely on this",
        None: f"{number} modes; counts are undecided, so others may lie between, and numbers are not told",
    }[near.modes.complete]
    return (proven, near.modes.method, *near.modes.warnings)


def require_modes(solution: MatrixSolution) -> Modes:
    """Return the modes found, or raise InputError where there are too many to be found all at once."""
    if solution.raw is None:
        raise InputError(
            f"The matrices have {solution.evidence[0]}. Ask for some of them by --near and "
            "--count; bounds and check need no more."
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
    percent = f"±{short(100 * share, 4)} %"
    return (
        f"tolerance of {name}: the whole matrix by one common factor, {short(1 - share, 4)} to "
        f"{short(1 + share, 4)}. It "
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
