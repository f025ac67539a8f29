"""What is shared by several assemblies of one model, and the cases of its tolerances."""

import json
from dataclasses import replace

import numpy as np
import pytest
from assembly_models import body, joined, model, mount, spring

from modalview.assembly.assemble import assemble
from modalview.assembly.parameters import Case
from modalview.model.values import Value
from modalview.store import dump_model, parse_model
from modalview.units.quantities import INERTIA, LENGTH, MASS, STIFFNESS


def plane(**more):
    bodies = [
        body("a", 0.1, 1.0, inertia=2.0),
        body("b", 1.3, 1.0, mass=4.0, inertia=1.0),
        body("c", 2.0, 1.0),
    ]
    links = [
        mount("m", "a", "g", at=(0.3, -0.4), x=3e5, y=4e5, rz=5e4),
        spring("k", "b", "a", "7e5 N/m", direction=[3, 4]),
        joined("beam", "v", "a", "b", E="206 GPa", A="1e-3 m2", I="1e-6 m4"),
        joined("rigid link", "r", "b", "c"),
        joined("damper", "d", "b", "g", damping="30 N s/m", direction="y"),
    ]
    return model("plane", bodies, links, **more)


def edited(given, group, place, **changes):
    parts = list(getattr(given, group))
    parts[place] = replace(parts[place], **changes)
    return replace(given, **{group: tuple(parts)})


def same(one, other):
    for case in Case:
        first, second = one.pencil(case), other.pencil(case)
        for name in ("K", "M", "C"):
            np.testing.assert_array_equal(getattr(first, name).toarray(), getattr(second, name).toarray())
        np.testing.assert_array_equal(first.rigid_body, second.rigid_body)
        np.testing.assert_array_equal(first.scale, second.scale)
        np.testing.assert_array_equal(first.stiffness, second.stiffness)
    assert one.parameters == other.parameters
    assert one.notes == other.notes


VALUES = {
    "stiffness of a spring": ("links", 1, {"stiffness": Value.typed("2e5 N/m", STIFFNESS, "12 %")}),
    "mass of a single body": ("bodies", 0, {"mass": Value.typed("3 kg", MASS)}),
    "inertia": ("bodies", 0, {"inertia": Value.typed("3 kg m2", INERTIA, "5 %")}),
    "name of a link": ("links", 1, {"name": "strut"}),
}
SHAPE = {
    "mass of a joined body": ("bodies", 1, {"mass": Value.typed("3 kg", MASS)}),
    "mass to nothing": ("bodies", 0, {"mass": Value.typed("0 kg", MASS)}),
    "direction": ("links", 1, {"direction": "x"}),
    "dof": ("bodies", 0, {"dof": ("x", "y")}),
    "inertia left out": ("bodies", 0, {"inertia": None}),
    "inertia of a point mass": ("bodies", 2, {"inertia": Value.typed("1 kg m2", INERTIA)}),
    "directions of a rigid link": ("links", 3, {"directions": ("x", "y")}),
}


@pytest.mark.parametrize("change", VALUES)
def test_an_edit_of_a_value_keeps_the_structure(change):
    group, place, changes = VALUES[change]
    before = assemble(plane())
    after = edited(before.model, group, place, **changes)
    found = assemble(after, before)
    assert found.structure is before.structure
    same(found, assemble(after))


@pytest.mark.parametrize("change", SHAPE)
def test_an_edit_of_the_shape_builds_it_anew(change):
    group, place, changes = SHAPE[change]
    before = assemble(plane())
    after = edited(before.model, group, place, **changes)
    found = assemble(after, before)
    assert found.structure is not before.structure
    same(found, assemble(after))


def test_moving_a_body_or_a_support_builds_anew():
    before = assemble(plane())
    for group in ("bodies", "supports"):
        place = tuple(
            replace(entry, si=entry.si + 0.25) for entry in getattr(before.model, group)[0].position
        )
        after = edited(before.model, group, 0, position=place)
        found = assemble(after, before)
        assert (found.structure is before.structure) is False
        same(found, assemble(after))
    assert LENGTH.name


def test_an_edit_that_is_taken_back_gives_the_first_numbers():
    before = assemble(plane())
    group, place, changes = VALUES["stiffness of a spring"]
    there = assemble(edited(before.model, group, place, **changes), before)
    back = assemble(before.model, there)
    same(back, before)


def test_a_part_added_or_taken_out_builds_anew():
    before = assemble(plane())
    shorter = replace(before.model, links=before.model.links[:1] + before.model.links[2:])
    same(assemble(shorter, before), assemble(shorter))
    same(assemble(before.model, assemble(shorter)), before)


def test_saved_and_read_again_assembles_alike():
    given = plane()
    same(assemble(parse_model(dump_model(given))), assemble(given))


