"""What goes over the line to the other process and back, in pieces that are quick to read.

Reading objects of our own classes back holds the interpreter lock for the length of one message: 10,000 of
them in one message stopped the window for a tenth of a second.
"""

from collections.abc import Iterator, Sequence
from dataclasses import fields, replace
from typing import Any

from modalview.model.parts import Model
from modalview.ui.studies import Step

# Parts in one message: less than ten milliseconds of reading.
PARTS_SENT = 100
# Of each mode the largest energy shares are sent; the window shows five.
SHARES_SENT = 5

Piece = tuple[str, int, Any]


def pieces(before: Model | None, after: Model) -> Iterator[Piece]:
    """Yield what who has ``before`` needs to have ``after``: the field, its length, and changed items.

    Parts that are the very same objects are not sent again, so that what was made of them stays of use. Of a
    field that is no list of parts the length is -1 and the content the whole.
    """
    for name in (field.name for field in fields(Model)):
        new = getattr(after, name)
        old = getattr(before, name) if before is not None else None
        if before is not None and new is old:
            continue
        if not isinstance(new, tuple):
            yield name, -1, new
            continue
        kept = old if isinstance(old, tuple) and len(old) == len(new) else (None,) * len(new)
        changed = [
            (at, one) for at, (one, other) in enumerate(zip(new, kept, strict=True)) if one is not other
        ]
        for start in range(0, max(len(changed), 1), PARTS_SENT):
            yield name, len(new), changed[start : start + PARTS_SENT]


def put_together(before: Model | None, received: Sequence[Piece]) -> Model:
    """Return the model whose pieces were received by who had ``before``."""
    model = before if before is not None else Model()
    found: dict[str, Any] = {}
    for name, length, content in received:
        if length < 0:
            found[name] = content
            continue
        items = found.get(name)
        if items is None:
            old = getattr(model, name)
            items = found[name] = list(old) if len(old) == length else [None] * length
        for at, one in content:
            items[at] = one
    return replace(model, **{name: _frozen(one) for name, one in found.items()})


def _frozen(content: Any) -> Any:
    return tuple(content) if isinstance(content, list) else content


def packed(step: Step, content: Any) -> Any:
    """Return the content of an answer as it is sent: plain, and without what the receiver has."""
    if step is Step.LOOKED:
        return replace(content.known(), request=None)
    if step is Step.SOLVED:
        return packed_solution(content)
    if step is Step.DAMPED:
        damped, plane, why = content
        return damped and replace(damped, outlook=None, raw=None), plane, why
    return content


def unpacked(step: Step, content: Any, known: Any, request: Any) -> Any:
    """Return the content of an answer that was sent.

    Parameters
    ----------
    step : Step
    content : Any
    known : study.results.Known
        What was told of the same model before.
    request : study.Request
        For the receiver's own model.
    """
    if step is Step.LOOKED:
        return replace(content, request=request)
    if step is Step.SOLVED:
        return replace(unpacked_solution(content), outlook=known)
    if step is Step.DAMPED:
        damped, plane, why = content
        return damped and replace(damped, outlook=known), plane, why
    return content


_SHARES = ("strain", "kinetic", "effective_mass")
_PLAIN = ("number", "name", "frequency_hz", "numerical_error_hz", "range_hz", "kind", "repeated_with")


def packed_solution(solution: Any) -> tuple[Any, Any, Any]:
    """Return a solution as what is quick to read back: no outlook, no shapes, modes as plain tuples."""
    raw = replace(solution.raw, shapes=solution.raw.shapes[:, :0])
    rest = replace(solution, outlook=None, modes=(), raw=raw)
    plain = [
        (
            tuple(getattr(mode, name) for name in _PLAIN),
            tuple(
                tuple((one.id, one.label, one.fraction) for one in getattr(mode, name)[:SHARES_SENT])
                for name in _SHARES
            ),
        )
        for mode in solution.modes
    ]
    return rest, plain, _stacked(solution.modes)


def _stacked(modes: Any) -> Any:
    import numpy as np  # noqa: PLC0415  (in the other process only)

    return np.stack([mode.motion for mode in modes]) if modes else []


def unpacked_solution(sent: tuple[Any, Any, Any]) -> Any:
    """Return the solution that was packed; sensitivities and shapes stay behind."""
    from modalview.study.results import FoundMode, Share  # noqa: PLC0415  (numpy comes later)

    rest, plain, motions = sent
    modes = []
    for (values, shares), motion in zip(plain, motions, strict=True):
        motion.setflags(write=False)
        named = {name: tuple(Share(*one) for one in some) for name, some in zip(_SHARES, shares, strict=True)}
        modes.append(
            FoundMode(**dict(zip(_PLAIN, values, strict=True)), **named, sensitivity=(), motion=motion)
        )
    return replace(rest, modes=tuple(modes))
