"""Properties of drawing operations on random models of every motion."""

from dataclasses import fields, is_dataclass

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, assume, given, reject, settings
from hypothesis import strategies as st
from random_models import Wishes, documents, parsed

from modalview.assembly.assemble import assemble
from modalview.eigen.solve import find_modes
from modalview.errors import InputError, ModelFaultsError, NumericalError
from modalview.model.adding import BODY_KINDS, add_body, add_link, add_support, end_at
from modalview.model.copying import duplicated, fragment, pasted
from modalview.model.differences import edit_between
from modalview.model.moving import EDGES, WAYS, aligned, moved, reattached, resized, spread
from modalview.model.parts import Body, End, Model, Motion, Support
from modalview.model.removing import without
from modalview.model.rules import faults
from modalview.model.rules_links import KINDS
from modalview.model.turning import mirrored, rotated
from modalview.model.values import Entry
from modalview.store import dump_model, parse_model

quick = settings(
    derandomize=True,
    deadline=None,
    max_examples=6,
    phases=(Phase.explicit, Phase.generate),
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much, HealthCheck.data_too_large],
)
few = settings(quick, max_examples=3)
many = settings(quick, max_examples=100)
TURNABLE = Wishes(motions=("plane", "space"), turnable=True, joints=False)
# Beside the largest eigenvalue: what rounding of coordinates to fourteen digits leaves, with room.
SAME = 1e-9


def dimensions(model):
    return 3 if model.motion is Motion.SPACE else 2


def parts(model):
    return [*model.bodies, *model.supports]


def with_places(document):
    """The same document with a position for every part: random ones of single axis have none."""
    for number, part in enumerate((*document["bodies"], *document["supports"])):
        part.setdefault("position", [f"{number / 4!r} m", f"{number / 2!r} m"])
    return document


def matrices(model):
    """Return K and M over the freedoms of the model, dense, or why it cannot move."""
    try:
        assembly = assemble(model)
    except ModelFaultsError as error:
        return str(error)
    pencil = assembly.pencil()
    return pencil.K.toarray(), pencil.M.toarray()


def eigenvalues(model):
    """Return omega^2 in rising order; none where the random model has no motion of its own."""
    try:
        return find_modes(assemble(model).pencil()).eigenvalues
    except (ModelFaultsError, NumericalError):
        reject()


def same_eigenvalues(one, other):
    wanted, found = eigenvalues(one), eigenvalues(other)
    np.testing.assert_allclose(found, wanted, rtol=SAME, atol=SAME * wanted[-1])


def same_matrices(one, other):
    mine, theirs = matrices(one), matrices(other)
    if isinstance(mine, str):
        assert mine == theirs
        return
    for a, b in zip(mine, theirs, strict=True):
        np.testing.assert_array_equal(a, b)


def untyped(item):
    """The same without the texts of entries, which may be written in another unit."""
    if isinstance(item, Entry):
        return item.si
    if isinstance(item, tuple):
        return tuple(untyped(one) for one in item)
    if is_dataclass(item):
        return type(item), tuple(untyped(getattr(item, field.name)) for field in fields(item))
    return item


tenths = st.integers(-20, 20).map(lambda i: i / 10)


class Dice:
    """What is chosen at random in a long run of edits."""

    def __init__(self, seed):
        self._random = np.random.default_rng(seed)

    def pick(self, items):
        """One of some items; "none" where there are none."""
        return items[self._random.integers(len(items))] if items else "none"

    def point(self, model):
        return tuple(self._random.integers(-20, 21, dimensions(model)) / 10)

    def some(self, model):
        """Ids of up to three bodies and supports."""
        return [self.pick([part.id for part in parts(model)]) for _ in range(self._random.integers(4))]


def add(dice, model):
    return add_body(model, dice.pick(BODY_KINDS[model.motion]), dice.point(model), (0.4, 0.3))[0]


def put_support(dice, model):
    return add_support(model, dice.point(model))[0]


def some_end(dice, model):
    part = dice.pick((*model.bodies, *parts(model)))
    if isinstance(part, Body):
        return end_at(model, part.id, dice.point(model))
    return End(support=part.id if isinstance(part, Support) else part)


def join(dice, model):
    ends = some_end(dice, model), some_end(dice, model)
    kind = dice.pick([one.kind for one in KINDS[model.motion]])
    return add_link(model, kind, *ends, drag=dice.point(model))[0]


def move(dice, model):
    return moved(model, dice.some(model), dice.point(model))


def remove(dice, model):
    return without(model, [dice.pick([part.id for part in (*parts(model), *model.links, *model.links)])])


