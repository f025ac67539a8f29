"""``keepclear speeds`` and what ``check`` tells of the run-up: words, keys, exit codes."""

import json
from itertools import pairwise
from pathlib import Path

import pytest

from modalview.cli import main
from modalview.places import demo_models
from modalview.resonance.speedruns import RPM
from modalview.store import read_model

DEMOS = sorted(demo_models().rglob("*.keepclear"))
FAN = demo_models() / "2-supply-fan" / "steel-springs.keepclear"
TRAIN = demo_models() / "3-air-compressor-train" / "as-built.keepclear"
MIKOTA = Path(__file__).resolve().parents[1] / "data" / "mikota_20"
HEAD = {"file", "title", "degrees_of_freedom", "verdict", "machines", "notes"}
MACHINE = {
    "machine",
    "verdict",
    "sentence",
    "speed_rpm",
    "considered_rpm",
    "left_rpm",
    "lines",
    "modes",
    "meetings",
    "runs",
    "fixed",
    "run_up",
}
PASSED = {
    "check",
    "mode",
    "speed_rpm",
    "range_rpm",
    "at_nominal",
    "damping_ratio",
    "half_power_s",
    "half_power_cycles",
    "quasi_steady",
}


def printed(capsys, *words):
    code = main([*map(str, words), "--json"])
    out, err = capsys.readouterr()
    assert err == ""
    return code, json.loads(out)


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: f"{path.parent.name}/{path.stem}")
def test_document(capsys, path):
    code, told = printed(capsys, "speeds", path)
    assert set(told) == HEAD
    assert code == (0 if told["verdict"] == "clear" else 1)
    (machine,) = told["machines"]
    assert set(machine) == MACHINE
    runs = machine["runs"]
    assert [runs[0]["from_rpm"], runs[-1]["to_rpm"]] == machine["considered_rpm"]
    assert all(one["to_rpm"] == after["from_rpm"] for one, after in pairwise(runs))
    assert machine["left_rpm"] == pytest.approx(sum(r["to_rpm"] - r["from_rpm"] for r in runs if r["left"]))
    for one in machine["meetings"]:
        low, high = one["keep_clear_rpm"]
        assert low < one["within_margin_rpm"][0] < one["speed_rpm"] < one["within_margin_rpm"][1] < high


def test_text(capsys):
    assert main(["speeds", str(FAN)]) == 1
    out = capsys.readouterr().out
    assert "500 of the 1200 rpm from 600 to 1800 rpm are clear of every order" in out
    assert "676 to 1376 rpm   mode in band         1× unbalance and mode 4\n" in out
    assert "1× unbalance  4 at 15.99 Hz  959.7 rpm  811.9 to 1100 rpm" in out
    assert all(len(line) <= 100 for line in out.splitlines())


def test_a_fixed_frequency_and_the_surroundings_of_one_speed(capsys):
    assert main(["speeds", str(TRAIN)]) == 1
    out = capsys.readouterr().out
    assert "Looked at: 742.5 to 1856.25 rpm, around the one speed given." in out
    assert "100 Hz twice line frequency  ±10 %   clear at nominal only\n" in out


def test_nothing_to_hold_against_modes(tmp_path, capsys):
    tree = json.loads(FAN.read_text(encoding="utf-8"))
    del tree["machines"]
    path = tmp_path / "bare.keepclear"
    path.write_text(json.dumps(tree), encoding="utf-8")
    assert main(["speeds", str(path)]) == 2
    assert "No machine has both a speed and an excitation" in capsys.readouterr().err


def test_ranges_barred_in_the_file_leave_the_rest_clear(tmp_path, capsys):
    tree = json.loads(FAN.read_text(encoding="utf-8"))
    tree["machines"][0]["barred_ranges"] = [{"from": "670 rpm", "to": "1380 rpm"}]
    path = tmp_path / "barred.keepclear"
    path.write_text(json.dumps(tree), encoding="utf-8")
    code, told = printed(capsys, "speeds", path)
    assert (code, told["verdict"]) == (0, "clear")
    assert [(r["from_rpm"], r["to_rpm"], r["left"], r["barred"]) for r in told["machines"][0]["runs"]] == [
        (600, 670, True, False),
        (670, 1380, False, True),
        (1380, 1800, True, False),
    ]


@pytest.mark.parametrize("path", DEMOS[::3], ids=lambda path: path.parent.name)
def test_check_tells_what_is_passed_on_run_up(capsys, path):
    _, told = printed(capsys, "check", path)
    assert all(set(one) == PASSED for one in told["run_up"])
    machine = read_model(path).machines[0]
    lowest = getattr(machine.speed, "from_", machine.speed).si / RPM
    assert all(one["at_nominal"] == (one["speed_rpm"] < lowest) for one in told["run_up"])
    assert all(one["range_rpm"][0] < lowest for one in told["run_up"])


def test_run_up_has_no_part_in_the_verdict(capsys):
    path = demo_models() / "6-vacuum-pump-absorber" / "absorber-210kg.keepclear"
    code, told = printed(capsys, "check", path)
    assert (code, told["verdict"]) == (0, "clear")
    (one,) = told["run_up"]
    assert one["speed_rpm"] == pytest.approx(16.914 * 60, rel=1e-4)
    main(["check", str(path)])
    assert "From standstill to the lowest speed; without a verdict." in capsys.readouterr().out


def test_matrices_pass_modes_too(capsys):
    """Mikota's chain has its modes at 1, 2, 3 ... times the first."""
    words = ["check", "--stiffness", MIKOTA / "K.mtx", "--mass", MIKOTA / "M.mtx", "--margin", "3 %"]
    _, told = printed(capsys, *words, "--speed", "25 rpm", "--orders", "1,2")
    speeds = [
        (one["check"][-2], one["mode"], one["speed_rpm"] * 2 * 3.141592653589793 / 60)
        for one in told["run_up"]
    ]
    assert [(check, mode) for check, mode, _ in speeds] == [
        ("1", 1),
        ("1", 2),
        *(("2", n) for n in range(1, 6)),
    ]
    assert [speed for _, _, speed in speeds] == pytest.approx([1, 2, 0.5, 1, 1.5, 2, 2.5], rel=1e-9)
    assert {one["half_power_s"] for one in told["run_up"]} == {None}
