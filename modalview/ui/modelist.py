"""The found modes as a list: what each says, in the order of their numbers."""

from collections.abc import Mapping
from typing import Any

from PySide6.QtCore import QAbstractListModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from modalview.units.show import shown_digits, significant

_Index = QModelIndex | QPersistentModelIndex
# Digits in the list; all that the error leaves stand in the tool tip.
LIST_DIGITS = 4


def frequency_text(mode: Any) -> str:
    """Return a mode's frequency as shown, fewer digits where its numerical error demands.

    >>> from types import SimpleNamespace as Mode
    >>> frequency_text(Mode(kind="elastic", frequency_hz=51.2603, numerical_error_hz=1e-13))
    '51.26 Hz'
    >>> frequency_text(Mode(kind="rigid-body", frequency_hz=0.0, numerical_error_hz=0.0))
    '0 Hz'
    """
    if mode.kind == "rigid-body":
        return "0 Hz"
    if mode.kind == "unstable":
        return "unstable"
    if is_damped(mode):
        return _damped_frequency(mode)
    digits = min(LIST_DIGITS, shown_digits(mode.frequency_hz, mode.numerical_error_hz))
    return f"{significant(mode.frequency_hz, digits)} Hz"


def range_text(mode: Any) -> str:
    """Return the range over all tolerances, or what stands in its place.

    >>> from types import SimpleNamespace as Mode
    >>> range_text(Mode(kind="elastic", frequency_hz=51.26, range_hz=(44.12, 57.84)))
    '44.12 to 57.84'
    """
    if mode.kind == "rigid-body":
        return "rigid-body mode"
    if mode.kind == "unstable":
        return ""
    if is_damped(mode):
        return ratio_text(mode)
    low, high = mode.range_hz
    if low == high:
        return "no tolerance"
    return f"{significant(low, LIST_DIGITS)} to {significant(high, LIST_DIGITS)}"


def foretold_text(hz: float) -> str:
    """Return the frequency that a mode found before an edit has by now, as far as it is foretold.

    >>> foretold_text(68.0612)
    'foretold 68.06 Hz'
    """
    return f"foretold {significant(hz, LIST_DIGITS)} Hz"


def is_damped(mode: Any) -> bool:
    """Return whether a mode is a root of a model with dashpots, not a natural mode."""
    return hasattr(mode, "root")


def _damped_frequency(mode: Any) -> str:
    if mode.damped_hz <= 0:
        return "decays"
    digits = min(LIST_DIGITS, shown_digits(abs(mode.root), mode.error_per_s))
    return f"{significant(mode.damped_hz, digits)} Hz"


def ratio_text(mode: Any) -> str:
    """Return the damping ratio of a root.

    >>> from types import SimpleNamespace as Mode
    >>> ratio_text(Mode(damping_ratio=0.0321)), ratio_text(Mode(damping_ratio=1e-12))
    ('ratio 3.21 %', 'not damped')
    """
    ratio = mode.damping_ratio
    if ratio is None:
        return "no ratio"
    return f"ratio {significant(100 * ratio, 3)} %" if ratio >= _UNDAMPED else "not damped"


def damped_facts(mode: Any) -> tuple[tuple[str, str], ...]:
    """Return what a card of a root says below its picture: name and figure."""
    facts = [("decay", f"{significant(mode.decay_per_s, 3)} 1/s")]
    if mode.time_constant_s is not None:
        facts.append(("falls to 37 % in", f"{significant(mode.time_constant_s, 3)} s"))
    if mode.log_decrement is not None:
        facts.append(("log decrement", significant(mode.log_decrement, 3)))
    if mode.natural_hz is not None:
        facts.append(("natural", f"{significant(mode.natural_hz, LIST_DIGITS)} Hz"))
    if mode.partner is not None:
        facts.append(("one mode with root", str(mode.partner)))
    return tuple(facts)


# A ratio below this is rounding.
_UNDAMPED = 1e-8


def percent(fraction: float) -> str:
    """Return a share in per cent.

    >>> percent(0.897), percent(0.0004)
    ('90 %', '0 %')
    """
    return f"{100 * fraction:.0f} %"