def mirror(dice, model):
    return mirrored(model, dice.some(model), dice.pick("xyz"[: dimensions(model)]), dice.point(model))


def turn(dice, model):
    axis = dice.pick("xyz") if model.motion is Motion.SPACE else "z"
    degrees = dice.pick((30.0, 90.0, -90.0, 180.0))
    return rotated(model, dice.some(model), degrees, dice.point(model), axis)


def double(dice, model):
    return duplicated(model, dice.some(model)[:1], dice.point(model))[0]


def line_up(dice, model):
    if dice.pick((True, False)):
        return aligned(model, dice.some(model), dice.pick(sorted(EDGES)))
    return spread(model, dice.some(model), dice.pick(WAYS))


def size(dice, model):
    body = dice.pick(model.bodies)
    return resized(model, body.id, 0.1 + abs(dice.point(model)[0]), 0.3) if model.bodies else model


def lead(dice, model):
    link = dice.pick(model.links)
    side = dice.pick(("from", "to"))
    return reattached(model, link.id, side, some_end(dice, model)) if model.links else model


OPERATIONS = (add, put_support, join, join, join, join, move, mirror, turn, double, line_up, size, lead)
MOST_BODIES = 6


def edited(dice, model):
    """The model after one drawing operation; the same where that is refused with its reason."""
    full = len(model.bodies) >= MOST_BODIES or len(model.links) > 2 * MOST_BODIES
    operation = remove if full else dice.pick((*OPERATIONS, remove))
    try:
        return operation(dice, model)
    except InputError:
        return model


def check_undo_and_redo(model, dice, number):
    """Make random edits, undo them all and do them all again; save and open on the way."""
    first, done = model, []
    for step in range(number):
        after = edited(dice, model)
        edit = edit_between(model, after, str(step))
        applied = edit.apply(model)
        assert applied == after
        shared(model, applied)
        done.append((edit, model))
        model = applied
        if step % 10 == 9:
            assert parse_model(dump_model(model)) == model  # also: no rule is broken
    last = model
    for edit, before in reversed(done):
        model = edit.revert(model)
        assert model == before
    same_matrices(held(model), held(first))
    for edit, _ in done:
        model = edit.apply(model)
    assert model == last
    same_matrices(held(model), held(last))
    return last


HOLDERS = {Motion.SINGLE_AXIS: "spring", Motion.SHAFT_TRAIN: "shaft"}


def held(model):
    """The model with every body held to the ground, so that it has matrices whatever it is like."""
    for body in model.bodies:
        model, ground = add_support(model, [5 + place.si for place in body.position])
        model, _ = add_link(model, HOLDERS.get(model.motion, "beam"), End(body=body.id), End(support=ground))
    return model


def shared(before, after):
    """Parts that are equal in both are the very same objects."""
    old = {part.id: part for part in (*parts(before), *before.links)}
    for part in (*parts(after), *after.links):
        assert part is old.get(part.id) or part != old.get(part.id)


@few
@given(documents(Wishes(joints=False)), st.integers(0, 2**32 - 1))
def test_random_edits_undone_and_done_again_are_the_same_models(document, seed):
    check_undo_and_redo(parsed(with_places(document)), Dice(seed), 40)


@pytest.mark.parametrize("motion", Motion)
def test_two_hundred_edits_from_an_empty_sheet_undone_and_done_again(motion):
    last = check_undo_and_redo(Model(motion=motion), Dice(8), 200)
    assert last.links
    assert not isinstance(matrices(held(last)), str)


@pytest.mark.slow
@many
@given(documents(), st.integers(0, 2**32 - 1))
def test_many_runs_of_two_hundred_edits(document, seed):
    check_undo_and_redo(parsed(with_places(document)), Dice(seed), 200)


@quick
@given(documents(), st.data())
def test_removing_anything_leaves_no_reference_behind(document, data):
    document["machines"][0]["on"] = "b1"
    document["limits"] = [
        {"id": "l", "at": {"body": "b0"}, "quantity": "velocity rms", "value": "4.5 mm/s"},
    ]
    document["measured"] = [{"id": "p", "frequency": "17 Hz", "at": {"body": "b1"}}]
    model = parsed(document)
    everything = [part.id for part in (*parts(model), *model.links, *model.machines, *model.limits)]
    gone = data.draw(st.lists(st.sampled_from(everything), min_size=1, max_size=3))
    after = without(model, gone)
    assert faults(after) == ()
    assert not {part.id for part in (*parts(after), *after.links, *after.machines)} & set(gone)
    shared(model, after)


