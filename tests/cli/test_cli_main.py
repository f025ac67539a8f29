"""The command line as a person or a script meets it: words, exit codes, messages, keys."""

import json
import os
import re
import subprocess
import sys
from pathlib import Path

import pytest

from modalview.__main__ import main as start
from modalview.cli import main
from modalview.places import demo_models

WIDTH = 100
CAUTION = "A screening aid. It does not replace local codes or a licensed engineer's review."

ALL_CLEAR = "1-cooling-water-pump/part-grout-and-anchors"
IN_BAND = "1-cooling-water-pump/as-built"
NOMINAL_ONLY = "5-raw-water-vertical-pump/design"
TRAIN = "3-air-compressor-train/as-built"
SET = "4-standby-generator-set/dynamic-stiffness"
FAN = "2-supply-fan/rubber-mounts"


def demo(name):
    return str(demo_models() / f"{name}.keepclear")


def run(capsys, *words):
    """Exit code, standard output and standard error."""
    try:
        code = main([str(word) for word in words])
    except SystemExit as leave:
        code = leave.code
    out, err = capsys.readouterr()
    assert "Traceback" not in out + err
    return code, out, err


def document(**changes):
    found = {
        "format": "keepclear",
        "version": 1,
        "title": "made up",
        "motion": "single axis",
        "bodies": [{"id": "a", "name": "motor", "mass": "10 kg"}],
        "supports": [{"id": "ground"}],
        "links": [
            {
                "id": "k",
                "kind": "spring",
                "from": {"body": "a"},
                "to": {"support": "ground"},
                "stiffness": "1e6 N/m",
            }
        ],
        "machines": [
            {"id": "fan", "speed": "600 rpm", "margin": "10 %", "excitations": [{"id": "1x", "order": 1}]}
        ],
    }
    return found | changes


@pytest.fixture
def file(tmp_path):
    def write(text="", name="made.keepclear", **changes):
        path = tmp_path / name
        path.write_text(text or json.dumps(document(**changes)), encoding="utf-8")
        return path

    return write


class TestExitCodes:
    @pytest.mark.parametrize(
        ("names", "code"),
        [
            ([ALL_CLEAR], 0),
            ([IN_BAND], 1),
            ([NOMINAL_ONLY], 1),
            ([ALL_CLEAR, ALL_CLEAR], 0),
            ([ALL_CLEAR, NOMINAL_ONLY], 1),
        ],
    )
    def test_check_tells_the_worst_of_its_files(self, capsys, names, code):
        assert run(capsys, "check", *map(demo, names))[0] == code

    def test_an_unusable_file_is_worse_than_a_mode_in_band(self, capsys, file):
        bad = file("{", name="bad.keepclear")
        code, out, err = run(capsys, "check", demo(IN_BAND), bad, demo(ALL_CLEAR))
        assert code == 2
        assert "MODE IN BAND" in out
        assert out.count(CAUTION) == 2
        assert str(bad) in err

    @pytest.mark.parametrize("command", ["bounds", "modes"])
    def test_bounds_and_modes_judge_nothing(self, capsys, command):
        assert run(capsys, command, demo(IN_BAND))[0] == 0

    @pytest.mark.parametrize("machines", [[], [{"id": "fan", "speed": "600 rpm", "margin": "10 %"}]])
    def test_nothing_to_check(self, capsys, file, machines):
        code, out, _ = run(capsys, "check", file(machines=machines))
        assert code == 2
        assert "NOTHING TO CHECK" in out
        assert "give a machine its speed, its orders and the margin wanted" in out


