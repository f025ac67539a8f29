"""Removing: what hangs on a part goes with it, what stands without it stays."""

from dataclasses import replace

import pytest

from modalview.model.adding import add_body, add_excitation, add_link, add_machine, add_support
from modalview.model.parts import (
    End,
    Limit,
    LoadCase,
    LoadChange,
    MeasuredPeak,
    Model,
    Motion,
    ShapePoint,
)
from modalview.model.removing import without
from modalview.model.rules import faults
from modalview.model.values import Entry
from modalview.units.quantities import FREQUENCY


@pytest.fixture
def model():
    """Two bodies on grounds of their own, joined; everything that can refer to a part refers to one."""
    made = Model(motion=Motion.PLANE)
    for x in (0.0, 2.0):
        made, body = add_body(made, "body", (x, 1.0), (0.6, 0.4))
        made, ground = add_support(made, (x, 0.0))
        made, _ = add_link(made, "spring", End(body=body), End(support=ground))
    made, _ = add_link(made, "spring", End(body="b1"), End(body="b2"))
    made, machine = add_machine(made, "fan", "600 rpm", "15 %", on="b1")
    made, _ = add_excitation(made, machine, "1x", at=End(body="b1"), direction="y")
    made, _ = add_excitation(made, machine, "2x", at=End(body="b2"), direction="y")
    made, _ = add_excitation(made, machine, "5 Hz", at=End(support="s2"), direction="y", magnitude="1 mm")
    counted = replace(made.machines[0].excitations[1], id="of b2", of="b2", at=None, direction=None)
    owner = replace(made.machines[0], excitations=(*made.machines[0].excitations, counted))
    frequency = Entry.typed("17 Hz", FREQUENCY)
    shape = tuple(ShapePoint(at=End(body=name), direction="y", amplitude=1.0) for name in ("b1", "b2"))
    changes = tuple(LoadChange(part=part, key=key, value=value) for part, key, value in CHANGES)
    made = replace(
        made,
        machines=(owner,),
        measured=(
            MeasuredPeak(id="p1", frequency=frequency, at=End(body="b2"), direction="x", shape=shape),
            MeasuredPeak(id="p2", frequency=frequency, at=End(body="b1"), direction="x"),
        ),
        limits=tuple(
            Limit(id=f"l{name}", at=End(body=name), quantity="velocity rms", value="4.5 mm/s")
            for name in ("b1", "b2")
        ),
        load_cases=(LoadCase(id="full", changes=changes), LoadCase(id="hot", changes=changes[:1])),
    )
    assert faults(made) == ()
    return made


CHANGES = (("b1", "mass", "120 kg"), ("b2", "mass", "130 kg"), ("k2", "stiffness", "2e6 N/m"))


def test_a_body_takes_along_all_that_hangs_on_it(model):
    after = without(model, ["b2"])
    assert faults(after) == ()
    assert [part.id for part in (*after.bodies, *after.supports, *after.links)] == ["b1", "s1", "k1"]
    assert [one.id for one in after.machines[0].excitations] == ["1x"]
    assert [one.id for one in after.limits] == ["lb1"]
    assert [[change.part for change in case.changes] for case in after.load_cases] == [["b1"], ["b1"]]
    # A measured frequency is a fact of the machine, whatever the model is like.
    assert [(one.id, one.at and one.at.body) for one in after.measured] == [("p1", None), ("p2", "b1")]
    assert [point.at.body for point in after.measured[0].shape] == ["b1"]


def test_what_does_not_hang_on_it_is_the_very_same_object(model):
    after = without(model, ["b2"])
    assert after.bodies[0] is model.bodies[0]
    assert after.links[0] is model.links[0]
    assert after.machines[0].excitations[0] is model.machines[0].excitations[0]
    assert after.measured[1] is model.measured[1]
    assert after.load_cases[1] is model.load_cases[1]
    link = without(model, ["k3"])
    assert link.bodies is model.bodies
    assert link.machines is model.machines
    assert link.measured is model.measured
    assert without(model, ["unknown"]) is model


def test_a_machine_whose_body_goes_stays_without_it(model):
    after = without(model, ["b1"])
    assert faults(after) == ()
    assert after.machines[0].on is None
    # Nobody knows any more how fast "b2" turns, so its order has no meaning.
    assert [one.id for one in after.machines[0].excitations] == ["2x", "f1"]


def test_a_ground_goes_with_its_last_link_and_not_before(model):
    assert [one.id for one in without(model, ["k1"]).supports] == ["s2"]
    twice, _ = add_link(model, "damper", End(body="b1"), End(support="s1"))
    assert without(twice, ["k1"]).supports is twice.supports
    lone, ground = add_support(model, (5.0, 0.0))
    assert ground in [one.id for one in without(lone, ["k1"]).supports]  # it never had a link


def test_an_excitation_is_removed_by_its_machine_and_its_id(model):
    after = without(model, [("mc1", "2x")])
    assert [one.id for one in after.machines[0].excitations] == ["1x", "f1", "of b2"]
    assert without(model, [("other", "2x")]) is model
    assert without(model, ["mc1"]).machines == ()


@pytest.mark.parametrize(("name", "group"), [("p1", "measured"), ("lb1", "limits"), ("full", "load_cases")])
def test_records_are_removed_by_their_id(model, name, group):
    after = without(model, [name])
    assert [one.id for one in getattr(after, group)] == [
        one.id for one in getattr(model, group) if one.id != name
    ]
    assert faults(after) == ()
