"""Models for the drawing: the demonstration models, and one of every kind of link."""

import pytest

from modalview.model.parts import (
    Beam,
    Body,
    Damper,
    End,
    Gear,
    Model,
    Motion,
    Mount,
    MountDamping,
    MountStiffness,
    RigidLink,
    Shaft,
    Spring,
    Support,
)
from modalview.model.values import Entry, Value
from modalview.places import demo_models
from modalview.store.reading import read_model
from modalview.units import quantities as q

DEMO_FILES = sorted(demo_models().glob("*/*.keepclear"))


@pytest.fixture(params=DEMO_FILES, ids=lambda path: f"{path.parent.name[:1]}-{path.stem}")
def demo_model(request: pytest.FixtureRequest) -> Model:
    return read_model(request.param)


def place(*metres: float) -> tuple[Entry, ...]:
    return tuple(Entry(f"{length} m", length) for length in metres)


def end(body: str | None = None, support: str | None = None, offset: tuple[float, ...] | None = None) -> End:
    return End(body=body, support=support, offset=None if offset is None else place(*offset))


STIFFNESS = Value.typed("4e8 N/m", q.STIFFNESS, "10 %")
TWIST = Value.typed("6e5 N m/rad", q.TORSIONAL_STIFFNESS)
DAMPING = Value.typed("1200 N s/m", q.DAMPING)


def body(name: str, *position: float, inertia: str | None = "100 kg m2") -> Body:
    return Body(
        id=name,
        mass=Value.typed("620 kg", q.MASS),
        inertia=None if inertia is None else Value.typed(inertia, q.INERTIA),
        position=place(*position) if position else None,
    )


@pytest.fixture
def plane_model() -> Model:
    """Two bodies, a junction and one of every link of a plane."""
    modulus, area, second = Value.typed("206 GPa", q.MODULUS), Value.typed("1 m2", q.AREA), "1e-4 m4"
    return Model(
        title="all links",
        motion=Motion.PLANE,
        bodies=(body("a", 0, 1), body("b", 3, 1), Body(id="j", position=place(1.5, 2.5))),
        supports=(Support(id="g", position=place(0, 0)), Support(id="h", position=place(3, 0))),
        links=(
            Spring(id="k", from_=end("a"), to=end(support="g"), stiffness=STIFFNESS),
            Spring(id="kx", from_=end("a"), to=end(support="g"), stiffness=STIFFNESS, direction="x"),
            Damper(id="c", from_=end("b"), to=end(support="h"), damping=DAMPING, direction="-30 deg"),
            Mount(id="m", from_=end("a"), to=end("b"), stiffness=MountStiffness(x=STIFFNESS, rz=TWIST)),
            Mount(id="mc", from_=end("a"), to=end("b"), damping=MountDamping(y=DAMPING)),
            Beam(
                id="beam",
                from_=end("a"),
                to=end("j"),
                E=modulus,
                A=area,
                I=Value.typed(second, q.SECOND_MOMENT),
            ),
            RigidLink(id="r", from_=end("b"), to=end("j")),
            Gear(id="gear", from_=end("a"), to=end("b"), ratio="-21/5"),
        ),
    )


@pytest.fixture
def train_model() -> Model:
    """A geared train whose bodies have no positions, held by a torsional spring."""
    names = ("motor", "wheel", "pinion", "rotor")
    inertias = ("46 kg m2", "14 kg m2", "0.35 kg m2", "1.6 kg m2")
    return Model(
        title="train",
        motion=Motion.SHAFT_TRAIN,
        bodies=tuple(body(name, inertia=value) for name, value in zip(names, inertias, strict=True)),
        supports=(Support(id="wall"),),
        links=(
            Shaft(id="k1", from_=end("motor"), to=end("wheel"), stiffness=TWIST),
            Gear(id="g", from_=end("wheel"), to=end("pinion"), teeth=(84, 20)),
            Shaft(id="k2", from_=end("pinion"), to=end("rotor"), stiffness=TWIST),
            Shaft(id="hold", from_=end("rotor"), to=end(support="wall"), stiffness=TWIST),
        ),
    )


@pytest.fixture
def tower_model() -> Model:
    """A single-axis model without any position: two masses side by side on a third, two springs to ground."""
    names = ("left", "right", "base")
    pairs = (("left", "base"), ("right", "base"))
    springs = [
        Spring(id=f"k{number}", from_=end(top), to=end(low), stiffness=STIFFNESS)
        for number, (top, low) in enumerate(pairs)
    ]
    grounds = [
        Spring(id=f"g{number}", from_=end("base"), to=end(support="s"), stiffness=STIFFNESS)
        for number in range(2)
    ]
    return Model(
        title="tower",
        motion=Motion.SINGLE_AXIS,
        bodies=tuple(body(name, inertia=None) for name in names),
        supports=(Support(id="s"),),
        links=(*springs, *grounds),
    )
