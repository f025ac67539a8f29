"""Feet that stand elsewhere: what is found, what moves along, what is offered."""

from dataclasses import replace

import pytest

from modalview.advice.geometry import HEIGHT, WIDTH, every_feet, moved_feet, moves_that_clear
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study import Request, look

SET = demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear"
RAISED = SET.with_name("raised-mounts.keepclear")
FAN = demo_models() / "2-supply-fan" / "steel-legs.keepclear"
PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"


def _feet(model, kind, axis=2):
    return next(one for one in every_feet(model) if (one.kind, one.axis) == (kind, axis))


def test_feet_of_a_set_are_raised_and_set_apart():
    found = every_feet(read_model(SET))
    assert [(one.kind, one.axis, one.number, round(one.now, 6)) for one in found] == [
        (HEIGHT, 2, 6, -0.62),
        (WIDTH, 0, 6, 2.25),
        (WIDTH, 1, 6, 0.96),
    ]


def test_springs_at_one_place_are_one_foot():
    assert [one.number for one in every_feet(read_model(FAN))] == [2, 2]


def test_where_places_have_no_influence_there_are_none():
    assert every_feet(read_model(PUMP)) == ()


def test_raised_feet_are_those_of_the_raised_model():
    model = read_model(SET)
    after = moved_feet(model, _feet(model, HEIGHT), -0.12)
    wanted = read_model(RAISED)
    assert [one.from_.offset for one in after.links] == [one.from_.offset for one in wanted.links]
    assert [one.position for one in after.supports] == [one.position for one in wanted.supports]


def test_feet_set_apart_stay_about_their_middle():
    model = read_model(SET)
    after = moved_feet(model, _feet(model, WIDTH, 0), 2 * 2.25)
    places = [one.from_.offset[0].si for one in after.links]
    assert (min(places) + max(places)) / 2 == pytest.approx(0.075)
    assert max(places) - min(places) == pytest.approx(4.5)


def test_feet_on_a_support_of_others_stay():
    model = read_model(SET)
    shared = replace(model.links[0], to=model.links[5].to)
    assert moved_feet(replace(model, links=(shared, *model.links[1:])), _feet(model, WIDTH, 0), 3.0) is None


def test_nearest_height_that_clears_is_told_and_undone():
    """Judged here by height alone: clear from 0.3 m below upward."""
    model = read_model(SET)
    found = list(
        moves_that_clear(model, _feet(model, HEIGHT), lambda one: one.links[0].from_.offset[2].si >= -0.2999)
    )
    assert [one.text for one in found] == [
        "Raise the 6 feet of engine and alternator by 330 mm, to 290 mm below its centre of gravity"
    ]
    assert found[0].edit.apply(model) == found[0].model
    assert found[0].edit.revert(found[0].model) == model


def test_nothing_is_offered_where_nothing_clears():
    model = read_model(SET)
    assert list(moves_that_clear(model, _feet(model, HEIGHT), lambda _: False)) == []


@pytest.mark.slow
def test_set_is_cleared_by_raised_mounts():
    model = read_model(SET)
    (found,) = moves_that_clear(
        model, _feet(model, HEIGHT), lambda one: look(Request(one)).verdict == "clear"
    )
    assert found.to == pytest.approx(-0.25)
