"""Rank and null space of homogeneous linear forms, exactly, in rational arithmetic."""

from collections.abc import Hashable, Iterable, Mapping, Sequence
from fractions import Fraction
from typing import TypeVar

Key = TypeVar("Key", bound=Hashable)
Row = dict[Key, Fraction]


def reduced_echelon(forms: Iterable[Mapping[Key, Fraction]], order: Sequence[Key]) -> dict[Key, Row[Key]]:
    """Return the reduced echelon form of a set of forms held at zero.

    Parameters
    ----------
    forms : iterable of mapping
        Coefficients by unknown; only unknowns in ``order`` may occur.
    order : sequence
        Unknowns; a form is solved for the one that stands last, so early ones stay free.

    Returns
    -------
    dict
        For every dependent unknown p the row with p = sum of row[q] * q over free unknowns q.
        Its length is the exact rank.

    Notes
    -----
    Gauss-Jordan elimination on fractions; the cost grows with the size of connected sets of forms.
    """
    rank_of = {key: place for place, key in enumerate(order)}
    solved: dict[Key, Row[Key]] = {}
    users: dict[Key, set[Key]] = {}
    for form in forms:
        row = _substituted({k: Fraction(v) for k, v in form.items() if v}, solved)
        if not row:
            continue
        pivot = max(row, key=rank_of.__getitem__)
        head = row.pop(pivot)
        row = {key: -entry / head for key, entry in row.items()}
        for user in users.pop(pivot, set()):
            weight = solved[user].pop(pivot, None)
            if weight is None:  # cancelled since
                continue
            _add(solved[user], weight, row)
            for key in row:
                users.setdefault(key, set()).add(user)
        solved[pivot] = row
        for key in row:
            users.setdefault(key, set()).add(pivot)
    return solved


def _substituted(row: Row[Key], solved: Mapping[Key, Row[Key]]) -> Row[Key]:
    for key in [key for key in row if key in solved]:
        weight = row.pop(key)
        _add(row, weight, solved[key])
    return row


def _add(row: Row[Key], weight: Fraction, other: Mapping[Key, Fraction]) -> None:
    for key, entry in other.items():
        total = row.get(key, Fraction(0)) + weight * entry
        if total:
            row[key] = total
        else:
            row.pop(key, None)


def null_space(
    forms: Iterable[Mapping[Key, Fraction]], unknowns: Sequence[Key]
) -> list[tuple[Key, Row[Key]]]:
    """Return a basis of what the forms leave at zero: (free unknown, vector with 1 at it)."""
    solved = reduced_echelon(forms, unknowns)
    basis = []
    for free in unknowns:
        if free not in solved:
            vector = {free: Fraction(1)}
            vector.update({key: row[free] for key, row in solved.items() if free in row})
            basis.append((free, vector))
    return basis
