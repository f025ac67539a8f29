"""What measured peaks can and cannot tell of chosen values."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case, values_at

Array = npt.NDArray[np.float64]

# Ends of the interval that holds 95 % of a normal distribution, in standard deviations.
NORMAL_95 = 1.959964
# A combination of values that moves the peaks by less than this share of what the strongest one does is told
# by none of them: the rest is rounding of shapes and eigenvalues.
NOTHING = 1e-7
# A value with less than this share in a combination of unit length is not named.
NAMED = 0.3


@dataclass(frozen=True, slots=True)
class Combination:
    """Values that move together, and how well the peaks tell how far.

    Parameters
    ----------
    parts : tuple of (int, float)
        Which of the values, and its share in ln(value) per half range, largest first and positive.
    singular : float
        How many standard deviations of the peaks they move by when the combination moves by its half range.
    told : str
        "determined", "hardly determined" (the peaks tell no more than the range does) or "not determined".
    """

    parts: tuple[tuple[int, float], ...]
    singular: float
    told: str


DETERMINED, HARDLY, NOT = "determined", "hardly determined", "not determined"


def value_slopes(assembly: Assembly, eigenvalues: Array, shapes: Array) -> Array:
    """Return d(ln f) / d(ln value) of every typed value (parameters, modes).

    Half the strain-energy share of the terms that a value enters, minus half its kinetic share.

    Parameters
    ----------
    assembly : Assembly
    eigenvalues : array (modes,)
        Above zero.
    shapes : array (n, modes)
        M-orthonormal.

    References
    ----------
    Lord Rayleigh (1894), The Theory of Sound, section 88 (from memory).
    """
    structure, at = assembly.structure, values_at(assembly.parameters, Case.NOMINAL)
    found = np.zeros((len(assembly.parameters) + 1, shapes.shape[1]))
    for terms, over, sign in ((structure.stiffness, eigenvalues, 0.5), (structure.mass, 1.0, -0.5)):
        energy = terms.values(at)[:, None] * np.asarray(terms.rows @ shapes) ** 2 / over
        for place in terms.product_of.T:
            np.add.at(found, place, sign * energy)
    return found[:-1]


def combinations(weighted: Array, half_ranges: Array) -> tuple[Combination, ...]:
    """Return the combinations of values by how well peaks tell them, best first.

    Parameters
    ----------
    weighted : array (peaks, values)
        d(ln f) / d(ln value) over the relative uncertainty of each peak.
    half_ranges : array (values,)
        Half the width of each value's range, of its logarithm.

    Returns
    -------
    tuple of Combination
        The right singular vectors of the matrix in half ranges; of more values than peaks, those that no peak
        tells come last with 0.

    Notes
    -----
    G. H. Golub, C. F. Van Loan (1983), Matrix Computations, section 5.5 (rank-deficient least squares; from
    memory).
    """
    count = half_ranges.size
    _, singular, turned = np.linalg.svd(weighted * half_ranges)
    sizes = np.zeros(count)
    sizes[: singular.size] = singular
    return tuple(_combination(row, size, float(sizes[0])) for row, size in zip(turned, sizes, strict=True))


def _combination(row: Array, size: float, strongest: float) -> Combination:
    order = np.argsort(-np.abs(row), kind="stable")
    sign = 1.0 if row[order[0]] > 0 else -1.0
    parts = tuple((int(i), float(sign * row[i])) for i in order if abs(row[i]) >= NAMED)
    if size <= NOTHING * strongest or strongest == 0:
        told = NOT
    else:
        told = DETERMINED if size >= NORMAL_95 else HARDLY
    return Combination(parts, float(size), told)


def deviations(weighted: Array) -> Array:
    """Return the standard deviation of ln(value) (values,), from the linearised covariance.

    Parameters
    ----------
    weighted : array (peaks, values)
        As for ``combinations``; of full rank.

    Notes
    -----
    Covariance (J^T J)^-1 for independent peaks with known uncertainties. Y. Bard (1974), Nonlinear Parameter
    Estimation, chapter 7 (from memory).
    """
    _, singular, turned = np.linalg.svd(weighted, full_matrices=False)
    found: Array = np.linalg.norm(turned / singular[:, None], axis=0)
    return found


def carried_over(weighted: Array, others: Array, half_ranges: Sequence[float] | Array) -> Array:
    """Return how far ln(value) (values,) moves at most when other values lie at the ends of their ranges.

    Parameters
    ----------
    weighted : array (peaks, values)
    others : array (peaks, others)
        The same for values that were not tuned.
    half_ranges : sequence of float
        Of the others.
    """
    moved = np.linalg.pinv(weighted) @ others
    found: Array = np.abs(moved) @ np.asarray(half_ranges, dtype=float)
    return found
