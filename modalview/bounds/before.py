"""Everything that is known of the natural frequencies before any solve, in one result."""

from dataclasses import dataclass

import numpy as np

from modalview.assembly.pencil import Pencil
from modalview.bounds.discs import Discs, Group, discs_of
from modalview.bounds.forms import forms_of
from modalview.bounds.highest import highest_bounds
from modalview.bounds.lowest import lowest_bounds
from modalview.bounds.norms import Norms, norms_of
from modalview.bounds.rigid import rigid_body
from modalview.bounds.separated import separated_groups
from modalview.factor.rounding import gamma


@dataclass(frozen=True, slots=True, eq=False)
class Bounds:
    """Brackets of the lowest elastic and the highest mode, with discs and norms.

    Parameters
    ----------
    lowest_hz : pair of float or None
        (low, high) around the lowest elastic frequency, rounded outward; None where every mode is a
        rigid-body one, or the model is unstable, or their numbers are undecided (``notes`` say which).
    highest_hz : pair of float
        (low, high) around the highest frequency.
    rigid_body_modes : int or None
        None when rounding leaves it undecided (matrices of others only).
    rows, columns, symmetric : Discs or None
        None for a full M of others.
    separated : tuple of Group
        Groups of the discs of S that scalings of their own set apart; empty where none does.
    norms : Norms
        rad**2/s**2.
    notes : tuple of str
        What a reader of the numbers must know.
    """

    lowest_hz: tuple[float, float] | None
    highest_hz: tuple[float, float]
    rigid_body_modes: int | None
    rows: Discs | None
    columns: Discs | None
    symmetric: Discs | None
    separated: tuple[Group, ...]
    norms: Norms
    notes: tuple[str, ...]


def before_solve(pencil: Pencil) -> Bounds:
    """Bound the spectrum of a pencil without solving it.

    Parameters
    ----------
    pencil : Pencil
        Undamped.

    Returns
    -------
    Bounds

    Notes
    -----
    Cost: S once, twenty products with it, a triangular factor of it up to 1000 modes, two counts.
    """
    forms = forms_of(pencil)
    rigid = rigid_body(pencil)
    discs = discs_of(pencil, forms)
    rows, columns, symmetric = discs or (None, None, None)
    notes: list[str] = []
    if discs is None:
        notes.append("No discs: the mass matrix couples its coordinates; counts give the bounds.")
    separated = separated_groups(forms) if discs else ()
    if discs is not None and pencil.modes > 1 and not separated:
        notes.append("The discs of S overlap under every scaling tried, so they separate no group of modes.")
    lowest = None
    if rigid.number is None or rigid.negative is None:
        notes.append("Rounding leaves the number of zero modes undecided.")
    elif rigid.negative:
        notes.append(f"Unstable: {rigid.negative} eigenvalue(s) below zero.")
    elif rigid.number == pencil.modes:
        notes.append("Every mode is a rigid-body mode.")
    else:
        if not rigid.exact:
            notes.append(f"Zero modes by counts: within {to_hz(rigid.reach, up=True):.2g} Hz of zero.")
        found = lowest_bounds(pencil, forms, rigid)
        lowest = (to_hz(found.low, up=False), to_hz(found.high, up=True))
        notes.append(f"Lowest mode from below: {found.method}.")
    low, high = highest_bounds(forms)
    return Bounds(
        lowest_hz=lowest,
        highest_hz=(to_hz(low, up=False), to_hz(high, up=True)),
        rigid_body_modes=rigid.number,
        rows=rows,
        columns=columns,
        symmetric=symmetric,
        separated=separated,
        norms=norms_of(forms, discs),
        notes=tuple(notes),
    )


def to_hz(eigenvalue: float, *, up: bool) -> float:
    """Return sqrt(lambda) / 2 pi rounded outward; 0 for what lies below zero.

    Examples
    --------
    >>> to_hz((2 * np.pi) ** 2, up=False) < 1 < to_hz((2 * np.pi) ** 2, up=True)
    True
    """
    value = np.sqrt(max(eigenvalue, 0.0)) / (2 * np.pi)
    return float(value * (1 + gamma(6) if up else 1 - gamma(6)))
