"""First-order states of a damped model, balanced, for steady motion at any frequency.

Besides dashpots the stiffness may be complex (loss factors), which the state matrix of the damped roots does
not know. States are g = omega p (forces), v = p' (velocities) of the undamped modes with creeping coordinates
held, and y = R c of the creeping ones; every entry of the matrix is a rate in 1/s.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.linalg as la

from modalview.assembly.dampedterms import DampedTerms
from modalview.assembly.massroot import mass_root_inverse
from modalview.errors import NumericalError
from modalview.response.damping import Damping

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]
Inexact = npt.NDArray[np.inexact]


@dataclass(frozen=True, slots=True, eq=False)
class Undamped:
    """What does not depend on damping: modes with creeping coordinates held, and the static complement.

    Parameters
    ----------
    omega : array (m,)
        Angular frequencies, rad/s; where a motion stretches nothing zero, or (beside creeping coordinates)
        rounding of the largest.
    inertial : array (inertial, m)
        M-orthonormal shapes.
    following : array (static, m)
        Static coordinates of the shapes.
    stretch : array (t, m)
        sqrt(k) times the stretch of each shape over its omega: orthonormal where omega is not zero.
    static : array (t, s)
        Orthonormal basis of sqrt(k) times the stretch of the static coordinates.
    triangle : array (s, s)
        R of sqrt(k) A_static = static R.
    creeping : array (t, c)
        sqrt(k) times the stretch of the creeping coordinates.
    """

    omega: Array
    inertial: Array
    following: Array
    stretch: Array
    static: Array
    triangle: Array
    creeping: Array


@dataclass(frozen=True, slots=True, eq=False)
class States:
    """x' = A x + B f, q from x and f; f over the coordinates of DampedTerms.

    Parameters
    ----------
    matrix : array (n, n)
        A, 1/s; real without loss factors. n = 2 m + creeping.
    drive : array (n, N)
        B.
    undamped : Undamped
    creep : array (c, c)
        R: y = R c.
    giving : array (s, s)
        S^T P S: static coordinates are following p + triangle^-1 giving^-1 (triangle^-T f_s - fed (g, c)).
    fed : array (s, m + c)
        What forces g and creeping coordinates c press on the static ones.
    """

    matrix: Inexact
    drive: Inexact
    undamped: Undamped
    creep: Array
    giving: Inexact
    fed: Inexact

    @property
    def modes(self) -> int:
        """Number m of modes with creeping coordinates held."""
        return int(self.undamped.omega.size)

    def coordinates(self, omega: Array, states: ComplexArray, force: ComplexArray) -> ComplexArray:
        """Return q (N, w) from states (n, w) at frequencies (w,) under forces (N, w)."""
        base, m = self.undamped, self.modes
        g, v, y = states[:m], states[m : 2 * m], states[2 * m :]
        # Both give p; the larger of the two states is the sharper one.
        stiff = base.omega[:, None] > omega
        p = np.where(stiff, g / np.where(stiff, base.omega[:, None], 1.0), v / (1j * omega))
        c = la.solve_triangular(self.creep, y) if len(y) else y
        static = base.following @ p
        if len(base.triangle):
            pressed = la.solve_triangular(base.triangle, force[len(force) - len(base.triangle) :], trans="T")
            rest = np.linalg.solve(self.giving, pressed - self.fed @ np.vstack([g, c]))
            static = static + la.solve_triangular(base.triangle, rest)
        found: ComplexArray = np.vstack([base.inertial @ p, c, static]).astype(complex)
        return found


def undamped_part(terms: DampedTerms) -> Undamped:
    """Find the modes with creeping coordinates held, by the singular values of G = sqrt(k) A L^-T.

    Notes
    -----
    Static coordinates are projected out of G by QR. Dense, about n^3 operations, once per model.
    """
    root = np.sqrt(terms.stiffness)[:, None]
    whole = root * terms.stretching.toarray()
    ends = (terms.inertial, terms.inertial + terms.creeping)
    heavy, creeping, static = np.split(whole, ends, axis=1)
    back = mass_root_inverse(terms.mass, np.ones(terms.inertial, dtype=bool)).toarray()
    g = heavy @ back
    basis, triangle = np.linalg.qr(static) if static.shape[1] else (np.zeros((len(g), 0)), np.zeros((0, 0)))
    rest = g - basis @ (basis.T @ g)
    if len(rest) < terms.inertial:
        rest = np.vstack([rest, np.zeros((terms.inertial - len(rest), terms.inertial))])
    try:
        stretch, omega, turned = np.linalg.svd(rest, full_matrices=False)
    except np.linalg.LinAlgError as error:
        raise NumericalError("The singular values of the stiffness terms did not converge.") from error
    if terms.creeping == 0:
        omega[omega.size - terms.free.shape[1] :] = 0.0  # rigid-body motions, known from structure
    shapes = turned.T
    following = (
        -la.solve_triangular(triangle, basis.T @ g @ shapes) if static.shape[1] else np.zeros((0, g.shape[1]))
    )
    return Undamped(
        omega=omega,
        inertial=back @ shapes,
        following=np.asarray(following),
        stretch=stretch[: len(g)],
        static=basis,
        triangle=triangle,
        creeping=creeping,
    )


def states_of(terms: DampedTerms, base: Undamped, damping: Damping) -> States:
    """Form the state matrix of a damping.

    Notes
    -----
    With P = 1 + i eta per term, V = ``stretch``, S = ``static``, W = ``creeping``: the static coordinates
    follow, which leaves Q = P - P S (S^T P S)^-1 S^T P. Dashpot rows over inertial and creeping coordinates
    are D_v and D_c = T R (QR), so that c' is known: with N = W R^-1 and X = T^T D_v

        g' = omega v
        y' = -X v - N^T Q (V g + N y) + R^-T f_c
        v' = -(D_v^T D_v - X^T X) v - (omega V^T - X^T N^T) Q (V g + N y) + f_p - X^T R^-T f_c

    where f is reduced by what the static coordinates carry. Derived here.
    """
    m, creep = base.omega.size, terms.creeping
    factor = (
        1 + 1j * damping.losses[:, None] if np.any(damping.losses) else np.ones((terms.stiffness.size, 1))
    )
    rows = np.sqrt(damping.times * terms.damping)[:, None] * terms.resisting.toarray()
    over_modes = rows[:, : terms.inertial] @ base.inertial
    turned, r = np.linalg.qr(rows[:, terms.inertial : terms.inertial + creep])
    # Without creeping coordinates these are empty and drop out of everything below.
    light = (
        la.solve_triangular(r, base.creeping.T, trans="T").T if creep else np.zeros((terms.stiffness.size, 0))
    )
    x = turned.T @ over_modes
    both = np.hstack([base.stretch, light])
    giving = base.static.T @ (factor * base.static)
    pressed = base.static.T @ (factor * both)
    carried = np.linalg.solve(giving, pressed)
    inner = both.T @ (factor * both) - pressed.T @ carried
    up, low = inner[:m], inner[m:]
    dtype = inner.dtype
    matrix = np.zeros((2 * m + creep, 2 * m + creep), dtype=dtype)
    g, v, y = slice(0, m), slice(m, 2 * m), slice(2 * m, None)
    forces = np.r_[0:m, 2 * m : 2 * m + creep]
    matrix[g, v] = np.diag(base.omega)
    matrix[np.ix_(range(m, 2 * m), forces)] = x.T @ low - base.omega[:, None] * up
    matrix[v, v] = x.T @ x - over_modes.T @ over_modes
    matrix[y, v] = -x
    matrix[np.ix_(range(2 * m, 2 * m + creep), forces)] = -low
    drive = _drive(terms, base, (r, x), carried)
    fed = np.hstack([pressed[:, :m], base.static.T @ (factor * base.creeping)])
    return States(matrix, drive, base, r, giving, fed)


def _drive(terms: DampedTerms, base: Undamped, creeping: tuple[Array, Array], carried: Inexact) -> Inexact:
    """Return B (n, N): how forces on the coordinates feed the states."""
    r, x = creeping
    m, size = base.omega.size, terms.inertial + terms.creeping + terms.static
    ends = (terms.inertial, terms.inertial + terms.creeping)
    on_modes = np.zeros((m, size), dtype=carried.dtype)
    on_modes[:, : ends[0]] = base.inertial.T
    on_modes[:, ends[1] :] = base.following.T
    on_creep = np.zeros((terms.creeping, size), dtype=carried.dtype)
    if terms.creeping:
        on_creep[:, ends[0] : ends[1]] = la.solve_triangular(r, np.eye(terms.creeping), trans="T")
    if terms.static:
        from_static = la.solve_triangular(base.triangle, np.eye(terms.static), trans="T")
        lost = carried.T @ from_static
        # The part along the undamped following is in ``following`` already: V is square to S.
        on_modes[:, ends[1] :] = on_modes[:, ends[1] :] - base.omega[:, None] * lost[:m]
        on_creep[:, ends[1] :] = on_creep[:, ends[1] :] - lost[m:]
    return np.vstack([np.zeros((m, size)), on_modes - x.T @ on_creep, on_creep])
