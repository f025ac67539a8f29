"""What is installed is whole: resources and examples come along, and the command is there."""

import subprocess
import sys
import tomllib
import zipfile
from importlib.metadata import EntryPoint
from pathlib import Path

import pytest

import modalview
from modalview import places
from modalview.__main__ import main

ROOT = Path(__file__).resolve().parents[2]
PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))


def _names(folder):
    return {file.relative_to(folder).as_posix() for file in folder.rglob("*") if file.is_file()}


def test_version_is_one_and_the_same():
    assert PROJECT["project"]["version"] == modalview.__version__


def test_command_tells_its_version(capsys):
    with pytest.raises(SystemExit) as ended:
        main(["--version"])
    assert ended.value.code == 0
    assert capsys.readouterr().out == f"keepclear {modalview.__version__}\n"


def test_command_starts_the_program():
    assert EntryPoint("keepclear", PROJECT["project"]["scripts"]["keepclear"], "").load() is main


def test_resources_and_examples_are_found():
    assert {"model.schema.json", "style.qss", "cautions.md"} <= _names(places.resources())
    assert len(list(places.demo_models().glob("*/*.keepclear"))) == 19


@pytest.mark.slow
def test_wheel_holds_resources_and_examples(tmp_path):
    words = [sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "-w", str(tmp_path), str(ROOT)]
    subprocess.run(words, check=True)  # noqa: S603  (our own words)
    (wheel,) = tmp_path.glob("*.whl")
    with zipfile.ZipFile(wheel) as opened:
        held = set(opened.namelist())
    wanted = {f"modalview/_resources/{name}" for name in _names(ROOT / "resources") - {"readme-window.png"}}
    wanted |= {f"modalview/_demo_models/{name}" for name in _names(ROOT / "demo_models")}
    wanted |= {f"modalview/{file.relative_to(ROOT / 'modalview').as_posix()}" for file in _sources()}
    assert wanted <= held
    assert "modalview/_resources/readme-window.png" not in held


def _sources():
    return (ROOT / "modalview").rglob("*.py")
