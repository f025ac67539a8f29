"""An option: the changed model judged and solved anew, with its edit and what it costs."""

from collections.abc import Sequence
from dataclasses import dataclass

from modalview.advice.changes.effects import costs, effects
from modalview.advice.changes.results import Kind, Option, ValueChange
from modalview.advice.changes.states import State, all_clear, states_of
from modalview.model.differences import added_faults, edit_between
from modalview.model.parts import Model
from modalview.resonance.results import Check

# A value more than so many times what it was, or so little of it, is rarely built.
UNUSUAL = 5.0


@dataclass(frozen=True, slots=True, eq=False)
class Base:
    """The model that options start from.

    Parameters
    ----------
    model : Model
    states : tuple of State
    checks : tuple of tuple of Check
        By state.
    """

    model: Model
    states: tuple[State, ...]
    checks: tuple[tuple[Check, ...], ...]

    @property
    def clear(self) -> bool:
        """Whether every check of every state is clear."""
        return all(all_clear(checks) for checks in self.checks)


def base_of(model: Model) -> Base:
    """Judge a model in all of its states."""
    states = states_of(model)
    return Base(model, states, tuple(state.judged() for state in states))


@dataclass(frozen=True, slots=True, eq=False)
class Tried:
    """A changed model, judged in all of its states.

    Parameters
    ----------
    model : Model
    states : tuple of State
    checks : tuple of tuple of Check
    """

    model: Model
    states: tuple[State, ...]
    checks: tuple[tuple[Check, ...], ...]

    @property
    def clear(self) -> bool:
        """Whether every check of every state is clear, proven by counts."""
        return all(all_clear(checks) for checks in self.checks)


def tried(base: Base, model: Model) -> Tried | None:
    """Judge a changed model; None where the change breaks a rule of models."""
    if added_faults(base.model, model):
        return None
    states = states_of(model, base.states)
    return Tried(model, states, tuple(state.judged() for state in states))


@dataclass(frozen=True, slots=True)
class Told:
    """What an option says of itself.

    Parameters
    ----------
    kind : Kind
    text : str
    changes : tuple of ValueChange
    amount : float
    claim : str
    cautions : tuple of str
    """

    kind: Kind
    text: str
    changes: tuple[ValueChange, ...]
    amount: float
    claim: str = ""
    cautions: tuple[str, ...] = ()


def option_of(base: Base, after: Tried, told: Told) -> Option:
    """Return the option that a changed model is, solved in all of its states."""
    return Option(
        kind=told.kind,
        text=told.text,
        edit=edit_between(base.model, after.model, told.text),
        changes=told.changes,
        effects=effects(after.states, after.checks, base.checks),
        clears=after.clear,
        amount=told.amount,
        costs=costs(base.states[0], after.states[0]),
        cautions=(*told.cautions, *_cautions(told.changes)),
        claim=told.claim,
    )


def _cautions(changes: Sequence[ValueChange]) -> tuple[str, ...]:
    found = []
    for one in changes:
        factor = 1.0 if one.value.endswith(".tolerance") else one.factor
        if factor > UNUSUAL:
            found.append(f"{one.label} becomes {factor:.3g} times what it is: rarely built.")
        elif 0 < factor < 1 / UNUSUAL:
            found.append(f"{one.label} becomes 1/{1 / factor:.3g} of what it is: rarely built.")
    if any(".mass" in one.value and one.factor > 1 for one in changes):
        found.append("Added mass loads floors and supports: have them checked.")
    if any(one.value.endswith((".A", ".I", ".Iy", ".Iz", ".J")) for one in changes):
        found.append("A section's area and second moments change together: enter those of the new section.")
    return tuple(found)
