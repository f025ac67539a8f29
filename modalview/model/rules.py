"""The rules of meaning that a model must keep, told all at once.

The reader runs them after its walk, the window before every edit. Whether a model can move at all, or
moves freely, is no rule here: assembling it tells.
"""

from collections.abc import Callable, Iterator
from typing import Any

from modalview.errors import Fault
from modalview.model import rules_bodies, rules_links, rules_machines, rules_records
from modalview.model.parts import Model
from modalview.model.rules_context import Context, Findings, cut, place_of
from modalview.model.rules_names import plain_id, plain_name

_RULES: dict[str, Callable[[Any, Context], Findings]] = {
    "bodies": rules_bodies.body,
    "supports": rules_bodies.support,
    "links": rules_links.link,
    "machines": rules_machines.machine,
    "measured": rules_records.measured,
    "limits": rules_records.limit,
}


def faults(model: Model) -> tuple[Fault, ...]:
    """Return every rule that a model breaks, with the place of each; none means it may be analysed.

    Places count from 0, as in the file: ``bodies[2] "pump" . mass``. Linear in the size of the model and
    cheap enough for every edit.

    >>> from modalview.model.parts import Body
    >>> print(faults(Model(bodies=(Body(id="pump"),)))[0])
    bodies[0] "pump" . mass: is missing; a massless junction has the mass "0 kg"
    """
    return tuple(_faults(model))


def _faults(model: Model) -> Iterator[Fault]:
    yield from _names(model)
    context = Context.of(model)
    for group, rule in _RULES.items():
        for number, part in enumerate(getattr(model, group)):
            yield from _at(group, number, part.id, rule(part, context))
    for number, case in enumerate(model.load_cases):
        yield from _at("load_cases", number, case.id, rules_records.load_case(case, model))
    yield from rules_records.whole(model)


def _at(group: str, number: int, name: str, findings: Findings) -> Iterator[Fault]:
    for key, reason in findings:
        yield Fault(f"{place_of(group, number, name)} . {key}", reason)


def _names(model: Model) -> Iterator[Fault]:
    first: dict[str, str] = {}
    for group in (*_RULES, "load_cases"):
        for number, part in enumerate(getattr(model, group)):
            name = part.id
            if name in first:
                reason = f'"{cut(name)}" is already the id of {first[name]}; ids are unique over the file'
                yield Fault(f"{place_of(group, number, name)} . id", reason)
            elif not name.isprintable() or not name.strip():  # asked here too: most are plain, and many
                yield from _at(group, number, name, plain_id("id", name))
            label = getattr(part, "name", None)
            if label is not None and not label.isprintable():
                yield from _at(group, number, name, plain_name("name", label))
            first.setdefault(name, f"{group}[{number}]")
