"""The bundled example models, as the menu and the empty window offer them."""

import json
from dataclasses import dataclass
from pathlib import Path

from modalview.places import demo_models

SUFFIX = ".keepclear"


@dataclass(frozen=True, slots=True)
class Example:
    """One file: where it is, what it is called, and the first sentence of its story."""

    path: Path
    title: str
    variant: str
    sentence: str


def bundled_examples() -> tuple[Example, ...]:
    """Return the examples in the order of their folders, in each the as-built case first."""
    paths = demo_models().glob(f"*/*{SUFFIX}")
    return tuple(_example(path) for path in sorted(paths, key=_order))


def first_of_each(examples: tuple[Example, ...]) -> tuple[Example, ...]:
    """Return one example of each folder."""
    firsts: dict[Path, Example] = {}
    for example in examples:
        firsts.setdefault(example.path.parent, example)
    return tuple(firsts.values())


def _order(path: Path) -> tuple[str, bool, str]:
    return path.parent.name, not path.stem.startswith(_FIRST), path.stem


# The case a story begins with; the others follow by name.
_FIRST = ("as-built", "steel", "soft", "static", "design", "no-")


def _example(path: Path) -> Example:
    tree = json.loads(path.read_text(encoding="utf-8"))
    story = str(tree.get("notes", ""))
    sentence = story.split(". ", maxsplit=1)[0].rstrip(".")
    return Example(path, str(tree["title"]), path.stem.replace("-", " "), f"{sentence}." if sentence else "")
