"""The forced response as it is handed to window, command line and report."""

import json
import math

import numpy as np
import pytest

from modalview.errors import CancelledError, InputError, ModelFaultsError
from modalview.model.parts import End
from modalview.places import demo_models
from modalview.store import parse_model
from modalview.study import Request, solve
from modalview.study.response import BAND_NOTE, SUM_NOTE, respond
from modalview.study.response_results import (
    ACCELERATION,
    DISPLACEMENT,
    PEAK_TO_PEAK,
    VELOCITY,
    ResponseRequest,
    Watch,
)


def demo(name):
    return parse_model((demo_models() / name).read_text(encoding="utf-8"))


FORCE = {"id": "1x", "order": 1, "at": {"body": "m"}, "magnitude": {"force": "8 N"}}


def tree(*excitations, damping="25 N s/m", speed="200 rpm", **more):
    """10 kg on 4000 N/m: 20 rad/s, 191 rpm."""
    ends = {"from": {"body": "m"}, "to": {"support": "g"}}
    links = [{"id": "k", "kind": "spring", **ends, "stiffness": "4000 N/m"}]
    if damping:
        links.append({"id": "c", "kind": "damper", **ends, "damping": damping})
    machine = {"id": "machine", "margin": "10 %", "excitations": list(excitations or (FORCE,))}
    if speed:
        machine["speed"] = speed
    return {
        "format": "keepclear",
        "version": 1,
        "title": "t",
        "motion": "single axis",
        "bodies": [{"id": "m", "name": "fan", "mass": "10 kg"}],
        "supports": [{"id": "g", "name": "slab"}],
        "links": links,
        "machines": [machine],
        **more,
    }


def found(*excitations, request=None, **more):
    return respond(ResponseRequest(parse_model(json.dumps(tree(*excitations, **more))), **(request or {})))


def exact(omega, force=8.0, c=25.0):
    return force / np.abs(4000 - 10 * omega**2 + 1j * c * omega)


def at_speed(machine, curve, rpm, quantity=VELOCITY):
    (place,) = np.flatnonzero(np.abs(machine.speeds_rpm - rpm) < 1e-9 * rpm)
    return curve.nominal.values(quantity)[place]


@pytest.mark.parametrize(
    ("name", "body", "mm_per_s"),
    [
        ("1-cooling-water-pump/as-built.keepclear", "motor", 6.70),
        ("1-cooling-water-pump/part-grout-and-anchors.keepclear", "motor", 0.85),
        ("6-vacuum-pump-absorber/no-absorber.keepclear", "beam", 32.7),
        ("6-vacuum-pump-absorber/absorber-210kg.keepclear", "beam", 0.11),
    ],
)
def test_figures_of_the_demonstration_models(name, body, mm_per_s):
    """Velocities that their notes tell, to 2 %, computed apart for these invented models."""
    model = demo(name)
    result = respond(ResponseRequest(model, watches=(Watch("w", body, End(body=body), "y"),)))
    (machine,) = result.machines
    found = 1e3 * at_speed(machine, machine.curve("w"), machine.running_rpm[1])
    assert found == pytest.approx(mm_per_s, rel=0.02)
    assert f"{mm_per_s:g}" in model.notes
    assert result.worst_residual < 1e-12


def test_the_curve_is_that_of_one_mass():
    result = found()
    (machine,) = result.machines
    (curve,) = machine.curves
    omega = machine.speeds_rpm * np.pi / 30
    u = exact(omega)
    assert curve.nominal.values(DISPLACEMENT) == pytest.approx(u, rel=1e-9)
    assert curve.nominal.values(PEAK_TO_PEAK) == pytest.approx(2 * u, rel=1e-9)
    assert curve.nominal.values(VELOCITY) == pytest.approx(omega * u / math.sqrt(2), rel=1e-9)
    assert curve.nominal.values(ACCELERATION) == pytest.approx(omega**2 * u / math.sqrt(2), rel=1e-9)
    assert curve.half.displacement == pytest.approx(exact(omega, c=12.5), rel=1e-9)
    assert curve.double.displacement == pytest.approx(exact(omega, c=50.0), rel=1e-9)
    assert not curve.nominal.displacement.flags.writeable
    assert (machine.speeds_rpm[0], machine.speeds_rpm[-1]) == pytest.approx((20.0, 260.0))
    assert 200.0 in machine.speeds_rpm
    assert machine.running_rpm == (200.0, 200.0)
    assert BAND_NOTE in result.notes


