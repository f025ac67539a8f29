"""The modes nearest to a frequency, of models of any size, proven complete by counts."""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from modalview.assembly.pencil import Pencil
from modalview.eigen.completeness import Signs
from modalview.eigen.deflation import mass_orthonormal
from modalview.eigen.gathered import ascending, gathered
from modalview.eigen.intervals import Intervals, enclose
from modalview.eigen.modes import Count, Modes
from modalview.eigen.near_certificate import Certificate
from modalview.eigen.near_hunt import TIE, Hunt
from modalview.eigen.near_search import Progress
from modalview.eigen.near_small import SMALL, chosen
from modalview.eigen.rayleigh import Energy
from modalview.eigen.solve import find_modes, never
from modalview.eigen.threads import one_blas_thread
from modalview.errors import CancelledError, InputError

Array = npt.NDArray[np.float64]

# Modes asked for at once: the subspace of one search has 200 dimensions.
MOST = 80

# Relative width of an interval beyond which a small model is solved as a whole.
SHARP = 1e-11

METHOD = "shifted inverse iteration with Krylov acceleration"


@dataclass(frozen=True, slots=True, eq=False)
class NearModes:
    """The modes nearest to a frequency.

    Parameters
    ----------
    sigma : float
        What they are nearest to, rad**2/s**2.
    modes : Modes
        At least as many as were asked for: all between the ends of the certificate. ``complete`` says
        whether counts prove that.
    numbers : tuple of int or None
        Number of each mode among all, from 1, rigid-body modes included; None where undecided.
    certificate : Certificate
    history : tuple of Progress
        Residuals as they fell, search by search.
    """

    sigma: float
    modes: Modes
    numbers: tuple[int, ...] | None
    certificate: Certificate
    history: tuple[Progress, ...]


def find_near(
    pencil: Pencil,
    sigma: float,
    count: int,
    *,
    rigid_body: bool = False,
    cancelled: Callable[[], bool] = never,
    progress: Callable[[str, float], None] | None = None,
) -> NearModes:
    """Find the modes whose eigenvalues lie nearest to a value.

    Parameters
    ----------
    pencil : Pencil
        Of any size.
    sigma : float
        omega**2, rad**2/s**2, not below zero.
    count : int
        1 to 80; clipped to the elastic modes there are.
    rigid_body : bool
        Whether rigid-body modes known from structure are given too, where zero lies among those found.
    cancelled, progress : callables
        As for `find_modes`.

    Returns
    -------
    NearModes
        Never fewer than ``count`` and never part of a tie. Intervals hold the truth as for `find_modes`.

    Raises
    ------
    InputError
        A count or value out of range; no elastic mode.
    NumericalError
        The iteration did not converge.
    CancelledError
        ``cancelled`` said so.

    Notes
    -----
    Inverse iteration at one shift, accelerated by the Krylov subspace it spans, fully reorthogonalised,
    piece by piece where the model falls apart. One starting vector finds one of several equal modes: counts
    on both sides tell how many are missing, and the search runs again with what was found kept out.

    References
    ----------
    C. Lanczos (1950), J. Res. Natl. Bur. Stand. 45, 255. T. Ericsson, A. Ruhe (1980), Math. Comp. 35, 1251.
    """
    _check(pencil, sigma, count)

    def step(what: str, share: float) -> None:
        if cancelled():
            raise CancelledError("Finding the modes was stopped.")
        if progress is not None:
            progress(what, share)

    with one_blas_thread():
        elastic = pencil.modes - pencil.rigid_body.shape[1]
        hunt = Hunt(pencil, sigma, min(count, elastic), step).complete()
        step("error bounds", 0.9)
        found = _weighed(pencil, hunt, rigid_body=rigid_body)
    if rigid_body or pencil.modes > SMALL or (found.modes.complete and _sharp(found.modes)):
        return found
    return _from_all(pencil, found, count)


