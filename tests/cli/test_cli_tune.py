"""``keepclear tune``: words, keys, exit codes."""

import json

import pytest

from modalview.cli import main
from modalview.places import demo_models
from modalview.store import read_model

PUMP = demo_models() / "5-raw-water-vertical-pump"
WIDE = "sole.stiffness.rz=6e7 to 1e9 N m/rad"


@pytest.fixture
def bumped(tmp_path):
    """The design with the bump peak of later."""
    tree = json.loads((PUMP / "design.keepclear").read_text(encoding="utf-8"))
    later = json.loads((PUMP / "after-bump-test.keepclear").read_text(encoding="utf-8"))
    path = tmp_path / "bumped.keepclear"
    path.write_text(json.dumps({**tree, "measured": later["measured"][:1]}), encoding="utf-8")
    return path


def printed(capsys, *words):
    code = main(["tune", *map(str, words)])
    return code, capsys.readouterr()


def test_text_and_tuned_file(bumped, tmp_path, capsys):
    target = tmp_path / "tuned.keepclear"
    code, told = printed(capsys, bumped, "--value", WIDE, "-o", target)
    assert code == 0
    assert "Tuned soleplate stiffness rz to 1.174e8 N m/rad" in told.out
    assert "soleplate stiffness rz  6.0e8 N m/rad  1.174e8 N m/rad  1.03e8 to 1.34e8 N m/rad" in told.out
    assert "linearised at the tuned values" in told.out
    assert all(len(line) <= 100 for line in told.out.splitlines())
    assert read_model(target).links[0].stiffness.rz.status == "measured"


def test_a_file_is_not_written_over(bumped, capsys):
    code, told = printed(capsys, bumped, "--value", WIDE, "-o", bumped)
    assert code == 2
    assert "is there already" in told.err


def test_document(bumped, capsys):
    code, told = printed(capsys, bumped, "--value", WIDE, "--json")
    document = json.loads(told.out)
    assert (code, document["tuned"], document["refused"]) == (0, True, None)
    (value,) = document["values"]
    assert value["tuned_to"] == pytest.approx(1.174e8, rel=0.01)
    assert value["unit"] == "N m/rad"
    assert document["peaks"][0]["tuned_hz"] == pytest.approx(17.0, abs=0.01)
    assert document["verdict"] == "mode in band"
    assert document["modes_hz"][1] == pytest.approx(17.0, abs=0.01)


def test_refusal_ends_with_1(bumped, capsys):
    code, told = printed(capsys, bumped, "--value", "sole.stiffness.rz", "--value", "motor.mass")
    assert code == 1
    assert "Not tuned: 1 peak determines at most 1 value, and 2 are chosen" in " ".join(told.out.split())


def test_without_values_each_is_tried(bumped, capsys):
    code, told = printed(capsys, bumped)
    assert code == 1
    assert "would have to be" in told.out
    assert "motor mass                 1900 kg         1976 kg (end)" in told.out


def test_pairs_are_read(bumped, capsys):
    code, told = printed(capsys, bumped, "--value", WIDE, "--pair", "bump 1=1", "--json")
    assert code == 1
    assert json.loads(told.out)["peaks"][0]["mode"] == 1
    code, told = printed(capsys, bumped, "--pair", "bump 1")
    assert code == 2
    assert '--pair wants a peak and the number of a mode, such as "bump 1=2"' in told.err


def test_model_without_peaks(capsys):
    code, told = printed(capsys, PUMP / "design.keepclear", "--value", WIDE)
    assert code == 2
    assert "no measured peaks" in told.err
