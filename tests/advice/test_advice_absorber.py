"""A tuned absorber as parts: its tuning, where it goes, what is refused."""

import math
from dataclasses import replace

import pytest

from modalview.advice.absorber import Absorber, absorber_edit, own_mass, tuning
from modalview.errors import InputError
from modalview.model.parts import Damper, Shaft, Spring
from modalview.places import demo_models
from modalview.store import read_model

PUMP = demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear"
FAN = demo_models() / "2-supply-fan" / "steel-legs.keepclear"
TRAIN = demo_models() / "3-air-compressor-train" / "as-built.keepclear"


def test_undamped_is_tuned_to_the_excitation():
    tuned = tuning(0.05, 2100.0, 1180 / 60, damped=False)
    assert tuned.mass == 105.0
    assert math.sqrt(tuned.stiffness / tuned.mass) / (2 * math.pi) == pytest.approx(1180 / 60, rel=1e-12)
    assert (tuned.damping, tuned.largest_response) == (0.0, None)


@pytest.mark.parametrize("ratio", [0.05, 0.1, 0.25])
def test_damped_keeps_the_response_at_its_two_fixed_points(ratio):
    """The largest amplification of mass 1 on stiffness 1 is hardly above that of the fixed points."""
    tuned = tuning(ratio, 1.0, 1 / (2 * math.pi), damped=True)
    highest = 0.0
    for step in range(500, 1500):
        s = 1j * step / 1000
        arm = tuned.stiffness + s * tuned.damping
        base = 1.0 + s**2 + arm - arm**2 / (arm + tuned.mass * s**2)
        highest = max(highest, abs(1 / base))
    assert highest == pytest.approx(tuned.largest_response, rel=0.01)
    assert highest >= tuned.largest_response * (1 - 1e-5)


def test_edit_adds_mass_and_arm_and_goes_back():
    model = read_model(PUMP)
    asked = Absorber("beam", "y", 1180 / 60, 0.05)
    edit = absorber_edit(model, asked, tuning(0.05, own_mass(model, asked), asked.frequency_hz, damped=False))
    after = edit.apply(model)
    (arm,) = after.links[len(model.links) :]
    assert isinstance(arm, Spring)
    assert (after.bodies[-1].mass.text, arm.stiffness.text) == ("105 kg", "1.6 kN/mm")
    assert arm.to.body == "beam"
    assert edit.revert(after) == model


def test_damped_one_brings_a_dashpot():
    model = read_model(PUMP)
    asked = Absorber("beam", "y", 19.9, 0.1, damped=True)
    after = absorber_edit(model, asked, tuning(0.1, 2100.0, 19.9, damped=True)).apply(model)
    assert [type(one) for one in after.links[-2:]] == [Spring, Damper]


def test_in_a_shaft_train_it_is_a_disc_on_a_shaft():
    model = read_model(TRAIN)
    asked = Absorber("motor", "rz", 24.75)
    after = absorber_edit(model, asked, tuning(0.1, own_mass(model, asked), 24.75, damped=False)).apply(model)
    assert isinstance(after.links[-1], Shaft)
    assert after.bodies[-1].mass is None
    assert after.bodies[-1].inertia.si == pytest.approx(4.6)


def test_in_plane_it_moves_along_its_direction_alone():
    model = read_model(FAN)
    asked = Absorber("skid", "x", 20.0)
    after = absorber_edit(model, asked, tuning(0.1, own_mass(model, asked), 20.0, damped=False)).apply(model)
    assert after.bodies[-1].dof == ("x",)
    assert after.links[-1].direction == "x"


@pytest.mark.parametrize(
    ("asked", "said"),
    [
        (Absorber("cellar", "y", 20.0), 'no body "cellar"'),
        (Absorber("skid", "rz", 20.0), 'found "rz"'),
        (Absorber("floor", "x", 20.0), "floor bay is held still along x"),
        (Absorber("skid", "y", 20.0, 1.5), "found 1.5"),
        (Absorber("skid", "y", math.inf), "above zero"),
    ],
)
def test_refuses_what_cannot_be(asked, said):
    with pytest.raises(InputError, match=said):
        own_mass(read_model(FAN), asked)


def test_refuses_a_massless_body():
    model = read_model(PUMP)
    beam = model.bodies[0]
    light = replace(beam, mass=replace(beam.mass, entry=replace(beam.mass.entry, text="0 kg", si=0.0)))
    with pytest.raises(InputError, match="no mass"):
        own_mass(replace(model, bodies=(light,)), Absorber("beam", "y", 20.0))
