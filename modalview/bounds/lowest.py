"""Bounds of the lowest elastic mode."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
from scipy.linalg.lapack import dtrtri

from modalview.assembly.pencil import Pencil
from modalview.bounds.forms import Forms
from modalview.bounds.rigid import RigidBody
from modalview.factor.rounding import SLACK, gamma
from modalview.factor.shifted import ShiftedPencil

Array = npt.NDArray[np.float64]

# Up to this size the trace of the flexibility is formed densely (10 ms at the limit, growing with the cube);
# beyond, a ladder of counts below the upper bound proves the lower one by one or two factorizations, and
# usually a sharper one.
DENSE_TRACE = 500

# Heaviest directions whose unit accelerations are tried beside the rigid ones (design: 12).
HEAVIEST = 12

# What is asked of the counts, as shares of Dunkerley's value: all of it but rounding, then less and less.
BELOW_DUNKERLEY = (1 - 1e-12, 1 - 1e-9, 1 - 1e-6, 0.9, 0.5, 0.1, 1e-2)

# The same as shares of the upper bound, where no trace was formed: a Rayleigh quotient of static shapes is
# usually within a few per cent of the truth.
BELOW_RITZ = (0.9, 0.5, 0.1, 1e-2, 1e-4)

# The bound gives way by the uncertainty of its count: to this share of it no sharpening is worth its time.
PLAIN_ENOUGH = 1e-6

# Combinations of unit shapes shorter than this are what rounding left of dependent ones, and may be
# rigid-body motion.
INDEPENDENT = 1e-6

# The shift that makes K regular for trial shapes, as a share of the largest eigenvalue's bound; any shape is
# a valid trial, so its size proves nothing and spoils nothing.
REGULARISING_SHARE = 1e-12


@dataclass(frozen=True, slots=True)
class Lowest:
    """Bracket of the lowest elastic eigenvalue, rad**2/s**2, rounded outward.

    Parameters
    ----------
    low, high : float
    method : str
        Where the lower bound comes from.
    """

    low: float
    high: float
    method: str


def lowest_bounds(pencil: Pencil, forms: Forms, rigid: RigidBody) -> Lowest:
    """Bracket the lowest elastic eigenvalue: Dunkerley below, Rayleigh-Ritz on static shapes above.

    Parameters
    ----------
    pencil : Pencil
        With at least one mode that is not rigid-body.
    forms : Forms
    rigid : RigidBody
        Its number is known and nothing is below zero.

    Returns
    -------
    Lowest
        ``low`` is 0 where rounding lets no count prove more.

    Notes
    -----
    Dunkerley's value is only a proposal: rounding could lift it above the truth. What is returned is proven
    by a count that finds none but the rigid-body modes below it, less the uncertainty of that count.
    """
    flexibility = _Flexibility.of(forms, rigid.directions) if pencil.modes <= DENSE_TRACE else None
    shapes = _static_shapes(pencil, rigid.directions, flexibility)
    high = ritz_bound(pencil, forms, rigid, shapes)
    if flexibility is None:
        proposals, method = [share * high for share in BELOW_RITZ], "counts below the upper bound"
    else:
        value = 1 / max(flexibility.trace, 1 / high)
        proposals, method = [share * value for share in BELOW_DUNKERLEY], "Dunkerley"
    low = _proven(pencil.shifted, proposals, rigid.directions.shape[1])
    return Lowest(min(low, high), high, method if low else "nothing above zero is proven through rounding")


@dataclass(frozen=True, slots=True, eq=False)
class _Flexibility:
    """S^+ + U U.T / alpha = root.T root, and the trace of S^+.

    U spans the null space of S, so S + alpha U U.T has the elastic eigenvalues of S, and alpha in place of
    the zeros. It is Cholesky's L L.T; root = L^-1, and tr(S^+) = ||root||_F^2 - r / alpha. With alpha the
    mean diagonal of S nothing cancels. In z = W y this is the trace of the flexibility K^+ M on the
    M-orthogonal complement of the rigid-body modes: the sum of all elastic 1/lambda, which the largest of
    them cannot exceed (S. Dunkerley (1894), Phil. Trans. R. Soc. A 185, 279-360).
    """

    root: Array
    trace: float

    @classmethod
    def of(cls, forms: Forms, directions: Array) -> "_Flexibility | None":
        S = forms.S if isinstance(forms.S, np.ndarray) else forms.S.toarray()
        alpha = float(np.mean(np.diag(S))) or 1.0
        try:
            lower = np.linalg.cholesky(S + alpha * directions @ directions.T)
        except np.linalg.LinAlgError:  # graded beyond what the formed S can hold
            return None
        root, _ = dtrtri(lower, lower=1)
        return cls(root, float(np.sum(root**2)) - directions.shape[1] / alpha)


def _static_shapes(pencil: Pencil, directions: Array, flexibility: _Flexibility | None) -> Array:
    """Deflections K^+ M b under trial accelerations b, in y, one a column of length 1."""
    loads = pencil.basis.T @ (pencil.M @ _accelerations(pencil))
    loads -= directions @ (directions.T @ loads)
    if flexibility is not None:
        shapes = flexibility.root.T @ (flexibility.root @ loads)
    else:
        shifted = pencil.shifted
        found = shifted.factorize(-REGULARISING_SHARE * shifted.extents.top)
        shapes = pencil.basis.T @ (pencil.M @ shifted.solve(found, pencil.M @ (pencil.basis @ loads)))
    shapes -= directions @ (directions.T @ shapes)
    length = np.linalg.norm(shapes, axis=0)
    unit: Array = shapes[:, length > 0] / length[length > 0]
    return unit


def _accelerations(pencil: Pencil) -> Array:
    """All of one freedom together (as a rigid body would), and the heaviest directions one by one; (n, q)."""
    massy = np.flatnonzero(~pencil.massless)
    freedoms = [item.freedom for item in pencil.coordinates] or ["all"] * pencil.n
    together = [
        np.array([name == one for name in freedoms]) / pencil.scale for one in dict.fromkeys(freedoms)
    ]
    heavy = pencil.M.diagonal()[massy] / pencil.scale[massy] ** 2
    first = massy[np.argsort(-heavy, kind="stable")[:HEAVIEST]]
    alone = np.zeros((pencil.n, first.size))
    alone[first, np.arange(first.size)] = 1.0
    return np.column_stack([*together, alone])


def ritz_bound(pencil: Pencil, forms: Forms, rigid: RigidBody, shapes: Array) -> float:
    """Bound the lowest elastic eigenvalue from above by the best combination of trial shapes.

    Parameters
    ----------
    pencil : Pencil
    forms : Forms
    rigid : RigidBody
    shapes : array (modes, q)
        Any shapes, in y.

    Returns
    -------
    float, rad**2/s**2
        The Rayleigh quotient of one stored vector, orthogonal to the rigid-body modes, with the rounding of
        its evaluation added (Courant-Fischer). What is left of rigid-body motion in it enters squared.
    """
    span, strength, _ = np.linalg.svd(shapes, full_matrices=False)
    basis = span[:, strength > INDEPENDENT * strength[0]]
    _, vectors = np.linalg.eigh(basis.T @ (forms.S @ basis))
    shape = basis @ vectors[:, 0]
    shape -= rigid.directions @ (rigid.directions.T @ shape)
    squared = float(shape @ shape) * (1 - gamma(shape.size + 4))
    energy = _energy(pencil, forms, shape)
    value = energy / squared * (1 + 2 * forms.share)
    if not rigid.exact and rigid.directions.size:
        value += float(np.linalg.norm(forms.S @ rigid.directions))
        value += float(np.linalg.norm(forms.rounding(np.abs(rigid.directions).sum(axis=1))))
    return float(np.nextafter(value, np.inf))


def _energy(pencil: Pencil, forms: Forms, shape: Array) -> float:
    """y.T S y rounded upward: from the terms where there are some, as nothing cancels between them."""
    size = np.abs(shape)
    if pencil.rows is None or pencil.stiffness is None:
        return float(shape @ (forms.S @ shape)) + SLACK * float(size @ forms.rounding(size))
    root = np.sqrt(np.abs(pencil.stiffness))
    stretch = root * (pencil.rows @ (pencil.basis @ shape))
    wide = np.diff(pencil.rows.indptr).max(initial=0) + np.bincount(pencil.basis.indices).max()
    rounding = root * (abs(pencil.rows) @ (abs(pencil.basis) @ size))
    length = float(np.linalg.norm(stretch)) + gamma(int(wide) + 12) * float(np.linalg.norm(rounding))
    energy: float = length**2 * (1 + gamma(stretch.size + 6))
    return energy


def _proven(shifted: ShiftedPencil, proposals: list[float], rigid: int) -> float:
    for sigma in proposals:
        found = shifted.factorize(sigma, PLAIN_ENOUGH)
        if found.uncertainty >= sigma and shifted.relative is not None:
            found = shifted.relative.factorize(sigma)
        if found.negative <= rigid and found.uncertainty < sigma:
            return float(np.nextafter(sigma - found.uncertainty, 0.0))
    return 0.0
