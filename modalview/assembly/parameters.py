"""The typed values that the spectrum depends on, with the range their tolerance gives them."""

from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
import numpy.typing as npt

from modalview.model.parts import Body, DefaultTolerance, InertiaTensor, Link
from modalview.model.values import Entry, Tolerance, Value


class Case(StrEnum):
    """At which values within tolerance a model is taken."""

    NOMINAL = "nominal"
    SOFT_HEAVY = "soft-heavy"
    STIFF_LIGHT = "stiff-light"


@dataclass(frozen=True, slots=True)
class Parameter:
    """One typed value.

    Parameters
    ----------
    id : str
        "k3.stiffness", "motor.mass": the part and its field.
    part, label : str
        Id and shown name of the part.
    family : str
        "stiffness", "mass" or "damping": which way it moves the frequencies (stiffness up, mass down,
        damping not at all).
    nominal, low, high : float
        In SI; low = high = nominal for a value taken as exact.
    entry : Entry or None
        As typed; None for the factor 1 of an inertia tensor.
    tolerance : Tolerance or None
        As typed.
    """

    id: str
    part: str
    label: str
    family: str
    nominal: float
    low: float
    high: float
    entry: Entry | None = None
    tolerance: Tolerance | None = None

    @property
    def exact(self) -> bool:
        """Whether no tolerance was given."""
        return self.low == self.high

    def at(self, case: Case) -> float:
        """Return the value in a case; every stiffness low and every mass high is soft-heavy."""
        if case is Case.NOMINAL or self.family == "damping":
            return self.nominal
        low = (case is Case.SOFT_HEAVY) == (self.family == "stiffness")
        return self.low if low else self.high


def shown_name(part: Body | Link) -> str:
    """Return a part's name, or its id where it has none."""
    return part.name or part.id


def parameter(
    part: Body | Link,
    key: str,
    value: Value,
    family: str,
    fallbacks: Iterable[Tolerance | None] = (),
) -> Parameter:
    """Make a parameter of a value; its own tolerance goes before the fallbacks, in their order."""
    tolerance = next((t for t in (value.tolerance, *fallbacks) if t is not None), None)
    low, high = tolerance.limits(value.si) if tolerance else (value.si, value.si)
    name = f"{part.id}.{key}"
    return Parameter(name, part.id, shown_name(part), family, value.si, low, high, value.entry, tolerance)


def inertia_scale(body: Body, tensor: InertiaTensor, default: DefaultTolerance | None) -> Parameter:
    """Make the factor 1 that scales a whole inertia tensor within its tolerance."""
    fallbacks = (tensor.tolerance, body.tolerance, default.mass if default else None)
    tolerance = next((t for t in fallbacks if t is not None), None)
    low, high = tolerance.limits(1.0) if tolerance else (1.0, 1.0)
    return Parameter(f"{body.id}.inertia", body.id, shown_name(body), "mass", 1.0, low, high, None, tolerance)


def values_at(parameters: tuple[Parameter, ...], case: Case) -> npt.NDArray[np.float64]:
    """Return every parameter's value in a case, SI."""
    if case is Case.NOMINAL:
        return np.array([p.nominal for p in parameters], dtype=float)
    return np.array([p.at(case) for p in parameters], dtype=float)
