"""Edits from two models: applied and reverted exactly, parts shared, added faults refused."""

from dataclasses import replace
from pathlib import Path

import pytest

from modalview.errors import ModelFaultsError
from modalview.model.adding import add_body
from modalview.model.differences import added_faults, checked_edit, edit_between, joined
from modalview.model.parts import Body, Model, Motion
from modalview.model.values import Value
from modalview.store import read_model
from modalview.units.quantities import MASS

SAMPLES = Path(__file__).parent.parent / "store" / "samples"
MODELS = {path.stem: read_model(path) for path in sorted(SAMPLES.glob("*.keepclear"))}
PLANE = next(model for model in MODELS.values() if model.motion is Motion.PLANE)


def heavier(body):
    return replace(body, mass=Value.typed("9 kg", MASS))


def test_parts_that_do_not_change_are_the_very_same_objects():
    after = replace(PLANE, bodies=(heavier(PLANE.bodies[0]), *PLANE.bodies[1:]), title="Other")
    edit = edit_between(PLANE, after, "Change")
    applied = edit.apply(PLANE)
    assert applied == after
    assert all(a is b for a, b in zip(applied.bodies[1:], PLANE.bodies[1:], strict=True))
    assert applied.links is PLANE.links
    back = edit.revert(applied)
    assert back == PLANE
    assert back.bodies[0] is PLANE.bodies[0]


def test_a_part_taken_from_the_middle_comes_back_to_its_place():
    bodies = tuple(Body(id=f"b{i}", mass=Value.typed("1 kg", MASS)) for i in range(5))
    before = Model(bodies=bodies)
    after = Model(bodies=(*bodies[:2], *bodies[3:]))
    edit = edit_between(before, after, "Remove b2")
    assert edit.changes[0][1].old == (bodies[2],)  # only what differs is kept
    assert edit.apply(before).bodies == after.bodies
    assert edit.revert(after).bodies[2] is bodies[2]


def test_equal_models_make_an_edit_that_changes_nothing():
    edit = edit_between(PLANE, replace(PLANE, bodies=tuple(replace(one) for one in PLANE.bodies)), "Nothing")
    assert not edit
    assert edit.apply(PLANE) == PLANE


def test_a_change_that_breaks_a_rule_is_refused_and_says_which():
    bodies = (replace(PLANE.bodies[0], mass=Value.typed("-1 kg", MASS)), *PLANE.bodies[1:])
    with pytest.raises(ModelFaultsError, match="must not be negative"):
        checked_edit(PLANE, replace(PLANE, bodies=bodies), "Lighten")


def test_a_fault_that_was_there_does_not_count_again_when_its_part_moves_up_the_list():
    one = Body(id="one", mass=Value.typed("1 kg", MASS))
    before = Model(bodies=(one, Body(id="bad")))
    after = Model(bodies=(Body(id="bad"),))
    assert added_faults(before, after) == ()
    assert checked_edit(before, after, "Remove one").apply(before) == after
    twice = Model(bodies=(Body(id="bad"), Body(id="worse")))
    assert [str(fault.path) for fault in added_faults(before, twice)] == ['bodies[1] "worse" . mass']


def test_two_edits_of_one_drag_become_one():
    first = edit_between(PLANE, replace(PLANE, title="a"), "Name", merge="drag")
    middle = first.apply(PLANE)
    second = edit_between(middle, add_body(middle, "mass", (0.0, 0.0))[0], "Name", merge="drag")
    after = second.apply(middle)
    both = joined(first, second, after)
    assert both.apply(PLANE) == after
    assert both.revert(after) == PLANE
    assert both.merge == "drag"
