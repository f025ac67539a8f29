"""Which tolerances to narrow, so that checks that are clear at nominal values only become clear."""

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, field, replace
from functools import cached_property
from itertools import combinations

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.edges import Flexible, Gate, gates_of
from modalview.advice.changes.influence import influence
from modalview.advice.changes.numbers import DOWN, UP, Written, rounded
from modalview.advice.changes.options import Base, Told, Tried, option_of, tried
from modalview.advice.changes.results import Kind, Narrowing, Option, ValueChange
from modalview.advice.changes.values import Variable, address_of, terms_of
from modalview.assembly.parameters import Case, Parameter
from modalview.errors import CancelledError
from modalview.model.addresses import look, put, quantity_of
from modalview.model.parts import InertiaTensor, Model
from modalview.model.tolerance_text import tolerance_text
from modalview.model.values import Entry, Tolerance, Value
from modalview.resonance.results import Verdict
from modalview.units.quantities import RATIO
from modalview.units.show import short

Array = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]

# Sets of so many tolerances are all tried; larger ones are cut down one by one.
ALL_TRIED = 3
# So many tolerances are considered: those that move the deciding modes most.
MOST_CONSIDERED = 400
# Nobody narrows more tolerances than these at once.
MOST_NARROWED = 8
# So many sets of one size are tried at most.
MOST_SETS = 5_000
# The share of a tolerance that may stay is found to 1 in so many; it is shown to two digits.
STEPS = 512
DIGITS = 2
# Nobody is asked to know a stiffness, or a mass, to less than this share; common practice, no source.
KNOWN = {"stiffness": 0.02, "mass": 0.005}
# So many options are worked out, each solved anew.
SHOWN = 6


@dataclass(frozen=True, slots=True)
class _Alone:
    """One value with a tolerance, as a variable of its own."""

    parameter: Parameter
    variable: Variable

    def left(self, share: Array) -> Array:
        """Return what is left of the tolerance: all of it at share 1, what can be known at share 0."""
        p = self.parameter
        least = min(1.0, KNOWN[p.family] * p.nominal / max(p.nominal - p.low, p.high - p.nominal))
        return least + share * (1 - least)

    def factor(self, case: Case, share: Array) -> Array:
        """Return its factor in a case, of its value there, at a share of the tolerance."""
        p = self.parameter
        found: Array = (p.nominal + self.left(share) * (p.at(case) - p.nominal)) / p.at(case)
        return found


@dataclass(frozen=True, eq=False)
class Question:
    """Checks that are clear at nominal values only, and the tolerances that reach them.

    Parameters
    ----------
    base : Base
    gates : tuple of Gate
        Of those checks.
    alone : tuple of _Alone
        The one that moves the deciding modes most first.
    cut : bool
        Whether others were left out.
    cancelled : callable
    """

    base: Base
    gates: tuple[Gate, ...]
    alone: tuple[_Alone, ...]
    cut: bool = False
    cancelled: Callable[[], bool] = field(default=lambda: False)

    @cached_property
    def whole(self) -> tuple[tuple[Flexible, Flexible], ...]:
        """Upper and lower edge of each check, as functions of all of the tolerances."""
        every = [one.variable for one in self.alone]
        return tuple((gate.upper.flexible(every), gate.lower.flexible(every)) for gate in self.gates)

    def clear(self, chosen: Sequence[int], share: Array) -> Bools:
        """Return whether the checks are clear when some tolerances, by number, are at shares (m, chosen)."""
        if self.cancelled():
            raise CancelledError("Stopped by the user.")
        tolerances = [self.alone[i] for i in chosen]
        soft, stiff = (
            np.stack([one.factor(case, share[:, i]) for i, one in enumerate(tolerances)], axis=1)
            for case in (Case.SOFT_HEAVY, Case.STIFF_LIGHT)
        )
        clear = np.ones(len(share), dtype=bool)
        for upper, lower in self.whole:
            most, sure = upper.only(chosen).counts(soft)
            least, also = lower.only(chosen).counts(stiff)
            clear &= (most <= least) & sure & also
            if not clear.any():
                break
        return clear


