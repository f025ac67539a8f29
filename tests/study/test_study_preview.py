"""Previews through the study's door."""

import pytest

from modalview.model.edits import set_value_text
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study import Request, preview, solve

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"


def test_a_drag_of_the_base_support_is_foretold():
    model = read_model(PUMP)
    before = solve(Request(model))
    edited = set_value_text(model, ("links", "k3", "stiffness"), "3.4e8 N/m").apply(model)
    found = preview(before, edited)
    assert found.frequency_hz == pytest.approx(solve(Request(edited)).raw.frequency_hz, rel=1e-12)
    assert found.complete is True


def test_a_changed_structure_has_no_preview():
    model = read_model(PUMP)
    other = read_model(demo_models() / "6-vacuum-pump-absorber" / "no-absorber.keepclear")
    assert preview(solve(Request(model)), other) is None
