"""Damped modes and the complex plane at the command line."""

import json
import sys
from pathlib import Path

import pytest

from modalview.cli import main

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made

MASSES = [made.mass("motor", 2.0), made.mass("pump", 3.0)]
SPRINGS = [made.spring("k1", "motor", "g", 400.0), made.spring("k2", "motor", "pump", 300.0)]
MODE = {
    "number",
    "name",
    "kind",
    "root_real_per_s",
    "root_imag_rad_per_s",
    "damped_hz",
    "natural_hz",
    "damping_ratio",
    "decay_per_s",
    "log_decrement",
    "time_constant_s",
    "overdamped",
    "partner",
    "estimated_error_per_s",
    "shape_real",
    "shape_imag",
}


@pytest.fixture
def write(tmp_path):
    def made_file(links, **more):
        path = tmp_path / "model.keepclear"
        path.write_text(made.line(MASSES, links, **more), encoding="utf-8")
        return str(path)

    return made_file


def test_a_second_table_with_the_dashpots(write, capsys):
    links = [*SPRINGS, made.dashpot("c", "motor", "g", 4.0)]
    assert main(["modes", write(links)]) == 0
    said = capsys.readouterr().out
    first, second = said.split("With the dashpots:")
    assert "over tolerance" in first
    assert "damped frequency" in second
    assert "Verdicts use the undamped natural frequencies" in second
    assert second.count("motor against pump") == 1


def test_the_keys_of_a_damped_mode(write, capsys):
    links = [*SPRINGS, made.dashpot("c", "motor", "g", 200.0)]
    assert main(["modes", write(links), "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["damping_source"] == "dashpots"
    assert document["damped_roots"] == 4
    assert document["damped_zero_roots"] == 0
    for mode in document["damped_modes"]:
        assert set(mode) == MODE
        assert set(mode["shape_real"]) == {"motor", "pump"}
        assert mode["root_real_per_s"] == -mode["decay_per_s"]
    assert [mode["overdamped"] for mode in document["damped_modes"]] == [False, True, True]
    decay = document["damped_modes"][1]
    assert decay["damped_hz"] == 0
    assert decay["damping_ratio"] is None


def test_one_line_for_one_ratio(write, capsys):
    main(["modes", write(SPRINGS, damping={"ratio": "2 %"})])
    assert "2 % of critical in every mode" in capsys.readouterr().out


def test_a_table_for_proportional_damping(write, capsys):
    main(["modes", write(SPRINGS, damping={"alpha": "0.4 1/s", "beta": "0.002 s"})])
    said = capsys.readouterr().out
    assert "With the damping given for the whole model:\nmode  damped frequency" in said


def test_nothing_is_said_where_nothing_damps(write, capsys):
    main(["modes", write(SPRINGS)])
    assert "damp" not in capsys.readouterr().out


@pytest.mark.parametrize("dark", [[], ["--dark"]])
def test_picture_of_the_plane(write, tmp_path, dark):
    out = tmp_path / "plane.png"
    links = [*SPRINGS, made.dashpot("c", "motor", "g", 4.0)]
    assert main(["picture", write(links), "--of", "plane", "-o", str(out), "--size", "800x600", *dark]) == 0
    assert out.read_bytes().startswith(b"\x89PNG")
