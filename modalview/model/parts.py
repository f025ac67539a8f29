"""The parts of a model, as the file holds them.

A field's quantity stands beside it (``Annotated[Value, MASS]``): reader, writer, window and
command line read it there. Names are the file's keys; ``from_`` stands for ``from``.
"""

from dataclasses import dataclass
from enum import StrEnum
from typing import Annotated, Any, ClassVar

from modalview.model.values import Entry, Tolerance, Value
from modalview.units import quantities as q

Length = Annotated[Entry, q.LENGTH]
Point = tuple[Length, ...]
Ratio = Annotated[Entry, q.RATIO]


class Motion(StrEnum):
    """In which directions the bodies of a model move."""

    SINGLE_AXIS = "single axis"
    SHAFT_TRAIN = "shaft train"
    PLANE = "plane"
    SPACE = "space"


# Freedoms of one body, in the order the coordinates are kept.
FREEDOMS: dict[Motion, tuple[str, ...]] = {
    Motion.SINGLE_AXIS: ("y",),
    Motion.SHAFT_TRAIN: ("rz",),
    Motion.PLANE: ("x", "y", "rz"),
    Motion.SPACE: ("x", "y", "z", "rx", "ry", "rz"),
}


@dataclass(frozen=True, slots=True, kw_only=True)
class InertiaTensor:
    """Moments about the axes through the centre of gravity, and products P = integral of x y dm."""

    Ixx: Annotated[Value, q.INERTIA]
    Iyy: Annotated[Value, q.INERTIA]
    Izz: Annotated[Value, q.INERTIA]
    Pxy: Annotated[Value, q.PRODUCT_OF_INERTIA] | None = None
    Pxz: Annotated[Value, q.PRODUCT_OF_INERTIA] | None = None
    Pyz: Annotated[Value, q.PRODUCT_OF_INERTIA] | None = None
    tolerance: Tolerance | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawn:
    """How large a body is on the sheet; no influence on the numbers."""

    width: Length | None = None
    height: Length | None = None
    shape: str | None = None  # "box" | "disc" | "point"


@dataclass(frozen=True, slots=True, kw_only=True)
class Body:
    """A rigid mass; mass and inertia zero is a massless junction."""

    id: str
    name: str | None = None
    mass: Annotated[Value, q.MASS] | None = None
    inertia: Annotated[Value, q.INERTIA] | InertiaTensor | None = None
    tolerance: Tolerance | None = None
    position: Point | None = None
    dof: tuple[str, ...] | None = None
    drawn: Drawn | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Support:
    """A place on the ground."""

    id: str
    name: str | None = None
    position: Point | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class End:
    """Where a link ends: on a body, at an offset from its centre of gravity, or on a support."""

    body: str | None = None
    support: str | None = None
    offset: Point | None = None


# "x", "-y", "30 deg" from +x, or components.
Direction = str | tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Axes:
    """Directions of a part's own axes along the model's axes; what is missing is completed right-handed."""

    x: tuple[float, ...] | None = None
    y: tuple[float, ...] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class VaryLimits:
    """How far a change may move a value when the program looks for one; a missing side is open."""

    low: str | None = None
    high: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class _LinkBase:
    id: str
    name: str | None = None
    from_: End
    to: End
    tolerance: Tolerance | None = None
    loss_factor: Ratio | None = None
    dynamic_ratio: Annotated[Value, q.RATIO] | None = None
    rated_load: Annotated[Entry, q.FORCE] | None = None
    vary_limits: VaryLimits | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Spring(_LinkBase):
    """Resists the stretch along the line of its ends, or along ``direction``."""

    kind: ClassVar[str] = "spring"
    stiffness: Annotated[Value, q.STIFFNESS]
    direction: Direction | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Damper(_LinkBase):
    """A dashpot along the line of its ends, or along ``direction``; torsional in a shaft train."""

    kind: ClassVar[str] = "damper"
    damping: Annotated[Value, q.DAMPING]  # TORSIONAL_DAMPING in a shaft train
    direction: Direction | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class MountStiffness:
    """Stiffness of a mount along and about its axes; a missing one is none."""

    x: Annotated[Value, q.STIFFNESS] | None = None
    y: Annotated[Value, q.STIFFNESS] | None = None
    z: Annotated[Value, q.STIFFNESS] | None = None
    rx: Annotated[Value, q.TORSIONAL_STIFFNESS] | None = None
    ry: Annotated[Value, q.TORSIONAL_STIFFNESS] | None = None
    rz: Annotated[Value, q.TORSIONAL_STIFFNESS] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class MountDamping:
    """Damping of a mount along and about its axes; a missing one is none."""

    x: Annotated[Value, q.DAMPING] | None = None
    y: Annotated[Value, q.DAMPING] | None = None
    z: Annotated[Value, q.DAMPING] | None = None
    rx: Annotated[Value, q.TORSIONAL_DAMPING] | None = None
    ry: Annotated[Value, q.TORSIONAL_DAMPING] | None = None
    rz: Annotated[Value, q.TORSIONAL_DAMPING] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Mount(_LinkBase):
    """Springs (and dashpots) along several axes at one point."""

    kind: ClassVar[str] = "mount"
    stiffness: MountStiffness | None = None
    damping: MountDamping | None = None
    axes: Axes | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Shaft(_LinkBase):
    """Torsional stiffness between two rotations."""

    kind: ClassVar[str] = "shaft"
    stiffness: Annotated[Value, q.TORSIONAL_STIFFNESS]
    axis: tuple[float, ...] | None = None  # space only; default x, along the machine


