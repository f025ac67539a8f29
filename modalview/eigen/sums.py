"""Sums whose rounding hardly grows with their length."""

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

# numpy sums runs of 128 with eight accumulators and joins them pairwise: at most 24 additions follow
# each other, and one more per doubling of the length.
RUN = 26


def summing(length: int) -> int:
    """Count the roundings in a row when numpy sums a contiguous run of this length.

    Examples
    --------
    >>> summing(100), summing(100_000)
    (26, 36)
    """
    return RUN + max(0, int(np.ceil(np.log2(max(length, 1) / 128))))


def column_sums(entries: Array) -> Array:
    """Sum over rows, (n, m) to (m,), along contiguous runs, so that `summing` holds."""
    total: Array = np.ascontiguousarray(entries.T).sum(axis=1)
    return total
