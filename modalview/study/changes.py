"""The door to changes that clear a model: windows, least changes, tolerances to narrow, modes to place."""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import combinations
from time import perf_counter

from modalview.advice.changes.edges import Gate, gates_of
from modalview.advice.changes.effects import Ranges, ranges_of
from modalview.advice.changes.least import MOST_BOXES, Search
from modalview.advice.changes.narrowing import narrowing
from modalview.advice.changes.options import Base, base_of
from modalview.advice.changes.placed import placement
from modalview.advice.changes.results import (
    LeastChange,
    Narrowing,
    Option,
    Placement,
    ValueWindows,
)
from modalview.advice.changes.several import least_of
from modalview.advice.changes.single import value_windows, window_options
from modalview.advice.changes.values import Variable, every_variable, variable_named, variables_named
from modalview.errors import CancelledError, InputError
from modalview.study.results import Request
from modalview.units.show import short

# Pairs of so many values are tried where nobody says which may change together, with so many boxes each.
PAIRED, BOXES_PER_PAIR = 5, 4_000
# Two values are worth changing where that costs so much less than one.
WORTH = 0.95
# So many pairs are kept as options.
PAIRS_SHOWN = 3
# Ceilings of a model of more modes than this are left out of the overview; ask for one value.
MOST_CEILINGS = 60
# The windows of so many values are proven at once; what is proposed always is.
MOST_PROVEN = 150
NO_CHECKS = "Nothing to clear: give a machine its speed, its orders and the margin wanted."
UNPROVEN = (
    "Of so many values the windows are told without proof; asked for one value they are proven by counts."
)
NOT_LOOKED_AT = (
    "Changed heights and places of mounts, added absorbers and barred speeds are no values: "
    "not looked at here."
)


@dataclass(frozen=True, slots=True)
class Place:
    """A wish to put a mode at a frequency by one value.

    Parameters
    ----------
    mode : int
        From 1, rigid-body modes included.
    frequency_hz : float
    value : str
        Id as in `ValueWindows`.
    """

    mode: int
    frequency_hz: float
    value: str


@dataclass(frozen=True, slots=True)
class ChangesRequest:
    """What is to be changed, and how.

    Parameters
    ----------
    request : Request
        The model, with its cancel token and its progress.
    values : tuple of str
        Ids of the values that may change: "k3.stiffness", "sole.stiffness" for a whole mount,
        "k1.stiffness+k2.stiffness" for several by one factor. Empty: all that make sense.
    together : tuple of str
        Values that may change together, each by its own factor, for the least change: up to four for a proof
        that none exists. Empty: pairs of the values that matter most are tried.
    weights : tuple of (str, float)
        How dear a change of a value is; 1 where none is given.
    places : tuple of Place
        Modes to be put at frequencies.
    tolerances : bool
        Whether tolerances to narrow are looked for too.
    """

    request: Request
    values: tuple[str, ...] = ()
    together: tuple[str, ...] = ()
    weights: tuple[tuple[str, float], ...] = ()
    places: tuple[Place, ...] = ()
    tolerances: bool = True


@dataclass(frozen=True, slots=True)
class Changes:
    """What clears a model.

    Parameters
    ----------
    asked : ChangesRequest
    clear_now : bool
        Every check of every load case is clear over all tolerances.
    options : tuple of Option
        Every option that clears everything, the smallest amount first; then placed modes.
    windows : tuple of ValueWindows
        Of every value asked for, in the order of the model.
    least : tuple of LeastChange
        Of the values asked for together, or of the pairs tried.
    narrowing : Narrowing or None
        None where no check is clear at nominal only, or it was not asked for.
    placements : tuple of Placement
    sentence : str
    notes : tuple of str
        Load cases, limits, and what was not looked at.
    seconds : float
    """

    asked: ChangesRequest
    clear_now: bool
    options: tuple[Option, ...]
    windows: tuple[ValueWindows, ...]
    least: tuple[LeastChange, ...]
    narrowing: Narrowing | None
    placements: tuple[Placement, ...]
    sentence: str
    notes: tuple[str, ...]
    seconds: float


