"""Norm bounds of the largest eigenvalue: crude, cheap, shown beside the sharp ones."""

from dataclasses import dataclass

import numpy as np

from modalview.bounds.discs import Discs
from modalview.bounds.forms import Forms
from modalview.factor.rounding import gamma


@dataclass(frozen=True, slots=True)
class Norms:
    """Each at least the largest eigenvalue; rad**2/s**2, rounded outward.

    Parameters
    ----------
    one, infinity : float or None
        Largest column and row sum of the scaled |M^-1 K|; None for a full M of others.
    frobenius : float
        Root of the sum of squares of S: usually 3 to 20 times too high.
    """

    one: float | None
    infinity: float | None
    frobenius: float


def norms_of(forms: Forms, discs: tuple[Discs, Discs, Discs] | None) -> Norms:
    """Return the three norms; the first two are the farthest ends of the discs.

    References
    ----------
    R. A. Horn, C. R. Johnson (2013), Matrix Analysis, 2nd ed., section 5.6: no eigenvalue exceeds a norm.
    """
    entries = forms.S.ravel() if isinstance(forms.S, np.ndarray) else forms.S.data
    total = float(np.linalg.norm(entries)) * (1 + gamma(entries.size + 4))
    # ||F||_F <= sqrt(modes) ||F||_2, and the largest row sum bounds the 2-norm of symmetric F
    rounding = forms.rounding(np.ones(forms.modes)).max(initial=0.0)
    frobenius = total + float(np.sqrt(forms.modes) * rounding)
    if discs is None:
        return Norms(None, None, frobenius)
    rows, columns, _ = discs
    return Norms(one=_farthest(columns), infinity=_farthest(rows), frobenius=frobenius)


def _farthest(discs: Discs) -> float:
    return float(np.nextafter((np.abs(discs.centres) + discs.radii).max(initial=0.0), np.inf))
