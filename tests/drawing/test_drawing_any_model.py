"""Whatever a file may hold can be drawn: parts without places, on top of each other, joined to nothing."""

import random

import numpy as np
import pytest

from modalview.drawing.furniture import sheet_of, title_lines
from modalview.drawing.modepicture import mode_geometry, mode_picture
from modalview.drawing.motion import moved, pose
from modalview.drawing.overlay import chosen_items
from modalview.drawing.primitives import Circles, Drawing, Lines, Polygons
from modalview.drawing.sheet import part_at, sheet_drawing, sheet_geometry
from modalview.drawing.view import STRAIGHT
from modalview.model.parts import (
    Body,
    Damper,
    Drawn,
    End,
    Excitation,
    Gear,
    Link,
    Machine,
    Model,
    Motion,
    Mount,
    MountStiffness,
    Point,
    RigidLink,
    Shaft,
    Spring,
    Support,
)
from modalview.model.values import Entry, Value
from modalview.units import quantities as q

STIFFNESS = Value.typed("1e6 N/m", q.STIFFNESS)
TWIST = Value.typed("1e6 N m/rad", q.TORSIONAL_STIFFNESS)
MASSES = (None, Value.typed("0 kg", q.MASS), Value.typed("5 kg", q.MASS, "5 %"))
INERTIAS = (None, Value.typed("5 kg m2", q.INERTIA))
DIRECTIONS = (None, "x", "-y", "z", "30 deg", "-45 deg", (1.0, 1.0), (0.0, 0.0))
METRES = (0.0, 0.0, 1.0, -2.0, 0.37, 4.9)


def any_point(pick: random.Random, motion: Motion) -> Point | None:
    count = 3 if motion is Motion.SPACE else 2
    metres = [pick.choice(METRES) for _ in range(count)]
    return pick.choice((None, tuple(Entry(f"{length} m", length) for length in metres)))


def any_drawn(pick: random.Random) -> Drawn | None:
    metre = Entry("1 m", 1.0)
    return pick.choice((None, Drawn(width=metre), Drawn(height=metre, shape="disc"), Drawn(shape="point")))


def any_end(pick: random.Random, motion: Motion, bodies: int, supports: int) -> End:
    ends = [End(body=f"b{number}", offset=any_point(pick, motion)) for number in range(bodies)]
    return pick.choice([*ends, *(End(support=f"s{number}") for number in range(supports))])


def any_link(pick: random.Random, name: str, from_: End, to: End) -> Link:
    ends = {"id": name, "from_": from_, "to": to}
    return pick.choice(
        (
            Spring(stiffness=STIFFNESS, direction=pick.choice(DIRECTIONS), **ends),
            Damper(damping=Value.typed("5 N s/m", q.DAMPING), **ends),
            Mount(stiffness=MountStiffness(x=STIFFNESS, rz=TWIST), **ends),
            Mount(**ends),
            Shaft(stiffness=TWIST, **ends),
            Gear(ratio=pick.choice((-4.2, "21/5")), **ends),
            RigidLink(**ends),
        )
    )


def any_model(seed: int, motion: Motion) -> Model:
    pick = random.Random(seed)  # noqa: S311
    bodies, supports = pick.randint(1, 6), pick.randint(0, 2)

    def end() -> End:
        return any_end(pick, motion, bodies, supports)

    return Model(
        motion=motion,
        bodies=tuple(
            Body(
                id=f"b{number}",
                position=any_point(pick, motion),
                mass=pick.choice(MASSES),
                inertia=pick.choice(INERTIAS),
                drawn=any_drawn(pick),
            )
            for number in range(bodies)
        ),
        supports=tuple(
            Support(id=f"s{number}", position=any_point(pick, motion)) for number in range(supports)
        ),
        links=tuple(any_link(pick, f"l{number}", end(), end()) for number in range(pick.randint(0, 9))),
        machines=(
            Machine(
                id="m",
                excitations=tuple(
                    Excitation(id=f"x{number}", order=1, at=end(), direction=pick.choice(DIRECTIONS))
                    for number in range(pick.randint(0, 3))
                ),
            ),
        ),
    )


def assert_finite(drawing: Drawing) -> None:
    for item in drawing.items:
        match item:
            case Lines():
                assert np.isfinite(item.segments).all()
            case Polygons():
                assert np.isfinite(item.points).all()
            case Circles():
                assert np.isfinite(item.centres).all()


@pytest.mark.parametrize("motion", Motion)
@pytest.mark.parametrize("seed", range(12))
def test_any_model_can_be_drawn_and_moved(seed: int, motion: Motion):
    model = any_model(seed, motion)
    shape = np.random.default_rng(seed).normal(size=(len(model.bodies), 6))
    for size in ((700, 500), (120, 90)):
        geometry = sheet_geometry(model, *size)
        assert_finite(sheet_drawing(geometry, title_lines(model)))
        assert_finite(sheet_of(chosen_items(geometry, ("l0",)), geometry.width, geometry.height, 1.0))
        assert_finite(moved(geometry, shape, 1.0, 0.0))
        known = {part.id for part in (*model.bodies, *model.links, *model.supports)}
        assert part_at(geometry, *geometry.boxes[0, :2]) in known
    for viewpoint in STRAIGHT if motion is Motion.SPACE else ():
        geometry = sheet_geometry(model, 700, 500, viewpoint=viewpoint)
        assert_finite(sheet_drawing(geometry, title_lines(model)))
        assert_finite(sheet_of(chosen_items(geometry, ("l0",)), geometry.width, geometry.height, 1.0))
        assert_finite(moved(geometry, shape, 1.0, 0.0))
    small = mode_geometry(model, 200, 90)
    assert_finite(mode_picture(small, pose(small, shape), 1.0))
