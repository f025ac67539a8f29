"""What the page of changes shows: options as lines of a table, and the windows of each value for its axis."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from modalview.advice.changes.results import Ceiling, Effect, Kind, Option, ValueWindows, Window
from modalview.assembly.parameters import Parameter
from modalview.model.differences import Rewrite
from modalview.resonance.results import Verdict
from modalview.resonance.wording import percent
from modalview.study.changes import NOT_LOOKED_AT, Changes
from modalview.study.remedies import BarredSpeeds, Remedies
from modalview.study.results import Known
from modalview.units import quantities as q
from modalview.units.quantities import Quantity
from modalview.units.show import short, show, significant
from modalview.units.table import find_unit

QUANTITIES = {
    one.si_unit: one
    for one in (
        q.MASS,
        q.INERTIA,
        q.STIFFNESS,
        q.TORSIONAL_STIFFNESS,
        q.MODULUS,
        q.AREA,
        q.SECOND_MOMENT,
    )
}
VERDICTS = {Verdict.CLEAR: "clear", Verdict.NOMINAL_ONLY: "nominal only", Verdict.IN_BAND: "in band"}
ORDERS = 6  # columns of orders; of more, those with the least room
LISTED = 3  # values of one option, one below the other
WHAT, CHANGE, ROOM = "what", "from → to", "room left"
ROOM_TIP = "Worst separation over all tolerances and load cases, less the margin wanted on that side"


@dataclass(frozen=True, slots=True, eq=False)
class OptionLine:
    """One option as a line of the table.

    Parameters
    ----------
    text : str
        What it does, in full.
    cells : tuple of str
        Under the headings.
    detail : str
        All that is known of it, for the tool tip.
    edit : Rewrite or None
    clears : bool
    value : str
        Id of the value whose axis goes with it; "" for none.
    """

    text: str
    cells: tuple[str, ...]
    detail: str
    edit: Rewrite | None
    clears: bool
    value: str = ""


@dataclass(frozen=True, slots=True)
class Clear:
    """A window on the axis of a value; 0 and infinity where it is open."""

    low: float
    high: float
    low_text: str
    high_text: str
    bound_by: tuple[str, str]


@dataclass(frozen=True, slots=True)
class ValueAxis:
    """A value, its windows, and what is written about them.

    Parameters
    ----------
    value, label : str
    now : float
        SI, or 1 for a factor of several.
    now_text : str
        "" for a factor.
    tolerance : pair of float
        Lowest and highest within it; both ``now`` for an exact value.
    per : float
        SI for one of the unit written at the axis.
    unit : str
        "" for a factor.
    windows : tuple of Clear
    limits : pair of float
        Of the user; 0 and infinity without.
    clear_now : bool
    ceilings : tuple of str
        Where it alone can bring a mode.
    proven : bool
        Whether counts prove the ends of all windows.
    """

    value: str
    label: str
    now: float
    now_text: str
    tolerance: tuple[float, float]
    per: float
    unit: str
    windows: tuple[Clear, ...]
    limits: tuple[float, float]
    clear_now: bool
    ceilings: tuple[str, ...]
    proven: bool = True

    @property
    def today(self) -> str:
        """What is said of today's value: "not clear at 175 kN/mm"."""
        head = "clear" if self.clear_now else "not clear"
        return f"{head} at {self.now_text}" if self.now_text else f"{head} as it is"

    def text_of(self, number: float) -> str:
        """Return a number of the axis with its unit.

        >>> axis = ValueAxis("k", "k", 2e6, "", (2e6, 2e6), 1e6, "kN/mm", (), (0.0, 9e9), False, ())
        >>> axis.text_of(2.5e6)
        '2.5 kN/mm'
        """
        return f"{short(number / self.per, 4)} {self.unit}" if self.unit else f"× {short(number, 4)}"

    def is_clear(self, number: float) -> bool:
        """Return whether a value lies in a window."""
        return any(one.low <= number <= one.high for one in self.windows)


@dataclass(frozen=True, slots=True, eq=False)
class ChangesContent:
    """All that the page shows.

    Parameters
    ----------
    sentence : str
    clear : bool
        Whether everything is clear already.
    checks : bool
        Whether there is anything to check.
    headings : tuple of str
    options : tuple of OptionLine
    values : tuple of ValueAxis
    notes : tuple of str
    """

    sentence: str
    clear: bool
    checks: bool
    headings: tuple[str, ...]
    options: tuple[OptionLine, ...]
    values: tuple[ValueAxis, ...]
    notes: tuple[str, ...]