class TestTolerances:
    def limits(self, value=None, part=None, default=None, inertia=None):
        text = {"value": "100 N/m"} | ({"tolerance": value} if value else {})
        more = {"default_tolerance": default} if default else {}
        mass = {"value": "10 kg"} | ({"tolerance": inertia} if inertia else {})
        given = model(
            "single axis",
            [body("a") | {"mass": mass} | ({"tolerance": part} if part else {})],
            [spring("k", "a", "g", text) | ({"tolerance": part} if part else {})],
            **more,
        )
        return {p.id: (p.low, p.high) for p in assemble(given).parameters}

    @pytest.mark.parametrize(
        ("told", "share"),
        [
            ({}, 0.0),
            ({"default": {"stiffness": "30 %"}}, 0.3),
            ({"part": "20 %", "default": {"stiffness": "30 %"}}, 0.2),
            ({"value": "10 %", "part": "20 %", "default": {"stiffness": "30 %"}}, 0.1),
        ],
    )
    def test_the_value_goes_before_the_part_and_the_part_before_the_default(self, told, share):
        assert self.limits(**told)["k.stiffness"] == pytest.approx(
            (100 * (1 - share), 100 * (1 + share)), rel=1e-15
        )

    def test_mass_takes_its_own_default(self):
        found = self.limits(default={"mass": "5 %", "stiffness": "1 %"})
        assert found["a.mass"] == pytest.approx((9.5, 10.5))

    def test_uneven_and_absolute_tolerances(self):
        assert self.limits(value={"minus": "10 %", "plus": "40 %"})["k.stiffness"] == pytest.approx((90, 140))
        assert self.limits(value={"from": "70 N/m", "to": "0.11 N/mm"})["k.stiffness"] == pytest.approx(
            (70, 110)
        )

    def test_the_tolerance_of_a_body_scales_its_mass_and_whole_inertia(self):
        tensor = {"Ixx": 5.0, "Iyy": 6.0, "Izz": 7.0, "Pxy": 1.0}
        given = model(
            "space",
            [body("a", 0.0, 0.0, 0.0, inertia=tensor, tolerance="10 %")],
            [mount("m", "a", "g", x=1.0, y=1.0, z=1.0)],
        )
        assembly = assemble(given)
        nominal, heavy = assembly.pencil(), assembly.pencil(Case.SOFT_HEAVY)
        np.testing.assert_allclose(heavy.M.toarray(), 1.1 * nominal.M.toarray(), rtol=1e-14)
        np.testing.assert_array_equal(heavy.K.toarray(), nominal.K.toarray())

    def test_beam_and_dynamic_ratio_multiply_their_tolerances(self):
        beam = joined(
            "beam",
            "v",
            "a",
            "g",
            E={"value": "2 Pa", "tolerance": "10 %"},
            A="1 m2",
            I={"value": "3 m4", "tolerance": "20 %"},
            dynamic_ratio={"value": "2", "tolerance": "5 %"},
        )
        given = model("plane", [body("a", 4.0, 0.0, inertia=1.0)], [beam])
        assembly = assemble(given)
        bending = assembly.structure.stiffness.product_of[1]
        assert sorted(assembly.parameters[i].id for i in bending) == ["v.E", "v.I", "v.dynamic_ratio"]
        nominal, stiff = assembly.pencil().K[2, 2], assembly.pencil(Case.STIFF_LIGHT).K[2, 2]
        assert stiff / nominal == pytest.approx(1.1 * 1.2 * 1.05)

    def test_a_damping_tolerance_changes_no_case(self):
        damper = joined("damper", "d", "a", "g", damping={"value": "5 N s/m", "tolerance": "50 %"})
        assembly = assemble(model("single axis", [body("a")], [spring("k", "a", "g"), damper]))
        assert not assembly.toleranced
        assert assembly.pencil(Case.SOFT_HEAVY) is assembly.pencil()


def test_body_motion_follows_cluster_and_gear():
    given = plane()
    assembly = assemble(given)
    shapes = np.eye(assembly.n)
    motion = assembly.body_motion(shapes)
    assert motion.shape == (assembly.n, 3, 6)
    b, c = motion[:, 1], motion[:, 2]
    np.testing.assert_allclose(
        c[:, 1] - b[:, 1], 0.7 * b[:, 5], atol=1e-15
    )  # c stands 0.7 m to the right of b
    np.testing.assert_allclose(c[:, [0, 5]], b[:, [0, 5]], atol=1e-15)
    assert not motion[:, :, [2, 3, 4]].any()


def test_every_kind_of_part_keeps_the_structure_on_a_second_look():
    before = assemble(plane())
    again = parse_model(json.dumps(json.loads(dump_model(before.model))))
    assert assemble(again, before).structure is before.structure
