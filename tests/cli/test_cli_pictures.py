"""What a picture from the command line says in words, and which mode it shows."""

from types import SimpleNamespace

import pytest

from modalview.cli import main, pictures
from modalview.drawing.primitives import Text
from modalview.errors import UsageError
from modalview.places import demo_models

PUMP = demo_models() / "1-cooling-water-pump" / "as-built.keepclear"
DAMPED = demo_models() / "6-vacuum-pump-absorber" / "absorber-210kg-damped.keepclear"
TRAIN = demo_models() / "3-air-compressor-train" / "as-built.keepclear"
SET = demo_models() / "4-standby-generator-set" / "dynamic-stiffness.keepclear"


@pytest.fixture
def drawn(monkeypatch):
    """Return the texts of a picture, which is not painted."""

    def texts(file, *words):
        held = []
        monkeypatch.setattr(pictures, "save_picture", lambda drawing, *_: held.append(drawing))
        assert main(["picture", str(file), "-o", "x.png", *words]) == 0
        (drawing,) = held
        left, top, width, height = drawing.bounds
        assert all(
            left <= item.x <= left + width and top <= item.y <= top + height
            for item in drawing.items
            if isinstance(item, Text)
        )
        return [item.text for item in drawing.items if isinstance(item, Text)]

    return texts


def test_a_mode_is_told_by_number_frequency_range_and_name(drawn):
    texts = drawn(PUMP, "--of", "mode", "--mode", "2")
    assert texts[-1] == "Mode 2 · 140.99 Hz (131.7 to 150.2 Hz over tolerance) · pump against motor"


@pytest.mark.parametrize(("of", "told"), [("scale", "Frequency scale"), ("plane", "Complex plane")])
def test_scale_and_plane_name_the_model(drawn, of, told):
    assert drawn(DAMPED, "--of", of)[-1] == f"{told} · Vacuum pump on floor beam, damped absorber of 210 kg"


def test_a_long_caption_is_cut_to_a_small_picture(drawn):
    (caption,) = (text for text in drawn(PUMP, "--of", "mode", "--size", "600x400") if text[:4] == "Mode")
    assert caption.startswith("Mode 1 · 51.26")
    assert caption.endswith("…")


def test_a_rigid_body_mode_has_no_range(drawn):
    assert drawn(TRAIN, "--of", "mode")[-1].startswith("Mode 1 · 0 Hz · rigid-body: ")


@pytest.mark.parametrize("words", [(), ("--of", "mode")])
def test_the_title_block_holds_the_verdict(drawn, words):
    texts = drawn(PUMP, *words)
    assert texts[texts.index("checked") + 1] == "mode in band"


SPRING = """, "supports": [{"id": "g"}], "links": [{"id": "k", "kind": "spring", "from": {"body": "a"},
"to": {"support": "g"}, "stiffness": "1 N/m"}]"""


@pytest.mark.parametrize(("links", "checked"), [(SPRING, "nothing to check"), ("", "not yet")])
def test_a_sheet_without_a_verdict(drawn, tmp_path, links, checked):
    file = tmp_path / "a.keepclear"
    bodies = '"bodies": [{"id": "a", "mass": "1 kg"}]'
    file.write_text(f'{{"format": "keepclear", "version": 1, "motion": "single axis", {bodies}{links}}}')
    texts = drawn(file)
    assert texts[texts.index("checked") + 1] == checked


def test_modes_of_a_large_model_go_by_their_number():
    modes = tuple(SimpleNamespace(number=number) for number in (120, 121, 124))
    solution = SimpleNamespace(modes=modes)
    assert pictures.wanted_mode(solution, 121) is modes[1]
    assert pictures.wanted_mode(solution, None) is modes[0]
    with pytest.raises(UsageError, match="found are the modes near excitations, 120, 121, 124"):
        pictures.wanted_mode(solution, 1)


@pytest.mark.parametrize("words", [(), ("--of", "mode")])
def test_a_space_model_is_seen_from_where_it_is_asked(drawn, words):
    assert "side view" in drawn(SET, *words, "--view", "side")
    assert not any(text.endswith(" view") for text in drawn(SET, *words, "--view", "turned"))


@pytest.mark.parametrize(
    ("file", "words", "told"),
    [(PUMP, (), "only a model in space"), (SET, ("--of", "scale"), "goes with the sheet and with --of mode")],
)
def test_a_view_that_has_no_meaning_is_refused(file, words, told, capsys, tmp_path):
    out = tmp_path / "x.png"
    assert main(["picture", str(file), "-o", str(out), *words, "--view", "front"]) == 2
    assert told in capsys.readouterr().err
    assert not out.exists()


@pytest.mark.parametrize(
    ("file", "of", "told", "also"),
    [
        (PUMP, "response", "Response · Cooling-water pump P-3, as built", "mm/s rms"),
        (PUMP, "speeds", "Speeds · Cooling-water pump P-3, as built", "runs at 2 950 rpm"),
        (SET, "mounts", "Mounts at rest · Standby generator set, dynamic stiffness", "rear left mount"),
    ],
)
def test_charts_name_the_model_and_what_they_show(drawn, file, of, told, also):
    texts = drawn(file, "--of", of)
    assert texts[-1] == told
    assert also in texts


def test_a_response_of_another_quantity(drawn):
    assert "um peak-to-peak" in drawn(
        PUMP, "--of", "response", "--quantity", "displacement peak-to-peak", "--machine", "pump set"
    )


@pytest.mark.parametrize(
    ("file", "words", "told"),
    [
        (PUMP, ("--of", "speeds", "--machine", "fan"), "--machine fan: there is none; the file has pump set"),
        (PUMP, ("--machine", "pump set"), "--machine goes with --of response and --of speeds"),
        (PUMP, ("--of", "speeds", "--quantity", "velocity rms"), "--quantity goes with --of response"),
        (TRAIN, ("--of", "mounts"), "only turns"),
    ],
)
def test_charts_that_cannot_be_drawn_say_why(capsys, file, words, told):
    assert main(["picture", str(file), "-o", "x.png", *words]) == 2
    assert told in " ".join(capsys.readouterr().err.split())
