"""One checked order: sign, frequency, verdict in words, nearest mode and whether it is driven."""

from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QContextMenuEvent, QKeyEvent, QMouseEvent
from PySide6.QtWidgets import QFrame, QGridLayout, QLabel, QMenu, QWidget

from modalview.ui.symbols import VerdictSign
from modalview.ui.theme import Theme
from modalview.ui.wording import kept_together, one_line
from modalview.units.show import significant

_TURN = 6.283185307179586  # rad of one turn
# Separations that differ by less are shown as one: it is half of the last digit shown.
_SAME_SHARE = 5e-4


def excitation_text(band: Any) -> str:
    """Return the excitation frequency, or the range it sweeps.

    >>> from types import SimpleNamespace as Band
    >>> excitation_text(Band(excitation=(308.9, 308.9)))
    '49.16 Hz'
    >>> excitation_text(Band(excitation=(62.83, 188.5)))
    '10.00 to 30.00 Hz'
    """
    low, high = (edge / _TURN for edge in band.excitation)
    if low == high:
        return f"{significant(low, 4)} Hz"
    return f"{significant(low, 4)} to {significant(high, 4)} Hz"


def signed_percent(share: float) -> str:
    """Return a separation with its sign.

    >>> signed_percent(0.0426), signed_percent(-0.5), signed_percent(0.0)
    ('+4.3 %', '−50 %', '0 %')
    """
    size = abs(100 * share)
    if size < 0.05:
        return "0 %"
    return f"{'+' if share > 0 else '−'}{size:.{1 if size < 9.95 else 0}f} %"


def nearest_text(check: Any) -> str:
    """Return how far the nearest mode is and whether it is driven; "" before the solve."""
    if check.nearest_mode is None or check.separation is None:
        return ""
    words = f"mode {check.nearest_mode}: {signed_percent(check.separation)}"
    worst = check.worst_separation
    if worst is not None and abs(worst - check.separation) > _SAME_SHARE:
        words += f", {signed_percent(worst)} at worst"
    drive = next((one for one in check.drives if one.mode == check.nearest_mode), None)
    if drive is not None and str(drive.drive) != "unknown":
        words += f"; {drive.drive}"
    return words


class CheckCard(QFrame):
    """A card of the results; updated in place on every edit.

    Enter or a double click asks for its values, Delete takes the order away; a right click offers both.
    """

    change_asked = Signal(str)  # machine
    removal_asked = Signal(str, str)  # machine, excitation

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setProperty("role", "card")
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self._band: Any = None
        self.sign = VerdictSign(1.2, self)
        self.label = QLabel(self)
        self.label.setProperty("role", "strong")
        self.frequency = QLabel(self)
        self.verdict = QLabel(self)
        self.verdict.setProperty("role", "verdict")
        self.frequency.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.nearest = QLabel(self)
        self.reason = QLabel(self)
        for text in (self.label, self.verdict, self.nearest, self.reason):
            text.setWordWrap(True)
        for text in (self.nearest, self.reason):
            text.setProperty("role", "small")
        layout = QGridLayout(self)
        layout.setContentsMargins(9, 6, 9, 6)
        layout.setHorizontalSpacing(7)
        layout.setVerticalSpacing(2)
        layout.setColumnStretch(1, 1)
        layout.addWidget(self.sign, 0, 0, Qt.AlignmentFlag.AlignTop)
        layout.addWidget(self.label, 0, 1)
        layout.addWidget(self.frequency, 0, 2, Qt.AlignmentFlag.AlignTop)
        for row, text in enumerate((self.verdict, self.nearest, self.reason), start=1):
            layout.addWidget(text, row, 1, 1, 2)

    def show_check(self, check: Any, theme: Theme, *, current: bool, machine: str = "") -> None:
        """Show a resonance.Check; ``current`` tells whether the nearest mode is of this model.

        ``machine`` names the machine where there are several.
        """
        self._band = check.band
        verdict = str(check.verdict)
        self.sign.show_verdict(verdict, theme)
        label = one_line(f"{machine}: {check.band.label}" if machine else check.band.label)
        self.label.setText(kept_together(label))
        self.frequency.setText(excitation_text(check.band))
        self.verdict.setText(check.wording)
        self.verdict.setProperty("verdict", verdict)
        self.verdict.style().polish(self.verdict)
        nearest = nearest_text(check) if current else ""
        self.nearest.setText(kept_together(nearest))
        self.nearest.setVisible(bool(nearest))
        self.reason.setText(kept_together(check.reason))
        self.reason.setVisible(not nearest or verdict != "clear")
        self.setToolTip(f"{check.band.check}: {check.reason}\n{_margin_text(check.band)}")
        self.setAccessibleName(f"{label}, {self.frequency.text()}: {check.wording}")
        self.setAccessibleDescription(f"{nearest}. {check.reason}".removeprefix(". "))

    def ask_change(self) -> None:
        """Ask for the values of its machine."""
        if self._band is not None:
            self.change_asked.emit(self._band.machine)

    def ask_removal(self) -> None:
        """Ask to take the order away."""
        if self._band is not None:
            self.removal_asked.emit(self._band.machine, self._band.excitation_id)

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Change by Enter, remove by Delete."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.ask_change()
        elif event.key() == Qt.Key.Key_Delete:
            self.ask_removal()
        else:
            super().keyPressEvent(event)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:  # noqa: N802  (Qt's name)
        """Change."""
        del event
        self.ask_change()

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:  # noqa: N802  (Qt's name)
        """Offer both."""
        menu = QMenu(self)
        menu.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        menu.addAction("Change…", self.ask_change)
        menu.addAction("Remove this order", self.ask_removal)
        menu.popup(event.globalPos())


def _margin_text(band: Any) -> str:
    low, high = (significant(edge / _TURN, 4) for edge in band.nominal)
    below, above = (significant(100 * share, 3) for share in band.margin)
    wanted = f"{below} %" if below == above else f"{below} % below, {above} % above"
    return f"margin wanted {wanted}: no mode from {low} to {high} Hz"
