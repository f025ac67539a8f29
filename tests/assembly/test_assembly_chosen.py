"""Values chosen by name: every typed value has one, ranges are read with their units."""

import pytest

from modalview.assembly.assemble import assemble
from modalview.assembly.chosen import GEOMETRY, chosen, coordinates_of, typed_like, values_of, with_numbers
from modalview.errors import InputError, UnitError
from modalview.model.addresses import look
from modalview.model.values import Entry
from modalview.places import demo_models
from modalview.store import read_model
from modalview.units import quantities as q

DEMOS = sorted(demo_models().glob("*/*.keepclear"))
PUMP = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
SET = read_model(demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear")


def known(model):
    return (*values_of(model, assemble(model).parameters), *coordinates_of(model))


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_names_are_unique_and_lead_to_what_was_typed(path):
    model = read_model(path)
    found = known(model)
    assert len({one.name for one in found}) == len(found)
    for one in found:
        there = look(model, one.address)
        assert getattr(there, "entry", there) == one.entry
        assert chosen(found, one.name) is one


def test_part_with_one_value_needs_its_id_alone():
    assert chosen(known(PUMP), "k3").name == "k3.stiffness"


def test_part_with_several_values_is_told():
    with pytest.raises(InputError, match=r'"m1" has several values: say which, m1.stiffness.x'):
        chosen(known(SET), "m1")


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("k3=50 kN/mm to 500 kN/mm", 5e7, 5e8),
        ("k3.stiffness = 50 to 500 kN/mm", 5e7, 5e8),
        ("k3=35 mm under 900 kg to 5 kN/mm", 900 * 9.80665 / 0.035, 5e6),
    ],
)
def test_ranges(text, low, high):
    found = chosen(known(PUMP), text)
    assert (found.low, found.high) == pytest.approx((low, high))
    assert found.given


def test_ranges_that_cannot_be():
    for text, told in (("k3=5 kN/mm", "is no range"), ("k3=9 to 5 kN/mm", "must rise")):
        with pytest.raises(InputError, match=told):
            chosen(known(PUMP), text)
    with pytest.raises(UnitError, match="stiffness"):
        chosen(known(PUMP), "k3=5 to 9 kg")


def test_coordinates_are_chosen_by_end_and_axis():
    found = chosen(known(SET), "m1.from.offset.z=-0.6 m to -0.1 m")
    assert (found.family, found.low, found.high) == (GEOMETRY, -0.6, -0.1)
    assert chosen(known(SET), "set.position.x").quantity is q.LENGTH


def test_numbers_put_in_reach_the_parameters():
    one = chosen(known(PUMP), "k3")
    after = with_numbers(PUMP, [(one, 3e8)])
    values = {p.id: p.nominal for p in assemble(after).parameters}
    assert values["k3.stiffness"] == 3e8
    assert values["k1.stiffness"] == 4e8
    assert PUMP.links[-1].stiffness.si == 1.75e8


@pytest.mark.parametrize(
    ("typed", "quantity", "si", "text"),
    [
        ("175 kN/mm", q.STIFFNESS, 1.2345678e8, "123.46 kN/mm"),
        ("6.0e8 N m/rad", q.TORSIONAL_STIFFNESS, 1.174e8, "1.174e8 N m/rad"),
        ("35 mm under 900 kg", q.STIFFNESS, 2.5e5, "250 N/mm"),
        ("1092 lb ft2", q.INERTIA, 46.0, "1091.6 lb ft2"),
    ],
)
def test_numbers_are_typed_in_the_unit_of_before(typed, quantity, si, text):
    assert typed_like(si, Entry.typed(typed, quantity), quantity, 5).text == text
