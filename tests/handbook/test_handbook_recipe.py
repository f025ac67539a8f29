"""How an entry of the handbook reads sizes, what it refuses, what it tells, and that it can be made again."""

import inspect
import json
import math
import re
from itertools import product

import pytest

from modalview.errors import RecipeFaultsError
from modalview.handbook.catalogue import GROUPS, RECIPES, recipe
from modalview.handbook.handed import file_entry
from modalview.model.tolerance_text import typed_tolerance
from modalview.store import dump_model, parse_model
from modalview.units import quantities as q
from modalview.units.parse import read

COIL = {"wire": "20 mm", "mean": "200 mm", "turns": "5", "shear": "80 GPa"}
ODD = (
    "nan",
    "inf",
    "1e400",
    "1 m",
    "1e-29 m",
    "1e29 m",
    "1e29",
    "1;2",
    "; ;",
    "é",
    "1e29 Pa",
    "1e28 rpm",
    "89.9999 deg",
)
STATUSES = {
    "formula seen in the source",
    "from memory",
    "common practice",
    "definition",
    "closed form",
    "check against the current edition",
    "from memory, check against the current edition",
    "formula seen second-hand, check against the current edition",
}


def examples(entry):
    return {one.name: one.example for one in entry.inputs}


def faults(name, texts):
    with pytest.raises(RecipeFaultsError) as raised:
        recipe(name).evaluate(texts)
    return [str(one) for one in raised.value.faults]


@pytest.mark.parametrize("entry", RECIPES.values(), ids=RECIPES)
class TestEveryEntry:
    def test_is_whole(self, entry):
        assert re.fullmatch(r"[a-z0-9]+(-[a-z0-9]+)*", entry.id)
        assert entry.sentence.endswith(".")
        assert entry.title
        assert entry.validity
        assert entry.formula
        assert entry.source.citation
        assert entry.source.status in STATUSES
        assert (entry.written == "order") <= (entry.result == q.RATIO)

    def test_asks_for_what_its_function_takes(self, entry):
        asked = {one.name for one in entry.inputs if not one.only_checked}
        assert set(inspect.signature(entry.compute).parameters) == asked
        assert len({one.option for one in entry.inputs}) == len(entry.inputs)

    def test_makes_a_value_of_its_examples_that_reads_back(self, entry):
        made = entry.evaluate(examples(entry))
        assert read(made.text, entry.result) == pytest.approx(made.si, rel=1e-5)
        assert math.isfinite(made.si)
        assert typed_tolerance(made.tolerance, entry.result) is not None or not made.tolerance

    def test_can_be_made_again_from_what_it_keeps(self, entry):
        made = entry.evaluate(examples(entry))
        assert recipe(made.by).evaluate(dict(made.given)).si == made.si

    def test_letters_of_the_formula_are_explained(self, entry):
        constants = {
            "k",
            "m",
            "f",
            "J",
            "I",
            "e",
            "U",
            "g",
            "E0",
            "G",
            "order",
            "n",
            "fs",
            "fp",
            "f2",
            "swing",
        }
        parts = [one.label for one in entry.inputs]
        known = " ".join(
            [*parts, entry.formula.partition(",")[2], entry.formula.partition(";")[2], entry.validity]
        )
        letters = set(re.findall(r"\b(?:[A-Z][0-9]?|[a-z][0-9]?|rho|nu|ms|Dp)\b", entry.formula)) - constants
        assert [one for one in letters if not re.search(rf"\b{one}\b", known)] == []

    def test_refuses_to_be_given_nothing_where_it_needs_something(self, entry):
        needed = [one for one in entry.inputs if not one.default and not one.only_checked]
        if needed:
            told = faults(entry.id, {})
            assert len(told) == len(needed)
            assert all("is missing" in one for one in told)
        else:
            assert entry.evaluate({}).si > 0

    def test_refuses_what_is_below_zero(self, entry):
        for one in entry.inputs:
            if one.quantity is not None:
                unit = re.sub(r"^G .*", " mm/s", re.sub(r"^[0-9.e]+", "", one.example.partition(";")[0]))
                told = faults(entry.id, {**examples(entry), one.name: f"-3{unit}"})
                assert "out of range" in told[0], told

    def test_odd_texts_end_as_a_value_or_as_faults(self, entry):
        for one, text in product(entry.inputs, ODD):
            try:
                made = entry.evaluate({**examples(entry), one.name: text})
            except RecipeFaultsError as error:
                assert error.faults  # noqa: PT017  (either end is right, a third is not)
            else:
                assert math.isfinite(made.si)


