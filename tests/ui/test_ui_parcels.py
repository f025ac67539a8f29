"""What goes over the line to the other process comes out the same."""

import pytest
from conftest import PUMP

from modalview.model.edits import set_plain_text, set_value_text
from modalview.model.parts import Model
from modalview.places import demo_models
from modalview.store import read_model
from modalview.ui import parcels
from modalview.ui.studydoor import load_study

MODELS = sorted(demo_models().glob("*/*.keepclear"))


@pytest.mark.parametrize("path", MODELS, ids=lambda path: f"{path.parent.name}-{path.stem}")
def test_every_model_is_put_together_from_its_pieces(path):
    model = read_model(path)
    assert parcels.put_together(None, list(parcels.pieces(None, model))) == model


def test_from_one_model_to_another_what_is_alike_is_kept():
    model = read_model(PUMP)
    edit = set_value_text(model, ("links", "k3", "stiffness"), "340 kN/mm")
    after = set_plain_text(model, ("title",), "Another").apply(edit.apply(model))
    found = parcels.put_together(model, list(parcels.pieces(model, after)))
    assert found == after
    assert found.links[0] is model.links[0]
    assert found.bodies is model.bodies


def test_from_more_parts_to_fewer_and_back():
    model = read_model(PUMP)
    fewer = Model(title="less", bodies=model.bodies[1:])
    assert parcels.put_together(model, list(parcels.pieces(model, fewer))) == fewer
    assert parcels.put_together(fewer, list(parcels.pieces(fewer, model))) == model


def test_many_parts_go_in_several_pieces(monkeypatch):
    monkeypatch.setattr(parcels, "PARTS_SENT", 2)
    model = read_model(PUMP)
    sent = list(parcels.pieces(None, model))
    assert max(len(content) for _, length, content in sent if length >= 0) == 2
    assert parcels.put_together(None, sent) == model


def test_what_is_packed_is_read_back_with_its_largest_shares():
    model = read_model(PUMP)
    study = load_study()
    request = study.request(model)
    solution = study.solve(request, study.look(request, None))
    again = parcels.unpacked_solution(parcels.packed_solution(solution))
    assert again.outlook is None
    assert again.sentence == solution.sentence
    for one, other in zip(again.modes, solution.modes, strict=True):
        assert (one.motion == other.motion).all()
        assert not one.motion.flags.writeable
        assert one.strain == other.strain[: parcels.SHARES_SENT]
        assert one.range_hz == other.range_hz