def test_peaks_and_half_power_marks():
    (curve,) = found().machines[0].curves
    zeta = 25 / (2 * 10 * 20)
    (peak,) = [one for one in curve.peaks if one.quantity == DISPLACEMENT]
    assert peak.speed_rpm == pytest.approx(20 * math.sqrt(1 - 2 * zeta**2) * 30 / math.pi, rel=1e-9)
    low, high = (
        20 * math.sqrt(1 - 2 * zeta**2 + s * 2 * zeta * math.sqrt(1 - zeta**2)) * 30 / math.pi
        for s in (-1, 1)
    )
    assert peak.half_power_rpm == pytest.approx((low, high), rel=1e-9)


@pytest.mark.parametrize("zeta", [1e-5, 1e-3])
def test_a_lightly_damped_peak_lies_on_its_true_place(zeta):
    """To 1e-6 of itself, and its height with it."""
    (curve,) = found(damping=f"{2 * 10 * 20 * zeta!r} N s/m").machines[0].curves
    (peak,) = [one for one in curve.peaks if one.quantity == DISPLACEMENT]
    assert peak.speed_rpm == pytest.approx(20 * math.sqrt(1 - 2 * zeta**2) * 30 / math.pi, rel=1e-9)
    assert peak.value == pytest.approx(8 / 4000 / (2 * zeta * math.sqrt(1 - zeta**2)), rel=1e-6)


def test_the_state_at_the_speed():
    (state,) = found().machines[0].states
    omega = 200 * math.pi / 30
    y = 8 / (4000 - 10 * omega**2 + 25j * omega)
    assert state.speed_rpm == 200.0
    assert state.frequency_hz == pytest.approx(200 / 60)
    assert state.motion.shape == (1, 6)
    assert state.motion[0, 1] == pytest.approx(y, rel=1e-12)
    assert [one.part for one in state.links] == ["k", "c"]
    assert state.links[0].force_n == pytest.approx(4000 * abs(y), rel=1e-12)
    (slab,) = state.supports
    assert (slab.part, slab.label) == ("g", "slab")
    assert slab.force_n == pytest.approx(abs(4000 + 25j * omega) * abs(y), rel=1e-12)
    assert state.transmissibility == pytest.approx(slab.force_n / 8, rel=1e-12)
    assert state.isolation_percent == pytest.approx(100 * (1 - slab.force_n / 8), rel=1e-12)
    assert state.applied == 8.0


def test_transmission_and_forces_over_the_speeds():
    (machine,) = found().machines
    (passed,) = machine.transmissions
    omega = machine.speeds_rpm * np.pi / 30
    ratio = np.abs(4000 + 25j * omega) * exact(omega) / 8
    assert passed.kind == "force"
    assert passed.ratio == pytest.approx(ratio, rel=1e-9)
    assert passed.at_supports == pytest.approx(8 * ratio, rel=1e-9)
    forces = {(one.part, one.unit): one.values for one in machine.forces}
    assert set(forces) == {("k", "N"), ("c", "N"), ("g", "N")}
    assert forces["k", "N"] == pytest.approx(4000 * exact(omega), rel=1e-9)


SECOND = {"id": "2x", "order": 2, "at": {"body": "m"}, "magnitude": {"unbalance": "20 g mm"}}
MAINS = {"id": "mains", "frequency": "50 Hz", "at": {"body": "m"}, "magnitude": {"force": "3 N"}}


def test_excitations_alone_and_their_sum():
    result = found(FORCE, SECOND, MAINS)
    (machine,) = result.machines
    names = [curve.excitation for curve in machine.curves]
    assert names == ["machine/1x", "machine/2x", "machine/mains", None]
    first, second, fixed, total = (curve.nominal.velocity for curve in machine.curves)
    assert total == pytest.approx(first + second + fixed, rel=1e-12)
    assert np.ptp(fixed) == 0
    omega = machine.speeds_rpm * np.pi / 30
    assert second == pytest.approx(2 * omega * exact(2 * omega, 2e-5 * 4 * omega**2) / math.sqrt(2), rel=1e-9)
    assert [one.fixed_hz is None for one in machine.drivers] == [True, True, False]
    assert machine.drivers[1].hz_per_rpm == pytest.approx(2 / 60)
    assert [one.label for one in machine.drivers] == ["1×", "2×", "50 Hz"]
    assert SUM_NOTE in result.notes
    (peak,) = [one for one in machine.curve("fan, y", "machine/2x").peaks if one.quantity == DISPLACEMENT]
    assert peak.speed_rpm < 100


