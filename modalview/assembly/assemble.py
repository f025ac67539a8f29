"""A model becomes terms over independent coordinates; an edit of a value only refills them."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.coordinates import Coordinates, independent_coordinates
from modalview.assembly.kinematics import places
from modalview.assembly.masses import principal_terms
from modalview.assembly.parameters import Case, Parameter, shown_name, values_at
from modalview.assembly.pencil import Coordinate, Pencil, Reused
from modalview.assembly.perpart import PerPart, per_part
from modalview.assembly.quadratic import QuadraticForm
from modalview.assembly.rigid import rigid_body_motions
from modalview.assembly.scales import coordinate_scales
from modalview.assembly.soundness import require_links
from modalview.assembly.stretch import Stretch, stretches
from modalview.factor.pattern import union_pattern
from modalview.model.parts import FREEDOMS, Body, InertiaTensor, Link, Model, Motion

Array = npt.NDArray[np.float64]

# A term is a product of at most three typed values (a beam's E and I, a spring's k and its dynamic ratio).
FACTORS = 3
ALL_FREEDOMS = FREEDOMS[Motion.SPACE]
# An entry this small against the products it is the sum of is their rounding: sums have a dozen products,
# and lengths typed to fifteen digits differ by more than this where they differ at all.
CANCELLED = 1e-14


@dataclass(frozen=True, eq=False)
class TermSet:
    """Rank-one terms of one kind: sum v_i r_i r_i^T with v_i = factor_i times a product of parameters.

    Attributes
    ----------
    rows : csr_array (t, n)
        In the independent coordinates.
    support_rows : csr_array (t, s)
        Stretch per unit motion of a support, columns as ``support_freedoms``.
    factor : array (t,)
    product_of : int array (t, 3)
        Indices of parameters; the index one past the last stands for 1.
    part : tuple of str
        The part each term belongs to.
    """

    rows: sp.csr_array
    support_rows: sp.csr_array
    support_freedoms: tuple[tuple[str, str], ...]
    factor: Array
    product_of: npt.NDArray[np.int64]
    part: tuple[str, ...]

    def values(self, parameter_values: Array) -> Array:
        """Return the value of every term (t,), SI."""
        padded = np.append(parameter_values, 1.0)
        products: Array = self.factor * padded[self.product_of].prod(axis=1)
        return products

    @cached_property
    def form(self) -> QuadraticForm:
        """The matrix of the terms, ready to be refilled."""
        return QuadraticForm(self.rows)

    @cached_property
    def at_work(self) -> frozenset[str]:
        """Parts with a term that some motion stretches."""
        filled = np.diff(self.rows.indptr)
        return frozenset(part for part, entries in zip(self.part, filled, strict=True) if entries)


@dataclass(frozen=True, eq=False)
class Structure:
    """What does not change when a value is edited."""

    skeleton: tuple[Any, ...]
    coordinates: Coordinates
    labels: tuple[Coordinate, ...]
    stiffness: TermSet
    mass: TermSet
    damping: TermSet
    rigid_body: Array

    @cached_property
    def reused(self) -> Reused:
        """What all pencils of this structure share."""
        ones = [np.ones(len(terms.part)) for terms in (self.stiffness, self.mass)]
        pattern = union_pattern(self.stiffness.form.matrix(ones[0]), self.mass.form.matrix(ones[1]))
        return Reused(pattern, QuadraticForm(sp.csr_array(abs(self.stiffness.rows))))


@dataclass(frozen=True, eq=False)
class Assembly:
    """A model as terms over independent coordinates.

    Attributes
    ----------
    model : Model
    structure : Structure
    parameters : tuple of Parameter
        Every typed value that the terms use.
    by_part : PerPart
        What each part contributes, kept for the next edit.
    """

    model: Model
    structure: Structure
    parameters: tuple[Parameter, ...]
    by_part: PerPart

    @property
    def n(self) -> int:
        """Number of independent coordinates."""
        return len(self.structure.coordinates.free)

    @property
    def notes(self) -> tuple[str, ...]:
        """What was locked or left out, and links that have nothing to stretch."""
        terms = self.structure.stiffness
        idle = set(terms.part) - terms.at_work
        still = (
            f"{shown_name(link)}: no motion stretches it; its ends are held or joined rigidly"
            for link in self.model.links
            if link.id in idle
        )
        return (*self.structure.coordinates.notes, *still)

    @property
    def toleranced(self) -> bool:
        """Whether any value that matters to the modes has a tolerance."""
        return any(not p.exact for p in self.parameters if p.family != "damping")

    @property
    def exact_values(self) -> tuple[Parameter, ...]:
        """Values that matter to the modes and carry no tolerance.

        A dynamic ratio without one is covered by that of the stiffness it multiplies.
        """
        return tuple(p for p in self.matter if p.exact)

    @property
    def matter(self) -> tuple[Parameter, ...]:
        """Values that matter to the modes: no damping; ratios only with a tolerance of their own."""
        return tuple(
            p
            for p in self.parameters
            if p.family != "damping" and not (p.exact and p.id.endswith(".dynamic_ratio"))
        )

    def pencil(self, case: Case = Case.NOMINAL) -> Pencil:
        """Return K, M and C with all values taken in one case; equal to nominal without tolerances."""
        if case is not Case.NOMINAL and not self.toleranced:
            case = Case.NOMINAL
        cache: dict[Case, Pencil] = self._pencils
        if case not in cache:
            cache[case] = self._filled(case)
        return cache[case]

    @cached_property
    def _pencils(self) -> dict[Case, Pencil]:
        return {}

    def _filled(self, case: Case) -> Pencil:
        at, structure = values_at(self.parameters, case), self.structure
        stiffness = structure.stiffness.values(at)
        mass = structure.mass.form.matrix(structure.mass.values(at))
        free = structure.coordinates.free
        nominal = case is Case.NOMINAL
        # Coordinates are compared on one scale in all cases.
        scale = coordinate_scales(self.model.motion, free, mass) if nominal else self.pencil().scale
        return Pencil(
            K=structure.stiffness.form.matrix(stiffness),
            M=mass,
            massless=structure.coordinates.massless,
            scale=scale,
            rigid_body=structure.rigid_body,
            rows=structure.stiffness.rows,
            stiffness=stiffness,
            C=structure.damping.form.matrix(structure.damping.values(at)),
            coordinates=structure.labels,
            reused=structure.reused,
        )

    def body_motion(self, shapes: Array) -> Array:
        """Return x, y, z, rx, ry, rz of every body from coordinates (n, k): array (k, bodies, 6)."""
        names = FREEDOMS[self.model.motion]
        moved = np.asarray(self.structure.coordinates.to_bodies @ shapes)
        motion = np.zeros((shapes.shape[1], len(self.model.bodies), len(ALL_FREEDOMS)))
        columns = [ALL_FREEDOMS.index(name) for name in names]
        motion[:, :, columns] = moved.T.reshape(shapes.shape[1], len(self.model.bodies), len(names))
        return motion


def assemble(model: Model, previous: Assembly | None = None) -> Assembly:
    """Turn a model into terms over independent coordinates.

    Parameters
    ----------
    model : Model
        Free of faults.
    previous : Assembly or None
        Of an earlier state of the model; its structure serves again if only values differ.

    Raises
    ------
    ModelFaultsError
        A body is joined to nothing, a gear loop cannot turn, no motion is left.
    """
    by_part = per_part(model, previous.by_part if previous else None)
    parameters = tuple(p for part in by_part.parameters for p in part)
    bones = (model.motion, by_part.bones)
    if previous is not None and previous.structure.skeleton == bones:
        return Assembly(model, previous.structure, parameters, by_part)
    require_links(model)
    return Assembly(model, _structure(model, bones, parameters), parameters, by_part)


def _structure(model: Model, bones: tuple[Any, ...], parameters: Sequence[Parameter]) -> Structure:
    coordinates = independent_coordinates(model)
    index = {p.id: i for i, p in enumerate(parameters)}
    here = places(model)
    terms = [(link, term) for link in model.links for term in stretches(link, here)]
    sets = {
        family: _link_terms([(k, t) for k, t in terms if t.family == family], model, coordinates, index)
        for family in ("stiffness", "damping")
    }
    return Structure(
        skeleton=bones,
        coordinates=coordinates,
        labels=tuple(Coordinate(part, freedom, i) for i, (part, freedom) in enumerate(coordinates.free)),
        stiffness=sets["stiffness"],
        mass=_mass_terms(model, coordinates, index),
        damping=sets["damping"],
        rigid_body=rigid_body_motions(model, coordinates, sets["stiffness"].rows),
    )


def _link_terms(
    terms: Sequence[tuple[Link, Stretch]],
    model: Model,
    coordinates: Coordinates,
    index: Mapping[str, int],
) -> TermSet:
    columns = {
        (body.id, name): i
        for i, (body, name) in enumerate((b, f) for b in model.bodies for f in FREEDOMS[model.motion])
    }
    supports = tuple((support.id, name) for support in model.supports for name in FREEDOMS[model.motion])
    support_columns = {key: i for i, key in enumerate(supports)}
    forms = [{key: float(entry) / term.divide for key, entry in term.form.items()} for _, term in terms]
    products = []
    for link, term in terms:
        keys = [f"{link.id}.{key}" for key in term.keys]
        if term.family == "stiffness" and link.dynamic_ratio is not None:
            keys.append(f"{link.id}.dynamic_ratio")
        products.append([index[key] for key in keys])
    return TermSet(
        rows=_without_rounding(_rows(forms, columns), coordinates.to_bodies),
        support_rows=_rows(forms, support_columns),
        support_freedoms=supports,
        factor=np.array([term.factor for _, term in terms], dtype=float),
        product_of=_padded(products, len(index)),
        part=tuple(link.id for link, _ in terms),
    )


def _without_rounding(forms: sp.csr_array, to_bodies: sp.csr_array) -> sp.csr_array:
    """Return forms @ to_bodies without what is left of entries that cancel.

    A spring between two bodies of one rigid cluster stretches by nothing; a rest of 1e-17 in its row would
    be taken for a direction of its own where rows are normalised.
    """
    rows, products = forms @ to_bodies, abs(forms) @ abs(to_bodies)
    meant = (abs(rows) - CANCELLED * products) > 0
    kept = sp.csr_array(rows.multiply(meant))
    kept.eliminate_zeros()
    kept.sort_indices()
    return kept


def _rows(
    forms: Sequence[Mapping[tuple[str, str], float]], columns: Mapping[tuple[str, str], int]
) -> sp.csr_array:
    known = [{columns[key]: entry for key, entry in form.items() if key in columns} for form in forms]
    columns_of = np.array([column for form in known for column in form], dtype=np.int64)
    entries = np.array([entry for form in known for entry in form.values()], dtype=float)
    ends = np.cumsum([0, *(len(form) for form in known)])
    return sp.csr_array((entries, columns_of, ends), shape=(len(forms), len(columns)))


def _padded(products: Sequence[Sequence[int]], one: int) -> npt.NDArray[np.int64]:
    table = np.full((len(products), FACTORS), one, dtype=np.int64)
    for row, product in zip(table, products, strict=True):
        row[: len(product)] = product
    return table


def _mass_terms(model: Model, coordinates: Coordinates, index: Mapping[str, int]) -> TermSet:
    terms = [(body, *term) for body in model.bodies for term in _body_mass_terms(body, model.motion)]
    terms = [term for term in terms if f"{term[0].id}.{term[1]}" in index]
    columns = {
        (body.id, name): i
        for i, (body, name) in enumerate((b, f) for b in model.bodies for f in FREEDOMS[model.motion])
    }
    rows = _rows([form for _, _, _, form in terms], columns) @ coordinates.to_bodies
    # Where principal axes are rounded, a direction known to be massless would keep a rest of 1e-17.
    rows = sp.csr_array(rows @ sp.diags_array((~coordinates.massless).astype(float)))
    rows.eliminate_zeros()
    return TermSet(
        rows=rows,
        support_rows=sp.csr_array((len(terms), 0)),
        support_freedoms=(),
        factor=np.array([factor for _, _, factor, _ in terms], dtype=float),
        product_of=_padded([[index[f"{body.id}.{key}"]] for body, key, _, _ in terms], len(index)),
        part=tuple(body.id for body, _, _, _ in terms),
    )


def _body_mass_terms(body: Body, motion: Motion) -> list[tuple[str, float, dict[tuple[str, str], float]]]:
    """Return (key of the value, factor, form) of each direction in which a body's inertia acts."""
    names = FREEDOMS[motion]
    found = [("mass", 1.0, {(body.id, name): 1.0}) for name in names if not name.startswith("r")]
    if isinstance(body.inertia, InertiaTensor):
        for moment, axis in principal_terms(body.inertia):
            form = {(body.id, name): a for name, a in zip(("rx", "ry", "rz"), axis, strict=True) if a}
            found.append(("inertia", moment, form))
    else:
        found.append(("inertia", 1.0, {(body.id, "rz"): 1.0}))
    return found
