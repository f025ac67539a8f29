"""The page of changes as data: what stands in its lines, in which units, and what is left to notes."""

import pytest

from modalview.drawing.changescontent import changes_content, clear_by
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study import Request, look
from modalview.study.changes import ChangesRequest, changes
from modalview.study.present import present
from modalview.study.remedies import RemediesRequest, remedies

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
CLEAR = PUMP.with_name("part-grout-and-anchors.keepclear")
GENERATOR = demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear"
SPRINGS = demo_models() / "2-supply-fan" / "steel-springs.keepclear"
RETROFIT = demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear"


def content_of(path):
    request = Request(read_model(path))
    outlook = look(request)
    found = changes(ChangesRequest(request, values=(_first(outlook),)))
    others = remedies(RemediesRequest(request, geometry=False))
    margin = clear_by(present(request)) if found.clear_now else ""
    return changes_content(outlook, found, others, outlook.assembly.parameters, margin)


def _first(outlook):
    return next(one.id for one in outlook.assembly.parameters[::-1] if one.family == "stiffness")


@pytest.fixture(scope="module")
def pump():
    return content_of(PUMP)


def test_options_say_what_from_to_and_every_order(pump):
    first = dict(zip(pump.headings, pump.options[0].cells, strict=True))
    assert first["what"] == "stiffness of base support"
    assert first["from → to"].startswith("175 kN/mm → 30")
    assert first["1× unbalance"].startswith("clear +15")
    assert first["room left"] == "0.0 %"
    assert " um → " in first["most that a body settles under the weight at rest"]
    assert pump.options[0].value == "k3.stiffness"


def test_axis_is_in_the_unit_of_the_value_and_has_its_tolerance(pump):
    (axis,) = pump.values
    assert (axis.unit, axis.per) == ("kN/mm", 1e6)
    assert axis.tolerance == pytest.approx((1.3125e8, 2.1875e8))
    assert axis.ceilings == ("mode 1 (now 51.26 Hz) below 127.8 Hz",)


def test_clear_model_says_by_how_much():
    content = content_of(CLEAR)
    assert content.options == ()
    assert content.sentence.startswith("Every check is clear over all tolerances. Least room:")
    assert "at 7× vane pass, where mode 3 stays −18.9 % away" in content.sentence


def test_absorber_and_barred_speeds_are_lines_too():
    (absorber,) = [one for one in content_of(RETROFIT).options if "absorber" in one.text]
    assert absorber.cells[1] == "210 kg, 3.21 kN/mm"
    (speeds,) = [one for one in content_of(SPRINGS).options if not one.clears]
    assert speeds.cells[0] == "barred speeds of supply fan SF-2"
    assert speeds.cells[1] == "bar 676 to 1376 rpm; left 600 to 676, 1376 to 1800 rpm"
    assert speeds.edit is not None


def test_several_by_one_factor_are_named_as_one():
    request = Request(read_model(GENERATOR))
    outlook = look(request)
    found = changes(ChangesRequest(request, values=("set.mass+set.inertia",)))
    others = remedies(RemediesRequest(request, geometry=False))
    content = changes_content(outlook, found, others, outlook.assembly.parameters)
    (axis,) = content.values
    assert axis.today == "not clear as it is"
    first = content.options[0]
    assert first.cells[0] == "mass and inertia of engine and alternator"
    assert first.cells[1].startswith("as it is → × 1.7")
    assert first.value == axis.value