def details(mode: Any, foretold: float | None = None) -> str:
    """Return all that is known of a mode, for the tool tip; ``foretold`` is in Hz, after an edit."""
    if is_damped(mode):
        head = f"Root {mode.number}: {mode.name}"
        facts = [f"{name}: {figure}" for name, figure in damped_facts(mode)]
        return "\n".join(
            [head, f"{frequency_text(mode)}, {ratio_text(mode)}", *facts, f"root {mode.root!r} 1/s"]
        )
    lines = [f"Mode {mode.number}: {mode.name}"]
    if foretold is not None:
        lines += [
            f"after the edit {foretold_text(foretold)}, from the modes before it; without range and error",
            "Find modes (Ctrl+Enter) finds it; all below is of the model before the edit",
        ]
    if mode.kind == "elastic":
        low, high = mode.range_hz
        lines += [
            f"{mode.frequency_hz!r} Hz, numerical error at most {mode.numerical_error_hz:.1e} Hz",
            f"over all tolerances {significant(low, 5)} to {significant(high, 5)} Hz",
        ]
    if len(mode.repeated_with) > 1:
        lines.append(f"one frequency with modes {', '.join(str(n) for n in mode.repeated_with)}")
    lines += [f"strain energy, {one.label}: {percent(one.fraction)}" for one in mode.strain[:5]]
    lines += [f"kinetic energy, {one.label}: {percent(one.fraction)}" for one in mode.kinetic[:5]]
    return "\n".join(lines)


def spoken(mode: Any, *, current: bool, foretold: float | None = None) -> str:
    """Return a mode in one line, for those who hear the window."""
    if is_damped(mode):
        facts = ", ".join(f"{name} {figure}" for name, figure in damped_facts(mode))
        return f"Root {mode.number}: {frequency_text(mode)}, {ratio_text(mode)}, {mode.name}. {facts}"
    shares = ", ".join(f"{one.label} {percent(one.fraction)}" for one in mode.strain[:3])
    old = "" if current else " (of an older model)"
    if foretold is not None:
        old = f" (of an older model, now {foretold_text(foretold)})"
    return f"Mode {mode.number}{old}: {frequency_text(mode)}, {range_text(mode)}, {mode.name}. {shares}"


class ModeList(QAbstractListModel):
    """The modes of a solution; ``ModeRole`` gives the mode itself, ``BandRole`` the check it lies in."""

    ModeRole = Qt.ItemDataRole.UserRole
    BandRole = Qt.ItemDataRole.UserRole + 1
    CurrentRole = Qt.ItemDataRole.UserRole + 2
    ForetoldRole = Qt.ItemDataRole.UserRole + 3

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._modes: tuple[Any, ...] = ()
        self._in_band: dict[int, str] = {}
        self._current = True
        self._foretold: Mapping[int, float] = {}

    def show_solution(self, solution: Any, *, current: bool) -> None:
        """Show the modes of a study.Solution; None shows none."""
        self.beginResetModel()
        self._modes = () if solution is None else solution.modes
        self._in_band = {} if solution is None else _modes_in_band(solution)
        self._current, self._foretold = current, {}
        self.endResetModel()

    def mark_old(self, foretold: Mapping[int, float]) -> None:
        """Mark the modes as those of an older model; ``foretold`` is what some become by the edit, in Hz."""
        if (self._current or foretold != self._foretold) and self._modes:
            self._current, self._foretold = False, foretold
            self.dataChanged.emit(self.index(0), self.index(len(self._modes) - 1))

    def mode(self, row: int) -> Any:
        """Return the mode of a row, or None."""
        return self._modes[row] if 0 <= row < len(self._modes) else None

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: N802, B008  (Qt's)
        """Return the number of modes."""
        return 0 if parent.isValid() else len(self._modes)

    def worst_row(self) -> int:
        """Return what is looked at first: the first mode in a band, else the first elastic one."""
        elastic = [row for row, mode in enumerate(self._modes) if mode.kind == "elastic"]
        in_band = [row for row in elastic if self._modes[row].number in self._in_band]
        return next(iter((*in_band, *elastic)), 0)

    def data(self, index: _Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """Return what a row shows or says."""
        mode = self.mode(index.row())
        if mode is None:
            return None
        answers = {
            self.ModeRole: lambda: mode,
            self.BandRole: lambda: self._in_band.get(mode.number),
            self.CurrentRole: lambda: self._current,
            self.ForetoldRole: lambda: self._foretold.get(mode.number),
            Qt.ItemDataRole.DisplayRole: lambda: f"{mode.number} {frequency_text(mode)}",
            Qt.ItemDataRole.ToolTipRole: lambda: details(mode, self._foretold.get(mode.number)),
            Qt.ItemDataRole.AccessibleTextRole: lambda: spoken(
                mode, current=self._current, foretold=self._foretold.get(mode.number)
            ),
        }
        answer = answers.get(role)
        return answer() if answer else None


def _modes_in_band(solution: Any) -> dict[int, str]:
    """Return the label of the check in whose band each mode lies at nominal values."""
    found: dict[int, str] = {}
    bands = [check.band for check in getattr(solution, "checks", ()) if check.inside]
    for mode in solution.modes:
        for band in bands:
            low, high = (edge / _TURN for edge in band.nominal)
            if mode.kind == "elastic" and low <= mode.frequency_hz <= high:
                found.setdefault(mode.number, band.label)
    return found


_TURN = 6.283185307179586  # rad of one turn