def changes_content(
    known: Known, found: Changes, others: Remedies, parameters: Sequence[Parameter], margin: str = ""
) -> ChangesContent:
    """Take what the page shows from what the study found.

    Parameters
    ----------
    known : Known
        Of the model as it is.
    found : Changes
    others : Remedies
    parameters : sequence of Parameter
        Of the same model, for the tolerances on the axes.
    margin : str
        How much room there is where everything is clear.
    """
    system = known.request.model.units or "SI"
    wanted = [one for one in others.options if others.asked.absorbers and one.kind is Kind.ABSORBER]
    rest = [one for one in (*found.options, *others.options) if one not in wanted and not found.clear_now]
    options = [*wanted, *rest]
    columns = _columns(options)
    costs = tuple(dict.fromkeys(cost.what for one in options for cost in one.costs))
    lines = [_line(one, columns, costs, found.windows) for one in options]
    empty = len(columns) + len(costs)
    lines += [_speed_line(one, empty) for one in others.speeds if one.edit is not None]
    of = {one.id: one for one in parameters}
    notes = [] if found.narrowing is None else [f"Tolerances: {found.narrowing.sentence}"]
    notes += [one.sentence for one in found.least if one.option is None]
    notes += [one.sentence for one in others.speeds if one.edit is None]
    notes += [one for one in found.notes if one != NOT_LOOKED_AT]
    return ChangesContent(
        sentence=margin if found.clear_now and margin else found.sentence,
        clear=found.clear_now,
        checks=bool(known.checks),
        headings=(WHAT, CHANGE, ROOM, *(label for _, label in columns), *costs),
        options=tuple(lines),
        values=tuple(_axis(one, of, system) for one in found.windows),
        notes=(*notes, *others.notes),
    )


_Key = tuple[str, str]  # check and load case


def _columns(options: Sequence[Option]) -> list[tuple[_Key, str]]:
    rooms: dict[_Key, float] = {}
    labels: dict[_Key, str] = {}
    for one in options:
        for effect in one.effects:
            key = (effect.check, effect.case)
            labels[key] = f"{effect.label} ({effect.case})" if effect.case else effect.label
            rooms[key] = min(rooms.get(key, math.inf), math.inf if effect.room is None else effect.room)
    shown = set(sorted(rooms, key=lambda key: rooms[key])[:ORDERS])
    return [(key, label) for key, label in labels.items() if key in shown]


def _line(
    one: Option,
    columns: Sequence[tuple[_Key, str]],
    costs: Sequence[str],
    windows: Sequence[ValueWindows],
) -> OptionLine:
    known = {(effect.check, effect.case): effect for effect in one.effects}
    paid = {cost.what: f"{cost.before} → {cost.after}" for cost in one.costs}
    value, what, change = _what(one, windows)
    room = one.worst.room if one.worst is not None else None
    effects = [_effect_text(known.get(key)) for key, _ in columns]
    spent = [f"{name}: {text}" for name, text in paid.items()]
    detail = [one.text, one.claim, *map(_in_full, one.effects), *spent, *one.cautions]
    return OptionLine(
        text=one.text,
        cells=(
            what,
            change,
            "" if room is None else room_text(room),
            *effects,
            *(paid.get(name, "as before") for name in costs),
        ),
        detail="\n".join(line for line in detail if line),
        edit=one.edit,
        clears=one.clears,
        value=value,
    )


def room_text(room: float) -> str:
    """Return room in per cent to one decimal, never more than there is.

    >>> room_text(0.00996), room_text(-0.1)
    ('0.9 %', '−10.0 %')
    """
    text = f"{math.floor(round(1000 * room, 6)) / 10:.1f} %"
    return text.replace("-", "−")


def _what(one: Option, windows: Sequence[ValueWindows]) -> tuple[str, str, str]:
    """Return the id of the value that an option changes, what that is, and from what to what."""
    changes = one.changes
    if one.kind is Kind.ABSORBER or not changes:
        what, _, values = one.text.partition(": ")
        return "", what, values
    if one.kind is Kind.ONE_VALUE and len(changes) > 1:
        # Several by one factor are named as their windows are.
        named = [window for window in windows if f" {window.label} " in one.text]
        if named:
            label = max(named, key=lambda window: len(window.label))
            return label.value, label.label, f"as it is → × {short(changes[0].factor, 4)}"
    labels = [change.label for change in changes]
    if one.kind is Kind.TOLERANCE:
        labels = [f"tolerance of {label.removeprefix('tolerance of ')}" for label in labels]
    value = changes[0].value if len(changes) == 1 else ""
    texts = [f"{change.before} → {change.after}" for change in changes]
    return value, _listed(labels), _listed(texts)


