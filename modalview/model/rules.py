"""The rules of meaning that a model must keep, told all at once."""

from collections.abc import Iterator

from modalview.errors import Fault
from modalview.model.parts import Model


def faults(model: Model) -> tuple[Fault, ...]:
    """Return every rule that a model breaks, with the place of each; none means it may be analysed."""
    return tuple(_ids(model))


def _ids(model: Model) -> Iterator[Fault]:
    first: dict[str, str] = {}
    groups = ("bodies", "supports", "links", "machines", "measured", "limits", "load_cases")
    for group in groups:
        for number, part in enumerate(getattr(model, group)):
            place = f'{group}[{number}] "{part.id}"'
            if part.id in first:
                yield Fault(
                    f"{place} . id", f'"{part.id}" is already the id of {first[part.id]}; ids are unique'
                )
            first.setdefault(part.id, place)
