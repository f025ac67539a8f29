"""K and M of a model in fractions, from the numbers as typed."""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction

from modalview.assembly.assemble import Assembly
from modalview.assembly.coordinates import Coordinates
from modalview.assembly.kinematics import ROTATIONS, Freedom, Vector, dot, places
from modalview.assembly.masses import ROTATION_ENTRIES, principal_terms
from modalview.assembly.parameters import Case, Parameter
from modalview.assembly.stretch import Stretch, stretches
from modalview.model.parts import FREEDOMS, Body, InertiaTensor, Link, Model, Motion
from modalview.units.exact import as_meant

Entries = dict[tuple[int, int], Fraction]
Row = dict[int, Fraction]
Form = Mapping[Freedom, Fraction]


@dataclass(frozen=True, slots=True, eq=False)
class ExactPencil:
    """K and M in fractions at one set of values, over the coordinates of the assembly.

    Parameters
    ----------
    n : int
    stiffness, mass : mapping
        By (row, column), rows >= columns; N/m and kg or their rotational fellows.
    """

    n: int
    stiffness: Entries
    mass: Entries

    def shifted(self, sigma: Fraction) -> Entries:
        """Return K - sigma M."""
        entries = dict(self.stiffness)
        for key, mass in self.mass.items():
            entries[key] = entries.get(key, Fraction(0)) - sigma * mass
        return entries


@dataclass(frozen=True, slots=True)
class _Term:
    """Weight times the product of some parameters, times left left^T or its symmetric mixture with right."""

    keys: tuple[str, ...]
    weight: Fraction
    left: Row
    right: Row


