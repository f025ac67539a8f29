"""Counts of modes without any rounding."""

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction

from modalview.assembly.exactly import ExactPencil
from modalview.bounds.bands import Edge
from modalview.factor.counts import Count
from modalview.factor.exactly import exact_negative

# pi between two fractions (first 50 digits; the digits are those of any table).
PI = Fraction("3.14159265358979323846264338327950288419716939937510")
PI_ABOVE = PI + Fraction(1, 10**50)

# An edge is rounded outward to so many bits: 1e-19 of itself.
BITS = 64

METHOD = "exact LDL^T in integers"


@dataclass(frozen=True, slots=True, eq=False)
class Exactly:
    """Counts one case in integers; edges are turns per second, as fractions.

    Parameters
    ----------
    pencil : ExactPencil
    rigid_modes : int
        Motions that stretch nothing; exact from structure.
    step : callable
        Told the share of one count done, 0..1; may raise to stop.
    known : dict
        Counts made so far, by side and edge.
    """

    pencil: ExactPencil
    rigid_modes: int
    step: Callable[[float], None]
    known: dict[tuple[int, Fraction], Count]

    def at_most(self, edge: Edge) -> Count:
        """Count the eigenvalues <= (2 pi edge)**2, at a fraction just above."""
        return self._counted(Fraction(edge), 1)

    def below(self, edge: Edge) -> Count:
        """Count the eigenvalues < (2 pi edge)**2, at a fraction just below."""
        return self._counted(Fraction(edge), -1)

    def _counted(self, edge: Fraction, side: int) -> Count:
        if (side, edge) not in self.known:
            self.known[side, edge] = self._count(edge, side)
        return self.known[side, edge]

    def _count(self, edge: Fraction, side: int) -> Count:
        if edge == 0:
            return Count(self.rigid_modes, 0.0, 0.0, "a sum of positive stiffness terms has none below zero")
        sigma, unit = squared_edge(edge, side)
        while (negative := exact_negative(self.pencil.shifted(sigma), self.pencil.n, step=self.step)) is None:
            # A pivot vanishes at no more than finitely many edges: the next one outward is as good.
            sigma += side * unit
        return Count(max(negative, self.rigid_modes), float(sigma), 0.0, METHOD)


def squared_edge(turns: Fraction, side: int) -> tuple[Fraction, Fraction]:
    """Return a short fraction beyond (2 pi turns)**2 > 0, above for side 1 and below for -1, and its unit.

    Examples
    --------
    >>> sigma, unit = squared_edge(Fraction(50), 1)
    >>> 0 < float(sigma - (2 * PI * 50) ** 2) <= 2 * float(unit)
    True
    """
    exact = (2 * turns * (PI_ABOVE if side > 0 else PI)) ** 2
    unit = Fraction(2) ** (exact.numerator.bit_length() - exact.denominator.bit_length() - BITS)
    whole = exact // unit
    return (whole + 1 if side > 0 else whole) * unit, unit
