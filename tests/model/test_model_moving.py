"""Moving, aligning, sizing and leading ends elsewhere: what goes along and what stays the same object."""

from dataclasses import replace

import pytest

from modalview.errors import InputError, ModelFaultsError
from modalview.model.adding import add_body, add_link, add_support, end_at
from modalview.model.entries import point_of
from modalview.model.moving import aligned, moved, placed, reattached, resized, slid, spread
from modalview.model.parts import Body, Drawn, End, Model, Motion, Support
from modalview.model.values import Entry


def texts(model, name):
    part = next(one for one in (*model.bodies, *model.supports) if one.id == name)
    return [entry.text for entry in part.position]


def standing(motion=Motion.PLANE):
    """Two bodies; the first on a ground of its own, both on a second ground."""
    up = (lambda x, y: (x, 0.0, y)) if motion is Motion.SPACE else (lambda x, y: (x, y))
    model, one = add_body(Model(motion=motion), "body", up(0.0, 1.0), (0.6, 0.4))
    model, other = add_body(model, "body", up(2.0, 1.5), (0.2, 0.8))
    model, own = add_support(model, up(0.0, 0.0))
    model, both = add_support(model, up(1.0, 0.0))
    for start, stop in ((one, own), (one, both), (other, both)):
        model, _ = add_link(model, "spring", End(body=start), End(support=stop))
    return model


def test_steps_are_added_as_decimals_in_the_unit_that_was_typed():
    body = Body(id="b", position=(Entry("100 mm", 0.1), Entry("0.7 m", 0.7)))
    after = moved(Model(motion=Motion.PLANE, bodies=(body,)), ["b"], (0.2, 0.1 + 0.2 - 0.3))
    assert texts(after, "b") == ["300 mm", "0.7 m"]
    assert after.bodies[0].position[1] is body.position[1]


@pytest.mark.parametrize(("motion", "step"), [(Motion.PLANE, (0.5, 0.3)), (Motion.SPACE, (0.5, 0.2, 0.3))])
def test_the_ground_under_a_body_goes_along_sideways_and_keeps_its_height(motion, step):
    before = standing(motion)
    after = moved(before, ["b1"], step)
    sideways = ["0.5 m", "0 m"] if motion is Motion.PLANE else ["0.5 m", "0.2 m", "0 m"]
    assert texts(after, "s1") == sideways
    assert after.supports[1] is before.supports[1]  # it carries the other body too
    assert after.bodies[1] is before.bodies[1]
    assert after.links is before.links
    alone = moved(before, ["b1"], step, lone_supports_follow=False)
    assert alone.supports is before.supports


def test_a_ground_that_is_moved_itself_follows_nothing():
    assert texts(moved(standing(), ["b1", "s1"], (0.5, 0.3)), "s1") == ["0.5 m", "0.3 m"]


def test_moving_nothing_or_nowhere_is_the_same_model():
    model = standing()
    assert moved(model, ["k1", "unknown"], (1.0, 1.0)) is model
    assert moved(model, ["b1"], (0.0, 0.0)) is model
    floating = Model(bodies=(Body(id="b"),))
    assert moved(floating, ["b"], (1.0, 1.0)) is floating


def test_parts_without_a_position_are_placed():
    model = placed(Model(bodies=(Body(id="b"),), supports=(Support(id="s"),)), {"b": (0.5, 1.0)})
    assert texts(model, "b") == ["0.5 m", "1 m"]
    assert model.supports[0].position is None
    assert placed(model, {"b": (0.5, 1.0)}) is model


def test_another_size_changes_no_number_of_the_model():
    model = standing()
    after = resized(model, "b1", 0.8, 0.4)
    assert after.bodies[0].drawn == Drawn(width=Entry("0.8 m", 0.8), height=Entry("0.4 m", 0.4))
    assert replace(after.bodies[0], drawn=None) == replace(model.bodies[0], drawn=None)
    assert resized(after, "b1", 0.8, 0.4) is after
    with pytest.raises(InputError, match="above zero"):
        resized(model, "b1", 0.0, 1.0)


