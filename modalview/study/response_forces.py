"""The whole model at one speed, and forces in its parts and at its supports over all speeds."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from modalview.assembly.kinematics import places
from modalview.assembly.parameters import shown_name
from modalview.model.parts import End, Model, Motion
from modalview.response.dynamic import Damped, Dynamics
from modalview.response.forces import ForceMap
from modalview.response.load import Push, load_of
from modalview.response.motion import TAKES_PART, SteadyMotion
from modalview.response.quantities import larger_axis
from modalview.response.strength import MOTION, TORQUE
from modalview.study.response_curves import rpm_of
from modalview.study.response_results import ForceCurve, PartForce, Steady, Transmission
from modalview.study.response_watches import Watched

Array = npt.NDArray[np.float64]
ComplexArray = npt.NDArray[np.complex128]

# Forces of every link over all speeds are given for so many links at most.
MOST_LINKS = 60


@dataclass(frozen=True, slots=True, eq=False)
class Pressing:
    """Reads forces off steady motion with the damping as given.

    Parameters
    ----------
    solver : Damped
    force_map : ForceMap
    grounded : bool
        Whether anything stands on a support, or is held.
    """

    solver: Damped
    force_map: ForceMap
    grounded: bool

    @classmethod
    def of(cls, dynamics: Dynamics) -> "Pressing":
        """Prepare a model."""
        structure = dynamics.assembly.structure
        carried = structure.stiffness.support_rows.nnz + structure.damping.support_rows.nnz > 0
        held = any(body.dof is not None for body in dynamics.assembly.model.bodies)
        force_map = ForceMap.of(dynamics.assembly, dynamics.terms)
        return cls(dynamics.with_damping(), force_map, bool(carried or held))

    def resultants(self, push: Push, omega: Array, motion: SteadyMotion) -> tuple[Array, Array]:
        """Return force and moment per unit load: (links, 2, w) and (supports, 2, w); infinite where they are.

        Of a link the larger of both ends; NaN where unknown.
        """
        size = np.ones_like(omega)
        links, supports = self._sizes(push, omega, motion.coordinates)
        if motion.infinite is None:
            return links * size, supports * size
        still = replace(push, bodies=np.zeros_like(push.bodies), moved=np.zeros_like(push.moved))
        grown = self._sizes(still, omega, motion.infinite)
        return _unbounded(links, grown[0]), _unbounded(supports, grown[1])

    def _sizes(self, push: Push, omega: Array, coordinates: ComplexArray) -> tuple[Array, Array]:
        found = self.force_map.forces(self.solver, push, omega, coordinates)
        links = np.maximum(_pair(found.at_from), _pair(found.at_to))
        return links, _pair(found.on_supports)

    def passed_on(self, push: Push, omega: Array, motion: SteadyMotion, at: End) -> Array | None:
        """Return what the supports feel (w,) per unit load, a torque's as a moment; None of a free model."""
        if not self.grounded:
            return None
        found = self._passed_on(push, omega, motion.coordinates, at)
        if motion.infinite is None:
            return found
        still = replace(push, bodies=np.zeros_like(push.bodies), moved=np.zeros_like(push.moved))
        return _unbounded(found, self._passed_on(still, omega, motion.infinite, at))

    def _passed_on(self, push: Push, omega: Array, coordinates: ComplexArray, at: End) -> Array:
        model = self.force_map.assembly.model
        if push.strength.kind != TORQUE:
            return larger_axis(self.force_map.total(push, omega, coordinates))
        if model.motion is Motion.SHAFT_TRAIN:
            found = self.force_map.forces(self.solver, push, omega, coordinates)
            return larger_axis(found.on_supports.sum(axis=0)[3:])
        x, y, z = (float(c) for c in places(model).point(at))
        return larger_axis(self.force_map.total_moment(push, omega, coordinates, (x, y, z)))


def _pair(six: ComplexArray) -> Array:
    """Return the resultant force and moment (parts, 2, w) of six components (parts, 6, w)."""
    parts, _, count = six.shape
    rows = six.reshape(parts, 2, 3, count).transpose(2, 0, 1, 3).reshape(3, -1)
    return larger_axis(rows).reshape(parts, 2, count)


def _unbounded(found: Array, grown: Array) -> Array:
    largest = np.nanmax(grown, axis=tuple(range(grown.ndim - 1)), initial=0.0)
    return np.where(grown > TAKES_PART * np.maximum(largest, np.finfo(float).tiny), np.inf, found)


