"""Measured peaks as texts of a table."""

import pytest

from modalview.errors import InputError
from modalview.model import typed_peaks as peaks
from modalview.model.typed_peaks import added_peak, pasted_peaks, peak_texts, retyped_peak, without_peaks
from modalview.places import demo_models
from modalview.store import read_model

BUMPED = demo_models() / "5-raw-water-vertical-pump" / "after-bump-test.keepclear"


@pytest.fixture(scope="module")
def model():
    return read_model(BUMPED)


def test_columns_show_a_peak_by_the_name_of_its_body(model):
    name = next(one.name or one.id for one in model.bodies if one.id == "motor")
    assert peak_texts(model, model.measured[0]) == (
        "bump 1",
        "17.0 Hz",
        "0.25 Hz",
        f"{name} at 0 m; 0.8 m",
        "x",
    )


def test_retyping_keeps_the_point_on_the_body(model):
    after = retyped_peak(model, 0, peaks.FREQUENCY_AT, "17,4 Hz").apply(model)
    assert after.measured[0].frequency.text == "17.4 Hz"
    assert after.measured[0].at == model.measured[0].at
    assert not retyped_peak(model, 0, peaks.BODY, peak_texts(model, model.measured[0])[peaks.BODY])
    moved = retyped_peak(model, 0, peaks.BODY, "motor at 0 m; 0,9 m").apply(model).measured[0].at
    assert (moved.body, [one.text for one in moved.offset]) == ("motor", ["0 m", "0.9 m"])
    assert retyped_peak(model, 0, peaks.BODY, "HEAD").apply(model).measured[0].at.body == "head"


@pytest.mark.parametrize(
    ("column", "text", "reason"),
    [
        (peaks.FREQUENCY_AT, "17", "unit is missing"),
        (peaks.FREQUENCY_AT, "0 Hz", "above zero"),
        (peaks.UNCERTAINTY, "1 kg", "frequency"),
        (peaks.BODY, "moter", 'no body "moter"'),
        (peaks.BODY, "motor at 1 m", "offset"),
        (peaks.BODY, "motor at top", "length"),
        (peaks.DIRECTION, "z", "direction"),
        (peaks.ID, "", "name of its own"),
        (peaks.ID, "bump 2", "bump 2"),
    ],
)
def test_what_cannot_be_used_is_refused(model, column, text, reason):
    with pytest.raises(InputError, match=reason):
        retyped_peak(model, 0, column, text)


def test_added_peak_gets_a_name_and_can_be_taken_back(model):
    edit = added_peak(model, ("", "24,4 Hz", "", "motor", "x"))
    after = edit.apply(model)
    assert peak_texts(after, after.measured[2])[0] == "peak 1"
    assert edit.revert(after) == model


def test_lines_of_a_spreadsheet_are_one_edit(model):
    lines = [
        ["Peak", "Frequency [Hz]", "Uncertainty [Hz]", "Body", "Direction"],
        ["p7", "31,5", "0,4", "motor", "x"],
        ["p8", "loud", "", "motor", "x"],
        ["", "44 Hz", "", "", ""],
        ["p7", "50", "", "", ""],
    ]
    edit, refused = pasted_peaks(model, lines)
    after = edit.apply(model)
    assert [(one.id, one.frequency.text) for one in after.measured[2:]] == [
        ("p7", "31.5 Hz"),
        ("peak 1", "44 Hz"),
    ]
    assert after.measured[2].uncertainty.text == "0.4 Hz"
    assert [one.split(",")[0] for one in refused] == ["line 3", "line 5"]
    assert edit.text == "paste 2 peaks"
    assert edit.revert(after) == model


def test_peaks_are_removed(model):
    edit = without_peaks(model, {0})
    assert [one.id for one in edit.apply(model).measured] == ["bump 2"]
    assert without_peaks(model, {0, 1}).text == "remove 2 peaks"
