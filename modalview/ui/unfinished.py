"""What a drawing still lacks before it can be checked, in words of the window: which key, what to drag."""

from collections.abc import Sequence
from typing import Any

from modalview.advice.doubt import Doubt, listed, plain
from modalview.errors import FaultsError
from modalview.model.parts import FREEDOMS, Body, Model, Motion

# Places of faults that name no part: a person at the window needs the reason alone.
_WHOLE = ("model", "bodies")


def invitation(motion: Motion) -> tuple[str, ...]:
    """Return what an empty sheet says: what to do first, then what follows.

    >>> invitation(Motion.SHAFT_TRAIN)[0]
    'Press O and drag on the sheet: a disc'
    """
    last = "Last F and a click on a body: which order of which speed acts there."
    if motion is Motion.SHAFT_TRAIN:
        first = "Press O and drag on the sheet: a disc"
        return first, "Then H and a drag from disc to disc: a shaft. G: a gear pair.", last
    key, what = ("M", "mass") if motion is Motion.SINGLE_AXIS else ("B", "rigid body")
    then = "Then S and a drag from it to another part, or to empty ground: a spring. T: a mount."
    lines = (f"Press {key} and drag on the sheet: a {what}", then, last)
    if motion is not Motion.SPACE:
        return lines
    return *lines, "In the front, side and top views (Ctrl+2 to Ctrl+4) lengths are true."


def missing(model: Model | None) -> str:
    """Return what a model lacks so that it can be analysed; "" where nothing of the kind is missing.

    >>> from modalview.model.parts import Body
    >>> missing(Model(bodies=(Body(id="m1", name="motor"),)))
    'Motor hangs on nothing yet: press S and drag from it to another part, or to empty ground.'
    """
    if model is None:
        return ""
    if not model.bodies:
        return f"Nothing is drawn yet. {invitation(model.motion)[0]}."
    loose = _loose(model)
    if not loose:
        return ""
    names = listed([plain(body) for body in loose])
    # An id is written as it stands on the sheet.
    names = f"{names[:1].upper()}{names[1:]}" if loose[0].name else f"Body {names}"
    hang, it = ("hangs", "it") if len(loose) == 1 else ("hang", "each of them")
    lead = f"{names} {hang} on nothing yet: press"
    if model.motion is Motion.SHAFT_TRAIN:
        return f"{lead} H and drag from {it} to another disc."
    return f"{lead} S and drag from {it} to another part, or to empty ground."


def unchecked(model: Model | None) -> str:
    """Return how a model without a machine gets something to check; "" where it has one."""
    if model is None or model.machines:
        return ""
    return (
        "Nothing to check yet: press F and click on the body where an order of a machine's speed, "
        "or a fixed frequency, acts."
    )


def ungiven(model: Model | None, doubts: Sequence[Doubt]) -> str:
    """Return how a verdict begins that hangs on values that nobody has given; "" where all are given.

    A verdict in green on the program's own numbers would be taken for one about the machine.

    >>> from modalview.model.parts import Body
    >>> ungiven(Model(bodies=(Body(id="b1", name="fan"),)), [Doubt("starting value", ("b1",), "", "")])
    'With starting values of fan that nobody has given yet: '
    """
    if model is None:
        return ""
    parts = dict.fromkeys(part for one in doubts if one.rule == "starting value" for part in one.parts)
    if not parts:
        return ""
    called = {part.id: plain(part) for part in (*model.bodies, *model.links)}
    names = [called[part] for part in parts if part in called]
    return f"With starting values of {listed(names)} that nobody has given yet: " if names else ""


def refusal_text(refusal: Any) -> str:
    """Return why a model cannot be analysed on one line, without the file's words for the whole of it."""
    if not isinstance(refusal, FaultsError):
        return " ".join(str(refusal).splitlines())
    told = [fault.reason if fault.path in _WHOLE else str(fault) for fault in refusal.faults]
    return "; ".join(told)


def _loose(model: Model) -> list[Body]:
    """Return the bodies that move and are joined to nothing."""
    touched = {end.body for link in model.links for end in (link.from_, link.to)}
    ways = FREEDOMS[model.motion]
    return [
        body
        for body in model.bodies
        if body.id not in touched and (body.dof is None or any(way in body.dof for way in ways))
    ]
