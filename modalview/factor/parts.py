"""What a shifted pencil is made of."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp


@dataclass(frozen=True, slots=True, eq=False)
class PencilParts:
    """What a shifted pencil is made of.

    Parameters
    ----------
    K, M : csc_array (n, n)
        Symmetric, both triangles stored; N/m and kg or their rotational fellows. M is taken as stored.
    basis : csc_array (n, modes)
        W with W.T M W = 1 and K W zero on massless coordinates.
    formation : csc_array (n, n)
        Sum of |k_i| |a_i| |a_i|.T over the terms of K; |K| where K is given.
    massless : bool array (n,)
        Rows of M that are wholly zero.
    terms : int
        Most terms that meet in one entry of K; 0 where K is given and taken as exact.
    rigid_modes : int
        Known number of motions that stretch nothing.
    definite : bool
        K is a sum of positive terms, so no eigenvalue is negative.
    rows, stiffness : csr_array (t, n), array (t,); or None
        The terms of K, where they are known.
    scale : array (n,) or None
        Metres per unit of each coordinate; None is 1.
    """

    K: sp.csc_array
    M: sp.csc_array
    basis: sp.csc_array
    formation: sp.csc_array
    massless: npt.NDArray[np.bool_]
    terms: int = 0
    rigid_modes: int = 0
    definite: bool = False
    rows: sp.csr_array | None = None
    stiffness: npt.NDArray[np.float64] | None = None
    scale: npt.NDArray[np.float64] | None = None
