"""From a file or a text to a model, or to every fault in it at once.

The standard library's JSON reader and a walk over the types are used, not a compiled decoder such as
msgspec: that one stops at the first fault and cannot see a key given twice.

A byte order mark at the start of a file is accepted and not written again. Places in a fault count
from 0, as in JSON: ``links[2] "M3" . from``.
"""

import os
from collections.abc import Callable
from pathlib import Path
from typing import Any

from modalview.errors import Fault, FileAccessError, FileFaultsError
from modalview.model import rules
from modalview.model.parts import FREEDOMS, Model, Motion
from modalview.store.json_text import JsonMap, decode
from modalview.store.walk import Walk, never, shown

FORMAT = "keepclear"
VERSION = 1
# A file beyond these is a mistake or an attack; both are refused before any long work.
LARGEST_BYTES = 200_000_000
MOST_FREEDOMS = 200_000
# Nobody reads more faults than this; the rest is told by its number.
MOST_FAULTS = 1000


def read_model(path: str | os.PathLike[str]) -> Model:
    """Read a model file.

    Raises
    ------
    FileAccessError
        When the file cannot be read.
    FileFaultsError
        With all faults at once, when it is not a model.
    """
    return parse_bytes(read_bytes(path))


def read_bytes(path: str | os.PathLike[str]) -> bytes:
    """Return what a file holds, unless it cannot be read or is larger than any model may be."""
    try:
        with Path(path).open("rb") as file:
            data = file.read(LARGEST_BYTES + 1)
    except FileNotFoundError:
        raise FileAccessError(f"{path}: there is no such file") from None
    except IsADirectoryError:
        raise FileAccessError(f"{path} is a folder, not a file") from None
    except (OSError, ValueError) as fault:
        why = "it is a folder" if Path(path).is_dir() else getattr(fault, "strerror", None) or str(fault)
        raise FileAccessError(f"{path} cannot be read: {why}") from None
    if len(data) > LARGEST_BYTES:
        raise FileAccessError(
            f"{path} is larger than {LARGEST_BYTES // 1_000_000} MB, the most a model may hold"
        )
    return data


def parse_bytes(data: bytes, *, stopped: Callable[[], bool] = never) -> Model:
    """Read a model from the bytes of a file."""
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as fault:
        reason = "the file is not UTF-8 text; if it is a model, save it as UTF-8"
        raise FileFaultsError((Fault(f"byte {fault.start}", reason),)) from None
    return parse_model(text, stopped=stopped)


def parse_model(text: str, *, stopped: Callable[[], bool] = never) -> Model:
    """Read a model from the text of a file.

    Parameters
    ----------
    text : str
    stopped : callable
        Asked at every part whether the reading was called off.

    Raises
    ------
    FileFaultsError
        With all faults at once: those of form and, as far as parts could be read, those of meaning.
    CancelledError
        It was called off.
    """
    tree = _tree(text)
    _check_size(tree, _motion(tree))
    model, walk = _walked(tree, stopped)
    if "motion" not in tree:
        walk.fault("motion", f"is missing: say how the bodies move, {_motions()}")
    faults = walk.faults
    # Without its bodies and supports, or with most of it unreadable, a model has no meaning to check.
    if not {"bodies", "supports"} & set(walk.spoiled) and len(faults) < MOST_FAULTS:
        faults = faults + [fault for fault in rules.faults(model) if not _covered(fault.path, walk.spoiled)]
    if faults:
        raise FileFaultsError(_shortened(faults))
    return model


def parse_unchecked(text: str) -> tuple[Model, tuple[Fault, ...]]:
    """Read a model that may break any rule of meaning, as one is while it is being drawn.

    Returns
    -------
    model : Model
        With blanks where a form is broken.
    faults : tuple of Fault
        Those of form alone; none for whatever `dump_model` wrote of a model made in the program.

    Raises
    ------
    FileFaultsError
        It is no model at all, or one of a later version.
    """
    model, walk = _walked(_tree(text))
    return model, tuple(walk.faults)


def _tree(text: str) -> JsonMap:
    tree = decode(text.removeprefix("\ufeff"))
    if not isinstance(tree, JsonMap):
        raise FileFaultsError((Fault("", f"a model file is one JSON object {{...}}; found {shown(tree)}"),))
    _check_header(tree)
    return tree


def _walked(tree: JsonMap, stopped: Callable[[], bool] = never) -> tuple[Model, Walk]:
    walk = Walk(_motion(tree), stopped)
    return walk.record(Model, tree, "", besides=("format", "version")), walk


def _shortened(faults: list[Fault]) -> tuple[Fault, ...]:
    more = len(faults) - MOST_FAULTS
    last = (Fault("", f"{more} more faults were found; mend these first"),) if more > 0 else ()
    return (*faults[:MOST_FAULTS], *last)


def _check_header(tree: JsonMap) -> None:
    """Stop at once when this is no model, or one of a later program: its keys would only confuse."""
    name, version = tree.get("format"), tree.get("version")
    if name != FORMAT:
        found = f"found {shown(name)}" if "format" in tree else "it is missing"
        reason = f'must be "{FORMAT}"; {found}; this is not a Keepclear model'
        raise FileFaultsError((Fault("format", reason),))
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        found = f"found {shown(version)}" if "version" in tree else "it is missing"
        raise FileFaultsError((Fault("version", f"must be {VERSION}; {found}"),))
    if version > VERSION:
        reason = (
            f"this file is of version {version} and was written by a newer Keepclear; this one reads up to "
            f"version {VERSION}; update the program, the file is left as it is"
        )
        raise FileFaultsError((Fault("version", reason),))


def _motions() -> str:
    return ", ".join(f'"{one.value}"' for one in Motion)


def _motion(tree: JsonMap) -> Motion:
    word = tree.get("motion")
    return next((one for one in Motion if one.value == word), Motion.SINGLE_AXIS)


def _check_size(tree: JsonMap, motion: Motion) -> None:
    bodies: Any = tree.get("bodies")
    each = len(FREEDOMS[motion])
    if isinstance(bodies, list) and len(bodies) * each > MOST_FREEDOMS:
        reason = (
            f"{len(bodies)} bodies of {each} freedoms are {len(bodies) * each} degrees of freedom; "
            f"the most is {MOST_FREEDOMS}"
        )
        raise FileFaultsError((Fault("bodies", reason),))


def _covered(path: str, spoiled: list[str]) -> bool:
    """Tell whether a fault of meaning stands at, above or below a place that could not be read."""
    return any(path == one or _inside(path, one) or _inside(one, path) for one in spoiled)


def _inside(path: str, whole: str) -> bool:
    return path.startswith((f"{whole} . ", f"{whole}["))