def narrowing(base: Base, cancelled: Callable[[], bool] = lambda: False) -> Narrowing | None:
    """Return which tolerances to narrow, and how far; None where no check is clear at nominal only.

    Parameters
    ----------
    base : Base
    cancelled : callable

    Notes
    -----
    Narrowing can only take combinations away, so that more of it never does harm. Single tolerances are all
    tried, then all pairs and triples while there are few enough; a larger set is found by giving back one
    tolerance after the other, and is then called small, not smallest.
    """
    gates = _gates(base)
    if not gates:
        return None
    alone, cut = _candidates(base)
    question = Question(base, gates, alone, cut, cancelled)
    names = tuple(gate.name for gate in gates)
    sets, smallest = _sets(question)
    if not sets:
        return Narrowing(names, possible=False, smallest=False, options=(), sentence=_impossible(question))
    if len(sets[0]) > MOST_NARROWED:
        sentence = f"It would take {len(sets[0])} tolerances narrowed at once. Change a value."
        return Narrowing(names, possible=True, smallest=False, options=(), sentence=sentence)
    found = [_narrowed(question, chosen) for chosen in _ranked(question, sets)[:SHOWN]]
    options = sorted((one for one in found if one is not None), key=lambda one: one.amount)
    if not options:
        return Narrowing(names, possible=False, smallest=False, options=(), sentence=UNPROVEN)
    return Narrowing(
        names,
        possible=True,
        smallest=smallest,
        options=tuple(options),
        sentence=_sentence(options, len(sets[0]), smallest=smallest),
    )


UNPROVEN = "Tolerances were found that would do, but rounding leaves the proof open."


def _gates(base: Base) -> tuple[Gate, ...]:
    wanted = {
        (id(state), check.band.check)
        for state, checks in zip(base.states, base.checks, strict=True)
        for check in checks
        if check.verdict is Verdict.NOMINAL_ONLY
    }
    return tuple(g for g in gates_of(base.states) if (id(g.state), g.band.check) in wanted)


def _candidates(base: Base) -> tuple[tuple[_Alone, ...], bool]:
    """Return the values with a tolerance that moves any mode, and whether some were left out."""
    assembly = base.states[0].assembly
    found = []
    for p in assembly.parameters:
        if p.exact or p.family == "damping":
            continue
        terms = assembly.structure.mass if p.family == "mass" else assembly.structure.stiffness
        if any(terms.rows.indptr[t] < terms.rows.indptr[t + 1] for t in terms_of(assembly, (p.id,))):
            found.append(_Alone(p, Variable(p.id, p.label, p.family, (p.id,))))
    weight = influence(base.states, base.checks)
    ranked = sorted(found, key=lambda one: -weight.get(one.parameter.id, 0.0))
    return tuple(ranked[:MOST_CONSIDERED]), len(ranked) > MOST_CONSIDERED


def _sets(question: Question) -> tuple[list[tuple[int, ...]], bool]:
    """Return sets of tolerances, by number, that do when all can be known of them; whether none smaller."""
    every = range(len(question.alone))
    if not every or not question.clear(every, np.zeros((1, len(every))))[0]:
        return [], False
    for size in range(1, ALL_TRIED + 1):
        if math.comb(len(every), size) > MOST_SETS:
            break
        none = np.zeros((1, size))
        found = [chosen for chosen in combinations(every, size) if question.clear(chosen, none)[0]]
        if found:
            return found, not question.cut
    return [_given_back(question)], False


def _ranked(question: Question, sets: Sequence[tuple[int, ...]]) -> list[tuple[int, ...]]:
    """Return the sets of which more may be left first."""
    part = np.array([[0.75], [0.5], [0.25], [0.1]])
    return sorted(
        sets, key=lambda chosen: -int(question.clear(chosen, part.repeat(len(chosen), axis=1)).sum())
    )


def _given_back(question: Question) -> tuple[int, ...]:
    """Return one set that does, from which no tolerance can be given back: the least influential go first."""
    low, high = 1, len(question.alone)
    while low < high:
        middle = (low + high) // 2
        does = question.clear(range(middle), np.zeros((1, middle)))[0]
        low, high = (low, middle) if does else (middle + 1, high)
    kept = list(range(high))
    for number in reversed(range(high)):
        trial = [one for one in kept if one != number]
        if trial and question.clear(trial, np.zeros((1, len(trial))))[0]:
            kept = trial
    return tuple(kept)


