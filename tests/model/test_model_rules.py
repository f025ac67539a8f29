"""Rules that a window can break but a file hardly can, and the cost of asking them."""

import math
from dataclasses import replace
from fractions import Fraction

import pytest

from modalview.model.gears import gear_ratio
from modalview.model.parts import (
    Axes,
    Beam,
    Body,
    End,
    Excitation,
    Gear,
    InertiaTensor,
    LoadCase,
    LoadChange,
    Machine,
    Magnitude,
    Model,
    Motion,
    Mount,
    MountStiffness,
    Spring,
    Support,
)
from modalview.model.rules import faults
from modalview.model.rules_context import Context
from modalview.model.rules_links import link, varied_quantity
from modalview.model.rules_records import changed_address
from modalview.model.values import Entry, Tolerance, Value
from modalview.units import quantities as q
from modalview.units.parse import read


def length(metres):
    return Entry(f"{metres!r} m", metres)


def body(name, *place, **more):
    return Body(id=name, mass=Value.typed("1 kg", q.MASS), position=tuple(map(length, place)) or None, **more)


def kilo(number):
    return Value(Entry(f"{number!r} kg m2", number))


def space(tensor):
    return Model(motion=Motion.SPACE, bodies=(body("a", 0.0, 0.0, 0.0, inertia=tensor),))


def tensor(ixx, iyy, izz, pxy=0.0, pxz=0.0, pyz=0.0):
    return InertiaTensor(
        Ixx=kilo(ixx), Iyy=kilo(iyy), Izz=kilo(izz), Pxy=kilo(pxy), Pxz=kilo(pxz), Pyz=kilo(pyz)
    )


def point_masses(*points):
    """Moments and products of unit masses at some points, about the origin."""
    total = [0.0] * 6
    for x, y, z in points:
        parts = (y * y + z * z, x * x + z * z, x * x + y * y, x * y, x * z, y * z)
        total = [old + new for old, new in zip(total, parts, strict=True)]
    return tensor(*total)


@pytest.mark.parametrize(
    "points",
    [
        [(1, 0, 0), (0, 1, 0), (0, 0, 1)],
        [(1, 2, 3), (-2, 0.5, 1), (0.3, -4, 2), (1, 1, -1)],
        [(0.1, 0.2, 0), (0.3, -0.5, 0)],  # all in one plane: Izz = Ixx + Iyy exactly
        [(1e-3, 2e-3, 5e-3), (3e-3, 1e-3, -1e-3)],
        [(1, 1, 1), (-1, -1, -1)],  # a rod across: products as large as they can be
    ],
)
def test_what_real_masses_give_is_accepted(points):
    assert faults(space(point_masses(*points))) == ()


@pytest.mark.parametrize(
    "given",
    [
        tensor(2, 3, 4, 2),  # Pxy beyond what Ixx and Iyy allow
        tensor(2, 2, 2, 0.9, 0.9, -0.9),  # every pair is possible, all three are not
        tensor(2, 3, 5.1),
        tensor(-1, 3, 4),
    ],
)
def test_what_no_masses_can_give_is_refused(given):
    assert faults(space(given))


def test_ends_nearly_together_have_no_direction():
    # two coordinates of a hundred metres, apart by their rounding
    far = Model(
        motion=Motion.PLANE,
        bodies=(body("a", 100.0, 100.0), body("b", 100.0, 100.0 + 2e-14)),
        links=(
            Spring(
                id="k", from_=End(body="a"), to=End(body="b"), stiffness=Value.typed("1 N/m", q.STIFFNESS)
            ),
        ),
    )
    assert [fault.path for fault in faults(far)] == ['links[0] "k" . direction']
    near = replace(far, bodies=(body("a", 0.0, 0.0), body("b", 0.0, 1e-6)))
    assert faults(near) == ()


def test_a_vector_typed_in_the_window_must_be_finite():
    model = Model(
        motion=Motion.PLANE,
        bodies=(body("a", 0.0, 0.0), body("b", 0.0, 1.0)),
        links=(
            Spring(
                id="k",
                from_=End(body="a"),
                to=End(body="b"),
                stiffness=Value.typed("1 N/m", q.STIFFNESS),
                direction=(1.0, math.inf),
            ),
        ),
    )
    assert "finite" in faults(model)[0].reason


def driven(margin="10 %", **excitation):
    """Return the faults of a mass in space that one excitation drives."""
    model = space(tensor(2, 2, 2))
    order = Excitation(id="1x", order=1.0, at=End(body="a"), **excitation)
    machine = Machine(
        id="fan",
        speed=Entry("600 rpm", 62.83),
        margin=Entry(margin, read(margin, q.RATIO)),
        excitations=(order,),
    )
    return faults(replace(model, machines=(machine,)))


def test_a_direction_that_turns_asks_for_a_torque():
    (fault,) = driven(direction="rx")
    assert 'found "rx", which needs a torque as magnitude, such as {"torque": "300 N m"}' in fault.reason
    assert driven(direction="rx", magnitude=Magnitude(torque=Entry("300 N m", 300.0))) == ()
    assert "torque" not in driven(direction="sideways")[0].reason


