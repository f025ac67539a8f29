"""Floating parts, and parts that hang on nothing."""

import pytest

G = {"id": "g", "position": ["0 m", "0 m"]}


def mass(part, y="1 m", **more):
    return {"id": part, "mass": "100 kg", "position": ["0 m", y], **more}


def spring(name, a, b, **more):
    ends = [{"support": end} if end == "g" else {"body": end} for end in (a, b)]
    return {"id": name, "kind": "spring", "stiffness": "1e6 N/m", "from": ends[0], "to": ends[1], **more}


def dashpot(name, a, b):
    given = spring(name, a, b)
    del given["stiffness"]
    return given | {"kind": "damper", "damping": "100 N s/m"}


def test_a_body_that_no_link_joins_floats_and_says_that_the_model_cannot_be_analysed(told):
    bodies = [mass("a"), mass("fan", name="exhaust fan")]
    [doubt] = told("floating part", "single axis", bodies=bodies, supports=[G], links=[spring("k", "a", "g")])
    assert doubt.parts == ("fan",)
    assert doubt.text == "Exhaust fan (body fan) floats: no link joins it to anything."
    assert "cannot be analysed" in doubt.effect


def test_bodies_joined_only_to_each_other_float_together(told):
    bodies = [mass("a"), mass("b"), mass("c", "2 m")]
    links = [spring("k1", "a", "g"), spring("k2", "b", "c")]
    [doubt] = told("floating part", "single axis", bodies=bodies, supports=[G], links=links)
    assert doubt.parts == ("b", "c")
    assert doubt.text == "B and c float: nothing joins them to ground."


def test_a_dashpot_alone_does_not_hold_and_is_told(told):
    [doubt] = told(
        "floating part", "single axis", bodies=[mass("a")], supports=[G], links=[dashpot("d", "a", "g")]
    )
    assert doubt.text == "Body a floats: only dashpots join it to ground."


def test_a_body_held_still_is_ground(told):
    bodies = [mass("a"), mass("wall", "0 m", dof=[])]
    assert not told("floating part", "single axis", bodies=bodies, links=[spring("k", "a", "wall")])


def test_what_springs_lead_to_ground_does_not_float(told):
    bodies, links = [mass("a"), mass("b", "2 m")], [spring("k1", "a", "g"), spring("k2", "b", "a")]
    assert not told("floating part", "single axis", bodies=bodies, supports=[G], links=links)


def test_a_shaft_train_turns_freely_and_only_a_second_one_beside_it_is_told(told):
    def rotor(name):
        return {"id": name, "inertia": "1 kg m2"}

    def shaft(name, a, b):
        ends = {"from": {"body": a}, "to": {"body": b}}
        return {"id": name, "kind": "shaft", "stiffness": "1e5 N m/rad", **ends}

    train = [rotor("a"), rotor("b"), rotor("c")]
    links = [shaft("s1", "a", "b"), shaft("s2", "b", "c")]
    assert not told("floating part", "shaft train", bodies=train, links=links)
    beside = [*train, rotor("d"), rotor("e")]
    [doubt] = told("floating part", "shaft train", bodies=beside, links=[*links, shaft("s3", "d", "e")])
    assert doubt.parts == ("d", "e")


@pytest.mark.parametrize("used", [False, True])
def test_a_support_without_a_link_is_told(told, used):
    supports = [G] if used else [G, {"id": "spare", "position": ["1 m", "0 m"]}]
    found = told(
        "lone support", "single axis", bodies=[mass("a")], supports=supports, links=[spring("k", "a", "g")]
    )
    assert [one.parts for one in found] == ([] if used else [("spare",)])


def test_a_junction_without_a_link_is_told_once(told):
    bodies = [mass("a"), {"id": "j", "mass": "0 kg", "position": ["0 m", "0.5 m"]}]
    given = {"bodies": bodies, "supports": [G], "links": [spring("k", "a", "g")]}
    [doubt] = told("lone junction", "single axis", **given)
    assert doubt.parts == ("j",)
    assert not told("floating part", "single axis", **given)


def test_a_spring_to_a_junction_that_nothing_else_holds_does_nothing(told):
    bodies = [mass("a"), {"id": "j", "mass": "0 kg", "position": ["0 m", "0.5 m"]}]
    links = [spring("k", "a", "g"), spring("loose", "a", "j")]
    [doubt] = told("loose end", "single axis", bodies=bodies, supports=[G], links=links)
    assert doubt.parts == ("loose", "j")
    through = [links[0], links[1], spring("on", "j", "g")]
    assert not told("loose end", "single axis", bodies=bodies, supports=[G], links=through)


def test_a_junction_at_which_a_force_acts_is_no_loose_end(told):
    bodies = [mass("a"), {"id": "j", "mass": "0 kg", "position": ["0 m", "0.5 m"]}]
    machine = {
        "id": "m",
        "speed": "1000 rpm",
        "margin": "10 %",
        "excitations": [{"id": "1x", "order": 1, "at": {"body": "j"}, "direction": "y"}],
    }
    links = [spring("k", "a", "g"), spring("arm", "a", "j")]
    assert not told("loose end", "single axis", bodies=bodies, supports=[G], links=links, machines=[machine])
