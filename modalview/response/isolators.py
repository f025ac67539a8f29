"""What each mount carries at rest: load, deflection, its share of the rated load, and how the bodies tilt."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.assembly.assemble import ALL_FREEDOMS, Assembly
from modalview.assembly.groups import Groups
from modalview.assembly.kinematics import AXES, ROTATIONS, Form, Places, Vector, places
from modalview.assembly.parameters import shown_name
from modalview.assembly.stretch import acting_point, stretches
from modalview.model.parts import FREEDOMS, Beam, Body, Link, Model, Motion, Mount, RigidLink, Spring
from modalview.response.weight import UP, Settled, settled, static_stiffness

Array = npt.NDArray[np.float64]

GROUND = ""  # among the ids of bodies; no id is empty
# A link whose direction rises by less than this carries no weight: a level one.
RISE = 1e-6
# Rotations that a body's tilt consists of: all but turning about the upright.
TILTS: dict[Motion, tuple[str, ...]] = {
    Motion.SINGLE_AXIS: (),
    Motion.PLANE: ("rz",),
    Motion.SPACE: ("rx", "ry"),
}
# So small a share of the weight on a foot, or held elsewhere, is rounding.
NOTHING = 1e-9
# Bodies whose centres differ by less stand side by side, m.
SAME_HEIGHT = 1e-6


@dataclass(frozen=True, slots=True)
class Foot:
    """A spring, mount or beam that bears weight.

    Parameters
    ----------
    link, label : str
    carried, on : str
        Id of the body it carries, and of the support or body it stands on (or hangs from).
    grounded : bool
        Whether that is a support.
    point : tuple of float, m
        Where it acts on what it carries.
    stiffness : float, N/m
        Static, upright.
    load : float, N
        Upward on what it carries; below zero it pulls down: a mount that cannot pull lifts off.
    deflection : float, m
        How far what it carries comes down towards what it stands on.
    rated : float or None, N
    strain : float, N
        What is held against the rated load: a spring's force along itself, else the load; not below zero.
    seated : bool
        Whether it is a spring or mount under or over what it carries, which can lift off; not a beam, and not
        one that joins bodies side by side.
    """

    link: str
    label: str
    carried: str
    on: str
    grounded: bool
    point: tuple[float, float, float]
    stiffness: float
    load: float
    deflection: float
    rated: float | None
    strain: float
    seated: bool

    @property
    def of_rated(self) -> float | None:
        """Share of the rated load; above 1 is overloaded."""
        return None if self.rated is None else self.strain / self.rated

    @property
    def overloaded(self) -> bool:
        """Whether it carries more than its rated load."""
        return self.rated is not None and self.strain > self.rated


@dataclass(frozen=True, slots=True)
class Sag:
    """How one body settles.

    Parameters
    ----------
    body, label : str
    down : float, m
        Of its centre of gravity.
    tilt : tuple of (freedom, float)
        "rx", "ry" in space, "rz" in a plane; rad.
    """

    body: str
    label: str
    down: float
    tilt: tuple[tuple[str, float], ...]


@dataclass(frozen=True, slots=True)
class Carried:
    """Bodies that tilt as one group of linked bodies, over the feet that carry them.

    Parameters
    ----------
    bodies, labels, feet : tuple of str
        Ids of the bodies, their names, ids of the links.
    mass : float, kg
    centre : tuple of float, m
        Centre of gravity.
    centroid : tuple of float, m
        Of the feet, weighted by their upright stiffness; level coordinates: x in a plane, x and y in space.
    offset : tuple of float, m
        Centre of gravity against it.
    height : float, m
        Of the centre of gravity above the mean of the feet.
    """

    bodies: tuple[str, ...]
    labels: tuple[str, ...]
    feet: tuple[str, ...]
    mass: float
    centre: tuple[float, float, float]
    centroid: tuple[float, ...]
    offset: tuple[float, ...]
    height: float


@dataclass(frozen=True, slots=True, eq=False)
class AtRest:
    """A model under its weight.

    Parameters
    ----------
    feet : tuple of Foot
        In the order of the file.
    sags : tuple of Sag
    carried : tuple of Carried
        Plane and space only.
    weight : float, N
        Of all bodies.
    on_ground : float, N
        Sum of the loads of all links to supports.
    held : float, N
        Carried by directions that are held still: what is left of the weight.
    unbalanced : float
        Largest force left over on any coordinate, as a share of the whole weight.
    """

    feet: tuple[Foot, ...]
    sags: tuple[Sag, ...]
    carried: tuple[Carried, ...]
    weight: float
    on_ground: float
    held: float
    unbalanced: float

    @property
    def lifted(self) -> tuple[Foot, ...]:
        """Feet that pull down on what they should carry."""
        return tuple(foot for foot in self.feet if foot.seated and foot.load < -NOTHING * self.weight)

    @property
    def overloaded(self) -> tuple[Foot, ...]:
        """Feet that carry more than their rated load."""
        return tuple(foot for foot in self.feet if foot.overloaded)


def at_rest(assembly: Assembly) -> AtRest:
    """Return what every mount carries under the weight of a model.

    Raises
    ------
    InputError, ModelFaultsError, NumericalError
        As `settled`.

    Notes
    -----
    Where more mounts carry a body than statics needs they share by their stiffness: they are taken as of one
    free height, set level without load.
    """
    found = settled(assembly)
    survey = _Survey(assembly, found)
    feet = tuple(foot for link in assembly.model.links if (foot := survey.foot(link)) is not None)
    weight, on_ground = float(found.weight.sum()), survey.on_ground()
    held = weight - on_ground
    return AtRest(
        feet=feet,
        sags=tuple(
            _sag(body, row, assembly.model.motion) for body, row in _rows(assembly.model, found.motion)
        ),
        carried=tuple(_carried_groups(assembly.model, survey.here, feet)),
        weight=weight,
        on_ground=on_ground,
        held=held if abs(held) > NOTHING * weight else 0.0,
        unbalanced=found.unbalanced,
    )


class _Survey:
    """The terms of every link with what they carry."""

    def __init__(self, assembly: Assembly, found: Settled) -> None:
        self.model, self.here = assembly.model, places(assembly.model)
        self.up, self.found = UP[self.model.motion], found
        self.forms: dict[str, list[tuple[Form, float]]] = {}
        self.depth = self._depths()
        terms = assembly.structure.stiffness
        self.stiffness = static_stiffness(assembly)
        self.terms_of: dict[str, list[int]] = {}
        for i, part in enumerate(terms.part):
            self.terms_of.setdefault(part, []).append(i)
        self.motion = {body.id: row for body, row in _rows(self.model, found.motion)}

    def foot(self, link: Link) -> Foot | None:
        """Return a link as a foot; None where it bears no weight."""
        if not isinstance(link, Spring | Mount | Beam):
            return None
        carried, on = self._ends(link)
        rises, own = self._rises(link, carried), self.terms_of.get(link.id, [])
        stiffness = float(np.sum(self.stiffness[own] * rises**2))
        if carried == GROUND or not np.any(np.abs(rises) > RISE) or stiffness == 0:
            return None
        forces = self.found.forces[own]
        load = float(-forces @ rises)
        return Foot(
            link=link.id,
            label=shown_name(link),
            carried=carried,
            on=on,
            grounded=on in self.here.supports,
            point=self._point(link, carried),
            stiffness=stiffness,
            load=load,
            deflection=self._rise(link, on) - self._rise(link, carried),
            rated=link.rated_load.si if link.rated_load is not None else None,
            strain=abs(float(forces[0])) if isinstance(link, Spring) else max(load, 0.0),
            seated=not isinstance(link, Beam) and not self._level(link),
        )

    def on_ground(self) -> float:
        """Return the sum of what all links to supports carry, N."""
        total = 0.0
        for link in self.model.links:
            own = self.terms_of.get(link.id, [])
            for end in (link.from_, link.to):
                if end.support is not None and own:
                    total += float(self.found.forces[own] @ self._rises(link, end.support))
        return total

    def _ends(self, link: Link) -> tuple[str, str]:
        """Return what a link carries (the end farther from ground, or higher) and what it stands on."""
        ends = [(end, self.here.part(end)) for end in (link.from_, link.to)]
        at = AXES[self.up].index(1)
        ranked = sorted(ends, key=lambda one: (self.depth[one[1]], self.here.point(one[0])[at]), reverse=True)
        (_, carried), (_, on) = ranked
        return (GROUND if carried in self.here.supports else carried), on

    def _depths(self) -> dict[str, int]:
        """Return over how many links that bear weight each part stands on ground; else of any links."""
        depth = {support.id: 0 for support in self.model.supports}
        depth |= {body.id: 0 for body in self.model.bodies if body.dof == ()}
        bearing = [link for link in self.model.links if self._bears(link)]
        for links in (bearing, self.model.links):
            _spread(depth, links)
        return depth | {body.id: len(depth) for body in self.model.bodies if body.id not in depth}

    def _bears(self, link: Link) -> bool:
        """Return whether a link passes upright force on."""
        ends = [self.here.part(end) for end in (link.from_, link.to)]
        return isinstance(link, RigidLink) or any(
            bool(np.any(abs(self._rises(link, part)) > RISE)) for part in ends
        )

    def _level(self, link: Link) -> bool:
        """Return whether a link joins two bodies side by side."""
        ends = [self.here.part(end) for end in (link.from_, link.to)]
        if self.model.motion is Motion.SINGLE_AXIS or not self.here.supports.isdisjoint(ends):
            return False
        at = AXES[self.up].index(1)
        one, other = (float(self.here.centre[part][at]) for part in ends)
        return abs(one - other) < SAME_HEIGHT

    def _rises(self, link: Link, part: str) -> Array:
        """Return the stretch of every stiffness term of a link per unit rise of one of its ends."""
        if link.id not in self.forms:
            terms = [one for one in stretches(link, self.here) if one.family == "stiffness"]
            self.forms[link.id] = [(one.form, one.divide) for one in terms]
        return np.array([float(form.get((part, self.up), 0.0)) / over for form, over in self.forms[link.id]])

    def _point(self, link: Link, part: str) -> tuple[float, float, float]:
        x, y, z = self._attached(link, part)
        return float(x), float(y), float(z)

    def _attached(self, link: Link, part: str) -> Vector:
        """Return the point at which a link acts on one of its ends."""
        if isinstance(link, Mount) or (isinstance(link, Spring) and link.direction is not None):
            return acting_point(link, self.here)
        return self.here.point(link.from_ if self.here.part(link.from_) == part else link.to)

    def _rise(self, link: Link, part: str) -> float:
        """Return how far the point at which a link acts on a part has risen, m; supports stand still."""
        if part not in self.motion:
            return 0.0
        form = self.here.moves(part, self._attached(link, part), AXES[self.up])
        row = self.motion[part]
        return float(sum(float(entry) * row[ALL_FREEDOMS.index(name)] for (_, name), entry in form.items()))


def _spread(depth: dict[str, int], links: Iterable[Link]) -> None:
    """Go on from the parts of known depth to those that links join to them."""
    beside: dict[str, list[str]] = {}
    for link in links:
        one, other = (str(end.body or end.support) for end in (link.from_, link.to))
        beside.setdefault(one, []).append(other)
        beside.setdefault(other, []).append(one)
    reached = sorted(depth, key=lambda part: depth[part])
    for part in reached:  # grows as it goes
        for other in beside.get(part, ()):
            if other not in depth:
                depth[other] = depth[part] + 1
                reached.append(other)


def _rows(model: Model, motion: Array) -> Iterable[tuple[Body, Array]]:
    return zip(model.bodies, motion, strict=True)


def _sag(body: Body, row: Array, motion: Motion) -> Sag:
    tilt = tuple((name, float(row[ALL_FREEDOMS.index(name)])) for name in TILTS[motion])
    return Sag(body.id, shown_name(body), 0.0 - float(row[ALL_FREEDOMS.index(UP[motion])]), tilt)


def _carried_groups(model: Model, here: Places, feet: Sequence[Foot]) -> Iterable[Carried]:
    """Yield the bodies that tilt, by what links join, with the feet that lead out of each group."""
    if not TILTS[model.motion]:
        return
    tilting = {body.id: body for body in model.bodies if _tilts(body, model.motion)}
    groups = Groups(tilting)
    for link in model.links:
        inside = [part for part in (link.from_.body, link.to.body) if part in tilting]
        if len(inside) == 2:
            groups.join(str(inside[0]), str(inside[1]))
    leading: dict[str, list[Foot]] = {}
    for foot in feet:
        if foot.carried in tilting and (
            foot.on not in tilting or groups.find(foot.on) != groups.find(foot.carried)
        ):
            leading.setdefault(groups.find(foot.carried), []).append(foot)
    for members in groups.lists():
        own = leading.get(groups.find(members[0]), [])
        mass = sum(_mass(tilting[part]) for part in members)
        if own and mass > 0:
            yield _carried(model, here, [tilting[part] for part in members], own)


def _tilts(body: Body, motion: Motion) -> bool:
    return body.dof is None or any(name in body.dof for name in ROTATIONS if name in FREEDOMS[motion])


def _mass(body: Body) -> float:
    return 0.0 if body.mass is None else body.mass.si


def _carried(model: Model, here: Places, bodies: Sequence[Body], feet: Sequence[Foot]) -> Carried:
    masses = np.array([_mass(body) for body in bodies])
    centre = masses @ np.array([[float(c) for c in here.centre[body.id]] for body in bodies]) / masses.sum()
    stiffness, points = np.array([foot.stiffness for foot in feet]), np.array([foot.point for foot in feet])
    up = AXES[UP[model.motion]].index(1)
    centroid = (stiffness @ points / stiffness.sum())[:up]
    return Carried(
        bodies=tuple(body.id for body in bodies),
        labels=tuple(shown_name(body) for body in bodies),
        feet=tuple(foot.link for foot in feet),
        mass=float(masses.sum()),
        centre=(float(centre[0]), float(centre[1]), float(centre[2])),
        centroid=tuple(map(float, centroid)),
        offset=tuple(map(float, centre[:up] - centroid)),
        height=float(centre[up] - points[:, up].mean()),
    )
