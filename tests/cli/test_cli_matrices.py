"""Matrices and tables at the command line: words, exit codes, JSON, and 200 spoiled files."""

import gzip
import json
import re
import sys
from pathlib import Path

import numpy as np
import pytest

from modalview.cli import main
from modalview.eigen import solve as all_modes
from modalview.study import matrices as study_matrices

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import open_data

MIKOTA = open_data.HERE / "mikota_20"
PAIR = ("--stiffness", MIKOTA / "K.mtx", "--mass", MIKOTA / "M.mtx")
# The chain's angular frequencies are 1, 2, ... 20: mode i lies at i / 2 pi Hz.
MODE_5 = "5 rad/s"
HEAD = {
    "file",
    "mass_file",
    "title",
    "degrees_of_freedom",
    "tolerance_k_percent",
    "tolerance_m_percent",
    "absent",
}


def run(capsys, *words):
    try:
        code = main([str(word) for word in words])
    except SystemExit as leave:
        code = leave.code
    out, err = capsys.readouterr()
    assert "Traceback" not in out + err
    return code, out, err


def told(capsys, *words):
    code, out, err = run(capsys, *words, "--json")
    assert err == ""
    return code, json.loads(out)


class TestCommands:
    def test_bounds(self, capsys):
        code, found = told(capsys, "bounds", *PAIR, "--frequencies", MODE_5, "--margin", "10 %")
        assert code == 0
        assert set(found) >= HEAD | {"lowest_hz", "highest_hz", "bands", "gershgorin", "notes"}
        low, high = found["lowest_hz"]
        assert low <= 1 / (2 * np.pi) <= high
        assert found["bands"][0]["modes_inside"] == 1
        assert any("SI is assumed" in note for note in found["notes"])
        assert "effective masses" in found["absent"]

    def test_modes(self, capsys):
        code, found = told(capsys, "modes", *PAIR, "--tolerance-k", "10 %", "--tolerance-m", "3 %")
        assert code == 0
        assert set(found) >= HEAD | {"modes", "complete", "counts", "method", "notes"}
        assert found["tolerance_k_percent"] == 10
        assert len(found["modes"]) == 20
        fifth = found["modes"][4]
        assert abs(fifth["frequency_hz"] - 5 / (2 * np.pi)) <= fifth["numerical_error_hz"]
        assert fifth["range_hz"][0] < fifth["frequency_hz"] * 0.9**0.5
        assert max(map(abs, fifth["shape"])) == 1
        assert found["complete"] is True

    @pytest.mark.parametrize(
        ("words", "code", "verdict"),
        [
            (("--frequencies", MODE_5, "--margin", "10 %"), 1, "mode in band"),
            (("--frequencies", "5.5 rad/s", "--margin", "2 %"), 0, "clear"),
            (
                ("--frequencies", "5.5 rad/s", "--margin", "2 %", "--tolerance-k", "20 %"),
                1,
                "clear at nominal only",
            ),
            (("--speed", "2.75 rad/s", "--orders", "2", "--margin", "2 %"), 0, "clear"),
            (
                ("--speed-from", "2 rad/s", "--speed-to", "3 rad/s", "--orders", "2,40", "--margin", "2 %"),
                1,
                None,
            ),
            (
                ("--speed", "5.5 rad/s", "--speed-tolerance", "9 %", "--orders", "1", "--margin", "2 %"),
                1,
                None,
            ),
            ((), 2, None),
        ],
    )
    def test_check(self, capsys, words, code, verdict):
        found_code, found = told(capsys, "check", *PAIR, *words)
        assert found_code == code
        assert verdict is None or found["verdict"] == verdict

    def test_text_says_what_is_assumed_and_absent(self, capsys):
        words = ("--speed", "20 rpm", "--orders", "1,2", "--margin", "15 %", "--tolerance-k", "10 %")
        for command in ("bounds", "modes", "check"):
            _, out, err = run(capsys, command, *PAIR, *words)
            assert err == ""
            plain = " ".join(out.split())
            for saying in (
                "SI is assumed",
                "by one common factor",
                "M is taken as exact",
                "names of the modes",
            ):
                assert saying in plain, (command, saying)

    def test_unit_mass_is_told(self, capsys):
        _, out, _ = run(capsys, "bounds", "--stiffness", MIKOTA / "K.mtx")
        assert "1 kg at every coordinate" in out

    def test_gzipped(self, capsys, tmp_path):
        packed = tmp_path / "K.mtx.gz"
        packed.write_bytes(gzip.compress((MIKOTA / "K.mtx").read_bytes()))
        _, found = told(capsys, "bounds", "--stiffness", packed, "--mass", MIKOTA / "M.mtx")
        assert found["degrees_of_freedom"] == 20

    def test_more_modes_than_are_found_at_once(self, capsys, monkeypatch):
        monkeypatch.setattr(study_matrices, "LARGEST", 10)
        monkeypatch.setattr(all_modes, "LARGEST", 10)
        code, out, _ = run(capsys, "check", *PAIR, "--frequencies", "5.5 rad/s", "--margin", "2 %")
        assert code == 0
        assert "clear (values taken as exact)" in out
        code, _, err = run(capsys, "modes", *PAIR)
        assert code == 2
        assert "20 modes: more than the 10 that are found all at once" in err
        assert "--near" in err

    def test_modes_near_a_frequency(self, capsys):
        code, found = told(capsys, "modes", *PAIR, "--near", "5.2 rad/s", "--count", "3")
        assert code == 0
        assert [mode["number"] for mode in found["modes"]] == [4, 5, 6]
        assert found["complete"] is True
        low, high = (2 * np.pi * found["certificate"][edge] for edge in ("low_hz", "high_hz"))
        assert 3 < low < 4
        assert 6 < high < 7
        assert found["residual_history"][-1]["relative_residual"] < 1e-9
        _, out, _ = run(capsys, "modes", *PAIR, "--near", "5.2 rad/s", "--count", "3")
        assert "3 modes between" in out
        assert "none missed (proven by counts)" in out


