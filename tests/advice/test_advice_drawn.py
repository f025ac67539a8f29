"""All doubts together: over the demonstration models, over refused ones, over large ones."""

from dataclasses import FrozenInstanceError
from time import process_time

import pytest

from modalview.advice.assembled import doubts_of
from modalview.advice.doubt import Doubt, few
from modalview.advice.drawn import doubts
from modalview.assembly.assemble import assemble
from modalview.bounds.before import before_solve
from modalview.errors import ModelFaultsError
from modalview.model.templates import TEMPLATES, build
from modalview.places import demo_models
from modalview.store import read_model


@pytest.mark.parametrize("path", sorted(demo_models().glob("*/*.keepclear")), ids=lambda path: path.stem)
def test_no_demonstration_model_raises_a_false_alarm(path):
    model = read_model(path)
    assembly = assemble(model)
    assert doubts(model) == ()
    assert doubts_of(assembly, before_solve(assembly.pencil())) == ()


def test_a_model_that_cannot_be_assembled_still_has_its_doubts(model):
    bodies = [{"id": "a", "mass": "1 kg"}, {"id": "j", "mass": "0 kg"}]
    floating = model("single axis", bodies=bodies)
    with pytest.raises(ModelFaultsError):
        assemble(floating)
    assert [one.rule for one in doubts(floating)] == ["floating part", "lone junction"]


@pytest.mark.parametrize("template", TEMPLATES, ids=lambda template: template.id)
def test_a_starting_point_is_doubted_for_its_starting_values_alone(template):
    model = build(template, {})
    assembly = assemble(model)
    found = (*doubts(model), *doubts_of(assembly, before_solve(assembly.pencil())))
    assert {one.rule for one in found} == {"starting value"}


def test_an_empty_model_has_none(model):
    assert doubts(model()) == ()


def test_a_doubt_cannot_be_changed():
    with pytest.raises(FrozenInstanceError):
        Doubt("r", (), "t", "e").text = "other"


def test_few_of_a_rule_are_told_one_by_one():
    four = [Doubt("r", (str(i),), "t.", "e") for i in range(4)]
    assert few(four) == four
    folded = few([*four, Doubt("r", ("4", "0"), "t.", "e")])
    assert [one.parts for one in folded] == [("0",), ("1",), ("2",), ("3", "4", "0")]
    assert folded[-1].text == "t. The same holds of 1 more."


def test_the_time_grows_with_the_size_and_not_with_its_square(model):
    def chain(n):
        bodies = [{"id": f"b{i}", "mass": "1 kg", "position": ["0 m", f"{i} m"]} for i in range(n)]
        links = [
            {
                "id": f"k{i}",
                "kind": "spring",
                "stiffness": "1 N/m",
                "from": {"body": f"b{i}"},
                "to": {"body": f"b{i + 1}"},
            }
            for i in range(n - 1)
        ]
        return model("single axis", bodies=bodies, links=links)

    def least(given):
        times = []
        for _ in range(3):
            start = process_time()
            doubts(given)
            times.append(process_time() - start)
        return min(times)

    small, large = chain(100), chain(800)
    assert least(large) < 30 * least(small)
