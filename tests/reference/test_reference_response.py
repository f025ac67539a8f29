"""Group F of the check bank, E12 and I06: steady motion, transmissibility, absorbers, half-power points.

Every figure comes out of the program's own response (or modes), from a model written as a file would hold it;
each failure tells the citation and the status of what was expected.
"""

import json
import math
from collections.abc import Callable
from functools import cache
from typing import Any

import bank_models
import numpy as np
import pytest
from check_bank import Figure, cases, figures
from scipy.optimize import brentq

from modalview.assembly.assemble import assemble
from modalview.response.dynamic import Dynamics
from modalview.response.load import Load
from modalview.response.sweep import Top, swept
from modalview.store import parse_model
from modalview.study import Request, solve
from modalview.study.response import respond
from modalview.study.response_results import ACCELERATION, DISPLACEMENT, Peak, ResponseRequest, ResponseResult

Tree = dict[str, Any]
RPM = 30 / math.pi


def inputs(case: str) -> dict[str, Any]:
    given = cases()[case]["inputs"]
    return {key: one["value"] if isinstance(one, dict) else one for key, one in given.items()}


def bank(case: str) -> Tree:
    return json.loads(bank_models.document(cases()[case]))


def oscillator(mass: float, stiffness: float, damping: float = 0.0, **spring: str) -> Tree:
    ends = {"from": {"support": "ground"}, "to": {"body": "m"}}
    links = [{"id": "k", "kind": "spring", **ends, "stiffness": f"{stiffness!r} N/m", **spring}]
    if damping:
        links.append({"id": "c", "kind": "damper", **ends, "damping": f"{damping!r} N s/m"})
    bodies = [{"id": "m", "mass": f"{mass!r} kg"}]
    return json.loads(bank_models.text("oscillator", "single axis", bodies, links, [{"id": "ground"}]))


def driven(tree: Tree, omega: list[float], *, at: Tree | None = None, **magnitude: str) -> ResponseResult:
    """Steady motion at angular frequencies, rad/s, of the first; the curves run to 1.3 times the last."""
    name = tree["bodies"][0]["id"]
    excitation = {"id": "1x", "order": 1, "at": at or {"body": name}, "magnitude": magnitude}
    speed = f"{omega[-1] * RPM!r} rpm"
    machine = {"id": "machine", "speed": speed, "margin": "10 %", "excitations": [excitation]}
    model = parse_model(json.dumps({**tree, "machines": [machine]}))
    return respond(ResponseRequest(model, speeds_rpm=tuple(w * RPM for w in omega[:-1])))


def moved(found: ResponseResult, body: int = 0, state: int = -1) -> complex:
    return complex(found.machines[0].states[state].motion[body, 1])


def passed_on(found: ResponseResult) -> list[float]:
    return [float(state.transmissibility) for state in found.machines[0].states]


def peaks(found: ResponseResult, quantity: str = DISPLACEMENT) -> list[Peak]:
    return [one for one in found.machines[0].curves[0].peaks if one.quantity == quantity]


@cache
def omega_n(case: str) -> list[float]:
    model = parse_model(bank_models.document(cases()[case]))
    return (2 * np.pi * solve(Request(model)).raw.frequency_hz).tolist()


# --- single figures ------------------------------------------------------------------------------------


def exciter_ratio() -> float:
    """Amplitude far above resonance over twice that at it, both from the response of the exciter."""
    given = inputs("F01")
    unbalance = f"{given['high_speed_limit']!r} kg m"
    at_one = moved(driven(oscillator(1.0, 1.0, 2 * 0.1), [1.0], unbalance=unbalance))
    ratio = 0.1 * abs(at_one) / given["resonant_amplitude"]
    found = driven(oscillator(1.0, 1.0, 2 * ratio), [1.0, 1e6], unbalance=unbalance)
    assert abs(moved(found, state=0)) == pytest.approx(given["resonant_amplitude"], rel=1e-9)
    return abs(moved(found)) / (2 * abs(moved(found, state=0)))


def four_springs() -> float:
    given = inputs("F02")
    return 1e3 * abs(moved(driven(bank("F02"), [given["speed"] / RPM], force=f"{given['force']} N")))


def road() -> tuple[float, ResponseResult]:
    given = inputs("F03")
    omega = 2 * math.pi * given["speed"] / 3.6 / given["wavelength"]
    found = driven(bank("F03"), [omega], at={"support": "ground"}, motion=f"{given['road_amplitude']!r} m")
    return omega, found


def isolated(ratio: float, over: list[float]) -> list[float]:
    return passed_on(driven(oscillator(1.0, 1.0, 2 * ratio), over, force="7 N"))


