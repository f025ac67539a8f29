"""``keepclear mounts``: words, keys, exit codes."""

import json

import pytest

from modalview.cli import main
from modalview.places import demo_models

SET = demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear"
FAN = demo_models() / "2-supply-fan" / "steel-springs.keepclear"
TRAIN = demo_models() / "3-air-compressor-train" / "as-built.keepclear"


def printed(capsys, path):
    code = main(["mounts", str(path), "--json"])
    return code, json.loads(capsys.readouterr().out)


def test_document(capsys):
    code, told = printed(capsys, SET)
    assert code == 0
    assert told["sound"] is True
    assert told["degrees_of_freedom"] == 6
    assert told["weight_n"] == pytest.approx(3200 * 9.80665)
    assert sum(one["load_n"] for one in told["mounts"]) == pytest.approx(told["weight_n"], rel=1e-12)
    assert told["mounts"][0]["of_rated_percent"] == pytest.approx(66.0, abs=0.05)
    assert told["carried"][0]["offset_m"] == pytest.approx([-0.1, 0], abs=1e-12)
    assert set(told["bodies"][0]["tilt_rad"]) == {"rx", "ry"}


def test_text(capsys):
    assert main(["mounts", str(FAN)]) == 0
    out = capsys.readouterr().out
    assert "left spring, vertical   skid     floor    9.864 kN     39.1 mm\n" in out
    assert "the centre of gravity lies x -100 mm from the stiffness-weighted centroid" in out
    assert "stability of a high centre of gravity" in out
    assert all(len(line) <= 100 for line in out.splitlines())


def edited(tmp_path, change):
    tree = json.loads(SET.read_text(encoding="utf-8"))
    change(tree)
    path = tmp_path / "edited.keepclear"
    path.write_text(json.dumps(tree), encoding="utf-8")
    return path


def test_overload_is_told_and_ends_with_1(tmp_path, capsys):
    path = edited(tmp_path, lambda tree: tree["links"][0].update(rated_load="5 kN"))
    assert main(["mounts", str(path)]) == 1
    out = capsys.readouterr().out
    assert "rear right mount carries 18.8 % more than its rated load." in out
    assert "118.8 % OVERLOADED" in out


def test_a_pulled_mount_is_told_and_ends_with_1(tmp_path, capsys):
    def shifted(tree):
        for link, x in zip(tree["links"], (2.0, 2.0, 0.5, 0.5, 1.0, 1.0), strict=True):
            link["from"]["offset"][0] = f"{x} m"

    code, told = printed(capsys, edited(tmp_path, shifted))
    assert code == 1
    assert [one["pulled"] for one in told["mounts"]] == [True, True, False, False, False, False]
    assert "pulled upward: a mount that cannot pull lifts off" in told["sentence"]


def test_a_train_has_none(capsys):
    assert main(["mounts", str(TRAIN)]) == 2
    assert "A shaft train only turns" in capsys.readouterr().err
