"""The independent coordinates of a model: rigid clusters, held directions, exact gears, massless parts.

Steps, all in exact arithmetic on the numbers as typed:

1. Bodies joined rigidly in all directions form a cluster, moving with its joint centre of gravity.
2. Held directions, partly listed rigid links and exact gears are one homogeneous set of forms; its
   reduced echelon form leaves the free unknowns.
3. Directions of a cluster that no inertia takes part in become coordinates of their own: massless.
4. Massless directions that no term resists decouple from everything and are left out, with a note.
"""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
import scipy.sparse as sp

from modalview.assembly.exact import null_space, reduced_echelon
from modalview.assembly.groups import Groups
from modalview.assembly.kinematics import (
    AXES,
    ROTATIONS,
    TRANSLATIONS,
    Freedom,
    Places,
    Vector,
    as_typed,
    combined,
    cross,
    minus,
    places,
)
from modalview.assembly.locks import gear_locks
from modalview.assembly.masses import has_inertia, inertia_forms
from modalview.assembly.parameters import shown_name
from modalview.assembly.stretch import exact_joints, stretches
from modalview.errors import Fault, ModelFaultsError
from modalview.model.parts import FREEDOMS, Body, Link, Model, Motion, RigidLink

ExactForm = dict[Freedom, Fraction]
ONE = Fraction(1)

# More parts than this of which the same is to be noted share one note.
NAMED = 4


@dataclass(frozen=True, slots=True)
class Coordinates:
    """The change of variable from independent coordinates to the freedoms of all bodies.

    Parameters
    ----------
    free : tuple of Freedom
        One for each coordinate: the body whose cluster carries it, and the freedom.
    to_bodies : csr_array (bodies * freedoms, n)
        Motion of every body's freedoms, in the order of the model, from the coordinates.
    released : csr_array (bodies * freedoms, d)
        The same from the massless directions left out, which no spring resists; a dashpot may.
    unrounded : mapping
        Entries of ``to_bodies``, then of ``released``, that no double holds, by row and column, exactly.
    massless : bool array (n,)
    substitutions : tuple of (Freedom, mapping)
        Massless directions that were split off or left out, in order; see :meth:`of_motion`.
    centres : mapping
        Reference point of every cluster by its first body, m.
    cluster_of : mapping
        First body of the cluster of every body.
    notes : tuple of str
        Directions locked or left out.
    """

    free: tuple[Freedom, ...]
    to_bodies: sp.csr_array
    released: sp.csr_array
    unrounded: Mapping[tuple[int, int], Fraction]
    massless: np.ndarray
    substitutions: tuple[tuple[Freedom, Mapping[Freedom, Fraction]], ...]
    centres: Mapping[str, Vector]
    cluster_of: Mapping[str, str]
    notes: tuple[str, ...]

    def of_motion(self, unknowns: Mapping[Freedom, float]) -> np.ndarray:
        """Return the coordinates (n,) of a motion given by the frames of its clusters."""
        values = dict(unknowns)
        for pivot, vector in self.substitutions:
            amount = values.get(pivot, 0.0)
            for key, entry in vector.items():
                if key != pivot:
                    values[key] = values.get(key, 0.0) - float(entry) * amount
        return np.array([values.get(key, 0.0) for key in self.free])


