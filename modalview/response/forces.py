"""Forces in every link and at every support in steady motion, from the equations before any constraint.

A spring or dashpot presses with its complex stiffness times its stretch. What rigid links and exact gears
carry follows from the balance of every body: D(w) times its motion, less all forces known. Where rigid links
form a ring their shares are a matter of stiffness that the model does not have; those are told as unknown.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp
from scipy.sparse.csgraph import connected_components

from modalview.assembly.assemble import Assembly
from modalview.assembly.dampedterms import DampedTerms
from modalview.assembly.kinematics import AXES, Form, Places, cross, minus, places
from modalview.assembly.masses import tensor_matrix
from modalview.assembly.parameters import Case, values_at
from modalview.assembly.stretch import (
    Stretch,
    acting_point,
    exact_joints,
    relative_motion,
    relative_turn,
    stretches,
)
from modalview.model.parts import FREEDOMS, Damper, InertiaTensor, Link, Motion, Mount, RigidLink, Spring
from modalview.response.dynamic import Damped
from modalview.response.load import Push, product, support_resisting

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

SIX = FREEDOMS[Motion.SPACE]
# Singular values of normalised constraint rows below this share of the largest are none.
DEPENDENT = 1e-9
# Joints of a rigid cluster beyond so many are not shared out: dense, its cost grows with the cube.
LARGEST_PIECE = 600
# A moment about the end's own point this small against its force is the rounding of arms.
ROUNDING = 1e-12


@dataclass(frozen=True, slots=True, eq=False)
class Forces:
    """Forces at many frequencies; six components each: force x, y, z (N), moment rx, ry, rz (N m).

    Parameters
    ----------
    at_from, at_to : complex array (links, 6, w)
        What a link does to the part at either end, the moment about the end's point (for a mount or a link in
        a given direction: about the point at which it acts). NaN: shared among rigid links, unknown.
    on_supports : complex array (supports, 6, w)
        What all links do to a support, the moment about its position.
    """

    at_from: ComplexArray
    at_to: ComplexArray
    on_supports: ComplexArray


@dataclass(frozen=True, slots=True, eq=False)
class ForceMap:
    """How forces follow from motion, prepared once for a model.

    Parameters
    ----------
    assembly : Assembly
    terms : DampedTerms
    ends : csr_array (12 links, t + l)
        Force on the parts at both ends per unit of every term's tension.
    supported : csr_array (6 supports, t + l)
    pulled : csr_array (bodies * freedoms, t + l)
        Force on the freedoms of bodies.
    mass : csr_array (bodies * freedoms, bodies * freedoms)
    carried : csr_array (c, bodies * freedoms)
        Force of every constraint per unit of what is missing in the balance of the bodies; NaN: unknown.
    constrained : csr_array (12 links, c)
        Force on the parts at both ends per unit of every constraint's force.
    """

    assembly: Assembly
    terms: DampedTerms
    ends: sp.csr_array
    supported: sp.csr_array
    pulled: sp.csr_array
    mass: sp.csr_array
    carried: sp.csr_array
    constrained: sp.csr_array

    @classmethod
    def of(cls, assembly: Assembly, terms: DampedTerms) -> "ForceMap":
        """Prepare a model."""
        model, here = assembly.model, places(assembly.model)
        values = assembly.structure.damping.values(values_at(assembly.parameters, Case.NOMINAL))
        found: dict[str, list[tuple[int, Stretch]]] = {"stiffness": [], "damping": []}
        for number, link in enumerate(model.links):
            for term in stretches(link, here):
                found[term.family].append((number, term))
        working = [one for one, value in zip(found["damping"], values, strict=True) if value > 0]
        laid = [*found["stiffness"], *working]
        forms: list[tuple[int, Form]] = [
            (number, {key: float(entry) / term.divide for key, entry in term.form.items()})
            for number, term in laid
        ]
        held = _constraint_forms(assembly, here)
        return cls(
            assembly=assembly,
            terms=terms,
            ends=_end_forces(assembly, here, forms),
            supported=_support_forces(assembly, [form for _, form in forms]),
            pulled=sp.csr_array(_over_bodies(assembly, [form for _, form in forms]).T),
            mass=_mass(assembly),
            carried=_carried(_over_bodies(assembly, [form for _, form in held])),
            constrained=_end_forces(assembly, here, held),
        )

    def forces(self, solver: Damped, push: Push, omega: Array, motion: ComplexArray) -> Forces:
        """Return all forces of a motion (N, w) per unit load.

        Notes
        -----
        Proportional damping beta K presses in the springs. A modal ratio, or alpha M, belongs to no part: it
        is left out of single links and supports, and stands in ``total``.
        """
        model = self.assembly.model
        tension = self._tensions(solver, push, omega, motion)
        ends = -product(self.ends, tension)
        if self.carried.shape[0]:
            missing = self._inertia(solver, push, omega, motion) - push.bodies[:, None]
            missing = missing + product(self.pulled, tension)
            ends = ends + product(self.constrained, product(self.carried, missing))
        both = ends.reshape(len(model.links), 2, 6, omega.size)
        on_supports = -product(self.supported, tension).reshape(len(model.supports), 6, omega.size)
        return Forces(both[:, 0], both[:, 1], on_supports)

    def total(self, push: Push, omega: Array, motion: ComplexArray) -> ComplexArray:
        """Return the force x, y, z (3, w) per unit load that the model passes on to its surroundings.

        What is pushed less what the masses take: f + w^2 M x over all bodies. It holds for every kind of
        damping, and counts what held directions carry.
        """
        moved = product(self.terms.to_bodies, motion)
        given = push.bodies[:, None] + omega**2 * product(self.mass, moved)
        return product(_resultant(self.assembly, None), given)[:3]

    def total_moment(
        self, push: Push, omega: Array, motion: ComplexArray, about: tuple[float, float, float]
    ) -> ComplexArray:
        """Return the moment rx, ry, rz (3, w) about a point, as in ``total``."""
        moved = product(self.terms.to_bodies, motion)
        given = push.bodies[:, None] + omega**2 * product(self.mass, moved)
        return product(_resultant(self.assembly, about), given)[3:]

    def _tensions(self, solver: Damped, push: Push, omega: Array, motion: ComplexArray) -> ComplexArray:
        """Return the tension (t + l, w) of every spring term, then of every dashpot at work."""
        terms, structure, damping = self.terms, self.assembly.structure, solver.damping
        from_base = product(structure.stiffness.support_rows, push.moved)[:, None]
        stretch = product(terms.stretching, motion) + from_base
        resisted = product(support_resisting(self.assembly), push.moved)[:, None]
        rate = product(terms.resisting, motion) + resisted
        stiffness = terms.stiffness[:, None] * (1 + 1j * damping.losses[:, None])
        stiffness = stiffness * (1 + 1j * omega * solver.on_stiffness(omega))
        dashpots = damping.times * terms.damping[:, None]
        return np.asarray(np.vstack([stiffness * stretch, 1j * omega * dashpots * rate]))

    def _inertia(self, solver: Damped, push: Push, omega: Array, motion: ComplexArray) -> ComplexArray:
        """Return M x'' and the damping that goes with mass, over the freedoms of bodies."""
        felt = -(omega**2) * motion + 1j * omega * solver.on_mass(push, omega, motion)
        return product(self.mass, product(self.terms.to_bodies, felt))


def _columns(assembly: Assembly) -> dict[tuple[str, str], int]:
    names = FREEDOMS[assembly.model.motion]
    return {(b.id, f): i for i, (b, f) in enumerate((b, f) for b in assembly.model.bodies for f in names)}


def _over_bodies(assembly: Assembly, forms: Sequence[Form]) -> sp.csr_array:
    """Return forms (r, bodies * freedoms)."""
    columns = _columns(assembly)
    entries = [
        (row, columns[key], float(entry))
        for row, form in enumerate(forms)
        for key, entry in form.items()
        if key in columns
    ]
    return _sparse(entries, (len(forms), len(columns)))


def _sparse(entries: Sequence[tuple[int, int, float]], shape: tuple[int, int]) -> sp.csr_array:
    rows, columns, values = zip(*entries, strict=True) if entries else ((), (), ())
    return sp.csr_array((np.array(values, dtype=float), (rows, columns)), shape=shape)


def _constraint_forms(assembly: Assembly, here: Places) -> list[tuple[int, Form]]:
    """Return what is held exactly, with the number of its link; -1 of a direction in which a body is held."""
    model, names = assembly.model, FREEDOMS[assembly.model.motion]
    found: list[tuple[int, Form]] = [
        (-1, {(body.id, name): 1})
        for body in model.bodies
        if body.dof is not None
        for name in names
        if name not in body.dof
    ]
    for number, link in enumerate(model.links):
        forms = exact_joints(link, here)
        if isinstance(link, RigidLink) and link.directions is None:
            at = acting_point(link, here)
            forms = [
                relative_motion(link, here, at, AXES[name])
                if name in AXES
                else relative_turn(link, here, AXES[name[1:]])
                for name in names
            ]
        found += [(number, form) for form in forms]
    return found


def _end_point(link: Link, here: Places, number: int) -> tuple[float, float, float]:
    """Return the point about which the moment at an end is taken."""
    at_one = isinstance(link, Mount | RigidLink)
    if isinstance(link, Spring | Damper):
        at_one = link.direction is not None or here.motion is Motion.SINGLE_AXIS
    x, y, z = acting_point(link, here) if at_one else here.point((link.from_, link.to)[number])
    return float(x), float(y), float(z)


def _end_forces(assembly: Assembly, here: Places, forms: Sequence[tuple[int, Form]]) -> sp.csr_array:
    """Return the wrench (12 links, forms) of each form on the parts at both ends of its link."""
    entries = []
    links, names = assembly.model.links, FREEDOMS[assembly.model.motion]
    for column, (number, form) in enumerate(forms):
        if number < 0:
            continue
        link = links[number]
        for place, end in enumerate((link.from_, link.to)):
            part = here.part(end)
            force = [float(form.get((part, name), 0.0)) for name in SIX]
            arm = minus(_end_point(link, here, place), here.centre[part])
            lost = cross(arm, (force[0], force[1], force[2]))
            wrench = [*force[:3], *(m - float(c) for m, c in zip(force[3:], lost, strict=True))]
            size = max(map(abs, force), default=0.0)
            for i, value in enumerate(wrench):
                if SIX[i] in names and abs(value) > ROUNDING * size * (1 + max(abs(float(a)) for a in arm)):
                    entries.append((12 * number + 6 * place + i, column, value))
    return _sparse(entries, (12 * len(links), len(forms)))


def _support_forces(assembly: Assembly, forms: Sequence[Form]) -> sp.csr_array:
    rows = {
        (support.id, name): 6 * i + SIX.index(name)
        for i, support in enumerate(assembly.model.supports)
        for name in FREEDOMS[assembly.model.motion]
    }
    entries = [
        (rows[key], column, float(entry))
        for column, form in enumerate(forms)
        for key, entry in form.items()
        if key in rows
    ]
    return _sparse(entries, (6 * len(assembly.model.supports), len(forms)))


def _mass(assembly: Assembly) -> sp.csr_array:
    """Return the mass matrix over the freedoms of all bodies."""
    columns, entries = _columns(assembly), []
    for body in assembly.model.bodies:
        for name in FREEDOMS[assembly.model.motion]:
            place = columns[body.id, name]
            if not name.startswith("r"):
                entries.append((place, place, body.mass.si if body.mass else 0.0))
            elif isinstance(body.inertia, InertiaTensor):
                row = tensor_matrix(body.inertia)[SIX.index(name) - 3]
                first = columns[body.id, "rx"]
                entries += [(place, first + i, float(value)) for i, value in enumerate(row) if value]
            else:
                entries.append((place, place, body.inertia.si if body.inertia else 0.0))
    return _sparse(entries, (len(columns), len(columns)))


def _carried(rows: sp.csr_array) -> sp.csr_array:
    """Return the pseudo-inverse of B^T, piece by piece; rows of undetermined constraints are NaN."""
    count, size = rows.shape
    if count == 0:
        return sp.csr_array((0, size))
    _, label = connected_components(rows @ rows.T, directed=False)
    entries: list[tuple[int, int, float]] = []
    for piece in range(int(label.max()) + 1):
        here = np.flatnonzero(label == piece)
        block = rows[here]
        columns = np.unique(block.indices).astype(np.intp)
        entries += _piece(here, columns, block[:, columns].toarray())
    return _sparse(entries, (count, size))


def _piece(
    here: npt.NDArray[np.intp], columns: npt.NDArray[np.intp], block: Array
) -> list[tuple[int, int, float]]:
    size = np.linalg.norm(block, axis=1)
    if len(here) > LARGEST_PIECE or not columns.size:
        return [(int(row), int(column), np.nan) for row in here for column in columns[:1]]
    left, values, right = np.linalg.svd((block / size[:, None]).T, full_matrices=True)
    rank = int(np.sum(values > DEPENDENT * values[0]))
    inverse = (right[:rank].T / values[:rank]) @ left[:, :rank].T / size[:, None]
    known = np.abs(right[rank:]).max(axis=0, initial=0.0) < DEPENDENT**0.5
    inverse[~known] = np.nan
    return [
        (int(row), int(column), float(value))
        for row, line in zip(here, inverse, strict=True)
        for column, value in zip(columns, line, strict=True)
        if value != 0
    ]


def _resultant(assembly: Assembly, about: tuple[float, float, float] | None) -> sp.csr_array:
    """Return what forces on the freedoms of all bodies sum to (6, bodies * freedoms)."""
    here, columns, entries = places(assembly.model), _columns(assembly), []
    for (body, name), column in columns.items():
        entries.append((SIX.index(name), column, 1.0))
        if about is not None and name in AXES:
            turned = cross(minus(here.centre[body], about), AXES[name])
            entries += [(3 + i, column, float(m)) for i, m in enumerate(turned) if m]
    return _sparse(entries, (6, len(columns)))