def test_every_entry_stands_in_one_group():
    assert sum(map(len, GROUPS.values())) == len(RECIPES)
    assert len({one.title for one in RECIPES.values()}) == len(RECIPES)


def test_all_faults_at_once_with_label_and_example():
    told = faults("coil-spring", {"wire": "20 kg", "mean": "", "turns": "0", "colour": "red"})
    assert len(told) == 5
    assert "colour: coil spring does not ask for it, but for wire, mean, turns, shear" in told[0]
    assert 'wire: wire diameter d: "20 kg" cannot be read as length: kg is a unit of mass' in told[1]
    assert 'mean: mean coil diameter D: it is missing; write it like "200 mm"' in told[2]
    assert 'turns: active turns n: "0" is out of range; it must be above zero' in told[3]
    assert "shear" in told[4]


@pytest.mark.parametrize(
    ("name", "texts", "says"),
    [
        ("coil-spring", {"wire": "0.3 m"}, "the wire must be thinner than the coil is wide"),
        ("shaft-hollow", {"inner": "400 mm"}, "the hole must be smaller than the shaft"),
        ("shaft-stepped", {"length": "2 m"}, "must hold as many values as each other; found 2 and 2 and 1"),
        ("shaft-stepped", {"inner": "300 mm; 0 mm"}, "every hole must be smaller than its shaft"),
        ("beam-pinned-at", {"place": "2 m"}, "the load must act between the ends"),
        ("order-vanes", {"count": "7.5"}, "is no whole number"),
        ("order-firing", {"strokes": "3"}, "4 or 2 strokes"),
        ("synchronous-speed", {"poles": "3"}, "an even number of poles"),
        ("rubber-round", {"hardness": "80"}, "must be at least 30 and at most 75"),
        ("footing-circle-vertical", {"poisson": "0.6"}, "must be at least zero and at most 0.5"),
        ("balance-grade", {"machine": "pump"}, '"pump" is none of: pumps, fans'),
        ("rod", {"young": "1e-40 Pa"}, "is of no machine's size"),
        ("bar", {"area": "1e25 m2", "young": "1e25 Pa"}, "no stiffness of a machine's size"),
        ("added-mass-in-bore", {"bore": "200 mm"}, "thinner than the bore"),
        ("second-moment-i-section", {"flange": "150 mm"}, "thinner than the depth"),
        ("order-belt", {"length": "0.7 m"}, "longer than round its pulley"),
        ("inclined-springs-along", {"angle": "95 deg"}, "at most 90 deg"),
    ],
)
def test_what_cannot_be_is_refused(name, texts, says):
    (told,) = faults(name, {**examples(recipe(name)), **texts})
    assert says in told


@pytest.mark.parametrize(
    ("name", "texts", "says"),
    [
        ("coil-spring", {"mean": "70 mm"}, "coil index D/d is 3.5; the formula is good from 4 to 20"),
        ("coil-spring", {"turns": "1.5"}, "the number of active turns is 1.5"),
        ("cantilever-tip", {"depth": ""}, "without the depth h it was not checked"),
        ("cantilever-tip", {"depth": "0.5 m"}, "L/h is 4, below 10: shear makes the beam softer"),
        ("rod", {"length": "30 mm"}, "L/d is 1.5"),
        ("rubber-round", {"thickness": "5 mm"}, "shape factor S is 5; the formula is good from 0.25 to 3"),
        ("rubber-dynamic-ratio", {"hardness": "32"}, "hardness is 32"),
        (
            "footing-rectangle-vertical",
            {"length": "15 m"},
            "the side ratio is 5; the formula is good up to 4",
        ),
        ("plate-strip-cantilever", {"width": "400 mm"}, "b/L is 1.33"),
        ("own-mass-spring", {"body": "50 kg"}, "the spring is heavier than the body"),
        ("own-mass-spring", {"body": ""}, "without the body's mass it was not checked"),
        ("slip-frequency", {"speed": "1510 rpm"}, "above the field's: a generator"),
        ("slip-frequency", {"speed": "1200 rpm"}, "the slip is 20 %"),
        ("bearing-outer", {"ball": "0.5 mm"}, "d/Dp is 0.01"),
        ("damping-ratio", {"structure": "coil spring"}, "found from 0.1 % to 1 %"),
        ("bearing-cage", {"angle": ""}, "contact angle a not given, taken as 0 deg"),
        ("static-deflection", {"mass": "3*300 kg", "deflection": "1.5 in"}, ""),
        ("springs-in-series", {"stiffness": "100 lb/in; 200 lbf/in"}, "lb/in read as lbf/in"),
    ],
)
def test_what_leaves_the_range_is_told_and_made(name, texts, says):
    entry = recipe(name)
    made = entry.evaluate({**examples(entry), **texts})
    assert made.si > 0
    assert any(says in note for note in made.notes) or not says
    doubts = [note for note in made.notes if "read as" not in note and "taken as" not in note]
    assert all(note in made.source for note in doubts if note not in entry.remarks)