def sagging(frequency: Any) -> Any:
    """Natural frequency of a mass that presses its spring by a deflection in mm, from the modes."""
    g = inputs("F05")["g"]

    def hertz(deflection: float) -> float:
        tree = oscillator(10.0, 10.0 * g / (1e-3 * deflection))
        return float(solve(Request(parse_model(json.dumps(tree)))).raw.frequency_hz[0])

    return frequency(hertz)


def pressed() -> ResponseResult:
    given = inputs("F08")
    return driven(bank("F08"), [given["speed"] / RPM], force=f"{given['force']} N")


def beat(share: float) -> float:
    slow, fast = omega_n("F10")
    return share * 2 * math.pi / (fast - slow)


def split() -> list[float]:
    """Where the undamped response of the main mass is infinite, over its own natural frequency."""
    found = driven(bank("F11"), [14.0], force="1 N")
    assert all(math.isinf(one.value) for one in peaks(found))
    return [one.speed_rpm / RPM / 10.0 for one in peaks(found)]


def signed(case: str) -> list[float]:
    given = inputs(case)
    force = given["force_on_m1"] if case == "F16" else given["force"]
    found = driven(bank(case), [float(given["omega"])], force=f"{force} N")
    motion = found.machines[0].states[0].motion[:, 1]
    assert np.abs(motion.imag).max() < 1e-15
    return motion.real.tolist()


def hysteretic() -> ResponseResult:
    given = inputs("E12")
    tree = oscillator(given["mass"], given["stiffness"], loss_factor=f"{given['loss_factor']!r}")
    return driven(tree, [25.0], force="1 N")


def half_power() -> Peak:
    (found,) = peaks(driven(oscillator(1.0, 1.0, 2 * inputs("F15")["damping_ratio"]), [1.5], force="1 N"))
    return found


def balanced() -> float:
    """Permissible unbalance, kg m."""
    (given,) = (cases()["I06"]["inputs"],)
    grade, speed, mass = (given[key]["value"] for key in ("grade", "speed", "mass"))
    found = driven(oscillator(1.0, 1.0), [speed / RPM], grade=f"G {grade}", rotor_mass=f"{mass} kg")
    return found.machines[0].drivers[0].size


# --- the damped absorber ----------------------------------------------------------------------------------

MU = inputs("F12")["mass_ratio"]


@cache
def absorber(tuning: float, ratio: float) -> Callable[[np.ndarray], np.ndarray]:
    """Amplification of a unit mass on a unit spring with an absorber of mass MU; ratio is c/(2 m2 omega1)."""
    tree = oscillator(1.0, 1.0)
    tree["bodies"].append({"id": "a", "mass": f"{MU!r} kg"})
    ends = {"from": {"body": "m"}, "to": {"body": "a"}}
    tree["links"] += [
        {"id": "ka", "kind": "spring", **ends, "stiffness": f"{MU * tuning**2!r} N/m"},
        {"id": "ca", "kind": "damper", **ends, "damping": f"{2 * MU * ratio!r} N s/m"},
    ]
    assembly = assemble(parse_model(json.dumps(tree)))
    dynamics = Dynamics.of(assembly)
    load = Load(dynamics.terms.to_bodies[[0]].toarray()[0].astype(complex), None, based=False)

    def amplification(r: np.ndarray) -> np.ndarray:
        steady = dynamics.with_damping().solve(np.asarray(r), load)
        return np.abs((dynamics.terms.to_bodies @ steady.coordinates)[:1])

    return amplification


def height(tuning: float, ratio: float, r: float) -> float:
    return float(absorber(tuning, ratio)(np.array([r]))[0, 0])


def tops(ratio: float) -> list[Top]:
    """Peaks with the optimum tuning."""
    return list(swept(absorber(0.8, ratio), np.linspace(0.55, 1.3, 30)).tops)


@cache
def fixed_points(tuning: float) -> list[float]:
    """Where the curves of two dampings cross: below the main mass's own frequency, and above."""

    def apart(r: float) -> float:
        return height(tuning, 0.05, r) - height(tuning, 0.5, r)

    return [brentq(apart, *ends, xtol=1e-14, rtol=1e-14) for ends in ((0.68, 0.78), (0.95, 1.12))]


def optimum_tuning() -> float:
    """At which both fixed points are equally high."""

    def uneven(tuning: float) -> float:
        low, high = fixed_points(tuning)
        return height(tuning, 0.5, low) - height(tuning, 0.5, high)

    return float(brentq(uneven, 0.78, 0.83, xtol=1e-13, rtol=1e-13))


def optimum_damping() -> float:
    """The mean of the squares of the two dampings at which a peak lies on one of the fixed points (Brock)."""

    def off(ratio: float, number: int) -> float:
        point = fixed_points(0.8)[number]
        return min((top.speed for top in tops(ratio)), key=lambda one: abs(one - point)) - point

    squares = [brentq(off, 0.18, 0.26, args=(number,), xtol=1e-13, rtol=1e-13) ** 2 for number in (0, 1)]
    return math.sqrt(sum(squares) / 2)