def changes(asked: ChangesRequest) -> Changes:
    """Look for changes that clear every check of a model, in all of its load cases together.

    Parameters
    ----------
    asked : ChangesRequest

    Raises
    ------
    ModelFaultsError
        The model cannot be analysed; names the part.
    InputError
        A value asked for is not there, a weight is not above zero, or the model is too large.
    CancelledError

    Notes
    -----
    Every option is proven by counts on the changed model and solved anew. Cost: one factorization for each
    edge, then small matrices for each value.
    """
    start = perf_counter()
    base = base_of(asked.request.model)
    assembly = base.states[0].assembly
    weights = _weights(asked)
    variables = variables_named(assembly, asked.values) if asked.values else every_variable(assembly)
    for name in weights:
        variable_named(assembly, name)
    work = _Work(asked, base, gates_of(base.states), weights)
    windows, single = work.windows(variables)
    least = work.least(single, variables, windows) if base.states[0].bands else ()
    work.tell("narrowing tolerances", 0.8)
    narrow = narrowing(base, asked.request.cancelled) if asked.tolerances else None
    placed = tuple(work.placed(place) for place in asked.places)
    options = _sorted(single, least, placed, narrow)
    return Changes(
        asked=asked,
        clear_now=base.clear,
        options=options,
        windows=windows,
        least=least,
        narrowing=narrow,
        placements=placed,
        sentence=_sentence(base, options, windows, least),
        notes=(*_notes(base), *((UNPROVEN,) if len(variables) > MOST_PROVEN else ())),
        seconds=perf_counter() - start,
    )


def _weights(asked: ChangesRequest) -> dict[str, float]:
    for name, weight in asked.weights:
        if not 0 < weight < math.inf:
            raise InputError(f"The weight of {name} is {weight:g}; it must be above zero.")
    return dict(asked.weights)


@dataclass(frozen=True, slots=True, eq=False)
class _Work:
    """What one search works on."""

    asked: ChangesRequest
    base: Base
    gates: tuple[Gate, ...]
    weights: dict[str, float]

    def tell(self, what: str, share: float) -> None:
        """Tell how far it has come, or stop."""
        request = self.asked.request
        if request.cancelled():
            raise CancelledError("Stopped by the user.")
        if request.progress is not None:
            request.progress(what, share)

    def weight(self, variable: Variable) -> float:
        """Return how dear a change of a value is."""
        return self.weights.get(variable.id, 1.0)

    def windows(
        self, variables: Sequence[Variable]
    ) -> tuple[tuple[ValueWindows, ...], tuple[tuple[Variable, Option], ...]]:
        """Return the windows of every value, and the options they hold."""
        ranges = self._ranges(len(variables))
        windows, options = [], []
        for number, variable in enumerate(variables):
            self.tell(f"windows of {variable.label}", 0.6 * number / len(variables))
            few = len(variables) <= MOST_PROVEN
            found = value_windows(self.base, self.gates, variable, ranges, prove=few)
            windows.append(found)
            if self.gates and not self.base.clear:
                options += [
                    (variable, option)
                    for option in window_options(self.base, variable, found, self.weight(variable))
                ]
        return tuple(windows), tuple(options)

    def _ranges(self, number: int) -> Ranges | None:
        state = self.base.states[0]
        few = number == 1 or state.assembly.pencil().modes <= MOST_CEILINGS
        return ranges_of(state) if few and self.gates else None

    def least(
        self,
        single: Sequence[tuple[Variable, Option]],
        variables: Sequence[Variable],
        windows: Sequence[ValueWindows],
    ) -> tuple[LeastChange, ...]:
        """Return the least change of the values asked for together, or of pairs that matter."""
        assembly = self.base.states[0].assembly
        if self.asked.together:
            chosen = variables_named(assembly, self.asked.together)
            return (self._least(chosen, MOST_BOXES),)
        if self.base.clear:
            return ()
        ranked = sorted(single, key=lambda one: one[1].amount)
        matter = list({one.id: one for one, _ in ranked}.values())
        others = [one for one, found in zip(variables, windows, strict=True) if not found.windows]
        cheapest = WORTH * min((option.amount for _, option in single), default=math.inf)
        pairs = list(_pairs([*matter, *others]))
        tried = [
            self._least(pair, BOXES_PER_PAIR, cheapest, (i / len(pairs), (i + 1) / len(pairs)))
            for i, pair in enumerate(pairs)
        ]
        found = [one for one in tried if one.option is not None]
        return tuple(sorted(found, key=lambda one: one.amount)[:PAIRS_SHOWN])

    def _least(
        self,
        chosen: Sequence[Variable],
        boxes: int,
        below: float = math.inf,
        shares: tuple[float, float] = (0.0, 1.0),
    ) -> LeastChange:
        def told(what: str, share: float) -> None:
            self.tell(what, 0.6 + 0.2 * (shares[0] + share * (shares[1] - shares[0])))

        weights = tuple(self.weight(one) for one in chosen)
        search = Search(weights, self.asked.request.cancelled, told, boxes, below)
        return least_of(self.base, self.gates, chosen, search)

    def placed(self, place: Place) -> Placement:
        """Return a mode placed as wished."""
        self.tell("placing modes", 0.95)
        variable = variable_named(self.base.states[0].assembly, place.value)
        return placement(self.base, variable, place.mode, place.frequency_hz, self.weight(variable))