class TestWords:
    def test_version(self, capsys):
        code, out, _ = run(capsys, "--version")
        assert code == 0
        assert re.fullmatch(r"keepclear \d+\.\d+\.\d+\n", out)

    @pytest.mark.parametrize("words", [[], ["bounds"], ["modes"], ["check"], ["picture"]])
    def test_help_names_every_option_and_the_caution(self, capsys, words):
        code, out, _ = run(capsys, *words, "--help")
        assert "%%" not in out
        assert code == 0
        assert "screening aid" in out
        assert ("FILE" if words else "COMMAND") in out

    @pytest.mark.parametrize(
        ("words", "says"),
        [
            ([], "required"),
            (["solve", "x"], "solve"),
            (["check"], "keepclear"),
            (["modes", "a", "b"], "'b' is one word too many; see keepclear modes --help"),
            (["bounds", "--jsn", "a"], "no option --jsn (did you mean --json?); see keepclear bounds --help"),
            (["check", "--stiff", "K.mtx"], "no option --stiff (did you mean --stiffness?)"),
            (["modes", "a", "--exact"], "no option --exact; see"),
            (["modes", "a", "-x"], "no option -x; see"),
            (["modes", "a", "--count", "2.5"], "--count: wants a whole number, such as 2; found '2.5'"),
            (["picture", "a"], "-o"),
            (["picture", "a", "-o", "b.png", "--mode", "two"], "two"),
            (["picture", "a", "-o", "b.png", "--of", "cat"], "cat"),
        ],
    )
    def test_words_that_do_not_fit(self, capsys, words, says):
        code, out, err = run(capsys, *words)
        assert (code, out) == (2, "")
        assert says in err
        assert err.startswith("keepclear: ")
        assert err.count("\n") == 1