class ExactForms:
    """The terms of a model in fractions.

    Parameters
    ----------
    assembly : Assembly

    Attributes
    ----------
    rounded : tuple of str
        What is not taken as typed but as the stored double nearest to it, by part.
    """

    def __init__(self, assembly: Assembly) -> None:
        self._n = assembly.n
        self._rounded: dict[str, None] = {}
        self._values = {p.id: self._cases(p) for p in assembly.parameters if p.family != "damping"}
        motions = exact_motions(assembly.structure.coordinates, assembly.model)
        massless = {i for i, none in enumerate(assembly.structure.coordinates.massless) if none}
        self._stiffness = [
            self._stretch(link, term, motions)
            for link in assembly.model.links
            for term in stretches(link, places(assembly.model, exact=True))
            if term.family == "stiffness"
        ]
        self._mass = [
            term
            for body in assembly.model.bodies
            for term in self._inertia(body, assembly.model.motion, motions, massless)
        ]

    @property
    def rounded(self) -> tuple[str, ...]:
        """What is taken as the nearest double."""
        return tuple(self._rounded)

    def pencil(self, case: Case) -> ExactPencil:
        """Return K and M with all values taken in one case."""
        return ExactPencil(self._n, self._sum(self._stiffness, case), self._sum(self._mass, case))

    def _sum(self, terms: Iterable[_Term], case: Case) -> Entries:
        total: Entries = {}
        for term in terms:
            weight = term.weight
            for key in term.keys:
                weight *= self._values[key][case]
            mixed = term.left is not term.right
            for i, a in term.left.items():
                for j, b in term.right.items():
                    if mixed:  # J_ab (x_a x_b + x_b x_a)
                        key2 = (max(i, j), min(i, j))
                        total[key2] = total.get(key2, Fraction(0)) + weight * a * b * (2 if i == j else 1)
                    elif i >= j:
                        total[i, j] = total.get((i, j), Fraction(0)) + weight * a * b
        return {key: entry for key, entry in total.items() if entry}

    def _read(self, text: str, si: float, name: str) -> Fraction:
        amount, exact = as_meant(text, si)
        if not exact:
            self._rounded[f"{name} {text}"] = None
        return amount

    def _cases(self, parameter: Parameter) -> dict[Case, Fraction]:
        entry, tolerance = parameter.entry, parameter.tolerance
        name = f"{parameter.label} {parameter.id.rpartition('.')[2]}"
        nominal = self._read(entry.text, entry.si, name) if entry else Fraction(1)
        low = high = nominal
        if tolerance is not None and tolerance.low is not None and tolerance.high is not None:
            low = self._read(tolerance.low.text, tolerance.low.si, name)
            high = self._read(tolerance.high.text, tolerance.high.si, name)
        elif tolerance is not None:
            minus, plus = tolerance.minus or tolerance.both, tolerance.plus or tolerance.both
            low *= 1 - (self._read(minus.text, minus.si, name) if minus else 0)
            high *= 1 + (self._read(plus.text, plus.si, name) if plus else 0)
        soft, stiff = (low, high) if parameter.family == "stiffness" else (high, low)
        return {Case.NOMINAL: nominal, Case.SOFT_HEAVY: soft, Case.STIFF_LIGHT: stiff}

    def _stretch(self, link: Link, term: Stretch, motions: Mapping[Freedom, Row]) -> _Term:
        keys = tuple(f"{link.id}.{key}" for key in term.keys)
        if link.dynamic_ratio is not None:
            keys = (*keys, f"{link.id}.dynamic_ratio")
        if isinstance(direction := getattr(link, "direction", None), str) and "deg" in direction:
            self._rounded[f"{link.name or link.id} direction {direction}"] = None
        weight = Fraction(term.times) / Fraction(dot(term.over, term.over))
        if term.per is not None:
            weight /= self._length(link, term.per)
        row = _through({key: Fraction(entry) for key, entry in term.form.items()}, motions)
        return _Term(keys, weight, row, row)

    def _length(self, link: Link, vector: Vector) -> Fraction:
        """Return the length of a beam; a root that is no fraction as a double."""
        squared = Fraction(dot(vector, vector))
        root = Fraction(math.isqrt(squared.numerator), math.isqrt(squared.denominator))
        if root * root == squared:
            return root
        self._rounded[f"{link.name or link.id} length"] = None
        return Fraction(math.sqrt(squared))

    def _inertia(
        self, body: Body, motion: Motion, motions: Mapping[Freedom, Row], massless: set[int]
    ) -> list[_Term]:
        rows = {
            name: {i: entry for i, entry in motions[body.id, name].items() if i not in massless}
            for name in FREEDOMS[motion]
        }
        mass, inertia = f"{body.id}.mass", f"{body.id}.inertia"
        one, found = Fraction(1), []
        if mass in self._values:
            found += [_Term((mass,), one, row, row) for name, row in rows.items() if name not in ROTATIONS]
        if inertia not in self._values:
            return found
        if not isinstance(body.inertia, InertiaTensor):
            return [*found, _Term((inertia,), one, rows["rz"], rows["rz"])]
        return [*found, *self._turning(body, body.inertia, rows)]

    def _turning(self, body: Body, tensor: InertiaTensor, rows: Mapping[str, Row]) -> list[_Term]:
        keys, principal = (f"{body.id}.inertia",), principal_terms(tensor)
        if len(principal) < sum(getattr(tensor, name).si > 0 for name in ROTATION_ENTRIES):
            # a thin rod askew: its massless direction is known from the rounded principal axes only
            self._rounded[f"{body.name or body.id} principal axes"] = None
            turned = [(Fraction(moment), _mixed(axis, rows)) for moment, axis in principal]
            return [_Term(keys, moment, row, row) for moment, row in turned]
        name = f"{body.name or body.id} inertia"
        found = []
        for entry, turn in zip(ROTATION_ENTRIES, ROTATIONS, strict=True):
            value = getattr(tensor, entry).entry
            found.append(_Term(keys, self._read(value.text, value.si, name), rows[turn], rows[turn]))
        for product, first, second in (("Pxy", "rx", "ry"), ("Pxz", "rx", "rz"), ("Pyz", "ry", "rz")):
            if (value := getattr(tensor, product)) is not None:
                amount = -self._read(value.entry.text, value.entry.si, name)
                found.append(_Term(keys, amount, rows[first], dict(rows[second])))
        return found


def exact_motions(coordinates: Coordinates, model: Model) -> dict[Freedom, Row]:
    """Return the motion of every body freedom from the coordinates, unrounded."""
    table, found = coordinates.to_bodies, {}
    freedoms = ((body.id, name) for body in model.bodies for name in FREEDOMS[model.motion])
    for i, key in enumerate(freedoms):
        inside = slice(table.indptr[i], table.indptr[i + 1])
        found[key] = {
            int(column): coordinates.unrounded.get((i, int(column)), Fraction(float(entry)))
            for column, entry in zip(table.indices[inside], table.data[inside], strict=True)
        }
    return found


def _through(form: Form, motions: Mapping[Freedom, Row]) -> Row:
    """Return a form in the freedoms of bodies as one in the coordinates; supports stand still."""
    row: Row = {}
    for key, weight in form.items():
        for column, entry in motions.get(key, {}).items():
            row[column] = row.get(column, Fraction(0)) + weight * entry
    return {column: entry for column, entry in row.items() if entry}


def _mixed(axis: Iterable[float], rows: Mapping[str, Row]) -> Row:
    row: Row = {}
    for amount, turn in zip(axis, ROTATIONS, strict=True):
        for column, entry in rows[turn].items():
            row[column] = row.get(column, Fraction(0)) + Fraction(amount) * entry
    return row