@pytest.mark.parametrize(
    ("margin", "hint"),
    [
        ("15", 'found "15", which is 1500 %; write "15 %"'),
        ("150 %", 'found "150 %"'),
        ("1", 'found "1"'),
    ],
)
def test_a_percent_sign_left_out_is_told(margin, hint):
    (fault,) = driven(margin=margin)
    assert fault.reason.endswith(hint)


def test_tiny_axes_are_compared_without_dividing_by_zero():
    ground = Support(id="g", position=(length(0.0), length(0.0)))
    mount = Mount(
        id="m",
        from_=End(body="a"),
        to=End(support="g"),
        stiffness=MountStiffness(x=Value.typed("1 N/m", q.STIFFNESS)),
        axes=Axes(x=(1e-29, 0.0), y=(1e-29, 1e-29)),
    )
    model = Model(motion=Motion.PLANE, bodies=(body("a", 0.0, 0.0),), supports=(ground,), links=(mount,))
    assert "right angles" in faults(model)[0].reason


def test_huge_numbers_do_not_overflow():
    assert faults(space(tensor(1e300, 1e300, 1e300))) == ()
    assert faults(space(tensor(1e300, 1e300, 1e300, 1e300)))


@pytest.mark.parametrize(
    ("given", "ratio"),
    [
        ({"teeth": (84, 20)}, Fraction(-21, 5)),
        ({"teeth": (84, -20)}, Fraction(21, 5)),
        ({"ratio": "-21/5"}, Fraction(-21, 5)),
        ({"ratio": "3"}, Fraction(3)),
        ({"ratio": 4.2}, Fraction(21, 5)),
        ({"ratio": -1}, Fraction(-1)),
        ({"ratio": "0/3"}, None),
        ({"ratio": "1e9"}, None),
        ({"ratio": math.inf}, None),
        ({"ratio": 1e-300}, None),
        ({"teeth": (0, 3)}, None),
        ({}, None),
    ],
)
def test_ratios_are_read_as_typed(given, ratio):
    assert gear_ratio(Gear(id="g", from_=End(body="a"), to=End(body="b"), **given)) == ratio


def test_a_tolerance_of_a_whole_part_has_no_limits_in_units():
    limits = Tolerance(low=Entry("1 kg", 1.0), high=Entry("2 kg", 2.0))
    model = Model(bodies=(replace(body("a"), tolerance=limits),))
    assert "percentage" in faults(model)[0].reason


def test_limits_of_change_are_ratios_where_a_link_has_several_values():
    beam = Beam(id="b", from_=End(body="a"), to=End(body="b"), E=kilo(1.0), A=kilo(1.0))
    assert varied_quantity(beam, Context.of(Model())) == q.RATIO
    gear = Gear(id="g", from_=End(body="a"), to=End(body="b"), ratio=2)
    assert varied_quantity(gear, Context.of(Model())) is None


def test_a_load_case_finds_the_value_it_changes():
    model = Model(bodies=(body("a", inertia=kilo(1.0)), Body(id="b")))

    def address(part, key):
        return changed_address(LoadChange(part=part, key=key, value="1 kg"), model)

    assert address("a", "mass") == ("bodies", "a", "mass")
    assert address("a", "inertia") == ("bodies", "a", "inertia")
    assert address("a", "inertia.Ixx") is None
    assert address("b", "mass") is None
    assert address("a", "position") is None
    assert address("zz", "mass") is None
    case = LoadCase(id="full", changes=(LoadChange(part="a", key="mass", value="-1 kg"),))
    assert 'load_cases[0] "full" . changes[0] . value' in [
        one.path for one in faults(replace(model, load_cases=(case,)))
    ]


def test_a_rule_is_told_once_for_a_kind_that_has_no_meaning():
    spring = Spring(
        id="k", from_=End(body="a"), to=End(body="b"), stiffness=Value.typed("0 N/m", q.STIFFNESS)
    )
    context = Context.of(Model(motion=Motion.SHAFT_TRAIN, bodies=(body("a"), body("b"))))
    assert [key for key, _ in link(spring, context)] == ["kind"]


def sixty_bodies():
    bodies = tuple(body(f"b{i}", float(i), float(i % 7), inertia=kilo(1.0 + i)) for i in range(60))
    links = tuple(
        Spring(
            id=f"k{i}",
            from_=End(body=f"b{i % 60}"),
            to=End(body=f"b{(i * 7 + 1) % 60 if (i * 7 + 1) % 60 != i % 60 else (i + 1) % 60}"),
            stiffness=Value.typed(f"{i + 1} N/m", q.STIFFNESS, "10 %"),
        )
        for i in range(150)
    )
    return Model(motion=Motion.PLANE, bodies=bodies, links=links)


def test_a_model_of_sixty_bodies_keeps_all_rules():
    assert faults(sixty_bodies()) == ()