class TestUnusableInput:
    @pytest.mark.parametrize("command", ["bounds", "modes", "check"])
    def test_missing_file(self, capsys, tmp_path, command):
        path = tmp_path / "gone.keepclear"
        assert run(capsys, command, path) == (2, "", f"keepclear: {path}: there is no such file\n")

    def test_folder(self, capsys, tmp_path):
        code, _, err = run(capsys, "check", tmp_path)
        assert code == 2
        assert f"{tmp_path} is a folder" in err

    @pytest.mark.parametrize(
        "text",
        ["{", "[]", "null", '{"format": "keepclear"}', '{"format": "other", "version": 1}', "\x00", "{}" * 3],
    )
    def test_not_a_model(self, capsys, file, text):
        code, out, err = run(capsys, "modes", file(text))
        assert (code, out) == (2, "")
        assert err.startswith("keepclear: ")

    def test_bytes_that_are_no_text(self, capsys, tmp_path):
        path = tmp_path / "picture.keepclear"
        path.write_bytes(b"\x89PNG\r\n\x1a\n\xff\xfe")
        assert run(capsys, "check", path)[0] == 2

    def test_all_faults_at_once_with_their_places(self, capsys, file):
        links = [
            {
                "id": "k",
                "kind": "spring",
                "from": {"body": "a"},
                "to": {"support": "gone"},
                "stiffness": "-1 N/m",
            }
        ]
        path = file(links=links)
        code, _, err = run(capsys, "check", path)
        assert code == 2
        assert err.startswith(f"keepclear: {path}: 2 faults:\n")
        assert 'links[0] "k" . to . support: there is no support "gone"' in err
        assert 'links[0] "k" . stiffness: must be above zero; found "-1 N/m"' in err

    @pytest.mark.parametrize("command", ["bounds", "modes", "check"])
    @pytest.mark.parametrize(
        ("body", "says"),
        [
            (
                {"id": "p", "name": "pump", "mass": "5 kg"},
                "the body pump floats: no link joins it to anything",
            ),
            ({"id": "j", "mass": "0 kg"}, "the massless junction j floats"),
        ],
    )
    def test_floating_parts_are_named(self, capsys, file, command, body, says):
        code, out, err = run(capsys, command, file(bodies=[*document()["bodies"], body]))
        assert (code, out) == (2, "")
        assert says in err

    def test_gear_loop_that_cannot_turn_is_named(self, capsys, file):
        gear = {"kind": "gear", "from": {"body": "a"}, "to": {"body": "b"}}
        path = file(
            motion="shaft train",
            bodies=[{"id": name, "inertia": "1 kg m2"} for name in "ab"],
            links=[{"id": "low", "ratio": -2, **gear}, {"id": "high", "ratio": -3, **gear}],
        )
        code, _, err = run(capsys, "check", path)
        assert code == 2
        assert f"keepclear: {path}: 1 fault:\n  gear low, high: the gear loop through b cannot turn" in err

    def test_a_file_with_nothing_that_can_move(self, capsys, file):
        code, _, err = run(capsys, "modes", file(bodies=[{"id": "a", "mass": "10 kg", "dof": []}]))
        assert code == 2
        assert "no motion is left" in err

    def test_json_of_several_files_holds_the_error_of_the_bad_one(self, capsys, file):
        bad = file("[]", name="bad.keepclear")
        code, out, _ = run(capsys, "check", demo(ALL_CLEAR), bad, "--json")
        good, spoiled = json.loads(out)
        assert code == 2
        assert good["verdict"] == "clear"
        assert set(spoiled) == {"file", "error"}

    def test_each_file_of_several_is_named_once(self, capsys, tmp_path, file):
        gone, bad = tmp_path / "gone.keepclear", file("[]", name="bad.keepclear")
        _, _, err = run(capsys, "check", gone, bad)
        assert err.splitlines()[:2] == [
            f"keepclear: {gone}: there is no such file",
            f"keepclear: {bad}: 1 fault:",
        ]

    @pytest.mark.parametrize("key", ["name", "id"])
    def test_names_cannot_steer_the_terminal(self, capsys, file, key):
        bodies = [{"id": "a", "mass": "10 kg"} | {key: "motor\x1b[2J\nCLEAR\u202e"}]
        code, out, err = run(capsys, "modes", file(bodies=bodies))
        assert (code, out) == (2, "")
        assert "holds an escape sign (U+001B) as character 6" in err
        assert not {"\x1b", "\u202e"} & set(err)
        assert "\nCLEAR" not in err

    def test_every_fault_stands_on_one_line(self, capsys, file):
        links = [{"id": "k", "kind": "spring", "from": {"body": "a\nb"}, "to": {"support": "g\u2028"}}]
        _, _, err = run(capsys, "modes", file(links=links))
        assert all(line.startswith(("keepclear: ", "  links[")) for line in err.split("\n")[:-1])

    def test_a_path_stands_on_one_line(self, capsys, file):
        path = file(name="a\n\x1bb.keepclear")
        code, out, _ = run(capsys, "check", path)
        assert code in (0, 2)
        assert out.startswith(f"{path.parent}/a\\u000a\\u001bb.keepclear: ")

    def test_words_of_the_command_line_cannot_steer_it_either(self, capsys):
        with pytest.raises(SystemExit):
            main(["modes", "x", "--\x1b[2J\n"])
        err = capsys.readouterr().err
        assert "\\u001b[2J\\u000a" in err
        assert err.count("\n") == 1

    def test_names_in_json_are_what_the_file_says(self, capsys, file):
        bodies = [{"id": "a", "name": "motor \U0001f469\u200d\U0001f527", "mass": "10 kg"}]
        _, out, _ = run(capsys, "modes", file(bodies=bodies), "--json")
        found = json.loads(out)["modes"][0]["kinetic_energy"][0]["name"]
        assert found == "motor \U0001f469\u200d\U0001f527"

    @pytest.mark.parametrize("name", ["stdout", "stderr"])
    def test_a_closed_stream_leaves_the_exit_code(self, capsys, monkeypatch, file, name):
        monkeypatch.setattr(f"sys.{name}", None)
        assert run(capsys, "check", demo(IN_BAND))[0] == 1
        assert run(capsys, "check", file("{"))[0] == 2

    def test_output_that_cannot_be_written_is_told(self, capsys, monkeypatch):
        class Full:
            def write(self, _text):
                raise OSError(28, "No space left on device")

        monkeypatch.setattr("sys.stdout", Full())
        code, _, err = run(capsys, "modes", demo(ALL_CLEAR))
        assert (code, err) == (2, "keepclear: the output cannot be written: No space left on device\n")

    @pytest.mark.slow
    @pytest.mark.skipif(not Path("/dev/full").exists(), reason="a disk that is always full is needed")
    def test_a_full_disk_is_told_where_the_output_waits_for_the_end(self):
        environment = {k: v for k, v in os.environ.items() if k != "PYTHONUNBUFFERED"}
        words = [sys.executable, "-m", "modalview", "bounds", demo(ALL_CLEAR)]
        with Path("/dev/full").open("w", encoding="utf-8") as full:
            found = subprocess.run(  # noqa: S603
                words, stdout=full, stderr=-1, text=True, env=environment, check=False
            )
        told = "keepclear: the output cannot be written: No space left on device\n"
        assert (found.returncode, found.stderr) == (2, told)

    def test_stopped_while_the_libraries_are_loaded(self, capsys, monkeypatch):
        def stop(_path):
            raise KeyboardInterrupt

        monkeypatch.setattr("modalview.__main__._window", stop)
        assert start([]) == 2
        assert capsys.readouterr().err == "keepclear: stopped\n"

    def test_an_unexpected_failure_is_a_message(self, capsys, monkeypatch):
        def fail(*_):
            raise ZeroDivisionError("division by zero")

        monkeypatch.setattr("modalview.cli.commands.read_model", fail)
        code, out, err = run(capsys, "modes", demo(ALL_CLEAR))
        assert (code, out) == (2, "")
        assert err == (
            "keepclear: an unexpected error, which is a fault of the program: "
            "ZeroDivisionError: division by zero\n"
        )