class _Frames:
    """Rigid clusters and how their bodies move with them."""

    def __init__(self, model: Model, exact: Places) -> None:
        self.motion = model.motion
        self.exact = exact
        groups = Groups(body.id for body in model.bodies)
        for link in model.links:
            if isinstance(link, RigidLink) and joins_wholly(link, model.motion):
                groups.join(exact.part(link.from_), exact.part(link.to))
        self.cluster_of = groups.first_of()
        self.members: dict[str, list[Body]] = {}
        for body in model.bodies:
            self.members.setdefault(self.cluster_of[body.id], []).append(body)
        self.centres = {root: self._centre(bodies) for root, bodies in self.members.items()}

    def _centre(self, bodies: Sequence[Body]) -> Vector:
        if len(bodies) == 1:
            return self.exact.centre[bodies[0].id]
        weights = [as_typed(body.mass.si) if body.mass else Fraction(0) for body in bodies]
        if not any(weights):
            weights = [Fraction(1)] * len(bodies)
        total = sum(weights)
        places_ = [self.exact.centre[body.id] for body in bodies]
        # Not rounded: masses on one line keep their centre on it, so that turning about it moves none.
        x, y, z = (
            sum((w * p[i] for w, p in zip(weights, places_, strict=True)), Fraction(0)) / total
            for i in range(3)
        )
        return x, y, z

    def form(self, freedom: Freedom) -> ExactForm:
        """Return one freedom of a body as a form in the unknowns of its cluster."""
        body, name = freedom
        root = self.cluster_of[body]
        if len(self.members[root]) == 1:
            return {freedom: ONE}
        form = {(root, name): Fraction(1)}
        if name in TRANSLATIONS:
            arm = minus(self.exact.centre[body], self.centres[root])
            turned = zip(ROTATIONS, cross(arm, AXES[name]), strict=True)
            allowed = FREEDOMS[self.motion]
            form.update({(root, r): Fraction(entry) for r, entry in turned if entry and r in allowed})
        return form

    def of(self, form: Mapping[Freedom, Fraction]) -> ExactForm:
        """Return a form in the freedoms of bodies as one in the unknowns; supports stand still."""
        if all(len(self.members.get(key[0], ())) == 1 for key in form):
            return dict(form)  # single bodies, as most are: nothing to be carried over
        moving = ((entry, self.form(key)) for key, entry in form.items() if key[0] in self.cluster_of)
        return {key: Fraction(entry) for key, entry in combined(moving).items()}


def joins_wholly(link: RigidLink, motion: Motion) -> bool:
    """Return whether a rigid link joins its bodies in every direction of the motion."""
    return link.directions is None or set(link.directions) >= set(FREEDOMS[motion])


def independent_coordinates(model: Model) -> Coordinates:
    """Reduce the freedoms of all bodies to independent coordinates.

    Raises
    ------
    ModelFaultsError
        A gear loop cannot turn, no motion is left, or nothing that moves has mass.
    """
    gear_locks(model)
    frames = _Frames(model, places(model, exact=True))
    unknowns = _unknowns(model, frames)
    held, joints = _held_forms(model, frames), _joint_forms(model, frames)
    solved = reduced_echelon([*held, *joints], unknowns)
    notes = _locked_notes(model, solved, held)
    free = [key for key in unknowns if key not in solved]
    masses = _mass_forms(model, frames, solved)
    massless, split = _massless_directions(model, frames, free, masses)
    dropped, drop_notes = _unresisted(model, frames, solved, [key for key in free if key in massless], split)
    left = tuple(key for key in free if key not in {d[0] for d in dropped})
    if not left:
        raise ModelFaultsError(
            (Fault("model", "no motion is left: every direction is held, locked or massless"),)
        )
    if massless.issuperset(left):
        raise ModelFaultsError((Fault("model", "no mass moves: every part that can move is massless"),))
    table, unrounded = _to_bodies(model, frames, solved, (split, dropped), left)
    return Coordinates(
        free=left,
        to_bodies=sp.csr_array(table[:, : len(left)]),
        released=sp.csr_array(table[:, len(left) :]),
        unrounded=unrounded,
        massless=np.array([key in massless for key in left]),
        substitutions=(*split, *dropped),
        centres=frames.centres,
        cluster_of=frames.cluster_of,
        notes=(*_point_notes(model), *notes, *drop_notes),
    )