def _check(pencil: Pencil, sigma: float, count: int) -> None:
    if not (np.isfinite(sigma) and sigma >= 0):
        raise InputError(f"Modes near sigma = {sigma:g} rad²/s² are asked for; it must not be below zero.")
    if not 1 <= count <= MOST:
        raise InputError(f"{count} modes are asked for near a frequency; ask for 1 to {MOST}.")
    if pencil.modes == pencil.rigid_body.shape[1]:
        raise InputError("The model has no elastic mode: nothing resists its motions.")


def _weighed(pencil: Pencil, hunt: Hunt, *, rigid_body: bool) -> NearModes:
    """Enclose what was found and weigh the evidence."""
    energy, shapes = Energy.of(pencil), hunt.shapes()
    shapes, found = ascending(shapes, energy.rayleigh(shapes))
    certificate = _certificate(hunt, found.quotient.size)
    whole = certificate.complete is True
    # Where counts prove nothing, no gap between intervals is known.
    outside = (certificate.low, certificate.high) if whole else (np.inf, -np.inf)
    below_zero = certificate.low <= 0
    intervals = enclose(energy, shapes, found, sum(hunt.rigid) if below_zero else 0, outside=outside)
    known = pencil.rigid_body[:, : pencil.rigid_body.shape[1] if rigid_body and below_zero else 0]
    known = mass_orthonormal(pencil, known) if known.shape[1] else known
    modes = gathered(known, shapes, found, intervals, _signs(intervals, definite=pencil.shifted.definite))
    sure = certificate.complete if intervals.separate or not whole else None
    modes = replace(
        modes,
        counts=_counts(certificate),
        complete=sure,
        method=METHOD if pencil.stiffness is None else f"{METHOD}, polished from the terms",
        warnings=(*modes.warnings, *hunt.warnings),
    )
    return NearModes(
        sigma=hunt.asked,
        modes=modes.frozen(),
        numbers=_numbers(certificate, modes, sum(hunt.rigid), known.shape[1]) if sure else None,
        certificate=certificate if sure is not None else replace(certificate, counted=None),
        history=tuple(entry for search in hunt.searches for entry in search.history),
    )


def _sharp(modes: Modes) -> bool:
    """Whether every error bound is as narrow as a model that is not graded gives it."""
    wide = modes.upper - modes.lower > SHARP * np.abs(modes.eigenvalues)
    return not bool(np.any(wide & (modes.eigenvalues != 0)))


def _from_all(pencil: Pencil, found: NearModes, count: int) -> NearModes:
    """Where a small model is so graded that counts or bounds suffer, find all of its modes and choose."""
    modes, numbers, certificate = chosen(find_modes(pencil), found.sigma, count, TIE)
    return NearModes(found.sigma, modes, numbers, certificate, found.history)


def _certificate(hunt: Hunt, found: int) -> Certificate:
    if hunt.edges is None:
        return Certificate(hunt.asked - hunt.reach, hunt.asked + hunt.reach, None, found, None)
    return hunt.edges.certificate(hunt.rigid, found)


def _signs(intervals: Intervals, *, definite: bool) -> Signs:
    """Tell negative eigenvalues and those whose interval holds zero from the others."""
    if definite:
        return Signs(0, 0, ())
    unstable = int(np.sum(intervals.upper < 0))
    zeros = int(np.sum(intervals.lower <= 0)) - unstable
    warnings = []
    if unstable:
        warnings.append(f"Unstable: {unstable} of these eigenvalues are negative; they grow without limit.")
    if zeros:
        warnings.append(f"{zeros} eigenvalues cannot be told from zero and are shown as 0 Hz.")
    return Signs(unstable, max(zeros, 0), tuple(warnings))


def _counts(certificate: Certificate) -> tuple[Count, ...]:
    if certificate.counted is None or certificate.below is None:
        return ()
    below = certificate.below
    return (
        Count(certificate.low, below, below),
        Count(certificate.high, below + certificate.found, below + certificate.counted),
    )


def _numbers(certificate: Certificate, modes: Modes, rigid: int, shown: int) -> tuple[int, ...]:
    """Count on from the modes below; rigid-body modes stand between unstable and elastic ones."""
    numbers = (certificate.below or 0) + 1 + np.arange(modes.number)
    if certificate.low <= 0:
        numbers[modes.unstable + shown :] += rigid - shown
    return tuple(numbers.tolist())
