"""Where an excitation pushes, against forms written down by hand."""

import numpy as np
import pytest
from assembly_models import body, joined, model, mount, rotor, spring

from modalview.assembly.assemble import assemble
from modalview.assembly.loads import unit_force
from modalview.model.parts import FREEDOMS


def force(motion, bodies, links, excitation, **more):
    """Unit force over the freedoms of all bodies in their order; None where there is none."""
    machine = {
        "id": "m",
        "speed": "600 rpm",
        "margin": "10 %",
        "excitations": [{"id": "e", "order": 1, **excitation}],
    }
    given = model(motion, bodies, links, machines=[machine], **more)
    assembly = assemble(given)
    found = unit_force(assembly, given.machines[0].excitations[0])
    if found is None:
        return None
    keys = [(one.id, name) for one in given.bodies for name in FREEDOMS[given.motion]]
    free = assembly.structure.coordinates.free
    return np.array([found[free.index(key)] if key in free else 0 for key in keys])


def plane(excitation, **more):
    block = body("a", 1.0, 2.0, inertia=1.0, **more)
    return force("plane", [block], [mount("k", "a", "g", x=3.0, y=4.0, rz=5.0)], excitation)


def space(excitation):
    block = body("a", 0.0, 0.0, 1.0, inertia=(1.0, 1.0, 1.0))
    stiff = mount("k", "a", "g", at=(0.1, 0.2, 0.3), x=3.0, y=4.0, z=5.0)
    return force("space", [block], [stiff], excitation)


def at(*offset, part="a"):
    return {"body": part, **({"offset": [f"{c} m" for c in offset]} if offset else {})}


class TestPlane:
    def test_force_at_an_offset_turns_too(self):
        found = plane({"at": at(0.3, 0.25), "direction": [3, 4]})
        np.testing.assert_allclose(found, [0.6, 0.8, 0.3 * 0.8 - 0.25 * 0.6], atol=1e-15)

    def test_rotating_force_is_two_a_quarter_turn_apart(self):
        found = plane({"at": at(0.3, 0.25), "direction": "rotating"})
        np.testing.assert_allclose(found, [1, -1j, -0.25 - 0.3j], atol=1e-15)

    def test_torque_is_about_z_wherever_it_acts(self):
        found = plane({"at": at(0.3, 0.25), "magnitude": {"torque": "1 N m"}})
        np.testing.assert_allclose(found, [0, 0, 1])

    def test_without_point_or_direction_there_is_none(self):
        assert plane({}) is None
        assert plane({"at": at()}) is None

    def test_force_on_a_held_direction_vanishes(self):
        np.testing.assert_array_equal(plane({"at": at(), "direction": "x"}, dof=["y"]), [0, 0, 0])

    def test_motion_of_the_support_pushes_through_the_springs(self):
        # -(k g^T) for one unit along x: the mount's stiffness, acting at the attachment.
        block = body("a", 1.0, 2.0, inertia=1.0)
        stiff = mount("k", "a", "g", at=(0.1, -0.4), x=3.0, y=4.0, rz=5.0)
        motion = {"at": {"support": "g"}, "direction": "x", "magnitude": {"motion": "1 mm"}}
        found = force("plane", [block], [stiff], motion)
        np.testing.assert_allclose(found, [3, 0, 3 * 0.4], atol=1e-15)


class TestSpace:
    def test_force_along_z_at_an_offset(self):
        # r x f with r = (1, 2, 3), f = z: (2, -1, 0).
        found = space({"at": at(1, 2, 3), "direction": "z"})
        np.testing.assert_allclose(found, [0, 0, 1, 2, -1, 0], atol=1e-15)

    @pytest.mark.parametrize(("axis", "still"), [(None, 0), ([0, 0, 2], 2), ([0, 1, 0], 1)])
    def test_rotating_force_turns_about_its_axis(self, axis, still):
        told = {"at": at(), "direction": "rotating"} | ({"axis": axis} if axis else {})
        found = space(told)[:3]
        moving = [i for i in range(3) if i != still]
        assert found[still] == 0
        np.testing.assert_allclose(np.abs(found[moving]), 1)
        np.testing.assert_allclose(np.abs((found[moving] ** 2).sum()), 0, atol=1e-15)  # a quarter turn apart

    def test_torque_about_a_named_axis(self):
        found = space({"at": at(1, 2, 3), "direction": "ry", "magnitude": {"torque": "1 N m"}})
        np.testing.assert_allclose(found, [0, 0, 0, 0, 1, 0])


def test_single_axis_knows_one_direction_alone():
    found = force(
        "single axis",
        [body("a"), body("b")],
        [spring("k", "a", "b"), spring("l", "b", "g")],
        {"at": at(part="b")},
    )
    np.testing.assert_array_equal(found, [0, 1])


def test_torque_on_a_geared_shaft_reaches_the_train_by_the_ratio():
    bodies = [rotor("a", 1.0), rotor("b", 1.0)]
    links = [joined("gear", "w", "a", "b", ratio=-4), joined("shaft", "s", "a", "g", stiffness="5 N m/rad")]
    found = force("shaft train", bodies, links, {"at": at(part="b"), "magnitude": {"torque": "1 N m"}})
    # b turns -4 times as far as a: the work of a unit torque at b is -4 per unit of a (or 1 per unit of b).
    assert found.tolist() in ([-4, 0], [0, 1])