@dataclass(frozen=True, slots=True, kw_only=True)
class PitchRadius:
    """Pitch radii of the two gears of an elastic mesh."""

    from_: Length
    to: Length


@dataclass(frozen=True, slots=True, kw_only=True)
class Gear(_LinkBase):
    """Two rotations in a fixed ratio; exact, or through an elastic mesh when a stiffness is given."""

    kind: ClassVar[str] = "gear"
    ratio: float | str | None = None  # rotation of `to` over `from`; text for a fraction such as "-21/5"
    teeth: tuple[int, int] | None = None
    stiffness: Annotated[Value, q.STIFFNESS] | None = None
    pitch_radius: PitchRadius | None = None
    axis: tuple[float, ...] | None = None  # space only; default x


@dataclass(frozen=True, slots=True, kw_only=True)
class Beam(_LinkBase):
    """A slender massless beam between its ends."""

    kind: ClassVar[str] = "beam"
    E: Annotated[Value, q.MODULUS]
    A: Annotated[Value, q.AREA]
    I: Annotated[Value, q.SECOND_MOMENT] | None = None  # noqa: E741  (the field's name, plane)
    Iy: Annotated[Value, q.SECOND_MOMENT] | None = None
    Iz: Annotated[Value, q.SECOND_MOMENT] | None = None
    G: Annotated[Value, q.MODULUS] | None = None
    J: Annotated[Value, q.SECOND_MOMENT] | None = None
    axes: Axes | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class RigidLink(_LinkBase):
    """Joins two bodies in all directions, or in the listed ones."""

    kind: ClassVar[str] = "rigid link"
    directions: tuple[str, ...] | None = None


Link = Spring | Damper | Mount | Shaft | Gear | Beam | RigidLink
LINK_KINDS: dict[str, type[Link]] = {
    kind.kind: kind for kind in (Spring, Damper, Mount, Shaft, Gear, Beam, RigidLink)
}


@dataclass(frozen=True, slots=True, kw_only=True)
class SpeedRange:
    """Machine speeds from the lowest to the highest."""

    from_: Annotated[Entry, q.SPEED]
    to: Annotated[Entry, q.SPEED]


@dataclass(frozen=True, slots=True, kw_only=True)
class Margin:
    """Distance wanted on each side of an excitation frequency, as a share of that frequency."""

    below: Ratio
    above: Ratio


