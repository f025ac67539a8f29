"""A mode as speeds are held against it: its number and where it can lie."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class ModeSpan:
    """One mode; all rad/s.

    Parameters
    ----------
    number : int
        From 1, rigid-body modes included.
    nominal : float
        At the values as typed.
    low, high : float
        Over all tolerances, proven; equal to ``nominal`` up to rounding where nothing has a tolerance.
    """

    number: int
    nominal: float
    low: float
    high: float