def same_for_all(values: list[float]) -> float:
    assert values == pytest.approx([values[0]] * len(values), rel=1e-9)
    return values[0]


def heights_at_fixed_points() -> float:
    points = fixed_points(0.8)
    return same_for_all([height(0.8, z, r) for z in inputs("F12")["damping_ratios_tried"] for r in points])


FIGURES = {
    "F01-damping_ratio": exciter_ratio,
    "F01-damping_ratio_printed": exciter_ratio,
    "F02-amplitude": four_springs,
    "F03-amplitude": lambda: abs(moved(road()[1])),
    "F03-amplitude_exact": lambda: abs(moved(road()[1])),
    "F03-omega_n": lambda: omega_n("F03")[0],
    "F03-frequency_ratio": lambda: road()[0] / omega_n("F03")[0],
    "F04-T_at_sqrt2_for_each_damping": lambda: [
        isolated(z, [math.sqrt(2)])[0] for z in inputs("F04")["damping_ratio"]
    ],
    "F04-T_undamped_r2_r3": lambda: isolated(0.0, [2.0, 3.0]),
    "F04-T_zeta_0p1": lambda: isolated(0.1, inputs("F04")["r"]),
    "F04-T_zeta_0p5": lambda: isolated(0.5, inputs("F04")["r"]),
    "F05-constant": lambda: sagging(lambda hertz: hertz(1.0)),
    "F05-frequency_at_6mm": lambda: sagging(lambda hertz: hertz(6.0)),
    "F05-frequency_at_25mm": lambda: sagging(lambda hertz: hertz(25.0)),
    "F05-deflection_for_9p7Hz": lambda: sagging(lambda hertz: brentq(lambda mm: hertz(mm) - 9.7, 1.0, 9.0)),
    "F08-amplitude": lambda: abs(moved(pressed())),
    "F08-transmissibility": lambda: passed_on(pressed())[0],
    "F08-transmitted_force": lambda: pressed().machines[0].states[0].supports[0].force_n,
    "F10-beat_period": lambda: beat(1.0),
    "F10-time_of_first_full_transfer": lambda: beat(0.5),
    "F11-r_split": split,
    "F11-r_split_printed": split,
    "F11-product_of_ratios": lambda: math.prod(split()),
    "F12-optimum_tuning": optimum_tuning,
    "F12-optimum_damping_ratio": optimum_damping,
    "F12-fixed_point_frequency_ratios": lambda: fixed_points(0.8),
    "F12-amplification_at_fixed_points": heights_at_fixed_points,
    "F12-peak_amplification_with_optimum": lambda: max(
        top.value for top in tops(inputs("F12")["damping_ratios_tried"][1])
    ),
    "F15-r_half_power": lambda: [side / RPM for side in half_power().half_power_rpm],
    "F15-estimate_from_bandwidth": lambda: float(np.diff(half_power().half_power_rpm)[0]) / RPM / 2,
    "F15-peak_amplification": lambda: half_power().value,
    "F16-amplitudes_signed": lambda: signed("F16"),
    "F19-X_main": lambda: signed("F19")[0],
    "F19-X_absorber": lambda: signed("F19")[1],
    "E12-omega_peak": lambda: peaks(hysteretic())[0].speed_rpm / RPM,
    "E12-peak_amplification": lambda: inputs("E12")["stiffness"] * peaks(hysteretic())[0].value,
    "E12-half_power_omega": lambda: [side / RPM for side in peaks(hysteretic())[0].half_power_rpm],
    "E12-equivalent_viscous_ratio": lambda: hysteretic().damping.losses[0].ratio,
    "I06-specific_unbalance": lambda: 1e6 * balanced() / inputs("I06")["mass"],
    "I06-permissible_unbalance": lambda: 1e6 * balanced(),
}
WANTED = [
    one
    for group in "EFI"
    for one in figures(group)
    if one.case["group"] == "F" or one.case["id"] in ("E12", "I06")
]


@pytest.mark.parametrize("figure", WANTED, ids=lambda figure: figure.id)
def test_figure(figure: Figure):
    figure.check(FIGURES[figure.id]())


def test_every_figure_is_in_the_bank():
    assert set(FIGURES) == {figure.id for figure in WANTED}


def test_trap_of_e12_static_amplification_is_below_one():
    """1/sqrt(1 + eta^2): a loss factor acts at every frequency."""
    found = hysteretic()
    given = inputs("E12")
    tree = oscillator(given["mass"], given["stiffness"], loss_factor=f"{given['loss_factor']!r}")
    slow = driven(tree, [1e-5], force="1 N")
    assert given["stiffness"] * abs(moved(slow)) == pytest.approx(1 / math.sqrt(1.01), rel=1e-9)
    assert len(peaks(found, ACCELERATION)) == 1
