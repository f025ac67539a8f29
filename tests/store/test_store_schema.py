"""The published schema says what the types say, and accepts what the program writes."""

import json
from pathlib import Path

import jsonschema
import pytest

from modalview.model import parts, values
from modalview.model.fields import fields_of
from modalview.places import resources
from modalview.store import dump_model, read_model

SCHEMA = json.loads((resources() / "model.schema.json").read_text(encoding="utf-8"))
SAMPLES = sorted((Path(__file__).parent / "samples").glob("*.keepclear"))
PLAIN = {"Entry", "Value", "Tolerance", "Percentage", "Point", "Vector", "Direction"}
RECORDS = sorted(set(SCHEMA["$defs"]) - PLAIN)


def reached_parts():
    found, waiting = set(), [parts.Model]
    while waiting:
        kind = waiting.pop()
        if kind not in found:
            found.add(kind)
            for field in fields_of(kind):
                shape = field.shape.items or field.shape
                waiting += shape.records
    return found - {parts.Model}


def test_it_is_a_schema():
    jsonschema.Draft202012Validator.check_schema(SCHEMA)


def test_it_holds_every_part_and_nothing_else():
    assert {kind.__name__ for kind in reached_parts()} == set(RECORDS)


@pytest.mark.parametrize("name", RECORDS)
def test_it_holds_every_field_of_a_part_in_the_order_of_the_file(name):
    kind, schema = getattr(parts, name), SCHEMA["$defs"][name]
    keys = [field.key for field in fields_of(kind)]
    if name in {link.__name__ for link in parts.LINK_KINDS.values()}:
        keys.insert(1, "kind")
        assert schema["properties"]["kind"]["const"] == kind.kind
    assert list(schema["properties"]) == keys
    assert schema["additionalProperties"] is False


@pytest.mark.parametrize("name", RECORDS)
def test_it_requires_what_the_types_require(name):
    kind, schema = getattr(parts, name), SCHEMA["$defs"][name]
    needed = {field.key for field in fields_of(kind) if field.required}
    assert set(schema.get("required", ())) - {"kind"} == needed


def test_it_holds_the_top_level_keys():
    keys = [field.key for field in fields_of(parts.Model)]
    assert list(SCHEMA["properties"]) == ["format", "version", *keys]
    assert SCHEMA["required"] == ["format", "version", "motion"]


def test_it_holds_the_forms_of_values_and_tolerances():
    known = SCHEMA["$defs"]["Value"]["anyOf"][1]["properties"]
    assert list(known) == ["value", *[field.key for field in fields_of(values.Value)][1:]]
    pairs = [
        list(SCHEMA["$defs"]["Percentage"]["anyOf"][1]["properties"]),
        list(SCHEMA["$defs"]["Tolerance"]["anyOf"][1]["properties"]),
    ]
    assert pairs == [["minus", "plus"], ["from", "to"]]


def described(node):
    if isinstance(node, dict):
        for name, inner in node.get("properties", {}).items():
            yield name, inner
        for inner in node.values():
            yield from described(inner)
    elif isinstance(node, list):
        for inner in node:
            yield from described(inner)


def test_every_key_is_described():
    assert [name for name, inner in described(SCHEMA) if not inner.get("description")] == []


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_it_accepts_what_the_program_writes(path):
    jsonschema.Draft202012Validator(SCHEMA).validate(json.loads(dump_model(read_model(path))))


@pytest.mark.parametrize(
    ("key", "node"),
    [
        ("motoin", "plane"),
        ("version", 2),
        ("bodies", [{"id": "a", "weight": "1 kg"}]),
        ("links", [{"id": "k"}]),
    ],
)
def test_it_refuses_what_the_program_refuses(key, node):
    tree = {"format": "keepclear", "version": 1, "motion": "plane", key: node}
    assert not jsonschema.Draft202012Validator(SCHEMA).is_valid(tree)
