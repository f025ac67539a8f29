"""`modes --near` of a model file."""

import json
from pathlib import Path

import pytest

from modalview.cli import main

GENSET = Path(__file__).parents[2] / "demo_models" / "4-standby-generator-set" / "raised-mounts.keepclear"


def run(capsys, *words):
    code = main([str(word) for word in words])
    out, err = capsys.readouterr()
    assert "Traceback" not in out + err
    return code, out, err


@pytest.mark.parametrize("near", ["510rpm", "8.5 Hz", "510 cpm", "53.407 rad/s"])
def test_any_unit_of_frequency(capsys, near):
    code, out, _ = run(capsys, "modes", GENSET, "--near", near, "--count", "2", "--json")
    found = json.loads(out)
    assert code == 0
    assert found["near_hz"] == pytest.approx(8.5, rel=1e-5)
    assert [mode["number"] for mode in found["modes"]] == [5, 6]
    assert found["certificate"]["counted"] == found["certificate"]["found"] == 2
    assert found["certificate"]["low_hz"] < 8.5 < found["certificate"]["high_hz"]
    assert found["residual_history"][-1]["relative_residual"] < 1e-11
    assert found["complete"] is True


def test_the_same_modes_as_all(capsys):
    _, every, _ = run(capsys, "modes", GENSET, "--json")
    _, near, _ = run(capsys, "modes", GENSET, "--near", "510rpm", "--json")
    for mode, other in zip(json.loads(near)["modes"], json.loads(every)["modes"], strict=True):
        assert mode["name"] == other["name"]
        assert mode["frequency_hz"] == pytest.approx(other["frequency_hz"], rel=1e-13)
        assert mode["range_hz"] == pytest.approx(other["range_hz"], rel=1e-12)
        assert mode.keys() == other.keys()


def test_history_on_request(capsys):
    _, out, _ = run(capsys, "modes", GENSET, "--near", "510rpm", "--count", "1", "--history")
    assert "1 mode between" in out
    assert "largest residual" in out


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--near", "8.5"], "unit"),
        (["--near", "8 kg"], "near"),
        (["--near", "-8 Hz"], "must not be negative"),
        (["--near", "8 Hz", "--count", "0"], "1 to 80"),
        (["--count", "3"], "go with --near"),
        (["--history"], "go with --near"),
    ],
)
def test_words_that_make_no_sense(capsys, words, said):
    code, out, err = run(capsys, "modes", GENSET, *words)
    assert (code, out) == (2, "")
    assert said in err