def test_an_undamped_resonance_is_infinite_and_no_number():
    own = 20 * 30 / math.pi
    result = found(damping=None, request={"speeds_rpm": (own,)})
    (machine,) = result.machines
    (curve,) = machine.curves
    assert curve.half is None
    peaks = [one for one in curve.peaks if one.quantity == VELOCITY]
    assert [(one.value, one.half_power_rpm) for one in peaks] == [(math.inf, (None, None))]
    assert peaks[0].speed_rpm == pytest.approx(own, rel=1e-12)
    first, second = machine.states
    assert first.infinite
    assert first.transmissibility is None
    assert not first.motion.any()
    assert first.links == ()
    assert not second.infinite
    assert "infinite" in result.damping.sentence
    assert np.isinf(machine.transmissions[0].ratio).any()


LIMIT = {
    "id": "ours",
    "name": "our limit",
    "at": {"body": "m"},
    "quantity": "velocity rms",
    "value": "4.5 mm/s",
}


def test_limits_hold_over_the_speeds_the_machine_runs_at():
    ranged = {"from": "100 rpm", "to": "300 rpm"}
    result = found(
        limits=[LIMIT, {**LIMIT, "id": "pp", "quantity": PEAK_TO_PEAK, "value": "90 mm"}], speed=ranged
    )
    (machine,) = result.machines
    velocity, motion = machine.limits
    top = 8 / 25 / math.sqrt(2)
    assert velocity.worst == pytest.approx(top, rel=1e-9)
    assert velocity.worst_rpm == pytest.approx(20 * 30 / math.pi, rel=1e-6)
    assert velocity.worst_half == pytest.approx(2 * top, rel=1e-3)
    assert velocity.worst_double == pytest.approx(top / 2, rel=1e-3)
    assert velocity.exceeded
    assert (velocity.label, velocity.text, velocity.value) == ("our limit", "4.5 mm/s", 0.0045)
    assert not motion.exceeded
    assert velocity.watch == motion.watch == "fan, y"


def test_limits_that_do_not_fit_are_told():
    model = parse_model(json.dumps(tree(limits=[LIMIT])))
    wrong = type(model.limits[0])(id="w", at=End(body="m"), quantity="velocity rms", value="4.5 mm")
    unknown = type(model.limits[0])(id="u", at=End(body="m"), quantity="jerk", value="4.5 mm")
    ground = type(model.limits[0])(id="g", at=End(support="g"), quantity="velocity rms", value="1 mm/s")
    spoiled = type(model)(
        **{**{k: getattr(model, k) for k in model.__slots__}, "limits": (wrong, unknown, ground)}
    )
    left_out = respond(ResponseRequest(spoiled)).machines[0].left_out
    assert [one.id for one in left_out] == ["w", "u", "g"]
    assert "velocity" in left_out[0].reason
    assert '"jerk" is not one of' in left_out[1].reason
    assert "looked at on a body" in left_out[2].reason


def test_an_excitation_without_a_size_is_left_out_with_its_reason():
    result = found(FORCE, {"id": "2x", "order": 2, "at": {"body": "m"}})
    assert [one.id for one in result.left_out] == ["machine/2x"]
    assert "size is not given" in result.left_out[0].reason
    assert len(result.machines[0].drivers) == 1


@pytest.mark.parametrize(
    ("excitation", "reason"),
    [
        ({"id": "1x", "order": 1, "at": {"body": "m"}}, "its size is not given"),
        ({"id": "1x", "order": 1, "magnitude": {"force": "1 N"}}, "its point is not given"),
        (
            {"id": "1x", "order": 1, "at": {"support": "other"}, "magnitude": {"motion": "1 mm"}},
            "moves nothing: no spring or dashpot stands on this support",
        ),
    ],
)
def test_nothing_to_compute_names_every_reason(excitation, reason):
    with pytest.raises(ModelFaultsError, match=f"machine/1x: .*{reason}"):
        found(excitation, supports=[{"id": "g"}, {"id": "other"}])


@pytest.mark.parametrize(
    ("request_", "reason"),
    [
        ({"speeds_rpm": (0.0,)}, "speeds_rpm: a steady response needs a speed above zero; found 0 rpm"),
        ({"speeds_rpm": (math.nan,)}, "speeds_rpm"),
        ({"span_rpm": (300.0, 100.0)}, "span_rpm: speeds must rise"),
        ({"machine": "pump"}, 'no machine "pump"; the model has: machine'),
    ],
)
def test_a_request_that_cannot_be_met_is_refused(request_, reason):
    with pytest.raises(InputError, match=reason):
        found(request=request_)


def test_a_model_without_excitations_is_refused():
    with pytest.raises(InputError, match="Nothing excites the model"):
        found(machines=[])


