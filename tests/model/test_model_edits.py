"""Edits: what is typed is read, refused or applied, and every step can be taken back."""

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.errors import InputError, ModelFaultsError, UnitError
from modalview.model.adding import add_body
from modalview.model.addresses import look, quantity_of
from modalview.model.editable import editable_fields
from modalview.model.edits import (
    SetField,
    set_field,
    set_number_text,
    set_plain_text,
    set_tolerance_text,
    set_typed,
    set_value_text,
)
from modalview.model.parts import Margin, Model, Motion
from modalview.model.rules import faults
from modalview.model.values import STARTING, Entry, Value
from modalview.store import dump_model, parse_model, read_model
from modalview.units import quantities as q

SAMPLES = Path(__file__).parent.parent / "store" / "samples"
MODELS = {path.stem: read_model(path) for path in sorted(SAMPLES.glob("*.keepclear"))}
SINGLE = MODELS["single-axis"]


def part_addresses(model):
    yield ()
    for group in ("bodies", "supports", "links", "measured", "limits"):
        yield from ((group, part.id) for part in getattr(model, group))
    for machine in model.machines:
        yield ("machines", machine.id)
        yield from (("machines", machine.id, "excitations", one.id) for one in machine.excitations)


def every_field(model):
    return [field for address in part_addresses(model) for field in editable_fields(model, address)]


def test_a_value_is_typed_anew_and_keeps_what_is_known_about_it():
    edit = set_value_text(SINGLE, ("links", "k1", "stiffness"), "400 kN/mm")
    value = edit.apply(SINGLE).links[0].stiffness
    assert value.entry == Entry("400 kN/mm", 4.0e8)
    assert value.tolerance == SINGLE.links[0].stiffness.tolerance
    assert edit.text == "Set stiffness of k1 to 400 kN/mm"


def test_a_typed_number_no_longer_claims_the_handbook():
    mass = set_value_text(SINGLE, ("bodies", "motor", "mass"), "610 kg").apply(SINGLE).bodies[0].mass
    assert (mass.source, mass.status) == ("name plate", "datasheet")
    assert (mass.by, mass.given) == (None, None)


def test_typing_the_same_text_changes_nothing():
    edit = set_value_text(SINGLE, ("bodies", "motor", "mass"), "620 kg")
    assert edit.old == edit.new


def test_a_decimal_comma_is_kept_as_a_file_may_hold_it():
    changed = set_value_text(SINGLE, ("links", "k1", "stiffness"), "4,2 kN/mm").apply(SINGLE)
    assert changed.links[0].stiffness.text == "4.2 kN/mm"
    assert parse_model(dump_model(changed)) == changed


@pytest.mark.parametrize(
    ("address", "text", "error", "words"),
    [
        (("links", "k1", "stiffness"), "620 kg", UnitError, "cannot be read as stiffness"),
        (("links", "k1", "stiffness"), "1,200 N/m", UnitError, "1,200"),
        (("links", "k1", "stiffness"), "0 N/m", ModelFaultsError, "above zero"),
        (("links", "k1", "stiffness"), "", ModelFaultsError, "cannot be left empty"),
        (("bodies", "motor", "mass"), "", ModelFaultsError, "mass: is missing"),
        (("bodies", "motor", "mass"), "500 kg", ModelFaultsError, "must enclose"),
        (("links", "k1", "stiffness"), "1e200 N/m", UnitError, "check unit and power"),
        (
            ("machines", "pump set", "excitations", "1x", "order"),
            "1e200",
            ModelFaultsError,
            "a number of a machine",
        ),
        (("bodies", "motor", "id"), "engine", ModelFaultsError, "change the name"),
        (("bodies", "motor", "tolerance"), "100 %", ModelFaultsError, "below 100 %"),
        (("bodies", "motor", "tolerance"), "1 kg to 2 kg", UnitError, "percentage"),
        (("links", "k1", "stiffness", "tolerance"), "5 kN", UnitError, "ratio"),
        (("machines", "pump set", "speed"), "0 rpm", ModelFaultsError, "above zero"),
        (("machines", "pump set", "speed", "from"), "9000 rpm", ModelFaultsError, "must rise"),
        (("machines", "hall", "margin"), "", ModelFaultsError, "no default"),
        (("machines", "pump set", "excitations", "1x", "order"), "0", ModelFaultsError, "above zero"),
        (("machines", "pump set", "excitations", "1x", "order"), "two", UnitError, "order of 1x"),
        (("machines", "pump set", "excitations", "1x", "order"), "1_0", UnitError, "order of 1x"),
        (("machines", "pump set", "excitations", "1x", "order"), "nan", UnitError, "order of 1x"),
    ],
)
def test_what_the_rules_refuse_is_refused_before_it_is_done(address, text, error, words):
    with pytest.raises(error, match=words):
        set_typed(SINGLE, address, text)


