"""Bounds of the highest mode."""

import numpy as np

from modalview.bounds.forms import Forms
from modalview.bounds.scaling import collatz_wielandt


def highest_bounds(forms: Forms) -> tuple[float, float]:
    """Bracket the largest eigenvalue: largest diagonal entry of S below, Collatz-Wielandt above.

    Returns
    -------
    (low, high) : floats, rad**2/s**2
        Rounded outward. A diagonal entry is a Rayleigh quotient, so never above the largest eigenvalue.
    """
    diagonal = forms.S.diagonal() - forms.rounding(np.ones(forms.modes))
    low = float(np.nextafter(diagonal.max(initial=0.0), -np.inf))
    return max(low, 0.0), collatz_wielandt(forms)
