"""What an edit leaves as it was serves again, and what comes out is as if built anew."""

import numpy as np
import pytest
from assembly_models import body, joined, model, mount, spring

from modalview.assembly.assemble import assemble
from modalview.assembly.parameters import Case
from modalview.model.moving import moved
from modalview.model.removing import without
from modalview.store import dump_model, parse_model


def given(*more, third=None):
    bodies = [
        body("a", 0.1, 1.0, inertia=2.0),
        body("b", 1.3, 1.0, mass=4.0, inertia=1.0),
        body("c", 2.0, 1.6, **({"inertia": 1.5} if third is None else third)),
    ]
    links = [
        mount("m", "a", "g", at=(0.3, -0.4), x=3e5, y=4e5, rz=5e4),
        spring("k", "b", "a", "7e5 N/m", direction=[3, 4]),
        mount("n", "c", "b", at=(0.1, 0.2), x=3e5, y=4e5, rz=5e4),
        joined("damper", "d", "b", "g", damping="30 N s/m", direction="y"),
        *more,
    ]
    return model("plane", bodies, links)


def with_link(before, link):
    """Return a model with one link more, every part that was there the very same object."""
    after = parse_model(dump_model(given(link)))
    return type(before)(
        **{
            **{name: getattr(before, name) for name in before.__dataclass_fields__},
            "links": (*before.links, after.links[-1]),
        }
    )


def same(found, anew):
    for case in Case:
        one, other = found.pencil(case), anew.pencil(case)
        for name in ("K", "M", "C"):
            first, second = getattr(one, name), getattr(other, name)
            np.testing.assert_array_equal(first.indices, second.indices)
            np.testing.assert_array_equal(first.data, second.data)
        np.testing.assert_array_equal(one.formation.toarray(), other.formation.toarray())
        np.testing.assert_array_equal(one.shifted.pattern.keys, other.shifted.pattern.keys)
        np.testing.assert_array_equal(one.rigid_body, other.rigid_body)
    for terms in ("stiffness", "mass", "damping"):
        mine, theirs = getattr(found.structure, terms), getattr(anew.structure, terms)
        np.testing.assert_array_equal(mine.rows.toarray(), theirs.rows.toarray())
        np.testing.assert_array_equal(mine.support_rows.toarray(), theirs.support_rows.toarray())
        np.testing.assert_array_equal(mine.product_of, theirs.product_of)
        assert mine.part == theirs.part
    assert found.structure.coordinates.centres == anew.structure.coordinates.centres
    assert found.notes == anew.notes


def test_a_move_keeps_coordinates_patterns_and_the_rows_of_other_links():
    before = assemble(given())
    pattern = before.pencil().shifted.pattern
    found = assemble(moved(before.model, ("c",), (0.05, 0.02)), before)
    same(found, assemble(found.model))
    assert found.structure.coordinates.to_bodies is before.structure.coordinates.to_bodies
    assert found.pencil().shifted.pattern.factors is pattern.factors
    kept = {name for name, terms in found.structure.links.items() if terms is before.structure.links[name]}
    assert kept == {"m", "k", "d"}


def test_factors_kept_for_the_model_before_do_not_stay_with_the_pattern():
    before = assemble(given())
    before.pencil().shifted.pattern.earlier.keep("a count", 1)
    found = assemble(moved(before.model, ("c",), (0.05, 0.02)), before)
    assert not found.pencil().shifted.pattern.earlier._kept


def test_a_move_that_makes_an_entry_vanish_finds_the_pattern_anew():
    before = assemble(given())
    level = moved(before.model, ("c",), (0.0, -0.4))  # the mount then acts level with a centre of gravity
    before.pencil()
    same(assemble(level, before), assemble(level))


@pytest.mark.parametrize("part", ["k", "d", "n"])
def test_a_link_taken_out_leaves_the_rest(part):
    before = assemble(given(spring("s", "c", "g", "1e5 N/m", direction="x")))
    before.pencil()
    found = assemble(without(before.model, (part,)), before)
    same(found, assemble(found.model))


@pytest.mark.parametrize(
    "link",
    [
        spring("s", "c", "a", "1e5 N/m", direction="y"),
        joined("rigid link", "r", "c", "a"),
        joined("rigid link", "r", "c", "a", directions=["x"]),
    ],
)
def test_a_link_drawn_and_a_move_after_it(link):
    before = assemble(given())
    before.pencil()
    drawn = assemble(with_link(before.model, link), before)
    same(drawn, assemble(drawn.model))
    further = assemble(moved(drawn.model, ("c",), (0.05, 0.02)), drawn)
    same(further, assemble(further.model))
    taken_out = assemble(before.model, further)
    same(taken_out, assemble(before.model))


def test_massless_directions_are_looked_at_anew():
    before = assemble(given(third={"mass": 0.0}))
    found = assemble(moved(before.model, ("c",), (0.05, 0.02)), before)
    same(found, assemble(found.model))
    held_less = assemble(without(found.model, ("k",)), found)
    same(held_less, assemble(held_less.model))