@pytest.mark.parametrize(
    ("address", "text", "found"),
    [
        (("title",), "Pump 4", "Pump 4"),
        (("title",), "", ""),
        (("bodies", "motor", "name"), "", None),
        (("machines", "pump set", "excitations", "half", "order"), "0,75", 0.75),
        (("machines", "hall", "margin"), "12 %", Entry("12 %", 0.12)),
        (("links", "k1", "loss_factor"), "", None),
        (("machines", "pump set", "speed", "from"), "900 rpm", Entry.typed("900 rpm", q.SPEED)),
        (("bodies", "motor", "position", 1), "1300 mm", Entry("1300 mm", 1.3)),
        (("bodies", "base", "inertia"), "3 kg m2", Value(Entry("3 kg m2", 3.0))),
        (("links", "m1", "stiffness", "y"), "1 kN/mm", Value(Entry("1 kN/mm", 1e6))),
    ],
)
def test_each_kind_of_field_can_be_typed(address, text, found):
    assert look(set_typed(SINGLE, address, text).apply(SINGLE), address) == found


def test_one_margin_takes_the_place_of_two():
    address = ("machines", "pump set", "margin")
    assert isinstance(look(SINGLE, address), Margin)
    assert look(set_value_text(SINGLE, address, "10 %").apply(SINGLE), address) == Entry("10 %", 0.1)


@pytest.mark.parametrize(
    ("text", "limits"),
    [
        ("12 %", (88.0, 112.0)),
        ("± 12,5 %", (87.5, 112.5)),
        ("-10 % / +20 %", (90.0, 120.0)),
        ("3 N/m to 500 kN/mm", (3.0, 5e8)),
    ],
)
def test_tolerances_are_typed_in_three_ways(text, limits):
    edit = set_tolerance_text(SINGLE, ("links", "k1", "stiffness", "tolerance"), text)
    tolerance = edit.apply(SINGLE).links[0].stiffness.tolerance
    assert tolerance.limits(100.0) == pytest.approx(limits)


def test_an_empty_tolerance_is_taken_away():
    address = ("links", "k1", "stiffness", "tolerance")
    assert look(set_tolerance_text(SINGLE, address, " ").apply(SINGLE), address) is None


@pytest.mark.parametrize("text", ["10 % / 20 %", "about 10 %", "-10 % / 20 %", "3 N/m to"])
def test_other_tolerances_are_refused(text):
    with pytest.raises(UnitError):
        set_tolerance_text(SINGLE, ("links", "k1", "stiffness", "tolerance"), text)


def test_faults_there_already_do_not_stand_in_the_way():
    broken = SetField(("bodies", "base", "mass"), SINGLE.bodies[1].mass, None, "").apply(SINGLE)
    assert faults(broken)
    assert (
        set_value_text(broken, ("links", "k1", "stiffness"), "1 N/m").apply(broken).links[0].stiffness.si == 1
    )
    with pytest.raises(ModelFaultsError, match="stiffness") as caught:
        set_value_text(broken, ("links", "k1", "stiffness"), "-1 N/m")
    assert len(caught.value.faults) == 1


def test_an_address_that_is_gone_is_an_error():
    with pytest.raises(LookupError, match="no part 'k99'"):
        set_value_text(SINGLE, ("links", "k99", "stiffness"), "1 N/m")
    with pytest.raises(LookupError, match="no field 'colour'"):
        set_field(SINGLE, ("bodies", "motor", "colour"), "red", "Paint")
    with pytest.raises(LookupError, match="no value with a unit"):
        set_value_text(SINGLE, ("title",), "1 N/m")


def test_nothing_can_be_typed_at_a_whole_part():
    with pytest.raises(LookupError, match="nothing can be typed"):
        set_typed(SINGLE, ("links", "k1", "from"), "motor")


def test_functions_for_one_kind_agree_with_the_one_for_all():
    name, order = ("bodies", "motor", "name"), ("machines", "pump set", "excitations", "1x", "order")
    assert set_plain_text(SINGLE, name, "M") == set_typed(SINGLE, name, "M")
    assert set_number_text(SINGLE, order, "3") == set_typed(SINGLE, order, "3")


@pytest.mark.parametrize(
    ("text", "words"),
    [("1,200", "1,200 can be read as 1.200 or as 1200"), ("1.2.3", "decimal point"), ("3 x", 'like "7"')],
)
def test_a_number_is_refused_by_the_rules_of_values(text, words):
    with pytest.raises(UnitError, match=words):
        set_typed(SINGLE, ("machines", "pump set", "excitations", "1x", "order"), text)


