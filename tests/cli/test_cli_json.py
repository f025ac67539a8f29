"""The keys and units of what the commands print as JSON: documented, and so never to change silently."""

import json
import math

import pytest

from modalview.cli import main
from modalview.places import demo_models

DEMOS = sorted(demo_models().rglob("*.keepclear"))
HEAD = {"file", "title", "degrees_of_freedom"}
BOUNDS = HEAD | {
    "lowest_hz",
    "highest_hz",
    "rigid_body_modes",
    "bands",
    "gershgorin",
    "norms_rad2_per_s2",
    "notes",
    "doubts",
}
BAND = {"check", "from_hz", "to_hz", "modes_inside", "modes_possible", "modes_certain"}
DISCS = {"low_rad2_per_s2", "high_rad2_per_s2", "groups"}
GROUP = {"low_rad2_per_s2", "high_rad2_per_s2", "modes"}
MODES = HEAD | {"modes", "rigid_body_modes", "unstable_modes", "complete", "counts", "method", "warnings"}
MODE = {
    "number",
    "frequency_hz",
    "numerical_error_hz",
    "range_hz",
    "name",
    "kind",
    "repeated_with",
    "growth_rate_per_s",
    "strain_energy",
    "kinetic_energy",
    "sensitivity",
    "effective_mass",
    "modal_mass_kg",
    "shape",
}
CHECKS = HEAD | {"verdict", "sentence", "checks", "not_checked", "notes"}
CHECK = {
    "check",
    "label",
    "verdict",
    "wording",
    "reason",
    "proven",
    "excitation_hz",
    "band_hz",
    "tolerance_band_hz",
    "margin_percent",
    "modes_inside",
    "modes_possible",
    "modes_certain",
    "nearest_mode",
    "separation_percent",
    "worst_separation_percent",
    "deciding_case",
    "undecided",
    "drives",
}
VERDICTS = {"clear", "clear at nominal only", "mode in band"}

every_demo = pytest.mark.parametrize("path", DEMOS, ids=lambda p: f"{p.parent.name}/{p.stem}")
one_of_each = pytest.mark.parametrize("path", DEMOS[::3], ids=lambda p: p.parent.name)


def printed(capsys, command, *paths):
    code = main([command, *map(str, paths), "--json"])
    out, err = capsys.readouterr()
    assert err == ""
    return code, json.loads(out)


@one_of_each
def test_bounds(capsys, path):
    _, told = printed(capsys, "bounds", path)
    assert set(told) >= BOUNDS
    for band in told["bands"]:
        assert set(band) >= BAND
        assert band["from_hz"] < band["to_hz"]
    separated = told["gershgorin"].pop("separated")
    assert all(set(group) == GROUP for group in separated)
    for discs in told["gershgorin"].values():
        assert set(discs) == DISCS
        assert all(set(group) == GROUP for group in discs["groups"])
    assert told["lowest_hz"][0] <= told["lowest_hz"][1]
    assert told["highest_hz"][0] <= told["highest_hz"][1]


@one_of_each
def test_modes(capsys, path):
    _, told = printed(capsys, "modes", path)
    assert set(told) >= MODES
    assert told["complete"] is True
    assert [mode["number"] for mode in told["modes"]] == list(range(1, len(told["modes"]) + 1))
    for mode in told["modes"]:
        assert set(mode) >= MODE
        low, high = mode["range_hz"]
        assert low - 1e-9 <= mode["frequency_hz"] <= high + 1e-9
        assert mode["numerical_error_hz"] < 1e-9
        assert all(len(motion) == 6 for motion in mode["shape"].values())


@every_demo
def test_check(capsys, path):
    code, told = printed(capsys, "check", path)
    assert set(told) >= CHECKS
    assert told["verdict"] in VERDICTS
    assert code == (0 if told["verdict"] == "clear" else 1)
    for check in told["checks"]:
        assert set(check) >= CHECK
        machine, _, excitation = check["check"].partition("/")
        assert machine
        assert excitation
        assert check["verdict"] in VERDICTS
        assert check["wording"].startswith(check["verdict"])
        assert check["deciding_case"] in (None, "soft-heavy", "stiff-light")
        assert (check["deciding_case"] is not None) == (check["verdict"] == "clear at nominal only")
        assert check["nearest_mode"] >= 1
        assert abs(check["worst_separation_percent"]) <= abs(check["separation_percent"]) + 1e-9


def test_several_files_make_a_list(capsys):
    code, told = printed(capsys, "check", *DEMOS[:2])
    assert code == 1
    assert [found["file"] for found in told] == [str(path) for path in DEMOS[:2]]


def test_full_values_are_printed(capsys):
    _, told = printed(capsys, "modes", demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear")
    assert told["modes"][0]["frequency_hz"] == pytest.approx(
        math.sqrt(3.28e7 / 2100) / (2 * math.pi), rel=1e-15
    )


def test_norms_bound_the_square_of_the_highest_mode(capsys):
    path = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
    _, bounds = printed(capsys, "bounds", path)
    _, modes = printed(capsys, "modes", path)
    highest = modes["modes"][-1]["frequency_hz"]
    square = (2 * math.pi * highest) ** 2
    assert all(square <= norm < 3 * square for norm in bounds["norms_rad2_per_s2"].values())
