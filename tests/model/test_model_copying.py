"""Copying: fragments that stand alone, pasted with fresh ids and every reference renamed."""

from dataclasses import replace

import pytest

from modalview.errors import InputError
from modalview.model.adding import add_body, add_excitation, add_link, add_machine, add_support
from modalview.model.copying import duplicated, fragment, pasted
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
from modalview.model.rules import faults
from modalview.model.values import Entry
from modalview.store import dump_model, parse_model
from modalview.units.quantities import FREQUENCY


@pytest.fixture
def model():
    """Two bodies on one ground and joined; a machine, a limit, a peak and a load case that speak of them."""
    made = Model(motion=Motion.PLANE, title="Fan")
    made, ground = add_support(made, (0.0, 0.0))
    for x in (0.0, 2.0):
        made, body = add_body(made, "body", (x, 1.0), (0.6, 0.4))
        made, _ = add_link(made, "spring", End(body=body), End(support=ground))
    made, _ = add_link(made, "spring", End(body="b1"), End(body="b2"))
    made, machine = add_machine(made, "fan", "600 rpm", "15 %", on="b1")
    made, _ = add_excitation(made, machine, "1x", at=End(body="b1"), direction="y")
    made, _ = add_excitation(made, machine, "2x", at=End(body="b2"), direction="y")
    made, _ = add_excitation(made, machine, "5x")
    last = replace(made.machines[0].excitations[2], of="b1")
    owner = replace(made.machines[0], excitations=(*made.machines[0].excitations[:2], last))
    frequency = Entry.typed("17 Hz", FREQUENCY)
    shape = tuple(ShapePoint(at=End(body=name), direction="y", amplitude=1.0) for name in ("b1", "b2"))
    changes = tuple(
        LoadChange(part=part, key=key, value=value)
        for part, key, value in (
            ("b1", "mass", "120 kg"),
            ("b2", "mass", "9 kg"),
            ("k1", "stiffness", "2 N/m"),
        )
    )
    made = replace(
        made,
        machines=(owner,),
        measured=(MeasuredPeak(id="p1", frequency=frequency, at=End(body="b2"), shape=shape),),
        limits=(Limit(id="l1", at=End(body="b1"), quantity="velocity rms", value="4.5 mm/s"),),
        load_cases=(LoadCase(id="full", changes=changes),),
    )
    assert faults(made) == ()
    return made


def test_a_fragment_stands_alone_and_shares_its_parts(model):
    piece = fragment(model, ["b1", "mc1", "p1"])
    assert [part.id for part in (*piece.bodies, *piece.supports, *piece.links)] == ["b1", "s1", "k1"]
    assert piece.bodies[0] is model.bodies[0]
    assert [one.id for one in piece.machines[0].excitations] == ["1x", "5x"]
    assert piece.measured[0].at is None
    assert [point.at.body for point in piece.measured[0].shape] == ["b1"]
    assert [change.part for change in piece.load_cases[0].changes] == ["b1", "k1"]
    assert faults(piece) == ()
    assert parse_model(dump_model(piece)) == piece


def test_a_machine_without_its_body_loses_what_it_says_of_it(model):
    piece = fragment(model, ["b2", "mc1"])
    assert piece.machines[0].on is None
    assert [one.id for one in piece.machines[0].excitations] == ["2x"]
    assert piece.limits == ()
    assert faults(piece) == ()


def test_pasting_renames_every_reference(model):
    piece = fragment(model, ["b1", "b2", "mc1", "p1"])
    after, ids = pasted(model, piece, (0.5, -0.5))
    assert ids == ("b3", "b4", "s2", "k4", "k5", "k6", "mc2", "p2", "l2")
    assert faults(after) == ()
    assert [entry.text for entry in after.bodies[2].position] == ["0.5 m", "0.5 m"]
    assert [(link.from_.body, link.to.body or link.to.support) for link in after.links[3:]] == [
        ("b3", "s2"),
        ("b4", "s2"),
        ("b3", "b4"),
    ]
    machine = after.machines[1]
    assert (machine.on, machine.excitations[0].at.body, machine.excitations[2].of) == ("b3", "b3", "b3")
    assert [point.at.body for point in after.measured[1].shape] == ["b3", "b4"]
    assert after.limits[1].at.body == "b3"
    # The case "full" is that of the whole machine: the copy is full at the same time.
    assert [change.part for change in after.load_cases[0].changes] == ["b1", "b2", "k1", "b3", "b4", "k4"]
    assert all(a is b for a, b in zip(after.bodies, model.bodies, strict=False))


def test_ids_that_are_free_in_another_file_stay(model):
    piece = fragment(model, ["b2"])
    after, ids = pasted(Model(motion=Motion.PLANE), piece, (0.0, 0.0))
    assert ids == ("b2", "s1", "k2")
    assert after.bodies[0] == model.bodies[1]
    assert after.load_cases[0].id == "full"
    assert faults(after) == ()


def test_names_that_are_words_get_a_number(model):
    named = replace(model, bodies=(replace(model.bodies[0], id="motor"),), links=(), machines=(), limits=())
    named = replace(named, measured=(), load_cases=())
    after, ids = duplicated(named, ["motor"], (1.0, 0.0))
    assert ids == ("motor 2",)
    assert duplicated(after, ["motor 2"], (1.0, 0.0))[1] == ("motor 3",)


def test_a_link_alone_is_doubled_between_the_same_ends(model):
    after, ids = duplicated(model, ["k3"], (0.5, 0.0))
    assert ids == ("k4",)
    assert replace(after.links[3], id="k3") == model.links[2]
    both, ids = duplicated(model, ["b1", "k3"], (0.5, 0.0))
    assert ids == ("b3", "s2", "k4", "l2", "k5")
    assert faults(both) == ()


def test_what_cannot_be_pasted_says_why(model):
    with pytest.raises(InputError, match="of a model in plane and cannot move in space"):
        pasted(Model(motion=Motion.SPACE), fragment(model, ["b1"]), (0.0, 0.0, 0.0))
    with pytest.raises(InputError, match="nothing that can be copied is chosen"):
        duplicated(model, ["unknown"], (0.0, 0.0))