class TestWords:
    @pytest.mark.parametrize("command", ["bounds", "modes", "check"])
    @pytest.mark.parametrize(
        ("words", "says"),
        [
            (("--mass", "M.mtx"), "--mass goes with --stiffness"),
            (("model.keepclear", "--orders", "1"), "--orders goes with --stiffness"),
            (("model.keepclear", *PAIR), "name one of them"),
            ((), "name a FILE"),
            ((*PAIR, "--speed", "fast"), "--speed"),
            ((*PAIR, "--speed", "20 rpm"), "--speed needs --orders or --frequencies"),
            ((*PAIR, "--orders", "1", "--margin", "5 %"), "--orders are multiples of a speed: give --speed"),
            ((*PAIR, "--orders", "1", "--speed", "20 rpm"), "--margin is missing"),
            ((*PAIR, "--orders", "one", "--speed", "20 rpm", "--margin", "5 %"), "--orders wants numbers"),
            ((*PAIR, "--orders", "1,nan", "--speed", "20 rpm", "--margin", "5 %"), "found 'nan'"),
            (
                (*PAIR, "--orders", "-1", "--speed", "20 rpm", "--margin", "5 %"),
                "--orders: must be above zero",
            ),
            ((*PAIR, "--orders", "1,1", "--speed", "20 rpm", "--margin", "5 %"), '"1x" is already'),
            ((*PAIR, "--orders", "1", "--speed", "20 rpm", "--margin", "100 %"), "--margin must be from 0 %"),
            (
                (*PAIR, "--orders", "1", "--speed-from", "20 rpm", "--margin", "5 %"),
                "a speed range has both ends",
            ),
            ((*PAIR, "--frequencies", "1,5 Hz", "--margin", "5 %"), "with decimal points, such as"),
            (
                (*PAIR, "--orders", "1", "--speed-from", "3 Hz", "--speed-to", "2 Hz", "--margin", "5 %"),
                "--speed-from and --speed-to: must rise",
            ),
            ((*PAIR, "--tolerance-k", "10"), """found '10'; write "10 %\""""),
            ((*PAIR, "--frequencies", "20", "--margin", "5 %"), "--frequencies"),
            ((*PAIR, "--frequencies", "0 Hz", "--margin", "5 %"), "--frequencies: must be above zero"),
            ((*PAIR, "--tolerance-k", "100 %"), "--tolerance-k is a share from 0 % to below 100 %"),
            ((*PAIR, "--tolerance-m", "5 kg"), "--tolerance-m"),
        ],
    )
    def test_words_that_do_not_fit(self, capsys, command, words, says):
        code, out, err = run(capsys, command, *words)
        assert (code, out) == (2, "")
        assert says in err

    @pytest.mark.parametrize(
        ("words", "says"),
        [
            ((*PAIR, "--count", "3"), "--count goes with --near"),
            ((*PAIR, "--near", "fast"), "--near"),
            ((*PAIR, "--near", "5 rad/s", "--count", "0"), "ask for 1 to"),
        ],
    )
    def test_words_of_modes_near(self, capsys, words, says):
        code, out, err = run(capsys, "modes", *words)
        assert (code, out) == (2, "")
        assert says in err

    def test_exact_is_not_promised_for_matrices(self, capsys):
        code, out, err = run(capsys, "check", *PAIR, "--exact", "--frequencies", "1 Hz", "--margin", "1 %")
        assert (code, out) == (2, "")
        assert "--exact goes with a .keepclear file" in err

    def test_nothing_to_check_names_the_options(self, capsys):
        code, out, err = run(capsys, "check", *PAIR)
        assert (code, err) == (2, "")
        said = out.split("\n\n")[1]
        options = {"--orders", "--speed", "--speed-from", "--speed-to", "--frequencies", "--margin"}
        assert set(re.findall(r"--[\w-]+", said)) == options
        assert told(capsys, "check", *PAIR)[1]["sentence"] == " ".join(said.split())

    def test_a_range_of_speeds_and_one_speed(self, capsys):
        words = (
            "--speed",
            "1 rpm",
            "--speed-from",
            "1 rpm",
            "--speed-to",
            "2 rpm",
            "--orders",
            "1",
            "--margin",
            "1 %",
        )
        code, _, err = run(capsys, "check", *PAIR, *words)
        assert code == 2
        assert "give one of them" in err


