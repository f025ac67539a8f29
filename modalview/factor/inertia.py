"""What one factorization proves."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import numpy as np
    from scipy.sparse.linalg import SuperLU


@dataclass(frozen=True, slots=True, eq=False)
class Inertia:
    """What one factorization proves.

    Parameters
    ----------
    sigma : float
        Shift, rad**2/s**2.
    negative : int
        Negative pivots.
    uncertainty : float
        delta, rad**2/s**2: ``negative`` is at least the number of eigenvalues below sigma - delta and at
        most the number below sigma + delta. Infinite where nothing is proven.
    method : str
        "sparse LDL^T", the same "in relative coordinates", or "dense Bunch-Kaufman".
    lu : SuperLU or None
        The sparse factors of K - sigma M, in the stored order; there also where pivoting made the count
        worthless.
    """

    sigma: float
    negative: int
    uncertainty: float
    method: str
    lu: "SuperLU[np.float64] | None" = None
