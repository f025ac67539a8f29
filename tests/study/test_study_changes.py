"""The door to changes: what it takes, tells, refuses and hands back."""

import json
from dataclasses import replace

import pytest

from modalview.advice.changes.results import Found, Kind
from modalview.errors import CancelledError, InputError
from modalview.resonance.results import Verdict
from modalview.store import dump_model, parse_model
from modalview.study import Request, look, solve
from modalview.study.changes import ChangesRequest, Place, changes


def mounted(**more):
    """A fan on four springs in space, at 9 Hz upward, run at 560 rpm (9.33 Hz)."""
    corners = {"a": (-1, -0.5), "b": (-1, 0.5), "c": (1, -0.5), "d": (1, 0.5)}
    links = [
        {
            "id": name,
            "kind": "mount",
            "from": {"body": "fan", "offset": [f"{x} m", f"{y} m", "-0.4 m"]},
            "to": {"support": "g"},
            "stiffness": {"x": "3e5 N/m", "y": "3e5 N/m", "z": {"value": "4e5 N/m", "tolerance": "5 %"}},
        }
        for name, (x, y) in corners.items()
    ]
    tensor = {"Ixx": "60 kg m2", "Iyy": "110 kg m2", "Izz": "120 kg m2", "Pxy": "5 kg m2"}
    body = {"id": "fan", "mass": "500 kg", "inertia": tensor, "position": ["0 m", "0 m", "1 m"]}
    machine = {
        "id": "drive",
        "speed": "560 rpm",
        "margin": "10 %",
        "excitations": [{"id": "1x", "order": 1}],
    }
    tree = {
        "format": "keepclear",
        "version": 1,
        "title": "fan",
        "motion": "space",
        "bodies": [body],
        "supports": [{"id": "g", "position": ["0 m", "0 m", "0 m"]}],
        "links": links,
        "machines": [machine],
        **more,
    }
    return parse_model(json.dumps(tree))


ALIKE = "a.stiffness+b.stiffness+c.stiffness+d.stiffness"


def asked(model=None, **wishes):
    return ChangesRequest(Request(model or mounted()), **wishes)


def test_alike_mounts_and_a_whole_tensor_change_by_one_factor():
    model = mounted()
    found = changes(asked(model, values=(ALIKE, "fan.inertia"), tolerances=False))
    assert [one.value for one in found.windows] == [ALIKE, "fan.inertia"]
    option = next(one for one in found.options if one.changes[0].value == "a.stiffness.x")
    assert len(option.changes) == 12
    assert "whole stiffness of 4 links alike (a to d)" in option.text
    after = solve(Request(option.edit.apply(model)))
    assert after.outlook.verdict is Verdict.CLEAR
    turned = next((one for one in found.options if one.changes[0].value == "fan.inertia"), None)
    if turned is not None:
        tensor = turned.edit.apply(model).bodies[0].inertia
        assert tensor.Pxy.si / 5 == pytest.approx(tensor.Ixx.si / 60, rel=1e-9)


def test_what_a_change_costs_elsewhere_is_told():
    found = changes(asked(values=(ALIKE, "fan.mass"), tolerances=False))
    costs = {one.what for option in found.options for one in option.costs}
    assert costs == {"mass of the whole model", "most that a body settles under the weight at rest"}
    heavier = next(
        one for one in found.options if one.changes[0].value == "fan.mass" and one.changes[0].factor > 1
    )
    assert "Added mass loads floors and supports: have them checked." in heavier.cautions


def test_every_load_case_is_cleared_together():
    loaded = [
        {"id": "wet", "name": "wet wheel", "changes": [{"part": "fan", "key": "mass", "value": "620 kg"}]}
    ]
    model = mounted(load_cases=loaded)
    found = changes(asked(model, values=(ALIKE,), tolerances=False))
    assert found.notes[0] == "Every option clears the model as it is and its load cases together: wet wheel."
    for option in found.options:
        assert {one.case for one in option.effects} == {"", "wet wheel"}
        assert option.clears
        plain = option.edit.apply(model)
        tree = json.loads(dump_model(plain))
        tree["bodies"][0]["mass"] = "620 kg"
        heavy = parse_model(json.dumps(tree))
        assert look(Request(plain)).verdict is look(Request(heavy)).verdict is Verdict.CLEAR


def test_a_weight_makes_another_change_the_least():
    both = asked(together=("fan.mass", "a.stiffness.z"), values=("fan.mass",), tolerances=False)
    plain = changes(both).least[0]
    dear = changes(replace(both, weights=(("fan.mass", 50.0),))).least[0]
    assert plain.status is dear.status is Found.FOUND
    assert plain.factors[0] != 1.0
    assert dear.factors[0] == 1.0
    assert plain.least < dear.least


def test_places_and_options_come_back_together():
    found = changes(asked(values=("fan.mass",), places=(Place(1, 3.0, ALIKE),), tolerances=False))
    assert found.options[-1].kind is Kind.PLACED
    after = solve(Request(found.options[-1].edit.apply(mounted())))
    assert after.modes[0].frequency_hz == pytest.approx(3.0, rel=1e-4)


def test_without_checks_there_is_nothing_to_clear():
    found = changes(asked(mounted(machines=[]), values=("fan.mass",)))
    assert found.sentence.startswith("Nothing to clear")
    assert [one.text for one in found.windows[0].windows] == ["any value"]
    assert found.options == ()


@pytest.mark.parametrize(
    ("wishes", "message"),
    [
        ({"values": ("fan.colour",)}, 'no value "fan.colour"'),
        ({"weights": (("fan.mass", 0.0),)}, "weight of fan.mass is 0"),
        ({"weights": (("mass", 2.0),)}, 'no value "mass"'),
        ({"values": ("fan.mass",), "places": (Place(9, 3.0, ALIKE),)}, "modes 1 to 6"),
    ],
)
def test_wishes_that_cannot_be_met_are_refused(wishes, message):
    with pytest.raises(InputError, match=message):
        changes(asked(tolerances=False, **wishes))


def test_a_search_is_stopped_between_steps_and_tells_its_progress():
    told = []

    def stop_at_the_third():
        return len(told) > 2

    request = Request(mounted(), cancelled=stop_at_the_third, progress=lambda *step: told.append(step))
    with pytest.raises(CancelledError):
        changes(ChangesRequest(request))
    assert told
    shares = [share for _, share in told]
    assert shares == sorted(shares)
    assert told[0][0].startswith("windows of ")
