"""The layout of a model file: indented by two, short objects on one line, lists of parts one a line.

So a file reads like a table where it can, and a changed value changes one line.
"""

from json import JSONEncoder
from json.encoder import encode_basestring
from typing import Any

WIDTH = 100
# Whole floats are written without a point up to here; beyond, digits would be invented.
EXACT = 1e15
_plain = JSONEncoder(ensure_ascii=False).encode


def laid_out(tree: dict[str, Any]) -> str:
    """Return the text of a JSON tree, with a newline at the end.

    >>> print(laid_out({"title": "Pump", "bodies": [{"id": "motor", "mass": "620 kg"}]}), end="")
    {
      "title": "Pump",
      "bodies": [
        {"id": "motor", "mass": "620 kg"}
      ]
    }
    """
    return _broken(tree, "") + "\n"


def _one_line(node: Any) -> str | None:
    """Return a node on one line, or None when it holds a list of parts, which never is."""
    if isinstance(node, dict):
        items = [(encode_basestring(key), _one_line(item)) for key, item in node.items()]
        if any(item is None for _, item in items):
            return None
        return "{" + ", ".join(f"{key}: {item}" for key, item in items) + "}"
    if isinstance(node, list):
        if any(isinstance(item, dict) for item in node):
            return None
        parts = [_one_line(item) for item in node]
        return None if None in parts else "[" + ", ".join(part or "" for part in parts) + "]"
    return _scalar(node)


def _scalar(node: Any) -> str:
    if isinstance(node, str):
        return encode_basestring(node)
    if isinstance(node, float) and node.is_integer() and abs(node) < EXACT:
        return str(int(node))  # an order 7.0 is typed 7
    return _plain(node)


def _laid(node: Any, indent: str, used: int) -> str:
    """Lay out a node that starts after ``used`` columns; a comma may follow it."""
    line = _one_line(node)
    if line is not None and (used + len(line) < WIDTH or not isinstance(node, dict | list)):
        return line
    return _broken(node, indent)


def _broken(node: Any, indent: str) -> str:
    inner = indent + "  "
    if isinstance(node, dict):
        lines = []
        for key, item in node.items():
            start = f"{inner}{encode_basestring(key)}: "
            lines.append(start + _laid(item, inner, len(start)))
        return "{\n" + ",\n".join(lines) + f"\n{indent}}}" if lines else "{}"
    lines = [inner + _laid(item, inner, len(inner)) for item in node]
    return "[\n" + ",\n".join(lines) + f"\n{indent}]"