def test_an_end_is_led_to_another_part_unless_a_rule_forbids_it():
    model = standing()
    after = reattached(model, "k1", "to", end_at(model, "b2", (1.9, 1.1)))
    assert [entry.text for entry in after.links[0].to.offset] == ["-0.1 m", "-0.4 m"]
    assert after.links[1] is model.links[1]
    with pytest.raises(ModelFaultsError, match='both ends are on "b1"'):
        reattached(model, "k1", "to", End(body="b1"))
    with pytest.raises(LookupError, match='no link "k9"'):
        reattached(model, "k9", "to", End(body="b1"))


@pytest.mark.parametrize(
    ("edge", "first", "second"),
    [
        ("left", ["0 m", "1 m"], ["-0.2 m", "1.5 m"]),
        ("right", ["1.8 m", "1 m"], ["2 m", "1.5 m"]),
        ("centre", ["0.9 m", "1 m"], ["0.9 m", "1.5 m"]),
        ("top", ["0 m", "1.7 m"], ["2 m", "1.5 m"]),
        ("bottom", ["0 m", "1 m"], ["2 m", "1.2 m"]),
        ("middle", ["0 m", "1.35 m"], ["2 m", "1.35 m"]),
    ],
)
def test_bodies_are_aligned_at_the_outermost_edge_or_in_the_middle_of_all(edge, first, second):
    after = aligned(standing(), ["b1", "b2"], edge)
    assert (texts(after, "b1"), texts(after, "b2")) == (first, second)
    assert aligned(after, ["b1", "b2"], edge) is after


def test_the_ground_of_an_aligned_body_goes_along():
    assert texts(aligned(standing(), ["b1", "b2"], "right"), "s1") == ["1.8 m", "0 m"]


def test_parts_are_spread_evenly_between_the_outermost():
    bodies = tuple(Body(id=f"b{i}", position=point_of((x, 0.0))) for i, x in enumerate((3.0, 0.0, 0.2)))
    model = Model(motion=Motion.PLANE, bodies=bodies)
    after = spread(model, ["b0", "b1", "b2"], "sideways")
    assert [body.position[0].text for body in after.bodies] == ["3 m", "0 m", "1.5 m"]
    assert after.bodies[0] is bodies[0]
    assert spread(after, ["b0", "b1", "b2"], "sideways") is after
    assert spread(model, ["b0", "b1"], "sideways") is model


def offsets(model, link):
    found = next(one for one in model.links if one.id == link)
    return [entry.text for entry in found.from_.offset or ()]


@pytest.mark.parametrize(("motion", "step"), [(Motion.PLANE, (0.1, 0.2)), (Motion.SPACE, (0.1, 0.3, 0.2))])
def test_a_link_slides_along_its_body_with_a_foot_of_its_own_and_without_one_that_others_share(motion, step):
    before = standing(motion)
    after = slid(before, ["k1"], step)
    told = ["0.1 m", "0.2 m"] if motion is Motion.PLANE else ["0.1 m", "0.3 m", "0.2 m"]
    assert offsets(after, "k1") == told
    assert texts(after, "s1") == told
    assert after.bodies is before.bodies
    assert after.links[1:] == before.links[1:]
    shared = slid(before, ["k2"], step)
    assert offsets(shared, "k2") == told
    assert shared.supports is before.supports
    both = slid(before, ["k2", "k3"], step)
    assert texts(both, "s2")[0] == "1.1 m"


def test_a_link_that_slides_back_has_no_offset_and_one_that_stays_is_the_same():
    before = standing()
    there = slid(before, ["k1"], (0.1, 0.2))
    assert slid(there, ["k1"], (-0.1, -0.2)).links[0].from_.offset is None
    assert slid(before, ["k1"], (0.0, 0.0)).links is before.links


def test_a_link_between_bodies_slides_on_both():
    model, one = add_body(Model(motion=Motion.PLANE), "body", (0.0, 1.0), (0.6, 0.4))
    model, other = add_body(model, "body", (0.0, 0.0), (0.6, 0.4))
    model, link = add_link(model, "spring", End(body=one), End(body=other))
    after = slid(model, [link], (0.2, 0.0))
    assert [entry.text for entry in after.links[0].to.offset] == offsets(after, link) == ["0.2 m", "0 m"]
