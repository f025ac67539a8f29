"""From a model to the text of its file; what has its default value is left out."""

from dataclasses import is_dataclass
from enum import StrEnum
from typing import Any

from modalview.model.fields import fields_of
from modalview.model.parts import Model
from modalview.model.values import Entry, JsonObject, Tolerance, Value
from modalview.store.layout import laid_out
from modalview.store.reading import FORMAT, VERSION


def dump_model(model: Model) -> str:
    """Return the text of a model's file, keys in a fixed order.

    Reading it gives an equal model; a file in this layout is written back unchanged.

    >>> print(dump_model(Model(title="Pump")), end="")
    {
      "format": "keepclear",
      "version": 1,
      "title": "Pump",
      "motion": "single axis"
    }
    """
    parts = _record(model)
    tree: dict[str, Any] = {"format": FORMAT, "version": VERSION}
    if model.title:
        tree["title"] = model.title
    # A default in the program, but never left to guess in a file.
    tree["motion"] = model.motion.value
    tree.update((key, node) for key, node in parts.items() if key not in tree)
    return laid_out(tree)


def _record(part: Any) -> dict[str, Any]:
    kind = getattr(part, "kind", None)
    tree: dict[str, Any] = {}
    for field in fields_of(type(part)):
        item = getattr(part, field.name)
        if field.required or item != field.default:
            tree[field.key] = _node(item)
        if field.key == "id" and kind:
            tree["kind"] = kind
    return tree


def _node(item: Any) -> Any:
    if isinstance(item, Value | Tolerance):
        return _value(item) if isinstance(item, Value) else _tolerance(item)
    if isinstance(item, Entry | StrEnum):
        return item.text if isinstance(item, Entry) else item.value
    if isinstance(item, JsonObject):
        return _thawed(item)
    if isinstance(item, tuple):
        return [_node(one) for one in item]
    return _record(item) if is_dataclass(item) else item


def _value(value: Value) -> str | dict[str, Any]:
    known = {
        field.key: _node(getattr(value, field.name))
        for field in fields_of(Value)
        if field.key != "entry" and getattr(value, field.name) is not None
    }
    return {"value": value.text, **known} if known else value.text


def _tolerance(tolerance: Tolerance) -> str | dict[str, str]:
    if tolerance.low and tolerance.high:
        return {"from": tolerance.low.text, "to": tolerance.high.text}
    if tolerance.minus and tolerance.plus:
        return {"minus": tolerance.minus.text, "plus": tolerance.plus.text}
    return tolerance.both.text if tolerance.both else "0 %"


def _thawed(item: Any) -> Any:
    """Return the plain JSON of a frozen mapping."""
    if isinstance(item, JsonObject):
        return {key: _thawed(one) for key, one in item}
    return [_thawed(one) for one in item] if isinstance(item, tuple) else item
