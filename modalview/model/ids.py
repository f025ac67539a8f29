"""Ids: which a model holds, and fresh ones."""

from collections.abc import Collection, Iterator

from modalview.model.parts import Model

# The lists of a model whose items have ids.
LISTS = ("bodies", "supports", "links", "machines", "measured", "limits", "load_cases")


def ids_of(model: Model) -> Iterator[str]:
    """Yield every id in a model, those of excitations too."""
    for name in LISTS:
        yield from (part.id for part in getattr(model, name))
    for machine in model.machines:
        yield from (excitation.id for excitation in machine.excitations)


def fresh_id(model: Model, stem: str) -> str:
    """Return the first of stem1, stem2, ... that nothing in the model is called.

    >>> from modalview.model.parts import Body
    >>> fresh_id(Model(bodies=(Body(id="m1"),)), "m")
    'm2'
    """
    return free_id(stem, set(ids_of(model)))


def free_id(stem: str, taken: Collection[str], first: int = 1) -> str:
    """Return the first of stem and a number, counted from ``first``, that is not taken."""
    numbers = range(first, first + len(taken) + 1)
    return next(name for number in numbers if (name := f"{stem}{number}") not in taken)
