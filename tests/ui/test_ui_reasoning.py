from dataclasses import replace

import pytest
from conftest import PUMP, settle
from PySide6.QtCore import Qt

from modalview.model.values import Entry
from modalview.places import demo_models
from modalview.store import read_model
from modalview.ui.reasoning import reasoning
from modalview.ui.studydoor import load_study
from modalview.units.quantities import RATIO, SPEED


def known(model):
    study = load_study()
    outlook = study.look(study.request(model), None)
    return outlook, study.solve(outlook.request, outlook)


@pytest.fixture(scope="module")
def pump_known():
    return known(read_model(PUMP))


def test_a_mode_in_band_is_told_by_band_counts_and_margin_with_their_numbers(pump_known):
    first = reasoning(*pump_known).checks[0]
    assert first.verdict == "mode in band"
    assert "order 1 × 2950 rpm / 60 = 49.167 Hz" in first.band[0]
    assert "49.167 Hz × (1 − 0.15) = 41.792 Hz to 49.167 Hz × (1 + 0.15) = 56.542 Hz" in first.band[1]
    assert "In the band as given: 1 − 0 = 1." in first.proof
    assert "(51.260 − 49.167) / 49.167 = +4.3 %" in first.margin[0]
    assert any("excited" in line for line in first.drive)


def test_a_clear_check_is_told_by_two_counts_that_are_equal(pump_known):
    second = next(one for one in reasoning(*pump_known).checks if one.title.startswith("2×"))
    assert [line.number for line in second.counts] == ["1", "1"]
    assert second.proof[0] == "1 − 1 = 0: no mode lies in the band at any value within tolerance."


def test_the_numbers_of_every_check_are_those_of_its_counts(pump_known):
    outlook, _ = pump_known
    for check, told in zip(
        sorted(outlook.checks, key=lambda one: one.band.label),
        sorted(reasoning(outlook).checks, key=lambda one: one.title),
        strict=True,
    ):
        assert sorted(line.number for line in told.counts) == sorted(
            str(edge.count.number) for edge in check.evidence
        )
        assert told.margin == ()  # nothing is known of modes before a solve


def test_the_deciding_case_is_named():
    model = read_model(demo_models() / "6-vacuum-pump-absorber" / "absorber-105kg.keepclear")
    (check,) = reasoning(*known(model)).checks
    assert check.verdict == "clear at nominal only"
    assert any(line.startswith("The stiff-light case decides") for line in check.proof)


def test_counts_of_the_band_widened_by_the_speed_tolerance_are_told():
    # The lowest mode at 51.26 Hz lies above the band of 40 Hz ± 15 %, but comes into it with both tolerances.
    model = read_model(PUMP)
    machine = model.machines[0]
    slower = replace(
        machine, speed=Entry.typed("2400 rpm", SPEED), speed_tolerance=Entry.typed("12 %", RATIO)
    )
    found = reasoning(*known(replace(model, machines=(slower,)))).checks
    first = next(one for one in found if one.title.startswith("1×"))
    assert first.verdict == "clear at nominal only"
    assert any("In the band widened by the speed tolerance, as given: 1 − 0 = 1." in x for x in first.proof)
    assert any("At the speed as given, soft-heavy less stiff-light: 1 − 0 = 1." in x for x in first.proof)
    assert len(first.counts) == 8


def test_what_was_not_checked_is_told_and_a_geared_order_names_its_gears():
    model = read_model(demo_models() / "3-air-compressor-train" / "as-built.keepclear")
    found = reasoning(*known(model))
    geared = next(one for one in found.checks if "compressor" in one.title)
    assert "× 4.200 (through gears)" in geared.band[0]
    assert any(line.startswith("Not checked: ") for line in found.rests_on)
    assert any("Courant-Fischer" in line for line in found.rests_on)


def test_the_sentence_unfolds_its_reasoning_by_click_and_key_and_esc_folds_it(pump, qtbot):
    assert pump.reasons.isHidden()
    qtbot.mouseClick(pump.banner.sentence, Qt.MouseButton.LeftButton)
    assert not pump.reasons.isHidden()
    assert "(fn − fe) / fe" in pump.reasons.text.toPlainText()
    qtbot.keyClick(pump.reasons.text, Qt.Key.Key_Escape)
    assert pump.reasons.isHidden()
    assert not pump.banner.why.isChecked()
    pump.menus.actions["on_why"].trigger()
    assert not pump.reasons.isHidden()


def test_open_reasoning_follows_an_edit(pump, qtbot):
    pump.on_why()
    pump.document.type_value(("machines", "pump set", "margin"), "4 %")
    settle(qtbot, pump)
    assert "(1 − 0.04)" in pump.reasons.text.toPlainText()
