"""From a JSON tree to the parts of a model, driven by their types, collecting every fault.

What a field may hold is read from the dataclass types (`modalview.model.fields`). A value that cannot
be read leaves a blank behind, so that the walk goes on and all faults are told at once; `spoiled`
tells later checks of meaning where they would only repeat themselves.
"""

import math
from collections.abc import Callable
from dataclasses import replace
from difflib import get_close_matches
from typing import Any

from modalview.errors import CancelledError, Fault, UnitError
from modalview.model.fields import Field, Shape, fields_of, quantity_in
from modalview.model.parts import LINK_KINDS, Link, Motion
from modalview.model.rules_context import LONGEST_NAME, cut, place_of
from modalview.model.values import Entry, JsonObject, Tolerance, Value, is_sane
from modalview.store.json_text import JsonMap, NotFinite
from modalview.units.quantities import RATIO, Quantity

# Objects in `given` may nest, but not so deeply that writing them could fail.
DEEPEST_GIVEN = 32
LONGEST_SHOWN = 40
# Of a list that has been read; the tree is not needed again.
LET_GO_AT_ONCE = 1000
# Looking for the key that was meant is slow; past so many faults it no longer helps.
MOST_HINTS = 200
BLANK = Entry("", math.nan)

_VALUE_KEYS = ("value", "tolerance", "source", "status", "by", "given")
_TOLERANCE_PAIRS = (("minus", "plus"), ("from", "to"))


def never() -> bool:
    """Never called off."""
    return False


def shown(node: Any) -> str:
    """Name a JSON value as found, for a message."""
    if isinstance(node, NotFinite):
        return f"{node.word}, which is not a number"
    if isinstance(node, str):
        return f'the text "{cut(node, LONGEST_SHOWN)}"'
    if isinstance(node, dict | list):
        return "an object {...}" if isinstance(node, dict) else "a list [...]"
    if node is None or isinstance(node, bool):
        return {None: "null; leave out a key that has no value", True: "true", False: "false"}[node]
    return f"the number {node}" if is_sane(node) else "a number beyond all measure"


def _wanted(shape: Shape, quantity: Quantity | None) -> str:
    """Say in words what may stand in a field."""
    example = quantity.example if quantity else ""
    words = ", ".join(f'"{one.value}"' for one in shape.choice or ())
    keys = [field.key for one in shape.records[:1] for field in fields_of(one) if field.required]
    ways = (
        (quantity is not None, f'text with a unit, such as "{example}"'),
        (shape.tolerance, 'a tolerance: "10 %", {"minus", "plus"} or {"from", "to"}'),
        (shape.choice is not None, f"one of {words}"),
        (shape.integer, "a whole number"),
        (shape.number, "a number"),
        (shape.text, "text"),
        (shape.items is not None, f"a list of {shape.length}" if shape.length else "a list"),
        (shape.value is not None, "an object with the key value"),
        (bool(shape.records), f"an object with {', '.join(keys)}" if keys else "an object"),
        (shape.mapping, "an object"),
    )
    return " or ".join(way for possible, way in ways if possible)


def blank(shape: Shape) -> Any:
    """Return what stands in for a value that could not be read: right in type, empty in meaning."""
    if shape.quantity:
        return Value(BLANK) if shape.value else BLANK
    if shape.records:
        needed = {field.name: blank(field.shape) for field in fields_of(shape.records[0]) if field.required}
        return shape.records[0](**needed)
    if shape.choice:
        return next(iter(shape.choice))
    if shape.items:
        return (blank(shape.items),) * (shape.length or 0)
    return Tolerance() if shape.tolerance else _blank_plain(shape)


def _blank_plain(shape: Shape) -> float | str:
    if shape.integer:
        return 0
    return math.nan if shape.number else ""