def _listed(texts: Sequence[str]) -> str:
    r"""Return texts one below the other; of many the first two.

    >>> _listed(["a", "b", "c", "d"])
    'a\nb\nand 2 more'
    """
    if len(texts) <= LISTED:
        return "\n".join(texts)
    return "\n".join([*texts[: LISTED - 1], f"and {len(texts) - LISTED + 1} more"])


def _effect_text(effect: Effect | None) -> str:
    if effect is None:
        return ""
    worst = "" if effect.worst_separation is None else f" {percent(effect.worst_separation)}"
    return f"{VERDICTS[effect.verdict]}{worst}"


def _in_full(effect: Effect) -> str:
    head = f"{effect.label}{f' ({effect.case})' if effect.case else ''}: {effect.wording}"
    if effect.nearest_hz is None or effect.worst_separation is None:
        return head
    low, high = (significant(hz, 4) for hz in effect.nearest_hz)
    worst = percent(effect.worst_separation)
    return f"{head}, mode {effect.nearest_mode} at {low} to {high} Hz, at worst {worst}"


def _speed_line(one: BarredSpeeds, empty: int) -> OptionLine:
    ranges = ", ".join(f"{short(low)} to {short(high)} rpm" for low, high in one.bar_rpm)
    left = ", ".join(f"{short(low)} to {short(high)}" for low, high in one.left_rpm)
    cells = (f"barred speeds of {one.label}", f"bar {ranges}; left {left} rpm", "", *[""] * empty)
    return OptionLine(one.sentence, cells, one.sentence, one.edit, clears=False)


def _axis(one: ValueWindows, of: Mapping[str, Parameter], system: str) -> ValueAxis:
    quantity = QUANTITIES.get(one.unit)
    per, unit = _unit(one, quantity, system)
    members = [of[name] for name in one.value.split("+") if name in of]
    first = members[0] if members else None
    tolerance = (one.nominal, one.nominal)
    if first is not None and first.nominal:
        tolerance = (one.nominal * first.low / first.nominal, one.nominal * first.high / first.nominal)
    now = one.text or (show(one.nominal, quantity, system) if quantity else "")
    return ValueAxis(
        value=one.value,
        label=one.label,
        now=one.nominal,
        now_text=now,
        tolerance=tolerance,
        per=per,
        unit=unit,
        windows=tuple(map(_clear, one.windows)),
        limits=one.limits,
        clear_now=one.clear_now,
        ceilings=tuple(map(_ceiling, one.ceilings)),
        proven=all(window.proven for window in one.windows),
    )


def _unit(one: ValueWindows, quantity: Quantity | None, system: str) -> tuple[float, str]:
    """Return the unit written at an axis: that of the number as it is shown, or none for a factor."""
    if quantity is None:
        return 1.0, ""
    spelling = show(one.nominal, quantity, system).partition(" ")[2]
    unit = find_unit(spelling, quantity)
    return (float(unit.factor), spelling) if unit else (1.0, one.unit)


def _clear(one: Window) -> Clear:
    return Clear(one.low, one.high, one.low_text, one.high_text, one.bound_by)


def _ceiling(one: Ceiling) -> str:
    low, high = sorted((one.at_zero_hz, one.at_infinity_hz))
    ends = f"{significant(low, 4)} to {significant(high, 4)} Hz"
    if math.isinf(high):
        ends = f"above {significant(low, 4)} Hz" if low else "anywhere"
    elif low == 0:
        ends = f"below {significant(high, 4)} Hz"
    return f"mode {one.mode} (now {significant(one.now_hz, 4)} Hz) {ends}"


def clear_by(effects: Sequence[Effect]) -> str:
    """Say that everything is clear, and by how much at least.

    Parameters
    ----------
    effects : sequence of Effect
        Of the model as it is, in all of its load cases (study.present).
    """
    known = [one for one in effects if one.room is not None and one.worst_separation is not None]
    worst = min(known, key=lambda one: one.room or 0.0, default=None)
    head = "Every check is clear over all tolerances."
    if worst is None or worst.room is None or worst.worst_separation is None:
        return head
    where = f"{worst.label}{f' ({worst.case})' if worst.case else ''}"
    apart = percent(worst.worst_separation)
    return (
        f"{head} Least room: {room_text(worst.room)} beyond the margin at {where}, where mode "
        f"{worst.nearest_mode} stays {apart} away at worst."
    )
