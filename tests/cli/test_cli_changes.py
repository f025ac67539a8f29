"""``keepclear changes``: words, keys, exit codes, progress and Ctrl+C."""

import json

import pytest

from modalview.cli import changes as command
from modalview.cli import main
from modalview.places import demo_models

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
CLEAR = PUMP.with_name("part-grout-and-anchors.keepclear")
RETROFIT = demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear"
SPRINGS = demo_models() / "2-supply-fan" / "steel-springs.keepclear"
RUBBER = demo_models() / "2-supply-fan" / "rubber-mounts.keepclear"


def printed(capsys, path, *words):
    code = main(["changes", str(path), "--json", *words])
    return code, json.loads(capsys.readouterr().out)


@pytest.fixture(scope="module")
def without_geometry():
    """Let no places of mounts be tried: it takes its time and is tested below the command."""
    known = command.RemediesRequest
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(command, "RemediesRequest", lambda *given: known(*given, geometry=False))
        yield


def test_document(capsys):
    code, told = printed(capsys, PUMP, "--value", "k3.stiffness")
    assert code == 0
    assert told["clear_now"] is False
    assert [one["check"] for one in told["not_clear"]] == ["pump set/1x"]
    (value,) = told["values"]
    assert value["unit"] == "N/m"
    assert all(one["proven"] for one in value["windows"])
    assert value["ceilings"][0]["at_infinity_hz"] == pytest.approx(127.8, abs=0.1)
    best = told["options"][0]
    assert best["clears"]
    assert best["changes"][0]["after_si"] == pytest.approx(3.07e8, rel=0.01)
    assert {one["verdict"] for one in best["effects"]} == {"clear"}
    assert best["least_room_percent"] >= 0


def test_text_is_no_wider_than_a_page(capsys):
    assert main(["changes", str(PUMP)]) == 0
    out = capsys.readouterr().out
    assert "1  Raise stiffness of base support from 175 kN/mm to" in out
    assert "mode 1 below 127.8 Hz" in out
    assert "Other speeds instead:" in out
    assert all(len(line) <= 100 for line in out.splitlines())


def test_clear_model_tells_its_windows(capsys):
    code, told = printed(capsys, CLEAR, "--value", "k3.stiffness")
    assert (code, told["clear_now"], told["options"], told["not_clear"]) == (0, True, [], [])
    assert len(told["values"][0]["windows"]) == 3


@pytest.mark.usefixtures("without_geometry")
def test_barred_speeds_are_the_alternative(capsys):
    _, told = printed(capsys, SPRINGS, "--value", "kf.stiffness")
    assert told["speeds"][0]["bar_rpm"] == [[676, 1376]]


@pytest.mark.usefixtures("without_geometry")
def test_ends_with_1_where_nothing_clears(capsys):
    code, told = printed(capsys, RUBBER, "--value", "kf.stiffness")
    assert (code, told["options"]) == (1, [])


@pytest.mark.parametrize(("ratio", "clears"), [("5 %", False), ("10 %", True)])
def test_absorber(capsys, ratio, clears):
    words = ("--absorber", "beam", "--mass-ratio", ratio, "--value", "kb.stiffness")
    _, told = printed(capsys, RETROFIT, *words)
    found = [one for one in told["options"] if one["kind"] == "absorber"]
    assert [one["clears"] for one in found] == [clears]


def test_mode_is_placed(capsys):
    _, told = printed(capsys, PUMP, "--place", "1", "3600 rpm", "k3.stiffness", "--value", "k3.stiffness")
    (placed,) = told["placements"]
    assert placed["wanted_hz"] == pytest.approx(60)
    assert placed["factor"] > 1


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (("--value", "nothing.stiffness"), 'no value "nothing.stiffness"'),
        (("--place", "one", "60 Hz", "k3.stiffness"), "--place wants the number of a mode"),
        (("--place", "1", "60 kg", "k3.stiffness"), "--place"),
        (("--damped",), "--damped goes with --absorber"),
        (("--mass-ratio", "5 %"), "--mass-ratio goes with --absorber"),
        (("--absorber", "cellar"), 'no body "cellar"'),
    ],
)
def test_refuses(capsys, words, said):
    assert main(["changes", str(PUMP), *words]) == 2
    told = capsys.readouterr()
    assert said in told.err
    assert told.out == ""


def test_nothing_to_clear_is_refused(tmp_path, capsys):
    tree = json.loads(PUMP.read_text(encoding="utf-8"))
    tree["machines"] = []
    path = tmp_path / "idle.keepclear"
    path.write_text(json.dumps(tree), encoding="utf-8")
    assert main(["changes", str(path)]) == 2
    assert "nothing to clear" in capsys.readouterr().err


def test_load_case_that_is_not_clear_is_told(tmp_path, capsys):
    tree = json.loads(CLEAR.read_text(encoding="utf-8"))
    full = {"part": "base", "key": "mass", "value": "1500 kg"}
    tree["load_cases"] = [{"id": "full", "name": "full tank", "changes": [full]}]
    path = tmp_path / "full.keepclear"
    path.write_text(json.dumps(tree), encoding="utf-8")
    _, told = printed(capsys, path, "--value", "k3.stiffness")
    assert told["clear_now"] is False
    assert {one["case"] for one in told["not_clear"]} == {"full tank"}


def test_progress_rises_and_ctrl_c_leaves_one_line(capsys, monkeypatch):
    shares = []

    def told(_, share):
        shares.append(share)
        if share > 0.5:
            raise KeyboardInterrupt

    monkeypatch.setattr(command, "progress", told)
    assert main(["changes", str(PUMP)]) == 2
    assert shares == sorted(shares)
    caught = capsys.readouterr()
    assert (caught.out, caught.err) == ("", "keepclear: stopped\n")