def _unknowns(model: Model, frames: _Frames) -> list[Freedom]:
    """List the cluster freedoms; those of massless clusters last, so that they become the dependent ones."""
    heavy = {
        root: any(has_inertia(body, name) for body in bodies for name in FREEDOMS[model.motion])
        for root, bodies in frames.members.items()
    }
    roots = sorted(frames.members, key=lambda root: not heavy[root])
    return [(root, name) for root in roots for name in FREEDOMS[model.motion]]


def _held_forms(model: Model, frames: _Frames) -> list[ExactForm]:
    return [
        frames.form((body.id, name))
        for body in model.bodies
        if body.dof is not None
        for name in FREEDOMS[model.motion]
        if name not in body.dof
    ]


def _joint_forms(model: Model, frames: _Frames) -> list[ExactForm]:
    return [
        frames.of(_fractions(form))
        for link in model.links
        if not (isinstance(link, RigidLink) and joins_wholly(link, model.motion))
        for form in exact_joints(link, frames.exact)
    ]


def _locked_notes(model: Model, solved: Mapping[Freedom, ExactForm], held: Iterable[ExactForm]) -> list[str]:
    plainly_held = {next(iter(form)) for form in held if len(form) == 1}
    names = {body.id: shown_name(body) for body in model.bodies}
    return [
        f"{names[part]}: motion {freedom} is locked by rigid links, gears or held directions"
        for (part, freedom), row in solved.items()
        if not row and (part, freedom) not in plainly_held
    ]


def _point_notes(model: Model) -> list[str]:
    if model.motion not in (Motion.PLANE, Motion.SPACE):
        return []
    points = [
        shown_name(body)
        for body in model.bodies
        if body.inertia is None
        and has_inertia(body, "x")
        and (body.dof is None or any(name in body.dof for name in ROTATIONS))
    ]
    if len(points) <= NAMED:
        return [f"{point}: no inertia is given; taken as a point mass" for point in points]
    return [f"{_shortened(points)}: no inertia is given; taken as point masses"]


def _shortened(names: Sequence[str]) -> str:
    return f"{', '.join(names[:NAMED])} and {len(names) - NAMED} more"


def _through(form: Mapping[Freedom, Fraction], solved: Mapping[Freedom, ExactForm]) -> ExactForm:
    if not any(key in solved for key in form):
        return dict(form)
    parts = ((entry, solved.get(key, {key: Fraction(1)})) for key, entry in form.items())
    return {key: Fraction(entry) for key, entry in combined(parts).items()}


def _mass_forms(model: Model, frames: _Frames, solved: Mapping[Freedom, ExactForm]) -> list[ExactForm]:
    return [
        _through(frames.of(form), solved)
        for body in model.bodies
        for form in inertia_forms(body, model.motion)
    ]


def _massless_directions(
    model: Model, frames: _Frames, free: Sequence[Freedom], masses: Sequence[ExactForm]
) -> tuple[set[Freedom], list[tuple[Freedom, ExactForm]]]:
    """Return the massless coordinates, and the directions that were turned into coordinates for it."""
    touched = {key for form in masses for key in form}
    massless = {key for key in free if key not in touched}
    light = {
        frames.cluster_of[body.id]
        for body in model.bodies
        if len(inertia_forms(body, model.motion)) < len(FREEDOMS[model.motion])
    }
    split: list[tuple[Freedom, ExactForm]] = []
    groups = Groups(key for key in free if key in touched)
    for form in masses:
        groups.join_all(form)
    for members in groups.lists():
        if len(members) > 1 and any(key[0] in light for key in members):
            inside = set(members)
            for pivot, vector in null_space([f for f in masses if inside.issuperset(f) and f], members):
                massless.add(pivot)
                split.append((pivot, vector))
    return massless, split


def _split_through(form: ExactForm, split: Sequence[tuple[Freedom, ExactForm]]) -> ExactForm:
    """Return a form in the coordinates after the splits: the entry at a pivot is its value on the vector."""
    result = dict(form)
    for pivot, vector in split:
        value = sum((form.get(key, Fraction(0)) * entry for key, entry in vector.items()), Fraction(0))
        result.pop(pivot, None)
        if value:
            result[pivot] = value
    return result