def _narrowed(question: Question, chosen: tuple[int, ...]) -> Option | None:
    """Return the option that narrows a set of tolerances by one share, as little as does."""
    shares = np.linspace(0.0, 1.0, STEPS, endpoint=False)
    clear = question.clear(chosen, np.repeat(shares[:, None], len(chosen), axis=1))
    left = float(shares[np.flatnonzero(clear)[-1]]) if clear.any() else 0.0
    for share in (left, left * 0.98, left * 0.9):
        model, changes = _written(question.base.model, [question.alone[i] for i in chosen], share)
        after = tried(question.base, model)
        if after is not None and _proves(question, after):
            return option_of(question.base, after, _told(changes))
    return None


def _proves(question: Question, after: Tried) -> bool:
    wanted = {gate.name for gate in question.gates}
    return all(
        check.verdict is Verdict.CLEAR
        for state, checks in zip(after.states, after.checks, strict=True)
        for check in checks
        if state.named(check.band.check) in wanted
    )


def _written(model: Model, chosen: Iterable[_Alone], share: float) -> tuple[Model, tuple[ValueChange, ...]]:
    changes = []
    for one in chosen:
        p = one.parameter
        address = address_of(model, p)
        there = look(model, address)
        old = p.tolerance or Tolerance()
        quantity = quantity_of(model, address) if isinstance(there, Value) else None
        written = Written(quantity, p.entry, model.units or "SI") if quantity and p.entry else None
        new = _tightened(old, p, float(one.left(np.array(share))), written)
        if isinstance(there, Value | InertiaTensor):
            model = put(model, address, replace(there, tolerance=new))
        key = p.id.partition(f"{p.part}.")[2].replace(".", " ").replace("_", " ")
        changes.append(
            ValueChange(
                value=f"{p.id}.tolerance",
                label=f"tolerance of {key} of {p.label}",
                before=tolerance_text(old),
                after=tolerance_text(new),
                before_si=_size(old, p.nominal),
                after_si=_size(new, p.nominal),
            )
        )
    return model, tuple(changes)


def _size(tolerance: Tolerance, nominal: float) -> float:
    low, high = tolerance.limits(nominal)
    return max(nominal - low, high - nominal) / nominal


def _tightened(old: Tolerance, p: Parameter, left: float, written: Written | None) -> Tolerance:
    """Return a tolerance of which a share is left, written as the old one was and rounded inward."""
    if old.low is not None and old.high is not None and written is not None:
        low = p.nominal - left * (p.nominal - p.low)
        high = p.nominal + left * (p.high - p.nominal)
        return Tolerance(
            low=p.entry if left == 0 else written.entry_of(low, 4, UP),
            high=p.entry if left == 0 else written.entry_of(high, 4, DOWN),
        )
    sides = {name: getattr(old, name) for name in ("both", "minus", "plus")}
    return Tolerance(**{name: _share(side.si * left) for name, side in sides.items() if side is not None})


def _share(share: float) -> Entry:
    return Entry.typed(f"{short(rounded(100 * share, DIGITS, DOWN))} %", RATIO)


def _told(changes: tuple[ValueChange, ...]) -> Told:
    said = "; ".join(f"{one.label.removeprefix('tolerance of ')} to {_within(one.after)}" for one in changes)
    amount = sum(one.before_si - one.after_si for one in changes)
    return Told(
        Kind.TOLERANCE, f"Know {said} (now {', '.join(_within(c.before) for c in changes)})", changes, amount
    )


def _within(text: str) -> str:
    return f"±{text}" if text.endswith("%") and "/" not in text else text


def _impossible(question: Question) -> str:
    if not question.alone:
        return "No value has a tolerance: only the tolerance of the speed reaches the band."
    stiffness, mass = (short(100 * KNOWN[family]) for family in ("stiffness", "mass"))
    return (
        f"Not by tolerances: even with every stiffness known to {stiffness} % and every mass to {mass} % "
        "some combination reaches the band. Change a value."
    )


def _sentence(options: Sequence[Option], size: int, *, smallest: bool) -> str:
    first = options[0].text
    if size == 1:
        others = len(options) - 1
        more = f" So does each of {others} other tolerance{'s' if others > 1 else ''}." if others else ""
        return f"{first}: that alone proves it.{more}"
    how = "the fewest tolerances that do" if smallest else "a small set that does; fewer may do"
    return f"{first}: {size} tolerances together, {how}."