class Walk:
    """One pass over the tree of one file.

    Parameters
    ----------
    motion : Motion
        Decides the quantity of some fields.
    stopped : callable
        Asked at every part whether the reading was called off.
    """

    def __init__(self, motion: Motion, stopped: Callable[[], bool] = never) -> None:
        self.motion = motion
        self._stopped = stopped
        self.faults: list[Fault] = []
        self.spoiled: list[str] = []
        self._entries: dict[tuple[str, Quantity], Entry] = {}

    def fault(self, path: str, reason: str) -> None:
        """Note a fault; checks of meaning at this place would only repeat it."""
        self.faults.append(Fault(path, reason))
        self.spoiled.append(path)

    def record(self, part: type, node: Any, path: str, *, besides: tuple[str, ...] = ()) -> Any:
        """Read an object with named keys; ``besides`` are keys read elsewhere, such as ``kind``."""
        if self._stopped():
            raise CancelledError("Reading was called off.")
        fields = fields_of(part)
        self._check_keys(node, tuple(field.key for field in fields) + besides, path)
        found: dict[str, Any] = {}
        for field in fields:
            where = f"{path} . {field.key}" if path else field.key
            if field.key in node:
                found[field.name] = self._field(part, field, node[field.key], where)
            elif field.required:
                self.fault(where, f"is missing: it needs {_wanted(field.shape, field.shape.quantity)}")
                found[field.name] = blank(field.shape)
        return part(**found)

    def _field(self, part: type, field: Field, node: Any, path: str) -> Any:
        declared = field.shape.quantity
        quantity = quantity_in(part, field.name, declared, self.motion) if declared else None
        return self._read(field.shape, quantity, node, path)

    def _read(self, shape: Shape, quantity: Quantity | None, node: Any, path: str) -> Any:
        if isinstance(node, str):
            found = self._text(shape, quantity, node, path)
        elif isinstance(node, JsonMap):
            found = self._object(shape, quantity, node, path)
        elif isinstance(node, list):
            found = self._list(shape, node, path)
        elif isinstance(node, int | float) and not isinstance(node, bool):
            found = self._number(shape, node)
        else:
            found = None
        if found is not None:
            return found
        self.fault(path, f"needs {_wanted(shape, quantity)}; found {shown(node)}")
        return blank(shape)

    def _text(self, shape: Shape, quantity: Quantity | None, node: str, path: str) -> Any:
        if shape.tolerance:
            return Tolerance(both=self._entry(node, RATIO, path))
        if quantity:
            entry = self._entry(node, quantity, path)
            return Value(entry) if shape.value else entry
        if shape.choice and node in shape.choice._value2member_map_:
            return shape.choice(node)
        if shape.text:
            self._check_characters(node, path)
            return node
        return None

    def _check_characters(self, text: str, path: str) -> None:
        if not text.isascii() and any("\ud800" <= sign <= "\udfff" for sign in text):
            self.fault(
                path, "holds half of a character (a lone surrogate), which no file can keep; type it anew"
            )

    def _entry(self, text: str, quantity: Quantity, path: str) -> Entry:
        known = self._entries.get((text, quantity))
        if known:
            return known
        try:
            entry = Entry.typed(text, quantity)
        except UnitError as reason:
            self.fault(path, str(reason))
            return BLANK
        self._entries[text, quantity] = entry
        return entry

    def _number(self, shape: Shape, node: float) -> Any:
        if shape.integer:
            return node if isinstance(node, int) else None
        if shape.number and is_sane(node):
            return node
        return None

    def _list(self, shape: Shape, node: list[Any], path: str) -> Any:
        if shape.items is None or (shape.length and shape.length != len(node)):
            return None
        quantity = shape.items.quantity
        found = tuple(
            self._read(shape.items, quantity, item, self._item_path(path, number, item))
            for number, item in enumerate(node)
        )
        while len(node) > LET_GO_AT_ONCE:  # all at once held the interpreter lock for a twentieth of a second
            del node[-LET_GO_AT_ONCE:]
        return found

    def _item_path(self, path: str, number: int, item: Any) -> str:
        name = item.get("id") if isinstance(item, JsonMap) else None
        return place_of(path, number, name) if isinstance(name, str) else f"{path}[{number}]"

    def _object(self, shape: Shape, quantity: Quantity | None, node: JsonMap, path: str) -> Any:
        if shape.mapping:
            return self._freeze(node, path, DEEPEST_GIVEN)
        if shape.tolerance:
            return self._tolerance(node, quantity, path)
        if shape.value and ("value" in node or not shape.records):
            return self._value(node, quantity, path)
        if shape.records == tuple(LINK_KINDS.values()):
            return self._link(shape, node, path)
        return self.record(shape.records[0], node, path) if shape.records else None

    def _link(self, shape: Shape, node: JsonMap, path: str) -> Link:
        kind = node.get("kind")
        known = LINK_KINDS.get(kind) if isinstance(kind, str) else None
        if known:
            link: Link = self.record(known, node, path, besides=("kind",))
            return link
        words = ", ".join(f'"{one}"' for one in LINK_KINDS)
        found = f"found {shown(kind)}{_near(kind, tuple(LINK_KINDS))}" if "kind" in node else "is missing"
        self.fault(f"{path} . kind", f"a link's kind is one of {words}; {found}")
        self.spoiled.append(path)
        name = node.get("id")
        empty: Link = blank(shape)
        return replace(empty, id=name if isinstance(name, str) else "")

    def _value(self, node: JsonMap, quantity: Quantity | None, path: str) -> Value:
        self._check_keys(node, _VALUE_KEYS, path)
        text = node.get("value")
        entry = BLANK
        if isinstance(text, str) and quantity:
            entry = self._entry(text, quantity, f"{path} . value")
        else:
            example = f', such as "{quantity.example}"' if quantity else ""
            found = f"found {shown(text)}" if "value" in node else "is missing"
            self.fault(f"{path} . value", f"needs text with a unit{example}; {found}")
        knowledge = {
            key: self._read(shape, quantity if shape.tolerance else None, node[key], f"{path} . {key}")
            for key, shape in _KNOWLEDGE.items()
            if key in node
        }
        return Value(entry, **knowledge)

    def _tolerance(self, node: JsonMap, quantity: Quantity | None, path: str) -> Tolerance:
        pair = _TOLERANCE_PAIRS[1] if "from" in node or "to" in node else _TOLERANCE_PAIRS[0]
        self._check_keys(node, pair, path)
        if pair[0] == "from" and quantity is None:
            self.fault(path, 'is a percentage here, such as "10 %"; from and to stand at the value itself')
            return Tolerance()
        sides = []
        for key in pair:
            text, unit = node.get(key), RATIO if key in _TOLERANCE_PAIRS[0] else quantity
            if isinstance(text, str) and unit:
                sides.append(self._entry(text, unit, f"{path} . {key}"))
            else:
                found = f"found {shown(text)}" if key in node else "is missing"
                self.fault(
                    f"{path} . {key}", f"a tolerance has both {pair[0]} and {pair[1]} as text; {found}"
                )
        if len(sides) < 2:
            return Tolerance()
        low, high = sides
        return Tolerance(minus=low, plus=high) if pair[0] == "minus" else Tolerance(low=low, high=high)

    def _freeze(self, node: Any, path: str, deeper: int) -> Any:
        if deeper == 0:
            self.fault(path, f"is nested more than {DEEPEST_GIVEN} deep")
            return None
        if isinstance(node, JsonMap):
            for key in node.repeated:
                self.fault(f"{path} . {key}", "is given twice; keep one")
            for key in node:
                self._check_characters(key, path)
            return JsonObject(
                (key, self._freeze(item, f"{path} . {key}", deeper - 1)) for key, item in node.items()
            )
        if isinstance(node, list):
            return tuple(self._freeze(item, f"{path}[{n}]", deeper - 1) for n, item in enumerate(node))
        if isinstance(node, str):
            self._check_characters(node, path)
        if isinstance(node, NotFinite) or (isinstance(node, float) and not math.isfinite(node)):
            self.fault(path, f"needs a finite number; found {shown(node)}")
            return None
        return node

    def _check_keys(self, node: JsonMap, known: tuple[str, ...], path: str) -> None:
        for key in node.repeated:
            self.fault(f"{path} . {cut(key)}" if path else cut(key), "is given twice; keep one")
        for key in node:
            if key not in known:
                where = f"{path} . {cut(key)}" if path else cut(key)
                near = _near(key, known) if len(self.faults) < MOST_HINTS else ""
                self.faults.append(Fault(where, f"is not a key here{near}"))


def _near(word: Any, known: tuple[str, ...]) -> str:
    short = isinstance(word, str) and len(word) <= LONGEST_NAME
    close = get_close_matches(word, known, n=1) if short else []
    if close:
        return f'; did you mean "{close[0]}"?'
    return f"; known are {', '.join(known)}" if len(known) <= 12 else ""


_KNOWLEDGE = {field.key: field.shape for field in fields_of(Value) if field.key in _VALUE_KEYS}
