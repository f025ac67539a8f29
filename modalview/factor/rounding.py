"""Constants of the standard model of rounding."""

from typing import Any, overload

import numpy as np
import numpy.typing as npt

# Unit roundoff of binary64 with rounding to nearest.
UNIT = 2.0**-53

# Bounds are sums of non-negative numbers, themselves rounded (relative error below n UNIT), made with a
# basis of rounded numbers: one per cent covers both for every n below 1e12 and a basis good to 1e-3.
SLACK = 1.01


@overload
def gamma(count: int) -> float: ...
@overload
def gamma(count: npt.NDArray[np.intp]) -> npt.NDArray[np.float64]: ...
def gamma(count: Any) -> Any:
    """Return gamma_k = k u / (1 - k u): relative error of k operations in a row.

    References
    ----------
    N. J. Higham (2002), Accuracy and Stability of Numerical Algorithms, 2nd ed., section 3.1.

    Examples
    --------
    >>> gamma(2) > 2 * UNIT
    True
    """
    return count * UNIT / (1 - count * UNIT)
