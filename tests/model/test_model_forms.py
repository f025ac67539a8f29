"""What the form of a part asks for: every part of every sample has one, and its lines can be typed."""

from pathlib import Path

import pytest

from modalview.errors import InputError
from modalview.model.editable import editable_fields
from modalview.model.filling import typed_together
from modalview.model.forms import form_lines, kind_of, part_of
from modalview.model.rules import faults
from modalview.store import read_model

SAMPLES = Path(__file__).parent.parent / "store" / "samples"
MODELS = {path.stem: read_model(path) for path in sorted(SAMPLES.glob("*.keepclear"))}
GROUPS = ("bodies", "supports", "links", "machines")
PARTS = [
    (name, part.id) for name, model in MODELS.items() for group in GROUPS for part in getattr(model, group)
]


@pytest.mark.parametrize(("name", "part"), PARTS)
def test_every_line_gives_back_its_own_text_and_changes_nothing(name, part):
    model = MODELS[name]
    for line in form_lines(model, part):
        if line.text:
            assert typed_together(model, line.typed(line.text), "").apply(model) == model, line.label
        if line.tolerance:
            same = typed_together(model, [(line.tolerance_address, line.tolerance)], "")
            assert same.apply(model) == model


@pytest.mark.parametrize(("name", "part"), PARTS)
def test_every_line_is_taken_away_whole_or_refused(name, part):
    model = MODELS[name]
    for line in form_lines(model, part):
        try:
            edit = typed_together(model, line.typed(""), "")
        except InputError:
            continue  # refused: what is needed stays
        assert not set(faults(edit.apply(model))) - set(faults(model))
        assert edit.revert(edit.apply(model)) == model


@pytest.mark.parametrize(("name", "part"), PARTS)
def test_no_two_lines_of_a_form_have_the_same_key(name, part):
    lines = form_lines(MODELS[name], part)
    assert len({line.key for line in lines}) == len(lines)
    assert kind_of(part_of(MODELS[name], part)[1])


# Typed in the table alone: what a change may do, ranges to skip.
TABLE_ALONE = ("vary_limits", "barred_ranges", "shape")


@pytest.mark.parametrize(("name", "part"), PARTS)
def test_every_value_of_the_table_has_its_line_in_the_form(name, part):
    model = MODELS[name]
    address, found = part_of(model, part)
    parts = [address, *((*address, "excitations", one.id) for one in getattr(found, "excitations", ()))]
    shown = [field.address for one in parts for field in editable_fields(model, one)]
    lines = form_lines(model, part)
    held = {line.address for line in lines} | {line.tolerance_address for line in lines}
    missing = [
        one
        for one in shown
        if not set(TABLE_ALONE) & set(one)
        and not any(one[:count] in held for count in range(3, len(one) + 1))
    ]
    assert missing == []


def test_a_gear_has_teeth_or_a_ratio_and_typing_one_takes_the_other_away():
    model = MODELS["shaft-train"]
    teeth = next(line for line in form_lines(model, "g1") if line.label == "teeth")
    gear = part_of(typed_together(model, teeth.typed("84 : 20"), "").apply(model), "g1")[1]
    assert (gear.teeth, gear.ratio) == ((84, 20), None)


def test_an_order_becomes_a_fixed_frequency():
    model = MODELS["plane"]
    line = next(one for one in form_lines(model, "fan") if one.key == "12x: fixed frequency")
    changed = typed_together(model, line.typed("100 Hz"), "").apply(model)
    excitation = next(one for one in part_of(changed, "fan")[1].excitations if one.id == "12x")
    assert (excitation.order, excitation.frequency.text) == (None, "100 Hz")


def test_taking_away_a_moment_takes_the_tensor_away():
    model = MODELS["space"]
    line = next(one for one in form_lines(model, "box") if one.key == "Iyy")
    at = ("bodies", "box", "inertia")
    moments = [((*at, key), "2 kg m2") for key in ("Ixx", "Iyy", "Izz")]
    with_tensor = typed_together(model, moments, "").apply(model)
    assert part_of(with_tensor, "box")[1].inertia is not None
    assert (
        part_of(typed_together(with_tensor, line.typed(""), "").apply(with_tensor), "box")[1].inertia is None
    )


def test_a_part_that_is_not_there_has_no_form():
    with pytest.raises(LookupError, match='no part "m99"'):
        form_lines(MODELS["space"], "m99")
