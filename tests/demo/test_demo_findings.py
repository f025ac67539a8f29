"""What the demonstration models teach: shares, bounds, ceilings, windows and near misses."""

import json
import math
from functools import cache

import numpy as np
import pytest

from modalview.assembly.loads import unit_force
from modalview.places import demo_models
from modalview.resonance.drive import mode_drives
from modalview.resonance.results import Drive, Verdict
from modalview.store import parse_model
from modalview.study import Request, Solution, solve
from modalview.study.damped import damped

PUMP = "1-cooling-water-pump/as-built"
PRINTED = 0.05 + 1e-9  # printed to one decimal
EDGE = 1e-3  # a window's edge is tried this far inside and outside of it


def hz(eigenvalue: float) -> float:
    return math.sqrt(eigenvalue) / (2 * math.pi)


def tree(file: str) -> dict:
    return json.loads((demo_models() / f"{file}.keepclear").read_text(encoding="utf-8"))


def solve_tree(given: dict) -> Solution:
    return solve(Request(parse_model(json.dumps(given))))


@cache
def solved(file: str) -> Solution:
    return solve_tree(tree(file))


def test_the_base_support_holds_nine_tenths_of_the_strain_energy_of_mode_1():
    shares = {share.id: share.fraction for share in solved(PUMP).modes[0].strain}
    percent = {name: round(100 * share) for name, share in shares.items()}
    assert percent == {"k3": 90, "k1": 8, "k2": 3}
    assert sum(shares.values()) == pytest.approx(1, abs=1e-12)


def test_bounds_of_the_pump_as_built():
    bounds = solved(PUMP).outlook.bounds
    assert bounds.lowest_hz == pytest.approx((47.3, 51.3), abs=PRINTED)
    assert bounds.highest_hz == pytest.approx((212.3, 249.5), abs=PRINTED)
    assert hz(bounds.rows.groups[-1].high) == pytest.approx(285.6, abs=PRINTED)
    assert hz(bounds.symmetric.groups[-1].high) == pytest.approx(287.8, abs=PRINTED)


def test_bounds_of_the_pump_bracket_its_modes():
    solution = solved(PUMP)
    bounds, modes = solution.outlook.bounds, solution.modes
    assert bounds.lowest_hz[0] <= modes[0].frequency_hz <= bounds.lowest_hz[1]
    assert bounds.highest_hz[0] <= modes[-1].frequency_hz <= bounds.highest_hz[1]


def test_rigid_pedestals_lift_mode_1_to_its_ceiling_only():
    given = tree(PUMP)
    for link in given["links"][:2]:
        link["kind"] = "rigid link"
        del link["stiffness"]
    assert solve_tree(given).modes[0].frequency_hz == pytest.approx(54.0, abs=0.01)


def pump_on(stiffness: float, tolerance: str) -> Verdict | None:
    given = tree(PUMP)
    given["links"][2]["stiffness"] = {"value": f"{stiffness!r} N/m", "tolerance": tolerance}
    return solve_tree(given).outlook.verdict


@pytest.mark.parametrize(
    ("edge", "clear_above", "tolerance"),
    [
        (9.3715e7, False, "15 %"),
        (2.7063e8, True, "15 %"),
        (4.7259e8, False, "15 %"),
        (4.5726e9, True, "15 %"),
        (3.0671e8, True, "25 %"),
        (4.3478e8, False, "25 %"),
    ],
)
def test_base_support_passes_everything_in_windows(edge, clear_above, tolerance):
    below = pump_on(edge * (1 - EDGE), tolerance)
    above = pump_on(edge * (1 + EDGE), tolerance)
    assert (above if clear_above else below) is Verdict.CLEAR
    assert (below if clear_above else above) is not Verdict.CLEAR


def test_fan_on_springs_hardly_drives_the_floor_mode_that_lies_in_its_range():
    (check,) = (one for one in solved("2-supply-fan/steel-springs").checks if one.band.order == 1)
    assert check.verdict is Verdict.IN_BAND
    assert check.inside == 1
    (drive,) = check.drives
    assert (drive.mode, drive.drive) == (4, Drive.HARDLY)
    assert drive.share == pytest.approx(0.0001, abs=0.00005)


def test_fan_unbalance_goes_into_the_modes_of_the_skid():
    solution = solved("2-supply-fan/steel-springs")
    assembly = solution.outlook.assembly
    force = unit_force(assembly, assembly.model.machines[0].excitations[0])
    drives = mode_drives(assembly.pencil(), solution.raw, force)
    shares = [drive.share for drive in drives]
    assert shares == pytest.approx([0.48, 0.40, 0.12, 0.0001], abs=0.005)
    assert sum(shares) == pytest.approx(1, abs=1e-12)
    assert [drive.drive for drive in drives] == [Drive.EXCITED] * 3 + [Drive.HARDLY]


