"""README.md says what is so: its output is the program's, its commands are there, its file opens."""

import json
import re
import shlex
import textwrap
import tomllib
from pathlib import Path

import pytest

from modalview.__main__ import main

ROOT = Path(__file__).resolve().parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
BLOCKS = [
    textwrap.dedent(block).strip() for block in re.findall(r"(?:^(?: {4}.*)?\n)+", README, re.MULTILINE)
]
SHOWN = [block for block in BLOCKS if block.startswith("$ keepclear ")]


def test_readme_shows_output():
    assert [block.split()[2] for block in SHOWN] == [
        "check",
        "bounds",
        "modes",
        "speeds",
        "response",
        "mounts",
        "changes",
        "tune",
        "vary",
        "values",
    ]


@pytest.mark.parametrize("block", SHOWN, ids=lambda block: block.split()[2])
def test_output_is_what_the_program_prints(block, capsys, monkeypatch):
    command, _, output = block.partition("\n")
    monkeypatch.chdir(ROOT)
    status = main(shlex.split(command)[2:])
    assert capsys.readouterr().out.strip() == output.strip()
    assert status == (1 if command.split()[2] in {"check", "speeds", "response"} else 0)


def test_file_of_the_readme_opens_and_is_checked(tmp_path, capsys):
    (text,) = (block for block in BLOCKS if block.startswith("{"))
    assert json.loads(text)["format"] == "keepclear"
    (tmp_path / "fan.keepclear").write_text(text, encoding="utf-8")
    assert main(["check", str(tmp_path / "fan.keepclear")]) == 0
    assert "Not checked" in capsys.readouterr().out


def test_what_the_readme_names_is_there():
    named = re.findall(
        r"\]\(([^)#]+)\)|(?<=sh )(\.ci/[\w-]+)|`(resources/\S+|tests/data\S*|\w+\.md)`", README
    )
    files = {name for found in named for name in found if name}
    assert {".ci/first-look", "resources/readme-window.png", "DEVELOPERS.md"} <= files
    assert [name for name in files if not (ROOT / name).exists()] == []


def test_what_developers_md_names_is_there():
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    named = set(re.findall(r"`((?:modalview|tests|resources|demo_models|\.ci)/[\w./-]+)`", text))
    mapped = {"modalview/_resources", "modalview/_demo_models"}  # in the wheel only
    assert len(named) > 40
    assert sorted(name for name in named - mapped if not (ROOT / name).exists()) == []


def test_layers_of_developers_md_are_those_that_are_checked():
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
    layers = project["tool"]["importlinter"]["contracts"][0]["layers"]
    (shown,) = (block for block in re.findall(r"(?:^ {4}.*\n)+", text, re.MULTILINE) if "__main__ " in block)
    assert [re.split(r"\s{2,}", line.strip())[0] for line in shown.splitlines()] == layers


def test_functions_of_developers_md_stand_where_it_says():
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    said = re.findall(r"`([A-Za-z_.]+)`\s+\(`(modalview/[\w/]+\.py)`\)", text)
    assert len(said) >= 10
    wrong = [
        (name, path)
        for name, path in said
        for one in name.split(".")
        if not re.search(rf"(?:def|class) {one}\b", (ROOT / path).read_text(encoding="utf-8"))
    ]
    assert wrong == []


PUMP = ("demo_models/1-cooling-water-pump/as-built.keepclear",)
DAMPED = ("demo_models/6-vacuum-pump-absorber/absorber-210kg-damped.keepclear",)
TRAIN = ("demo_models/3-air-compressor-train/as-built.keepclear",)
RETROFIT = ("demo_models/6-vacuum-pump-absorber/absorber-105kg.keepclear",)
GENSET = ("demo_models/4-standby-generator-set/raised-mounts.keepclear",)
PEAKS = ("demo_models/5-raw-water-vertical-pump/after-bump-test.keepclear",)
MATRICES = ("--stiffness", "tests/data/mikota_20/K.mtx", "--mass", "tests/data/mikota_20/M.mtx")
BAND = ("--frequencies", "1 Hz", "--margin", "3 %")


@pytest.mark.parametrize(
    "words",
    [
        *(
            (command, *what)
            for command in ("check", "bounds", "modes")
            for what in (PUMP, DAMPED, (*MATRICES, *BAND))
        ),
        ("check", *PUMP, "not-there.keepclear"),
        ("check", *PUMP, "--exact"),
        ("modes", *PUMP, "--near", "50 Hz", "--count", "1"),
        ("modes", *MATRICES, "--near", "1 Hz", "--count", "1"),
        *(("speeds", file) for file in (*PUMP, *TRAIN)),
        ("mounts", *GENSET),
        ("tune", *PEAKS),
        ("tune", *PEAKS, "--value", "sole.stiffness.rz=6e7 to 1e9 N m/rad"),
        ("tune", *PEAKS, "--value", "motor.mass", "--value", "head.mass", "--value", "column.mass"),
        ("vary", *PUMP, "--value", "k3"),
        ("vary", *PUMP, "--samples", "9", "--response"),
        *(("changes", file) for file in (*PUMP, *RETROFIT)),
        ("values",),
        ("values", "shaft-hollow"),
        ("values", "cable-middle", "--tension", "500 N", "--length", "1.6 m"),
        *(("response", file) for file in (*PUMP, *TRAIN, *RETROFIT)),
    ],
)
def test_every_key_of_the_documents_is_told(words, capsys, monkeypatch):
    monkeypatch.chdir(ROOT)
    main([*words, "--json"])
    document = json.loads(capsys.readouterr().out)
    told = set(re.findall(r"`(\w+)`", README.partition("## JSON\n")[2].partition("\n## ")[0]))
    assert {key for key in _keys(document) if key not in told} == set()


def _keys(item):
    """Yield the keys of a document; those of shapes and of shares by direction are names of the model."""
    for key, inner in item.items() if isinstance(item, dict) else ():
        yield key
        if key not in {
            "shape",
            "shape_real",
            "shape_imag",
            "effective_mass",
            "tilt_rad",
            "motion_real",
            "motion_imag",
            "given",
        }:
            yield from _keys(inner)
    for one in item if isinstance(item, list) else ():
        yield from _keys(one)