class TestImport:
    WORDS = ("--motion", "single axis", "--stiffness-unit", "N/m")
    TABLES = tuple(open_data.HERE / "gnm_1a8o" / name for name in ("nodes.csv", "springs.csv"))

    def test_a_unit_that_is_none_is_refused_also_where_headings_name_another(self, capsys, tmp_path):
        words = [*self.words(tmp_path / "m.keepclear"), "--stiffness-unit", "furlong"]
        code, _, err = run(capsys, *words)
        assert code == 2
        assert "--stiffness-unit: 'furlong' is no unit of stiffness; write one of N/m" in err

    def words(self, target, tables=TABLES):
        return ("import", "--nodes", tables[0], "--springs", tables[1], *self.WORDS, "-o", target)

    def test_model_opens(self, capsys, tmp_path):
        target = tmp_path / "net.keepclear"
        code, out, _ = run(capsys, *self.words(target))
        assert code == 0
        assert "70 nodes with mass, 0 on the ground, 256 springs, single axis" in out
        assert "Not read from nodes.csv: chain, resid, resname, z_angstrom." in out
        assert run(capsys, "bounds", target)[0] == 0

    def test_nothing_is_overwritten_unless_asked(self, capsys, tmp_path):
        target = tmp_path / "net.keepclear"
        target.write_text("mine")
        code, _, err = run(capsys, *self.words(target))
        assert code == 2
        assert "say --replace" in err
        assert target.read_text() == "mine"
        assert run(capsys, *self.words(target), "--replace")[0] == 0
        assert target.with_name("net.keepclear.bak").read_text() == "mine"

    def test_output_is_a_model_file(self, capsys, tmp_path):
        code, _, err = run(capsys, *self.words(tmp_path / "nodes.csv"))
        assert code == 2
        assert "-o names a model file" in err

    def test_faults_leave_no_file(self, capsys, tmp_path):
        nodes = tmp_path / "nodes.csv"
        nodes.write_text("node,mass_kg\n1,0.5\n2,x\n")
        code, _, err = run(capsys, *self.words(tmp_path / "net.keepclear", (nodes, self.TABLES[1])))
        assert code == 2
        assert 'nodes.csv, row 3, column "mass_kg": "x" is no number' in err
        assert list(tmp_path.iterdir()) == [nodes]