class TestPictures:
    @pytest.mark.parametrize("words", [[], ["--of", "scale", "--dark"], ["--of", "mode", "--mode", "2"]])
    def test_written(self, capsys, tmp_path, words):
        path = tmp_path / "out.png"
        code, out, _ = run(capsys, "picture", demo(IN_BAND), "-o", path, "--size", "600x400", *words)
        assert (code, out) == (0, f"{path} written\n")
        data = path.read_bytes()
        assert data[:8] == b"\x89PNG\r\n\x1a\n"
        assert (int.from_bytes(data[16:20]), int.from_bytes(data[20:24])) == (600, 400)

    @pytest.mark.parametrize(
        ("words", "says"),
        [
            (["--size", "20x20"], "--size wants WIDTHxHEIGHT"),
            (["--size", "big"], "--size wants WIDTHxHEIGHT"),
            (["--size", "601x400"], "even and 400 to 8000 each"),
            (["--of", "mode", "--mode", "9"], "the model has modes 1 to 3"),
            (["--of", "mode", "--mode", "0"], "the model has modes 1 to 3"),
            (["--mode", "2"], "--mode goes with --of mode"),
        ],
    )
    def test_wishes_that_do_not_fit(self, capsys, tmp_path, words, says):
        path = tmp_path / "out.png"
        code, _, err = run(capsys, "picture", demo(IN_BAND), "-o", path, *words)
        assert code == 2
        assert says in err
        assert not path.exists()

    @pytest.mark.parametrize("place", ["gone/out.png", ".", "out.xyz"])
    def test_place_that_cannot_be_written(self, capsys, tmp_path, place):
        code, _, err = run(capsys, "picture", demo(IN_BAND), "-o", tmp_path / place)
        assert code == 2
        assert err.startswith("keepclear: ")

    def test_the_model_itself_is_never_overwritten(self, capsys, file):
        path = file()
        before = path.read_bytes()
        code, _, _ = run(capsys, "picture", path, "-o", path)
        assert code == 2
        assert path.read_bytes() == before


@pytest.mark.parametrize("command", ["bounds", "modes", "check"])
@pytest.mark.parametrize("name", [ALL_CLEAR, FAN, TRAIN, SET, NOMINAL_ONLY])
def test_text_is_plain_fits_the_page_and_ends_with_the_caution(capsys, command, name):
    _, out, err = run(capsys, command, demo(name))
    assert err == ""
    assert out.endswith(f"{CAUTION}\n")
    long = [line for line in out.splitlines() if len(line) > WIDTH and name not in line]
    assert not long
    assert not re.search(r"\b(nan|inf|None|np\.)", out)
    assert "\t" not in out


def test_files_are_left_alone(capsys, file):
    path = file()
    before = path.read_bytes()
    for command in ("bounds", "modes", "check"):
        run(capsys, command, path)
    assert path.read_bytes() == before
    assert list(Path(path).parent.iterdir()) == [path]


def test_bounds_are_shown_rounded_outward(capsys):
    _, out, _ = run(capsys, "bounds", demo(IN_BAND))
    _, text, _ = run(capsys, "bounds", demo(IN_BAND), "--json")
    told = json.loads(text)
    for line, span in zip(out.splitlines()[2:4], (told["lowest_hz"], told["highest_hz"]), strict=True):
        low, high = map(float, re.findall(r"[\d.]+", line))
        assert low <= span[0]
        assert high >= span[1]
        assert (low, high) == pytest.approx(span, rel=2e-3)