def _unresisted(
    model: Model,
    frames: _Frames,
    solved: Mapping[Freedom, ExactForm],
    massless: Sequence[Freedom],
    split: Sequence[tuple[Freedom, ExactForm]],
) -> tuple[list[tuple[Freedom, ExactForm]], list[str]]:
    """Find the massless directions that no stiffness resists; they decouple and are left out."""
    if not massless:
        return [], []
    forms, light = [], set(massless)
    for link in _links_near(model, frames, light, solved):
        for term in stretches(link, frames.exact):
            if term.family == "stiffness":
                form = _split_through(_through(frames.of(_fractions(term.form)), solved), split)
                forms.append({key: entry for key, entry in form.items() if key in light})
    dropped = []
    groups = Groups(massless)
    for form in forms:
        groups.join_all(form)
    for members in groups.lists():
        inside = set(members)
        dropped += null_space([f for f in forms if f and inside.issuperset(f)], members)
    names = {body.id: shown_name(body) for body in model.bodies}
    left_out: dict[str, list[str]] = {}
    for (part, freedom), vector in dropped:
        left_out.setdefault(part, []).append(_direction(freedom, vector))
    alike: dict[str, list[str]] = {}
    for part, freedoms in left_out.items():
        alike.setdefault(", ".join(sorted(freedoms)), []).append(names[part])
    notes = [note for freedoms, parts in alike.items() for note in _left_out(parts, freedoms)]
    return dropped, notes


def _left_out(parts: Sequence[str], freedoms: str) -> list[str]:
    why = "no inertia and no resistance; left out"
    if len(parts) <= NAMED:
        return [f"{part}: its motion {freedoms} has {why}" for part in parts]
    return [f"{_shortened(parts)}: their motions {freedoms} have {why}"]


def _direction(freedom: str, vector: ExactForm) -> str:
    """Name a direction; one that several freedoms share lies between them."""
    shared = sorted({name for _, name in vector})
    return freedom if len(shared) == 1 else f"in a direction between {' and '.join(shared)}"


def _fractions(form: Mapping[Freedom, float | Fraction]) -> ExactForm:
    return {key: Fraction(entry) for key, entry in form.items()}


def _links_near(
    model: Model, frames: _Frames, massless: set[Freedom], solved: Mapping[Freedom, ExactForm]
) -> list[Link]:
    near = {key[0] for key in massless}
    near |= {key[0] for key, row in solved.items() if any(k in massless for k in row)}
    return [
        link
        for link in model.links
        if any(frames.cluster_of.get(frames.exact.part(end)) in near for end in (link.from_, link.to))
    ]


def _to_bodies(
    model: Model,
    frames: _Frames,
    solved: Mapping[Freedom, ExactForm],
    turns: tuple[Sequence[tuple[Freedom, ExactForm]], Sequence[tuple[Freedom, ExactForm]]],
    left: Sequence[Freedom],
) -> tuple[sp.csr_array, dict[tuple[int, int], Fraction]]:
    """Return the motion of every body's freedoms from the coordinates, then from the directions left out."""
    split, dropped = turns
    column = {key: place for place, key in enumerate([*left, *(pivot for pivot, _ in dropped)])}
    rows, cols, entries = [], [], []
    unrounded = {}
    names = FREEDOMS[model.motion]
    for row, (body, name) in enumerate((b, f) for b in model.bodies for f in names):
        form = _split_through(_through(frames.form((body.id, name)), solved), split)
        for key, entry in _split_through(form, dropped).items():
            if key in column:
                rows.append(row)
                cols.append(column[key])
                entries.append(float(entry))
                if entry is not ONE and float(entry) != entry:
                    unrounded[row, column[key]] = entry
    shape = (len(model.bodies) * len(names), len(column))
    return sp.csr_array((entries, (rows, cols)), shape=shape, dtype=float), unrounded