def test_the_span_asked_for():
    speeds = found(request={"span_rpm": (50.0, 80.0)}).machines[0].speeds_rpm
    assert (speeds[0], speeds[-1]) == pytest.approx((50.0, 80.0))


def test_a_machine_without_a_speed_has_states_and_limits_but_no_curves():
    result = found(MAINS, speed=None, limits=[LIMIT])
    (machine,) = result.machines
    assert machine.running_rpm is None
    assert machine.speeds_rpm.size == 0
    assert machine.curves == ()
    (state,) = machine.states
    assert state.speed_rpm is None
    assert state.frequency_hz == pytest.approx(50.0)
    (limit,) = machine.limits
    omega = 100 * math.pi
    assert limit.worst == pytest.approx(omega * exact(omega, 3.0) / math.sqrt(2), rel=1e-9)
    assert limit.worst_rpm is None


def test_base_motion_is_compared_with_the_motion_of_the_base():
    base = {"id": "floor", "order": 1, "at": {"support": "g"}, "magnitude": {"motion": "20 um"}}
    (machine,) = found(base).machines
    (passed,) = machine.transmissions
    omega = machine.speeds_rpm * np.pi / 30
    ratio = np.abs(4000 + 25j * omega) * exact(omega, 1.0)
    assert passed.kind == "motion"
    assert passed.ratio is None
    ((watch, found_ratio),) = passed.ratios
    assert watch == "fan, y"
    assert found_ratio == pytest.approx(ratio, rel=1e-9)
    assert machine.curves[0].nominal.displacement == pytest.approx(2e-5 * ratio, rel=1e-9)
    assert passed.at_supports == pytest.approx(10 * omega**2 * 2e-5 * ratio, rel=1e-9)


def test_modes_that_are_there_already_are_used():
    model = demo("1-cooling-water-pump/as-built.keepclear")
    solution = solve(Request(model))
    fresh, reused = respond(ResponseRequest(model)), respond(ResponseRequest(model), solution)
    assert reused.machines[0].curves[0].nominal.velocity == pytest.approx(
        fresh.machines[0].curves[0].nominal.velocity, rel=1e-9
    )
    assert [one.id for one in reused.left_out] == ["pump set/2x", "pump set/vane"]


def test_the_motor_of_the_pump_exceeds_the_plants_limit():
    (machine,) = respond(ResponseRequest(demo("1-cooling-water-pump/as-built.keepclear"))).machines
    (limit,) = machine.limits
    assert limit.exceeded
    assert 1e3 * limit.worst == pytest.approx(6.70, rel=0.02)
    assert limit.worst_half > limit.worst > limit.worst_double


def test_loss_factors_of_modes_are_told():
    result = respond(ResponseRequest(demo("6-vacuum-pump-absorber/absorber-210kg.keepclear")))
    assert result.damping.kind == "loss factors"
    assert [one.mode for one in result.damping.losses] == [1, 2]
    assert all(0.01 < one.loss_factor < 0.024 for one in result.damping.losses)
    assert result.damping.losses[0].ratio == result.damping.losses[0].loss_factor / 2


def test_a_train_turns_and_its_shafts_carry_torque():
    result = respond(ResponseRequest(demo("3-air-compressor-train/as-built.keepclear")))
    (machine,) = result.machines
    assert "rad" in result.notes[-1]
    torques = {one.part for one in machine.forces if one.unit == "N m"}
    assert {"low", "mesh", "high"} <= torques
    assert not any(one.unit == "N" for one in machine.forces)
    assert machine.transmissions == ()
    assert all(state.transmissibility is None for state in machine.states)


def test_rotating_unbalance_in_plane_is_watched_in_any_direction():
    (machine,) = respond(ResponseRequest(demo("2-supply-fan/steel-legs.keepclear"))).machines
    assert machine.watches[0].direction is None
    assert machine.watches[0].label.endswith("any direction")
    assert machine.running_rpm == (600.0, 1800.0)
    assert {state.speed_rpm for state in machine.states} == {600.0, 1800.0}


def test_a_watch_that_is_on_no_body_is_refused():
    with pytest.raises(ModelFaultsError, match='nowhere: motion is looked at on a body; "g" is none'):
        found(request={"watches": (Watch("w", "nowhere", End(support="g")),)})


def test_it_stops_when_told():
    with pytest.raises(CancelledError):
        found(request={"cancelled": lambda: True})


def test_evidence_tells_method_residual_and_balance():
    result = found()
    assert result.evidence[0].startswith("Steady motion by superposed damped roots")
    assert "backward error" in result.evidence[1]
    assert "power fed in equals power lost" in result.evidence[2]
    assert result.worst_residual < 1e-14