def spoiled(data, random):
    """Cut, repeat, swap or overwrite a random piece of a file."""
    at, size = int(random.integers(len(data))), int(random.integers(1, 12))
    piece = data[at : at + size]
    junk = bytes(random.choice(list(b"0123456789.,;-+eE%nan \t\n\"'\xff\x00"), size=size).tolist())
    return [
        data[:at],
        data[:at] + piece + data[at:],
        data[:at] + data[at + size :],
        data[:at] + junk + data[at + size :],
        data[:at] + junk + data[at:],
    ][int(random.integers(5))]


KEPT = (0, 1, 2)  # a spoiled file may still be a good one: another number, a blank more


@pytest.mark.parametrize("seed", range(10))
def test_spoiled_matrices_are_met_with_a_message(capsys, tmp_path, seed):
    random = np.random.default_rng(seed)
    path = tmp_path / "K.mtx"
    source = (MIKOTA / ("K.mtx" if seed % 2 else "M.mtx")).read_bytes()
    for _ in range(12):
        data = spoiled(source, random)
        path.write_bytes(data)
        code, out, err = run(capsys, "check", "--stiffness", path, "--frequencies", "1 Hz", "--margin", "5 %")
        assert code in KEPT
        assert bool(err) == (code == 2)
        assert bool(out) == (code != 2)
        assert "fault of the program" not in err
        assert path.read_bytes() == data


def small_tables():
    """The first twelve nodes and the springs among them: a good pair of tables."""
    nodes, springs = (path.read_bytes().splitlines(keepends=True) for path in TestImport.TABLES)
    inner = [line for line in springs[1:] if max(map(int, line.split(b",")[:2])) <= 12]
    return [b"".join(nodes[:13]), b"".join([springs[0], *inner])]


def test_tables_to_be_spoiled_are_good(capsys, tmp_path):
    paths = tmp_path / "nodes.csv", tmp_path / "springs.csv"
    for path, data in zip(paths, small_tables(), strict=True):
        path.write_bytes(data)
    assert run(capsys, *TestImport().words(tmp_path / "a.keepclear", paths))[0] == 0


@pytest.mark.parametrize("seed", range(8))
def test_spoiled_tables_are_met_with_a_message(capsys, tmp_path, seed):
    random = np.random.default_rng(100 + seed)
    nodes, springs = tmp_path / "nodes.csv", tmp_path / "springs.csv"
    sources = small_tables()
    for number in range(10):
        pieces = list(sources)
        pieces[number % 2] = spoiled(sources[number % 2], random)
        nodes.write_bytes(pieces[0])
        springs.write_bytes(pieces[1])
        target = tmp_path / f"{number}.keepclear"
        code, _, err = run(capsys, *TestImport().words(target, (nodes, springs)))
        assert code in (0, 2)
        assert bool(err) == (code == 2)
        assert target.exists() == (code == 0)
        assert "fault of the program" not in err