def _pairs(variables: Sequence[Variable]) -> Iterator[tuple[Variable, Variable]]:
    """Yield pairs of the first few variables that have no value in common."""
    chosen: list[Variable] = []
    for one in variables:
        if len(chosen) < PAIRED and all(_apart(one, other) for other in chosen):
            chosen.append(one)
    yield from combinations(chosen, 2)


def _apart(one: Variable, other: Variable) -> bool:
    return {m.partition(".")[0] for m in one.members}.isdisjoint(m.partition(".")[0] for m in other.members)


def _sorted(
    single: Sequence[tuple[Variable, Option]],
    least: Sequence[LeastChange],
    placed: Sequence[Placement],
    narrow: Narrowing | None,
) -> tuple[Option, ...]:
    found = [option for _, option in single] + [one.option for one in least if one.option is not None]
    known: dict[tuple[tuple[str, str], ...], Option] = {}
    for option in sorted(found, key=lambda one: one.amount):
        known.setdefault(tuple((change.value, change.after) for change in option.changes), option)
    tolerances = narrow.options if narrow else ()
    return (*known.values(), *tolerances, *(one.option for one in placed if one.option is not None))


def _sentence(
    base: Base,
    options: Sequence[Option],
    windows: Sequence[ValueWindows],
    least: Sequence[LeastChange],
) -> str:
    if not base.states[0].bands:
        return NO_CHECKS
    if base.clear:
        return "Every check is clear over all tolerances already; the windows say how far values may move."
    clearing = [one for one in options if one.clears]
    if clearing:
        return f"{clearing[0].text} clears everything, the least of {len(clearing)} found."
    alone = f"None of {len(windows)} values clears everything alone."
    return " ".join([alone, *(one.sentence for one in least)])


def _notes(base: Base) -> tuple[str, ...]:
    found = []
    names = [state.case for state in base.states if state.case]
    if names:
        found.append(
            f"Every option clears the model as it is and its load cases together: {', '.join(names)}."
        )
    limited = [v for v in every_variable(base.states[0].assembly) if v.limits != (0.0, math.inf)]
    if limited:
        found.append(f"Within your limits for {short(len(limited))} of the values.")
    return (*found, NOT_LOOKED_AT)