def test_vertical_pump_design_is_decided_by_its_soft_and_heavy_case():
    (check,) = solved("5-raw-water-vertical-pump/design").checks
    assert check.verdict is Verdict.NOMINAL_ONLY
    assert check.deciding_case == "soft-heavy"
    assert (check.inside, check.possible, check.certain) == (0, 1, 0)


def test_absorber_of_105_kg_misses_the_band_by_a_hundredth_of_a_hertz():
    solution = solved("6-vacuum-pump-absorber/absorber-105kg")
    (check,) = solution.checks
    assert solution.modes[0].frequency_hz == pytest.approx(17.690, abs=0.0005)
    assert check.band.nominal[0] / (2 * math.pi) == pytest.approx(17.700, abs=1e-9)
    assert check.verdict is Verdict.NOMINAL_ONLY
    assert (check.inside, check.possible) == (0, 2)


DAMPED, UNDAMPED = (f"6-vacuum-pump-absorber/absorber-210kg{end}" for end in ("-damped", ""))
BEAM_KG, BEAM_NM, ABSORBER_KG, ARM_NM, DASHPOT = 2100.0, 3.28e7, 210.0, 3.21e6, 8800.0


def test_a_dashpot_on_the_absorber_damps_both_modes_and_leaves_the_verdict():
    """The roots of |s**2 M + s C + K| for two masses, by hand as a polynomial of fourth degree."""
    found = damped(Request(parse_model(json.dumps(tree(DAMPED)))), solved(DAMPED))
    arm = np.polynomial.Polynomial([ARM_NM, DASHPOT])
    beam = arm + np.polynomial.Polynomial([BEAM_NM, 0, BEAM_KG])
    absorber = arm + np.polynomial.Polynomial([0, 0, ABSORBER_KG])
    roots = sorted((root for root in (beam * absorber - arm**2).roots() if root.imag > 0), key=abs)
    assert [mode.root for mode in found.modes] == pytest.approx(roots, rel=1e-9)
    assert [mode.damped_hz for mode in found.modes] == pytest.approx([17.29, 22.44], abs=0.005)
    assert [mode.damping_ratio for mode in found.modes] == pytest.approx([0.060, 0.116], abs=5e-4)
    assert solved(DAMPED).outlook.verdict is solved(UNDAMPED).outlook.verdict is Verdict.CLEAR


def test_the_dashpot_is_near_the_optimum_of_den_hartog():
    """c = 2 m w sqrt(3 r / (8 (1 + r)**3)): J. P. Den Hartog, Mechanical Vibrations, 1934 (from memory)."""
    share, alone = ABSORBER_KG / BEAM_KG, math.sqrt(BEAM_NM / BEAM_KG)
    optimum = 2 * ABSORBER_KG * alone * math.sqrt(3 * share / (8 * (1 + share) ** 3))
    assert optimum == pytest.approx(DASHPOT, rel=0.002)
    softer = tree(DAMPED)
    softer["links"][1]["stiffness"]["value"] = f"{ABSORBER_KG * (alone / (1 + share)) ** 2:.3g} N/m"
    assert softer["links"][1]["stiffness"]["value"] == "2.71e+06 N/m"
    assert solve_tree(softer).outlook.verdict is Verdict.NOMINAL_ONLY


def test_the_dashpot_calms_the_run_up_and_costs_at_the_running_speed():
    """Steady vibration of the beam under 400 N, mm/s rms; loss factors make a stiffness complex."""
    speeds = np.arange(600.0, 1180.5, 0.5)
    with_dashpot, without = _beam(speeds, DASHPOT, 0.0), _beam(speeds, 0.0, 0.01)
    assert (with_dashpot.max(), without.max()) == pytest.approx((5.7, 28.8), abs=0.05)
    assert speeds[without.argmax()] == pytest.approx(1015, abs=1)
    assert (with_dashpot[-1], without[-1]) == pytest.approx((3.3, 0.11), abs=0.05)


def _beam(rpm, dashpot: float, arm_loss: float):
    w = rpm * 2 * math.pi / 60
    arm, beam = ARM_NM * (1 + 1j * arm_loss) + 1j * w * dashpot, BEAM_NM * (1 + 0.024j)
    reached = 400.0 / (beam + arm - w**2 * BEAM_KG - arm**2 / (arm - w**2 * ABSORBER_KG))
    return 1e3 * w * np.abs(reached) / math.sqrt(2)


def test_static_stiffness_hides_the_mode_that_dynamic_stiffness_shows():
    low = solved("4-standby-generator-set/static-stiffness").modes[-1].frequency_hz
    high = solved("4-standby-generator-set/dynamic-stiffness").modes[-1].frequency_hz
    assert high / low == pytest.approx(math.sqrt(1.8), rel=1e-12)


def test_geared_train_counts_the_compressor_at_its_own_speed():
    bands = {check.band.check: check.band for check in solved("3-air-compressor-train/as-built").checks}
    low, high = bands["train/1x high"].excitation
    assert low == high == pytest.approx(4.2 * 1485 / 60 * 2 * math.pi, rel=1e-14)
