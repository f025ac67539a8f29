"""Tables as text: aligned, and never wider than a page."""

import sys
from pathlib import Path

import pytest

from modalview.cli import main
from modalview.cli.table import WIDTH, table

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made


def test_columns_are_aligned():
    assert table([["n", "name"], ["10", "pump"]], right=frozenset({0})) == " n  name\n10  pump"


def test_no_rows_are_no_text():
    assert table([]) == ""


def test_long_words_are_folded_and_numbers_are_not():
    name = "baseplate of the cooling-water pump against the motor " * 3
    lines = table([["1", "51.260 Hz", name.strip()]], right=frozenset({0, 1})).splitlines()
    assert max(map(len, lines)) <= WIDTH
    assert len(lines) == 2
    assert lines[0].startswith("1  51.260 Hz  baseplate of")
    assert lines[1].startswith(" " * 16)
    assert " ".join(" ".join(lines).split()) == f"1 51.260 Hz {name.strip()}"


def test_the_widest_of_two_columns_of_words_is_folded():
    first, second = table([["a" * 30, "word " * 40]]).splitlines()[:2]
    assert first.startswith("a" * 30 + "  word")
    assert second.startswith(" " * 32)


@pytest.mark.parametrize("command", ["modes", "check", "bounds"])
def test_no_line_is_wider_than_a_page(tmp_path, capsys, command):
    names = [f"a rather long name of body number {i}" for i in range(9)]
    ends = ["g", *names]
    links = [made.spring(f"k{i}", name, ends[i], 400.0) for i, name in enumerate(names)]
    links = [
        link | {"loss_factor": "2 %", "name": f"a spring with a long name, {link['id']}"} for link in links
    ]
    links += [made.dashpot(f"c{i}", name, "g", 4.0 + i) for i, name in enumerate(names)]
    orders = [{"id": f"{i}x", "name": "an excitation with a long name " * 2, "order": i} for i in range(1, 4)]
    machine = {"id": "m", "name": "long " * 30, "speed": "60 rpm", "margin": "10 %", "excitations": orders}
    path = tmp_path / "long.keepclear"
    bodies = [made.mass(name, 2.0) for name in names]
    path.write_text(made.line(bodies, links, machines=[machine], damping={"ratio": "2 %"}), encoding="utf-8")
    main([command, str(path)])
    lines = capsys.readouterr().out.splitlines()
    assert [line for line in lines[1:] if len(line) > WIDTH] == []
    assert len(lines) > 10
