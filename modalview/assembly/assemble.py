"""A model becomes terms over independent coordinates; an edit of a value only refills them."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import Any

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.coordinates import Coordinates, independent_coordinates
from modalview.assembly.kept import coordinates_again
from modalview.assembly.kinematics import places
from modalview.assembly.linkterms import LinkTerms, link_terms
from modalview.assembly.parameters import Case, Parameter, shown_name, values_at
from modalview.assembly.pencil import Coordinate, Pencil, Reused
from modalview.assembly.perpart import PerPart, per_part
from modalview.assembly.quadratic import QuadraticForm
from modalview.assembly.rigid import rigid_body_motions
from modalview.assembly.scales import coordinate_scales
from modalview.assembly.soundness import require_links
from modalview.assembly.termsets import TermSet, terms_of_links, terms_of_masses
from modalview.factor.earlier import EarlierCounts
from modalview.factor.pattern import Pattern, union_pattern
from modalview.model.parts import FREEDOMS, Model, Motion

Array = npt.NDArray[np.float64]

ALL_FREEDOMS = FREEDOMS[Motion.SPACE]


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
    links: Mapping[str, LinkTerms]
    before: "Before | None" = field(default=None, repr=False)

    @cached_property
    def reused(self) -> Reused:
        """What all pencils of this structure share."""
        stiffness, mass = self.stiffness.form, self.mass.form
        if self.before is not None and self.before.fits(stiffness, mass):
            pattern = self.before.pattern
        else:
            ones = [np.ones(len(terms.part)) for terms in (self.stiffness, self.mass)]
            pattern = union_pattern(stiffness.matrix(ones[0]), mass.matrix(ones[1]))
        return Reused(pattern, QuadraticForm(sp.csr_array(abs(self.stiffness.rows)), stiffness))


@dataclass(frozen=True, slots=True, eq=False)
class Before:
    """The pattern of the model before an edit of places, and the forms that have it."""

    stiffness: QuadraticForm
    mass: QuadraticForm
    pattern: Pattern

    def fits(self, stiffness: QuadraticForm, mass: QuadraticForm) -> bool:
        """Whether other forms have the same."""
        return self.stiffness.shares_pattern(stiffness) and self.mass.shares_pattern(mass)


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
        return self.pencil_at(values_at(self.parameters, case), nominal=case is Case.NOMINAL)

    def pencil_at(self, at: Array, *, nominal: bool = False) -> Pencil:
        """Return K, M and C at any values of the parameters (p,), SI; nothing is kept.

        ``nominal`` says that these are the nominal ones: they give the scale of the coordinates in all cases.
        """
        structure = self.structure
        stiffness = structure.stiffness.values(at)
        mass = structure.mass.form.matrix(structure.mass.values(at))
        free = structure.coordinates.free
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
    alike = previous if previous is not None and previous.model.motion is model.motion else None
    return Assembly(model, _structure(by_part, bones, parameters, alike), parameters, by_part)


def _structure(
    by_part: PerPart, bones: tuple[Any, ...], parameters: Sequence[Parameter], previous: Assembly | None
) -> Structure:
    """Build a structure from what each part contributes, with what serves again of that before the edit."""
    model, old = by_part.model, previous.structure if previous else None
    known = coordinates_again(by_part, previous.by_part, old.coordinates) if previous and old else None
    coordinates = known or independent_coordinates(model)
    index = {p.id: i for i, p in enumerate(parameters)}
    of_links = by_part.bones[len(model.bodies) + len(model.supports) :]
    links = link_terms(model.links, of_links, places(model), old.links if old else {})
    rows = [row for terms in links.values() for row in terms.rows]
    stiffness, damping = (
        terms_of_links([row for row in rows if row.family == family], model, coordinates, index, like)
        for family, like in (
            ("stiffness", old.stiffness.form if old else None),
            ("damping", old.damping.form if old else None),
        )
    )
    return Structure(
        skeleton=bones,
        coordinates=coordinates,
        labels=old.labels if old and known else _labels(coordinates),
        stiffness=stiffness,
        mass=old.mass.with_parameters(previous.parameters, parameters)
        if previous and old and known
        else terms_of_masses(model, coordinates, index, old.mass.form if old else None),
        damping=damping,
        rigid_body=rigid_body_motions(model, coordinates, stiffness.rows),
        links=links,
        before=_before(old) if old else None,
    )


def _labels(coordinates: Coordinates) -> tuple[Coordinate, ...]:
    return tuple(Coordinate(part, freedom, i) for i, (part, freedom) in enumerate(coordinates.free))


def _before(old: Structure) -> Before:
    """Return the pattern of a structure without the factors kept with it, which serve its own rows only."""
    return Before(old.stiffness.form, old.mass.form, replace(old.reused.pattern, earlier=EarlierCounts()))
