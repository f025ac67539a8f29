"""Size and frequency of excitations; refusals name what is missing."""

import json
import math

import numpy as np
import pytest

from modalview.errors import ModelFaultsError
from modalview.model.parts import End, Excitation, Machine, Magnitude, Motion, SpeedRange
from modalview.model.values import Entry
from modalview.response.strength import running_speeds, strength
from modalview.store import parse_model
from modalview.units import quantities as q

RPM = math.pi / 30


def model(motion="single axis", links=(), bodies=({"id": "a", "mass": "1 kg"},)):
    given = [
        *links,
        {"id": "k", "kind": "spring", "from": {"body": "a"}, "to": {"support": "g"}, "stiffness": "1 N/m"},
    ]
    return parse_model(
        json.dumps(
            {
                "format": "keepclear",
                "version": 1,
                "title": "t",
                "motion": motion,
                "bodies": list(bodies),
                "supports": [{"id": "g"}],
                "links": given if motion == "single axis" else list(links),
            }
        )
    )


def entry(text, quantity):
    return Entry.typed(text, quantity)


def excitation(magnitude=None, **more):
    given = {"id": "1x", "order": 1.0, "at": End(body="a"), "magnitude": magnitude}
    return Excitation(**{**given, **more})


def machine(speed="3000 rpm", **more):
    return Machine(id="m", speed=entry(speed, q.SPEED) if speed else None, **more)


GRADE = Magnitude(grade=entry("G 6.3", q.BALANCE_GRADE), rotor_mass=entry("50 kg", q.MASS))


def test_a_grade_is_an_unbalance_at_the_top_speed():
    """ISO 21940-11: G 6.3 at 3000 rpm and 50 kg are 1002.7 g mm (check bank, I06)."""
    found = strength(model(), machine(), excitation(GRADE))
    assert found.kind == "unbalance"
    assert 1e6 * found.size == pytest.approx(1002.676141479, rel=1e-9)
    ranged = Machine(id="m", speed=SpeedRange(from_=entry("600 rpm", q.SPEED), to=entry("3000 rpm", q.SPEED)))
    assert strength(model(), ranged, excitation(GRADE)).size == found.size
    assert "service speed 3000 rpm" in found.sentence


def test_a_typed_service_speed_goes_before_the_machines():
    given = Magnitude(
        grade=GRADE.grade, rotor_mass=GRADE.rotor_mass, service_speed=entry("1500 rpm", q.SPEED)
    )
    assert 1e6 * strength(model(), machine(), excitation(given)).size == pytest.approx(2 * 1002.676141479)


def test_an_unbalance_grows_with_the_square_of_its_own_frequency():
    given = Magnitude(unbalance=entry("850 g mm", q.UNBALANCE))
    found = strength(model(), machine(), excitation(given, order=2.0))
    omega = found.omega(np.array([10.0, 20.0]))
    assert omega.tolist() == [20.0, 40.0]
    assert found.amplitude(omega) == pytest.approx(850e-6 * np.array([400.0, 1600.0]))


def test_a_fixed_frequency_does_not_vary_with_the_speed():
    given = Magnitude(force=entry("90 N", q.FORCE))
    found = strength(
        model(), machine(None), excitation(given, order=None, frequency=entry("100 Hz", q.FREQUENCY))
    )
    assert found.omega(np.array([1.0, 500.0])).tolist() == [found.fixed] * 2
    assert found.fixed == pytest.approx(200 * math.pi)
    assert found.amplitude(found.omega(np.array([1.0, 500.0]))).tolist() == [90.0, 90.0]


TRAIN = {
    "motion": "shaft train",
    "bodies": [{"id": name, "inertia": "1 kg m2"} for name in ("a", "b", "c")],
    "links": [{"id": "z", "kind": "gear", "from": {"body": "a"}, "to": {"body": "b"}, "teeth": [84, 20]}],
}


def test_an_order_of_a_geared_body_turns_as_fast_as_that_body():
    train = model(
        **{
            **TRAIN,
            "links": [
                *TRAIN["links"],
                {
                    "id": "s",
                    "kind": "shaft",
                    "from": {"body": "c"},
                    "to": {"support": "g"},
                    "stiffness": "1 N m/rad",
                },
            ],
        }
    )
    given = excitation(Magnitude(torque=entry("25 N m", q.TORQUE)), order=3.0, of="b")
    found = strength(train, machine(on="a"), given)
    assert found.ratio == pytest.approx(3 * 4.2, rel=1e-15)
    with pytest.raises(ModelFaultsError, match="c is joined to a by no shaft or gear"):
        strength(train, machine(on="a"), excitation(Magnitude(torque=entry("1 N m", q.TORQUE)), of="c"))


FORCE = Magnitude(force=entry("1 N", q.FORCE))
MOTION = Magnitude(motion=entry("1 mm", q.LENGTH))
TORQUE = Magnitude(torque=entry("1 N m", q.TORQUE))


@pytest.mark.parametrize(
    ("owner", "given", "reason"),
    [
        (machine(), excitation(None), "its size is not given"),
        (machine(), excitation(Magnitude()), "its size is empty"),
        (machine(), excitation(FORCE, at=None), "its point is not given"),
        (machine(), excitation(Magnitude(grade=GRADE.grade)), "needs the mass of the rotor"),
        (machine(None), excitation(GRADE), "needs a service speed"),
        (machine(None), excitation(FORCE), "an order needs the speed of its machine"),
        (machine(), excitation(FORCE, order=None), "neither an order of the speed nor a fixed frequency"),
        (machine(), excitation(MOTION), "a motion is imposed at a support"),
        (machine(), excitation(FORCE, at=End(support="g")), "a force at a support moves nothing"),
        (machine(), excitation(TORQUE), "no meaning in single axis"),
    ],
)
def test_what_is_missing_is_named(owner, given, reason):
    with pytest.raises(ModelFaultsError, match=f"m/1x: .*{reason}"):
        strength(model(), owner, given)


def test_a_shaft_train_only_turns():
    train = model(**TRAIN)
    with pytest.raises(ModelFaultsError, match="a force has no meaning in a shaft train"):
        strength(train, machine(), excitation(FORCE))
    with pytest.raises(ModelFaultsError, match="a motion of a support in m has no meaning"):
        strength(train, machine(), excitation(MOTION, at=End(support="g")))


def test_running_speeds():
    assert running_speeds(machine()) == pytest.approx((3000 * RPM,) * 2)
    assert running_speeds(machine(None)) is None
    assert Motion.SINGLE_AXIS in Motion
