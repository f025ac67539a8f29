"""``keepclear response``: words, tables, keys, files, exit codes."""

import csv
import json
import math
import re

import pytest

from modalview.cli import main
from modalview.places import demo_models

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
FAN = demo_models() / "2-supply-fan" / "steel-legs.keepclear"
TRAIN = demo_models() / "3-air-compressor-train" / "as-built.keepclear"
VACUUM = demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear"


def printed(capsys, path, *words):
    code = main(["response", str(path), *words, "--json"])
    out, err = capsys.readouterr()
    assert err == ""
    return code, json.loads(out)


def test_motion_at_the_speed_of_a_single_mass(capsys):
    """Closed form F/|k - m w^2 + 2 i zeta w sqrt(k m)|: 400 N, 2100 kg, 3.28e7 N/m, 1.2 %, 1180 rpm."""
    code, told = printed(capsys, VACUUM)
    (machine,) = told["machines"]
    motion = next(one for one in machine["motion"] if one["check"])
    w, wn = 1180 * math.pi / 30, math.sqrt(3.28e7 / 2100)
    peak = 400 / abs(3.28e7 - 2100 * w**2 + 2j * 0.012 * w * math.sqrt(3.28e7 * 2100))
    assert motion["at_rpm"] == 1180
    assert motion["displacement_peak_m"] == pytest.approx(peak, rel=1e-9)
    assert motion["displacement_peak_to_peak_m"] == pytest.approx(2 * peak, rel=1e-9)
    assert motion["velocity_rms_m_per_s"] == pytest.approx(w * peak / math.sqrt(2), rel=1e-9)
    assert motion["acceleration_rms_m_per_s2"] == pytest.approx(w**2 * peak / math.sqrt(2), rel=1e-9)
    assert motion["velocity_rms_m_per_s"] == pytest.approx(0.0327, abs=5e-5)
    assert code == (1 if any(one["exceeded"] for one in machine["limits"]) else 0)
    # Its mode is passed below the speed at some values within tolerance only: no motion is told there.
    assert machine["run_up"] == []
    assert told["degrees_of_freedom"] == 1
    assert w < wn


def test_text_of_a_single_speed(capsys):
    assert main(["response", str(PUMP)]) == 1
    out = capsys.readouterr().out
    assert "motor, y  1× unbalance  30.7 um       61.3 um     6.70 mm/s         2.07 m/s2\n" in out
    assert "pump house foundation  1× unbalance     4.42 kN\n" in out
    assert "4.5 mm/s  6.70 mm/s  2950 rpm" in out
    assert "EXCEEDED" in out
    assert "pump set/2x: its size is not given" in out
    assert "Damping ratio 2 % for every mode" in out
    assert all(len(line) <= 110 for line in out.splitlines())


def test_text_of_a_range_tells_the_worst(capsys):
    main(["response", str(FAN)])
    out = capsys.readouterr().out
    assert "the worst over 600 to 1800 rpm (and at which rpm):" in out
    assert "12.9 mm/s (1498)" in out


def test_worst_lies_within_the_range_and_at_a_peak(capsys):
    _, told = printed(capsys, FAN)
    (machine,) = told["machines"]
    worst = machine["worst"][0]["velocity_rms_m_per_s"]
    assert 600 <= worst["at_rpm"] <= 1800
    same = [
        peak["velocity_rms_m_per_s"]
        for peak in machine["peaks"]
        if peak["watch"] == machine["worst"][0]["watch"] and "velocity_rms_m_per_s" in peak
    ]
    assert worst["value"] == pytest.approx(max(same), rel=1e-9)


def test_a_point_a_direction_and_further_speeds(capsys):
    words = ("--at", "skid:0.3 m,0.25 m", "--direction", "y", "--speed", "1200 rpm", "--speed", "2500 rpm")
    _, told = printed(capsys, FAN, *words)
    (machine,) = told["machines"]
    assert machine["watches"][0] == {"id": "at 1", "label": "fan, motor and skid at 0.3 m, 0.25 m, y"}
    speeds = sorted({one["at_rpm"] for one in machine["motion"]})
    assert speeds == [600, 1200, 1800, 2500]


def test_a_train_turns_and_tells_its_torques(capsys):
    main(["response", str(TRAIN)])
    out = capsys.readouterr().out
    assert "2.32 mrad     4.64 mrad    0.255 rad/s       39.6 rad/s2" in out
    assert "low-speed coupling     1× motor shaft                             2.51 kN m\n" in out
    assert re.search(r"1× motor shaft +2 +1475 rpm +compressor rotor, +12\.2 mrad +1\.33 rad/s", out)
    assert "a fast run-up does not reach it in full" in out


