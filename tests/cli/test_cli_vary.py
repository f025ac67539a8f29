"""``keepclear vary``: words, keys, tables, exit codes."""

import csv
import json

import pytest

from modalview.cli import main
from modalview.places import demo_models

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
SET = demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear"
BASE = ("--value", "k3=50 to 500 kN/mm")


def printed(capsys, *words):
    code = main(["vary", *map(str, words)])
    return code, capsys.readouterr()


def test_one_value(capsys):
    code, told = printed(capsys, PUMP, *BASE, "--points", "10")
    assert code == 0
    assert "350 kN/mm  68.85 Hz  141.5 Hz  261.7 Hz  clear\n" in told.out
    assert "Clear of every check at the points of 50 kN/mm, 350 to 400 kN/mm." in told.out
    assert all(len(line) <= 100 for line in told.out.splitlines())


def test_two_values_as_a_map(capsys):
    code, told = printed(capsys, PUMP, *BASE, "--value", "k1", "--points", "4")
    assert code == 0
    assert "base support stiffness down, motor pedestal stiffness across from 3.6e8 to 4.4e8 N/m:" in told.out
    assert "200 kN/mm  ####\n" in told.out
    assert ". clear, o clear at nominal only, # mode in band" in told.out


def test_document_of_a_grid(capsys):
    code, told = printed(capsys, PUMP, *BASE, "--points", "3", "--by-ratio", "--json")
    document = json.loads(told.out)
    assert code == 0
    assert [one["at"][0] for one in document["points"]] == pytest.approx([5e7, 5e7 * 10**0.5, 5e8])
    assert document["points"][0]["verdict"] == "clear"
    assert len(document["points"][0]["frequencies_hz"]) == 3
    assert document["values"] == [
        {"value": "k3.stiffness", "label": "base support stiffness", "unit": "N/m", "as_typed": 1.75e8}
    ]


def test_samples(capsys):
    code, told = printed(capsys, PUMP, "--samples", "500", "--seed", "1")
    assert code == 0
    assert "500 samples of 6 values,\nuniform, seed 1" in told.out
    assert "44.12 to 57.78 Hz\n" in told.out
    assert "A sample says how often, not whether" in told.out
    assert all(len(line) <= 100 for line in told.out.splitlines())


def test_document_of_samples(capsys):
    words = ("--samples", "20", "--triangular", "--response", "--json")
    code, told = printed(capsys, PUMP, *words)
    document = json.loads(told.out)
    assert code == 0
    assert (document["samples"], document["seed"], document["spread"]) == (20, 0, "triangular")
    mode = document["modes"][0]
    low, high = mode["range_hz"]
    assert low <= mode["sampled_hz"][0] <= mode["median_hz"] <= mode["sampled_hz"][1] <= high
    assert document["motion"][0]["as_typed"] == pytest.approx(6.70e-3, abs=5e-6)
    assert document["motion"][0]["unit"] == "m/s rms"


def read(path):
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.reader(file))


def test_tables(tmp_path, capsys):
    target = tmp_path / "grid.csv"
    assert printed(capsys, PUMP, *BASE, "--points", "5", "--csv", target)[0] == 0
    rows = read(target)
    assert rows[0][:2] == ["k3.stiffness [N/m]", "mode 1 [Hz]"]
    assert rows[0][-1] == "pump set/vane"
    assert len(rows) == 6
    code, told = printed(capsys, PUMP, "--samples", "7", "--csv", target)
    assert code == 2
    assert "is there already" in told.err
    target.unlink()
    printed(capsys, PUMP, "--samples", "7", "--csv", target)
    rows = read(target)
    assert len(rows) == 8
    assert rows[0][0] == "motor.mass [SI]"


def test_coordinate(capsys):
    code, told = printed(capsys, SET, "--value", "m1.from.offset.z=-0.6 to -0.1 m", "--points", "3", "--json")
    assert code == 0
    assert json.loads(told.out)["values"][0]["value"] == "m1.from.offset.z"


@pytest.mark.parametrize(
    ("words", "told"),
    [
        ((), "say which value is varied"),
        ((*BASE, "--seed", "1"), "--seed goes with --samples"),
        ((*BASE, "--response"), "--response goes with --samples"),
        (("--samples", "5", "--points", "3"), "--points and --by-ratio belong to a grid"),
        (("--samples", "5", "--workers", "1", "--cluster", "tcp://x:1"), "give one of them"),
        (("--value", "k9=1 to 2 N/m"), 'There is no value "k9"'),
        (("--value", "k3=1 to 2 kg"), "kg is a unit of mass, not of stiffness"),
    ],
)
def test_words_that_do_not_fit(words, told, capsys):
    code, output = printed(capsys, PUMP, *words)
    assert code == 2
    assert told in output.err
    assert "Traceback" not in output.err