@quick
@given(documents(), st.data())
def test_mirrored_twice_is_the_same_model_but_for_texts(document, data):
    model = parsed(with_places(document))
    axis = data.draw(st.sampled_from("xyz"[: dimensions(model)]))
    chosen = [part.id for part in parts(model) if data.draw(st.booleans())]
    about = [data.draw(tenths)] * dimensions(model)
    once = mirrored(model, chosen, axis, about, lone_supports_follow=False)
    twice = mirrored(once, chosen, axis, about, lone_supports_follow=False)
    assert untyped(twice) == untyped(model)
    same_matrices(model, twice)
    assert faults(once) == ()


@few
@given(documents(), st.data())
def test_four_quarter_turns_are_none(document, data):
    model = parsed(with_places(document))
    assume(model.motion in (Motion.PLANE, Motion.SPACE))
    axis = data.draw(st.sampled_from("xyz")) if model.motion is Motion.SPACE else "z"
    chosen = [part.id for part in parts(model) if data.draw(st.booleans())]
    about = [data.draw(tenths) for _ in range(dimensions(model))]
    turned = model
    for _ in range(4):
        turned = rotated(turned, chosen, 90, about, axis, lone_supports_follow=False)
    assert [untyped(a.position) for a in parts(turned)] == [untyped(a.position) for a in parts(model)]
    assert untyped(turned.bodies) == untyped(model.bodies)
    same_matrices(model, turned)


def check_turning(document, data):
    model = parsed(document)
    count = dimensions(model)
    axis = data.draw(st.sampled_from("xyz")) if count == 3 else "z"
    degrees = data.draw(st.floats(-400, 400))
    everything = [part.id for part in parts(model)]
    turned = rotated(model, everything, degrees, [data.draw(tenths) for _ in range(count)], axis)
    assert faults(turned) == ()
    assert parse_model(dump_model(turned)) == turned
    same_eigenvalues(model, turned)


@few
@given(documents(TURNABLE), st.data())
def test_turning_the_whole_model_leaves_its_natural_frequencies(document, data):
    check_turning(document, data)


@pytest.mark.slow
@many
@given(documents(TURNABLE), st.data())
def test_turning_the_whole_model_leaves_its_natural_frequencies_in_many(document, data):
    check_turning(document, data)


def check_mirroring(document, data):
    model = parsed(with_places(document))
    axis = data.draw(st.sampled_from("xyz"[: dimensions(model)]))
    everything = [part.id for part in parts(model)]
    image = mirrored(model, everything, axis, [data.draw(tenths)] * dimensions(model))
    same_eigenvalues(model, image)


@few
@given(documents(Wishes(joints=False)), st.data())
def test_mirroring_the_whole_model_leaves_its_natural_frequencies(document, data):
    check_mirroring(document, data)


@pytest.mark.slow
@many
@given(documents(Wishes(joints=False)), st.data())
def test_mirroring_the_whole_model_leaves_its_natural_frequencies_in_many(document, data):
    check_mirroring(document, data)


@quick
@given(documents(), st.data())
def test_moving_everything_changes_no_matrix(document, data):
    model = parsed(with_places(document))
    step = [data.draw(tenths) for _ in range(dimensions(model))]
    image = moved(model, [part.id for part in parts(model)], step)
    mine, theirs = matrices(model), matrices(image)
    if isinstance(mine, str):
        assert theirs == mine
        return
    for a, b in zip(mine, theirs, strict=True):
        np.testing.assert_allclose(b, a, rtol=1e-12, atol=1e-12 * np.abs(a).max())
    back = moved(image, [part.id for part in parts(model)], [-one for one in step])
    assert untyped(back) == untyped(model)


def check_pasting(document, data):
    model = parsed(with_places(document))
    chosen = [body.id for body in model.bodies if data.draw(st.booleans())]
    assume(chosen)
    piece = fragment(model, chosen)
    assert faults(piece) == ()
    step = [data.draw(tenths) for _ in range(dimensions(model))]
    after, new = pasted(model, piece, step)
    assert faults(after) == ()
    assert len(set(new)) == len(piece.bodies) + len(piece.supports) + len(piece.links)
    assert after.bodies[: len(model.bodies)] == model.bodies
    again = fragment(after, new)
    assert len(again.bodies) == len(piece.bodies)
    same_eigenvalues(piece, again)


@few
@given(documents(Wishes(joints=False)), st.data())
def test_a_pasted_fragment_has_the_natural_frequencies_of_the_fragment(document, data):
    check_pasting(document, data)


@pytest.mark.slow
@many
@given(documents(Wishes(joints=False)), st.data())
def test_a_pasted_fragment_has_the_natural_frequencies_of_the_fragment_in_many(document, data):
    check_pasting(document, data)