def test_amplitude_passed_is_that_of_the_peak(capsys):
    _, told = printed(capsys, TRAIN)
    (machine,) = told["machines"]
    passed = next(one for one in machine["run_up"] if one["check"] == "train/2x low")
    peaks = [
        peak["velocity_rms_rad_per_s"]
        for peak in machine["peaks"]
        if (peak["check"], peak["watch"]) == (passed["check"], passed["watch"])
        and "velocity_rms_rad_per_s" in peak
    ]
    assert passed["velocity_rms_rad_per_s"] == pytest.approx(max(peaks), rel=1e-9)
    assert passed["quasi_steady"] is False


def test_curves_as_a_table(tmp_path, capsys):
    target = tmp_path / "curves.csv"
    assert main(["response", str(PUMP), "--csv", str(target)]) == 1
    assert "curves.csv written" in capsys.readouterr().out
    with target.open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    assert {(row["machine"], row["watch"], row["check"]) for row in rows} == {
        ("pump set", "motor, y", "pump set/1x"),
        ("pump set", "pump, y", "pump set/1x"),
    }
    (at_speed,) = [row for row in rows if row["speed_rpm"] == "2950.0" and row["watch"] == "motor, y"]
    assert float(at_speed["velocity_rms_m_per_s"]) == pytest.approx(6.70e-3, abs=5e-6)
    assert main(["response", str(PUMP), "--csv", str(target)]) == 2
    assert "is there already" in capsys.readouterr().err
    assert main(["response", str(PUMP), "--csv", str(target), "--replace"]) == 1


def test_a_table_that_cannot_be_written(tmp_path, capsys):
    assert main(["response", str(PUMP), "--csv", str(tmp_path / "gone" / "curves.csv")]) == 2
    assert "was not written" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--at", "fan"], "--at fan: there is no such body; the file has skid, floor"),
        (["--at", "skid:1 m"], "an offset has 2 lengths here, BODY:x,y; found 1"),
        (["--at", "skid:1 m,2 kg"], "--at skid:1 m,2 kg:"),
        (["--at", "skid", "--direction", "up"], "up"),
        (["--direction", "y"], "--direction goes with --at"),
        (["--machine", "pump"], "--machine pump: there is none; the file has fan"),
        (["--speed", "fast"], "--speed:"),
        (["--speed", "0 rpm"], "--speed wants a speed above zero"),
    ],
)
def test_unusable_words(words, message, capsys):
    assert main(["response", str(FAN), *words]) == 2
    assert message in capsys.readouterr().err


def edited(tmp_path, change, source=VACUUM):
    tree = json.loads(source.read_text(encoding="utf-8"))
    change(tree)
    path = tmp_path / "edited.keepclear"
    path.write_text(json.dumps(tree), encoding="utf-8")
    return path


def test_without_damping_a_resonance_has_no_bound(tmp_path, capsys):
    def undamped(tree):
        del tree["damping"]
        tree["links"][0]["stiffness"] = f"{(2 * math.pi * 1180 / 60) ** 2 * 2100!r} N/m"

    path = edited(tmp_path, undamped)
    main(["response", str(path)])
    assert "without bound" in capsys.readouterr().out
    _, told = printed(capsys, path)
    state = told["machines"][0]["states"][0]
    assert state["infinite"] is True
    assert told["machines"][0]["motion"][0]["displacement_peak_m"] is None


def test_a_fixed_frequency_alone(tmp_path, capsys):
    def mains(tree):
        machine = tree["machines"][0]
        del machine["speed"]
        machine.pop("run_up", None)
        machine["excitations"] = [
            {
                "id": "mains",
                "frequency": "100 Hz",
                "at": {"body": "beam"},
                "direction": "y",
                "magnitude": {"force": "400 N"},
            }
        ]

    path = edited(tmp_path, mains)
    assert main(["response", str(path)]) == 0
    out = capsys.readouterr().out
    peak = 400 / abs(3.28e7 - 2100 * (200 * math.pi) ** 2)
    assert f"{1e6 * peak:.3f} um"[:4] in out
    assert main(["response", str(path), "--csv", str(tmp_path / "no.csv")]) == 2
    assert "no machine has a speed" in capsys.readouterr().err


def test_nothing_that_excites(tmp_path, capsys):
    path = edited(tmp_path, lambda tree: tree.pop("machines"))
    assert main(["response", str(path)]) == 2
    assert "Nothing excites the model" in capsys.readouterr().err
