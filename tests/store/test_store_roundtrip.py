"""Reading and writing: every key of version 1, in all four motions."""

import json
from dataclasses import fields, is_dataclass
from pathlib import Path

import pytest

from modalview.model import parts, values
from modalview.model.fields import fields_of
from modalview.model.parts import Model, Motion
from modalview.store import dump_model, parse_model, read_model

SAMPLES = sorted((Path(__file__).parent / "samples").glob("*.keepclear"))


def all_parts():
    found = [kind for kind in vars(parts).values() if isinstance(kind, type) and is_dataclass(kind)]
    return [kind for kind in found if kind.__module__ == parts.__name__ and not kind.__name__.startswith("_")]


def used_fields(item, found):
    if is_dataclass(item):
        for field in fields(item):
            inner = getattr(item, field.name)
            if inner not in (None, ()):
                found.add((type(item).__name__, field.name))
                used_fields(inner, found)
    elif isinstance(item, tuple):
        for one in item:
            used_fields(one, found)
    return found


def test_there_is_a_sample_for_each_motion():
    assert {read_model(path).motion for path in SAMPLES} == set(Motion)


def test_the_samples_use_every_key_of_version_1():
    used = set()
    for path in SAMPLES:
        used_fields(read_model(path), used)
    every = {(kind.__name__, field.name) for kind in all_parts() for field in fields_of(kind)}
    every |= {("Value", field.name) for field in fields(values.Value)}
    every |= {("Tolerance", field.name) for field in fields(values.Tolerance)}
    # A rigid link has no value that could be varied; the rules refuse limits of it.
    assert every - used == {("RigidLink", "vary_limits")}


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_a_file_in_the_layout_is_written_back_byte_for_byte(path):
    text = path.read_text(encoding="utf-8")
    assert dump_model(parse_model(text)) == text


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_saved_and_reopened_is_equal(path):
    model = read_model(path)
    assert parse_model(dump_model(model)) == model


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_the_layout_does_not_depend_on_how_the_file_was_typed(path):
    text = path.read_text(encoding="utf-8")
    assert dump_model(parse_model(json.dumps(json.loads(text)))) == text


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_no_line_is_longer_than_the_layout_allows_unless_it_is_one_text(path):
    for line in path.read_text(encoding="utf-8").splitlines():
        assert len(line) <= 100 or line.count('": ') == 1


def test_changing_one_value_changes_one_line():
    text = SAMPLES[0].read_text(encoding="utf-8")
    changed = dump_model(parse_model(text.replace('"5.2e7 N/m"', '"5.3e7 N/m"')))
    pairs = zip(text.splitlines(), changed.splitlines(), strict=True)
    assert sum(old != new for old, new in pairs) == 1


def test_an_empty_model_keeps_its_motion():
    text = dump_model(Model())
    assert '"motion": "single axis"' in text
    assert parse_model(text) == Model()


def test_whole_orders_are_written_without_a_point():
    text = dump_model(read_model(next(path for path in SAMPLES if path.stem == "plane")))
    assert '"order": 12,' in text


def test_a_byte_order_mark_is_accepted_and_not_written(tmp_path):
    path = tmp_path / "mark.keepclear"
    path.write_bytes(b"\xef\xbb\xbf" + SAMPLES[0].read_bytes())
    assert dump_model(read_model(path)) == SAMPLES[0].read_text(encoding="utf-8")


def test_windows_line_ends_are_read(tmp_path):
    path = tmp_path / "lines.keepclear"
    path.write_bytes(SAMPLES[0].read_bytes().replace(b"\n", b"\r\n"))
    assert read_model(path) == read_model(SAMPLES[0])


def test_a_handbook_entry_keeps_any_json():
    given = {"a": [], "b": {}, "c": [["x", 1]], "d": {"x": 1}, "e": None, "f": False, "g": 1.25e-7}
    mass = {"value": "1 kg", "given": given}
    text = json.dumps(
        {"format": "keepclear", "version": 1, "motion": "single axis", "bodies": [{"id": "a", "mass": mass}]}
    )
    assert json.loads(dump_model(parse_model(text)))["bodies"][0]["mass"]["given"] == given


def test_models_are_hashable_whatever_they_hold():
    assert len({read_model(path) for path in SAMPLES}) == len(SAMPLES)


def test_products_and_deflections_are_kept_as_typed_and_read_as_numbers():
    text = SAMPLES[0].read_text(encoding="utf-8").replace('"5.2e7 N/m"', '"35 mm under 4 x 225 kg"')
    model = parse_model(text)
    stiffnesses = [one.stiffness for one in model.links if isinstance(one, parts.Spring)]
    (typed,) = [one for one in stiffnesses if one.text == "35 mm under 4 x 225 kg"]
    assert typed.si == pytest.approx(900 * 9.80665 / 0.035, rel=1e-15)
    assert '"35 mm under 4 x 225 kg"' in dump_model(model)