@pytest.mark.parametrize(
    ("name", "texts"),
    [("coil-spring", {}), ("cantilever-tip", {}), ("own-mass-spring", {}), ("slip-frequency", {})],
)
def test_inside_the_range_nothing_is_told(name, texts):
    assert recipe(name).evaluate({**examples(recipe(name)), **texts}).notes == ()


def test_a_word_is_taken_in_any_case_and_kept_as_it_is_listed():
    made = recipe("balance-grade").evaluate({"machine": "Gas and Steam Turbines"})
    assert (made.text, made.given) == ("G 2.5", (("machine", "gas and steam turbines"),))


def test_units_do_not_change_a_value():
    inches = {"wire": "0.7874015748031497 in", "mean": "20 cm", "turns": "5", "shear": "80000 N/mm2"}
    assert recipe("coil-spring").evaluate(inches).si == pytest.approx(40000, rel=1e-14)


def test_the_window_takes_a_decimal_comma_and_keeps_a_point():
    entry = recipe("springs-in-parallel")
    made = entry.evaluate({"stiffness": "4,5 kN/mm; 5 kN/mm"}, window=True)
    assert made.text == "9.5 kN/mm"
    assert made.given == (("stiffness", "4.5 kN/mm; 5 kN/mm"),)
    assert entry.evaluate(dict(made.given)).si == made.si
    with pytest.raises(RecipeFaultsError, match="comma"):
        entry.evaluate({"stiffness": "4,5 kN/mm"})


@pytest.mark.parametrize(
    ("name", "says"),
    [("coil", "is coil-spring meant"), ("beam", "beam-"), ("xyz", "the handbook has no entry 'xyz'$")],
)
def test_an_entry_that_is_none(name, says):
    with pytest.raises(RecipeFaultsError, match=says):
        recipe(name)


def test_a_value_in_a_file_can_be_opened_and_made_again():
    made = recipe("coil-spring").evaluate(COIL)
    tree = {
        "format": "keepclear",
        "version": 1,
        "motion": "single axis",
        "bodies": [{"id": "m", "mass": "10 kg"}],
        "supports": [{"id": "ground"}],
        "links": [
            {
                "id": "k",
                "kind": "spring",
                "from": {"body": "m"},
                "to": {"support": "ground"},
                "stiffness": file_entry(made),
            }
        ],
    }
    model = parse_model(dump_model(parse_model(json.dumps(tree))))
    value = model.links[0].stiffness
    assert value.by == "coil-spring"
    assert recipe(value.by).evaluate(dict(value.given)) == made
    assert value.si == pytest.approx(made.si, rel=1e-5)
    assert value.tolerance.limits(value.si) == pytest.approx((36000, 44000))


@pytest.mark.parametrize(
    ("name", "texts", "held"),
    [
        ("order-vanes", {"count": "7"}, 7),
        ("order-gas", {"strokes": "4"}, 0.5),
        ("bearing-outer", {}, 3.2),
    ],
)
def test_an_order_stands_in_a_file_as_a_bare_number(name, texts, held):
    entry = recipe(name)
    assert file_entry(entry.evaluate({**examples(entry), **texts})) == held