def steady_at(pressing: Pressing, push: Push, at: End, speed: float | None) -> Steady:
    """Return the whole model under one excitation at one speed, rad/s; None: a machine without a speed."""
    strength = push.strength
    omega = strength.omega(np.array([speed if speed is not None else 1.0]))
    load = load_of(pressing.force_map.assembly, pressing.force_map.terms, pressing.solver.damping, push)
    motion = pressing.solver.solve(omega, load)
    applied = float(strength.amplitude(omega)[0])
    infinite = bool(motion.unbounded[0])
    links, supports = (np.zeros((0, 2)), np.zeros((0, 2)))
    passed = None
    if not infinite:
        links, supports = (one[:, :, 0] * applied for one in pressing.resultants(push, omega, motion))
        through = pressing.passed_on(push, omega, motion, at)
        passed = None if through is None or strength.kind == MOTION else float(through[0])
    model = pressing.force_map.assembly.model
    moved = pressing.force_map.terms.body_motion(motion.coordinates * applied)[0]
    moved = np.zeros_like(moved) if infinite else moved
    moved.setflags(write=False)
    return Steady(
        excitation=strength.id,
        speed_rpm=None if speed is None else rpm_of(speed),
        frequency_hz=float(omega[0]) / (2 * np.pi),
        infinite=infinite,
        applied=applied,
        motion=moved,
        links=_parts([(one.id, shown_name(one)) for one in model.links], links, infinite=infinite),
        supports=_parts(
            [(one.id, one.name or one.id) for one in model.supports], supports, infinite=infinite
        ),
        transmissibility=passed,
        isolation_percent=None if passed is None else 100 * (1 - passed),
    )


def _parts(names: Sequence[tuple[str, str]], sizes: Array, *, infinite: bool) -> tuple[PartForce, ...]:
    if infinite:
        return ()
    return tuple(
        PartForce(name, label, _known(force), _known(moment))
        for (name, label), (force, moment) in zip(names, sizes, strict=True)
    )


def _known(value: float) -> float | None:
    return None if np.isnan(value) else float(value)


def forces_over(
    pressing: Pressing, pushes: Sequence[tuple[Push, End]], speeds: Array, points: Sequence[Watched]
) -> tuple[tuple[Transmission, ...], tuple[ForceCurve, ...]]:
    """Return what is passed on to the supports, and the force in every link and support, over speeds."""
    model = pressing.force_map.assembly.model
    wide = len(model.links) <= MOST_LINKS
    transmissions, each = [], []
    for push, at in pushes:
        load = load_of(pressing.force_map.assembly, pressing.force_map.terms, pressing.solver.damping, push)
        omega = push.strength.omega(speeds)
        links, supports, passed, ratios = [], [], [], []
        for part in pressing.solver.batches(omega.size):
            motion = pressing.solver.solve(omega[part], load)
            passed.append(pressing.passed_on(push, omega[part], motion, at))
            if push.based:
                ones = np.ones_like(omega[part])
                rows = [one.point.amplitude(motion, ones) for one in points]
                ratios.append(np.array(rows).reshape(len(points), ones.size))
            if wide:
                both = pressing.resultants(push, omega[part], motion)
                links.append(both[0])
                supports.append(both[1])
        size = push.strength.amplitude(omega)
        transmissions += _transmission(push, size, passed, (ratios, points))
        if wide:
            whole = [np.concatenate(one, axis=2) * size for one in (links, supports)]
            each.append(np.concatenate(whole, axis=0))
    return tuple(transmissions), _curves(model, [push.strength.id for push, _ in pushes], each)


def _transmission(
    push: Push,
    size: Array,
    passed: Sequence[Array | None],
    watched: tuple[Sequence[Array], Sequence[Watched]],
) -> list[Transmission]:
    known = [one for one in passed if one is not None]
    if not known or len(known) < len(passed):
        return []
    ratio = np.concatenate(known)
    kind = "motion" if push.based else "moment" if push.strength.kind == TORQUE else "force"
    ratios, points = watched
    over = np.concatenate(ratios, axis=1) if ratios else np.zeros((0, size.size))
    by_watch = tuple((one.watch.id, _fixed(row)) for one, row in zip(points, over, strict=False))
    return [
        Transmission(
            excitation=push.strength.id,
            kind=kind,
            at_supports=_fixed(ratio * size),
            ratio=None if push.based else _fixed(ratio),
            ratios=by_watch,
        )
    ]


def _fixed(values: Array) -> Array:
    kept = np.array(values, dtype=float)
    kept.setflags(write=False)
    return kept


def _curves(model: Model, names: Sequence[str], each: Sequence[Array]) -> tuple[ForceCurve, ...]:
    """Return one curve per part, unit and excitation, then the sum; none where nothing ever acts."""
    parts = [(one.id, shown_name(one)) for one in model.links]
    parts += [(one.id, one.name or one.id) for one in model.supports]
    found = []
    for number, (part, label) in enumerate(parts):
        for place, unit in enumerate(("N", "N m")):
            rows = [one[number, place] for one in each]
            if not rows or not np.any(np.nan_to_num(rows) > 0):
                continue
            found += [
                ForceCurve(part, label, unit, name, _fixed(row))
                for name, row in zip(names, rows, strict=True)
            ]
            if len(rows) > 1:
                found.append(ForceCurve(part, label, unit, None, _fixed(np.sum(rows, axis=0))))
    return tuple(found)
