"""Steady motion of a model at many frequencies, with what is infinite told apart."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

ComplexArray = npt.NDArray[np.complex128]
Array = npt.NDArray[np.float64]

# Of an infinite motion, what is smaller than this share of its largest coordinate does not take part in it.
TAKES_PART = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class SteadyMotion:
    """Coordinates at many frequencies.

    Parameters
    ----------
    coordinates : complex array (N, w)
        Per unit of the load. Where a frequency is that of an undamped mode that the load drives: the finite
        part, the response of all other modes.
    infinite : complex array (N, w) or None
        Shape of what grows without bound; zero at frequencies where nothing does. None: nowhere.
    """

    coordinates: ComplexArray
    infinite: ComplexArray | None = None

    @property
    def unbounded(self) -> npt.NDArray[np.bool_]:
        """Frequencies (w,) at which something is infinite."""
        if self.infinite is None:
            return np.zeros(self.coordinates.shape[1], dtype=bool)
        return np.asarray(np.any(self.infinite != 0, axis=0))


@dataclass(frozen=True, slots=True, eq=False)
class Pole:
    """An undamped resonance.

    Parameters
    ----------
    omega : float, rad/s
    within : float, rad/s
        A frequency nearer than this is at the resonance.
    """

    omega: float
    within: float