def test_quantities_follow_the_motion():
    assert quantity_of(MODELS["shaft-train"], ("links", "c1", "damping")) == q.TORSIONAL_DAMPING
    assert quantity_of(SINGLE, ("links", "c1", "damping")) == q.DAMPING
    assert quantity_of(MODELS["space"], ("links", "m1", "stiffness", "rx")) == q.TORSIONAL_STIFFNESS
    assert quantity_of(MODELS["shaft-train"], ("links", "s1", "rated_load")) == q.TORQUE
    shake = ("machines", "train", "excitations", "shake", "magnitude", "motion")
    assert quantity_of(MODELS["shaft-train"], shake) == q.ANGLE
    assert quantity_of(SINGLE, ("title",)) is None


def typed_things(item):
    """Count the values and entries a model holds, wherever they stand, but for those inside tolerances."""
    if isinstance(item, Value | Entry):
        return 1
    if isinstance(item, tuple):
        return sum(typed_things(one) for one in item)
    slots = [name for kind in type(item).__mro__ for name in getattr(kind, "__slots__", ())]
    return sum(typed_things(getattr(item, name)) for name in slots if name not in ("tolerance", *NOT_COUNTED))


# Kept out of tables: the ends of links are drawn, tolerances have a column, ranges and shapes come later.
NOT_COUNTED = ("from_", "at", "default_tolerance", "barred_ranges", "shape", "limits", "load_cases")


@pytest.mark.parametrize("name", MODELS)
def test_a_table_shows_every_quantity_of_every_part(name):
    model = MODELS[name]
    shown = [field for field in every_field(model) if field.quantity is not None]
    ranges = [
        one for machine in model.machines for one in (machine.speed, machine.margin) if hasattr(one, "from_")
    ]
    gears = [link for link in model.links if getattr(link, "pitch_radius", None)]
    # from_ is left out above for the ends of links; where it is a quantity it is added here
    assert len(shown) == typed_things(model) + len(ranges) + len(gears)
    assert all(quantity_of(model, field.address) == field.quantity for field in shown)


@pytest.mark.parametrize("name", MODELS)
def test_typing_what_is_shown_changes_nothing(name):
    model = MODELS[name]
    for field in every_field(model):
        edit = set_typed(model, field.address, field.text)
        assert edit.apply(model) == model
        if field.tolerance_address:
            assert set_typed(model, field.tolerance_address, field.tolerance).apply(model) == model


def scaled(text, factor):
    number, space, unit = text.partition(" ")
    try:
        return f"{float(number) * factor:.6g}{space}{unit}"
    except ValueError:
        return f"{text}{factor:.3g}"


@settings(derandomize=True, max_examples=20, deadline=None)
@given(st.data())
def test_undo_all_then_redo_all_gives_equal_models(data):
    model = start = MODELS[data.draw(st.sampled_from(sorted(MODELS)))]
    done, states = [], [start]
    for _ in range(data.draw(st.integers(1, 8))):
        field = data.draw(st.sampled_from(every_field(model)))
        text = scaled(field.text, data.draw(st.sampled_from((0.5, 0.9, 1.0, 1.1, 3.0))))
        try:
            edit = set_typed(model, field.address, text)
        except InputError:
            continue
        model = edit.apply(model)
        done.append(edit)
        states.append(model)
    assert not faults(model)
    for edit, state in zip(reversed(done), states[-2::-1], strict=True):
        model = edit.revert(model)
        assert model == state
    assert model == start
    for edit in done:
        model = edit.apply(model)
    assert model == states[-1]


def test_every_motion_is_tried():
    assert {model.motion for model in MODELS.values()} == set(Motion)


@pytest.mark.parametrize("motion", [Motion.PLANE, Motion.SPACE])
def test_an_inertia_that_nobody_gave_goes_with_the_mass_and_back_by_undo(motion):
    model, body = add_body(
        Model(motion=motion), "body", (0.0,) * (3 if motion is Motion.SPACE else 2), (2.0, 0.7)
    )
    edit = set_typed(model, ("bodies", body, "mass"), "250 kg")
    after = edit.apply(model)

    def moments(one):
        inertia = one.bodies[0].inertia
        return [inertia] if motion is Motion.PLANE else [inertia.Ixx, inertia.Iyy, inertia.Izz]

    for new, old in zip(moments(after), moments(model), strict=True):
        assert new.si == pytest.approx(2.5 * old.si, rel=1e-3)
        assert new.source == STARTING
    assert after.bodies[0].mass.source is None
    assert edit.text == f"Set mass of {body} to 250 kg"
    assert edit.revert(after) == model


def test_an_inertia_that_somebody_gave_stays_when_the_mass_is_typed():
    model, body = add_body(Model(motion=Motion.PLANE), "body", (0.0, 0.0), (2.0, 0.7))
    model = set_typed(model, ("bodies", body, "inertia"), "40 kg m2").apply(model)
    edit = set_typed(model, ("bodies", body, "mass"), "250 kg")
    assert edit.address == ("bodies", body, "mass")
    assert edit.apply(model).bodies[0].inertia.text == "40 kg m2"
