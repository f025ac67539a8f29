"""keepclear values: the list, what an entry asks for, what it makes, and what is refused."""

import json
import re
import shlex

import pytest

from modalview.__main__ import main
from modalview.cli.cautions import CAUTION
from modalview.cli.table import WIDTH
from modalview.handbook.catalogue import RECIPES, recipe
from modalview.store import parse_model

COIL = ("coil-spring", "--wire", "20 mm", "--mean", "200mm", "--turns", "5", "--shear", "80 GPa")


def run(capsys, *words):
    try:
        code = main(["values", *words])
    except SystemExit as ended:
        code = ended.code
    told = capsys.readouterr()
    return code, told.out, told.err


def told_json(capsys, *words):
    code, out, _ = run(capsys, *words)
    assert code == 0
    return json.loads(out)


def test_the_list_names_every_entry(capsys):
    code, out, err = run(capsys)
    assert (code, err) == (0, "")
    listed = re.findall(r"^  ([a-z0-9-]+)  ", out, re.MULTILINE)
    assert listed == list(RECIPES)
    assert out.endswith(f"{CAUTION}\n")


def test_the_list_as_json(capsys):
    entries = told_json(capsys, "--json")["entries"]
    assert [one["by"] for one in entries] == list(RECIPES)
    assert all(one["source"] and one["status"] and one["validity"] for one in entries)


@pytest.mark.parametrize("name", RECIPES)
def test_an_entry_alone_tells_a_line_that_runs(capsys, name):
    code, out, _ = run(capsys, name)
    assert code == 0
    assert recipe(name).formula in out
    (line,) = re.findall(r"^  keepclear values (.+)$", out, re.MULTILINE)
    code, made, err = run(capsys, *shlex.split(line))
    assert (code, err) == (0, "")
    assert f"{recipe(name).title}: " in made
    assert f"\nSource: {recipe(name).source.citation.split()[0]}" in made


@pytest.mark.parametrize("name", RECIPES)
def test_texts_are_plain_and_only_what_is_pasted_is_wide(capsys, name):
    _, out, _ = run(capsys, name)
    wide = [line for line in out.splitlines() if len(line) > WIDTH]
    assert all(line.startswith("  keepclear values") for line in wide)
    assert not re.search(r"\b(nan|inf|None)\b|%%", out)


def test_the_file_entry_that_is_printed_opens_in_a_file(capsys):
    _, out, _ = run(capsys, *COIL)
    assert out.startswith("coil spring: 40 N/mm\n")
    held = out.partition("For a file\n")[2].partition("\n\n")[0]
    entry = json.loads(held)
    link = {"id": "k", "kind": "spring", "from": {"body": "m"}, "to": {"support": "s"}, "stiffness": entry}
    body = {"id": "m", "mass": "10 kg"}
    tree = {"format": "keepclear", "version": 1, "motion": "single axis", "bodies": [body], "links": [link]}
    value = parse_model(json.dumps({**tree, "supports": [{"id": "s"}]})).links[0].stiffness
    assert value.si == 40000
    assert value.by == "coil-spring"
    assert dict(value.given) == {"wire": "20 mm", "mean": "200mm", "turns": "5", "shear": "80 GPa"}


@pytest.mark.parametrize("words", [("--json", *COIL), (*COIL, "--json")], ids=["before", "after"])
def test_a_value_as_json(capsys, words):
    told = told_json(capsys, *words)
    assert told["si"] == pytest.approx(40000, rel=1e-12)
    assert (told["value"], told["unit"], told["tolerance"]) == ("40 N/mm", "N/m", "10 %")
    assert told["for_a_file"]["given"] == told["given"]


def test_an_order_is_told_as_the_file_takes_it(capsys):
    _, out, _ = run(capsys, "order-gas", "--strokes", "4")
    assert '\n  "order": 0.5\n' in out
    assert "Note: harmonic h not given, taken as 1." in out


@pytest.mark.parametrize(
    ("words", "says"),
    [
        (("coil",), "the handbook has no entry 'coil'; is coil-spring meant?"),
        (("coil-spring", "--wires", "3 mm"), "there is no option --wires (did you mean --wire?)"),
        (("coil-spring", "more"), "'more' is one word too many"),
        (("--jsn",), "there is no option --jsn (did you mean --json?)"),
        (("coil-spring", "--wire", "3 kg"), "mean: mean coil diameter D: it is missing"),
        (("coil-spring", "--wire", "3 kg"), 'wire: wire diameter d: "3 kg" cannot be read as length'),
        (("shaft-hollow", *COIL[1:3]), "there is no option --wire"),
    ],
)
def test_what_does_not_fit(capsys, words, says):
    code, out, err = run(capsys, *words)
    assert code == 2
    assert out == ""
    assert says in err
    assert "Traceback" not in err


@pytest.mark.parametrize(
    ("words", "says"), [((), "--json"), (("rod",), "--young"), (("balance-grade",), "pumps")]
)
def test_help(capsys, words, says):
    code, out, _ = run(capsys, *words, "--help")
    assert code == 0
    assert says in out
    assert "screening aid" in out


def test_the_name_of_an_entry_cannot_steer_the_terminal(capsys):
    code, _, err = run(capsys, "\x1b[2J")
    assert code == 2
    assert "\x1b" not in err