@dataclass(frozen=True, slots=True, kw_only=True)
class Magnitude:
    """How strong an excitation is: exactly one of force, torque, unbalance, grade or motion."""

    force: Annotated[Entry, q.FORCE] | None = None
    torque: Annotated[Entry, q.TORQUE] | None = None
    unbalance: Annotated[Entry, q.UNBALANCE] | None = None
    grade: Annotated[Entry, q.BALANCE_GRADE] | None = None
    rotor_mass: Annotated[Entry, q.MASS] | None = None
    service_speed: Annotated[Entry, q.SPEED] | None = None
    motion: Annotated[Entry, q.LENGTH] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Excitation:
    """One order of a machine's speed, or a fixed frequency, and where it acts."""

    id: str
    name: str | None = None
    order: float | None = None
    of: str | None = None
    frequency: Annotated[Entry, q.FREQUENCY] | None = None
    at: End | None = None
    direction: Direction | None = None  # "y", "rotating", components
    axis: tuple[float, ...] | None = None  # of "rotating" in space; default x
    magnitude: Magnitude | None = None
    margin: Ratio | Margin | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class RunUp:
    """How the machine passes its lower speeds."""

    acceleration: Annotated[Entry, q.SPEED_RATE]


@dataclass(frozen=True, slots=True, kw_only=True)
class Machine:
    """What runs: its speed or range and the excitations that follow from it."""

    id: str
    name: str | None = None
    speed: Annotated[Entry, q.SPEED] | SpeedRange | None = None
    speed_tolerance: Ratio | None = None
    on: str | None = None
    margin: Ratio | Margin | None = None
    run_up: RunUp | None = None
    barred_ranges: tuple[SpeedRange, ...] = ()
    excitations: tuple[Excitation, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class ModelDamping:
    """Damping of the whole model: one modal ratio, or proportional alpha M + beta K."""

    ratio: Ratio | None = None
    alpha: Annotated[Entry, q.DECAY_RATE] | None = None
    beta: Annotated[Entry, q.TIME] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class DefaultTolerance:
    """For values that have none of their own and whose part has none."""

    stiffness: Tolerance | None = None
    mass: Tolerance | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class ShapePoint:
    """Measured motion at one point, relative to the others of the same peak."""

    at: End
    direction: Direction
    amplitude: float


@dataclass(frozen=True, slots=True, kw_only=True)
class MeasuredPeak:
    """A peak of a bump test or a coast-down."""

    id: str
    frequency: Annotated[Entry, q.FREQUENCY]
    uncertainty: Annotated[Entry, q.FREQUENCY] | None = None
    at: End | None = None
    direction: Direction | None = None
    shape: tuple[ShapePoint, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Limit:
    """A vibration limit of the user's own at a point."""

    id: str
    name: str | None = None
    at: End
    direction: Direction | None = None
    quantity: str  # "displacement peak" | "displacement peak-to-peak" | "velocity rms" | "acceleration rms"
    value: str


@dataclass(frozen=True, slots=True, kw_only=True)
class LoadChange:
    """One value that differs in a load case."""

    part: str
    key: str  # "mass", "inertia", "stiffness"
    value: str


@dataclass(frozen=True, slots=True, kw_only=True)
class LoadCase:
    """A state of the machine with other values: empty, full."""

    id: str
    name: str | None = None
    changes: tuple[LoadChange, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Revision:
    """One line of the revision log."""

    number: str
    date: str | None = None
    author: str | None = None
    text: str | None = None
    fingerprint: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class TitleBlock:
    """Fields of a drawing's title block (after ISO 7200); the title stands at the top of the file."""

    owner: str | None = None
    number: str | None = None
    revision: str | None = None
    date: str | None = None
    author: str | None = None
    approved: str | None = None
    sheet: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Model:
    """Everything a file holds."""

    title: str = ""
    motion: Motion = Motion.SINGLE_AXIS
    bodies: tuple[Body, ...] = ()
    supports: tuple[Support, ...] = ()
    links: tuple[Link, ...] = ()
    machines: tuple[Machine, ...] = ()
    damping: ModelDamping | None = None
    default_tolerance: DefaultTolerance | None = None
    measured: tuple[MeasuredPeak, ...] = ()
    limits: tuple[Limit, ...] = ()
    load_cases: tuple[LoadCase, ...] = ()
    revisions: tuple[Revision, ...] = ()
    title_block: TitleBlock | None = None
    notes: str | None = None
    assumptions: tuple[str, ...] = ()
    units: str | None = None  # shown: "SI" | "mm-t" | "inch-pound"


Part = Body | Support | Link | Machine | Excitation
JsonValue = Any
