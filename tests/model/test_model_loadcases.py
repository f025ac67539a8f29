"""A model in a load case has the values of the case, with tolerances that moved along."""

import json

import pytest

from modalview.model.loadcases import in_load_case, with_number
from modalview.model.values import Entry, Tolerance, Value
from modalview.store import parse_model
from modalview.units.quantities import STIFFNESS


def drum(changes):
    return parse_model(
        json.dumps(
            {
                "format": "keepclear",
                "version": 1,
                "title": "t",
                "motion": "single axis",
                "bodies": [{"id": "m", "mass": {"value": "100 kg", "tolerance": "5 %"}}],
                "supports": [{"id": "g"}],
                "links": [
                    {
                        "id": "k",
                        "kind": "spring",
                        "from": {"body": "m"},
                        "to": {"support": "g"},
                        "stiffness": {
                            "value": "4 kN/mm",
                            "tolerance": {"from": "3 kN/mm", "to": "5 kN/mm"},
                        },
                    }
                ],
                "load_cases": [{"id": "full", "changes": changes}],
            }
        )
    )


def test_values_of_the_case_stand_in_the_model():
    model = drum([{"part": "m", "key": "mass", "value": "0.15 t"}])
    there = in_load_case(model, model.load_cases[0])
    assert (there.bodies[0].mass.si, there.bodies[0].mass.tolerance) == (
        150.0,
        model.bodies[0].mass.tolerance,
    )
    assert there.links is model.links


def test_limits_keep_their_shares_of_the_value():
    model = drum([{"part": "k", "key": "stiffness", "value": "8 kN/mm"}])
    value = in_load_case(model, model.load_cases[0]).links[0].stiffness
    assert value.tolerance.limits(value.si) == pytest.approx((6e6, 10e6))
    assert (value.tolerance.low.text, value.tolerance.high.text) == ("6 kN/mm", "10 kN/mm")


def test_limits_without_a_plain_number_keep_their_meaning():
    low, high = (Entry.typed(text, STIFFNESS) for text in ("35 mm under 900 kg", "25 mm under 900 kg"))
    value = Value(Entry.typed("30 mm under 900 kg", STIFFNESS), Tolerance(low=low, high=high))
    moved = with_number(value, Entry("600000 N/m", 6e5)).tolerance
    assert moved.low.si / 6e5 == pytest.approx(low.si / value.si)
