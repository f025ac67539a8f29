"""A form that floats on the sheet beside what it is about, and keeps keys and mouse from the sheet below."""

from itertools import pairwise

from PySide6.QtCore import QRect, QSize, Qt, QTimer, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QFrame,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QLayout,
    QScrollArea,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from modalview.ui.sketch.formrow import FormRow, TypedLine

# Pixels between the form and what it is about, and from the edges of the sheet.
_GAP, _EDGE = 12, 6
# Share of what it is about that a form may come to cover before it goes elsewhere.
_MOST_COVERED = 0.5


def place_beside(size: QSize, beside: QRect, inside: QRect) -> QRect:
    """Return where a form goes: right of a rectangle, left of it, below or above, where there is room.

    Where there is room on no side it takes the side with the most, moved so that it lies inside.

    >>> place_beside(QSize(100, 50), QRect(10, 10, 20, 20), QRect(0, 0, 400, 300)).x()
    41
    """
    free = {
        "right": inside.right() - beside.right() - _GAP,
        "left": beside.left() - inside.left() - _GAP,
        "below": inside.bottom() - beside.bottom() - _GAP,
        "above": beside.top() - inside.top() - _GAP,
    }
    wanted = {
        "right": size.width(),
        "left": size.width(),
        "below": size.height(),
        "above": size.height(),
    }
    side = next((side for side in free if free[side] >= wanted[side]), None)
    side = side or max(free, key=lambda one: free[one] - wanted[one])
    x = beside.right() + _GAP if side == "right" else beside.left() - _GAP - size.width()
    y = beside.bottom() + _GAP if side == "below" else beside.top() - _GAP - size.height()
    x = beside.left() if side in ("below", "above") else x
    y = beside.top() if side in ("right", "left") else y
    x = max(inside.left(), min(x, inside.right() + 1 - size.width()))
    y = max(inside.top(), min(y, inside.bottom() + 1 - size.height()))
    return QRect(x, y, size.width(), size.height())


def kept_in_place(before: QRect, size: QSize, beside: QRect, inside: QRect) -> QRect:
    """Return where a form of a new size goes so that it moves under no hand that types in it.

    It stays, moved only as far as it must to lie inside; where it would cover most of what it is about, it
    is placed anew.

    >>> part, sheet = QRect(10, 10, 20, 20), QRect(0, 0, 170, 300)
    >>> kept_in_place(QRect(41, 10, 100, 50), QSize(140, 60), part, sheet).x()
    30
    """
    x = max(inside.left(), min(before.x(), inside.right() + 1 - size.width()))
    y = max(inside.top(), min(before.y(), inside.bottom() + 1 - size.height()))
    stays = QRect(x, y, size.width(), size.height())
    covers = _area(stays.intersected(beside)) > max(_MOST_COVERED * _area(beside), _area(before & beside))
    return place_beside(size, beside, inside) if covers else stays


def _area(one: QRect) -> int:
    return max(one.width(), 0) * max(one.height(), 0)


class FloatingForm(QFrame):
    """Title, lines in a grid that scrolls where it must, and a foot."""

    closed = Signal()

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setObjectName("floatingForm")
        self.setAttribute(Qt.WidgetAttribute.WA_NoMousePropagation)
        self.setCursor(Qt.CursorShape.ArrowCursor)
        self._beside = QRect()
        self.rows: list[FormRow] = []
        self.title = QLabel(self)
        self.title.setProperty("role", "strong")
        self.close_button = QToolButton(self, text="\u00d7", accessibleName="close the form")
        self.close_button.setToolTip("Close (Esc)")
        self.close_button.clicked.connect(self.hide_form)
        self._head = QHBoxLayout()
        self._head.addWidget(self.title, 1)
        self._head.addWidget(self.close_button)
        self.inside = QWidget(self, objectName="floatingFormInside")
        self.grid = QGridLayout(self.inside)
        self.grid.setContentsMargins(0, 0, 4, 0)
        self.grid.setVerticalSpacing(3)
        self.grid.setColumnStretch(1, 1)
        self.grid.setSizeConstraint(QLayout.SizeConstraint.SetMinimumSize)
        self.scroll = QScrollArea(self, objectName="floatingFormScroll")
        self.scroll.setWidgetResizable(True)
        self.scroll.setFrameShape(QFrame.Shape.NoFrame)
        self.scroll.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAsNeeded)
        self.scroll.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.scroll.setWidget(self.inside)
        self.foot = QHBoxLayout()
        layout = QVBoxLayout(self)
        layout.setContentsMargins(10, 6, 8, 8)
        layout.setSpacing(5)
        layout.addLayout(self._head)
        layout.addWidget(self.scroll, 1)
        layout.addLayout(self.foot)
        self.hide()

    def float_beside(self, beside: QRect) -> None:
        """Show the form beside a rectangle of the sheet."""
        self._beside = beside
        self.show()
        self.raise_()
        self.fit(anew=True)
        # New widgets know their size once they are shown.
        QTimer.singleShot(0, self, lambda: self.fit(anew=True))

    def fit(self, *, anew: bool = False) -> None:
        """Take the size that the lines need, and the place for it: where it stands, if it was placed."""
        if self.isHidden():
            return
        room = self.parentWidget().rect().adjusted(_EDGE, _EDGE, -_EDGE, -_EDGE)
        self.grid.invalidate()
        margins = self.layout().contentsMargins()
        across = margins.left() + margins.right() + 2 * self.frameWidth()
        width = max(self.grid.sizeHint().width() + across, self.layout().minimumSize().width())
        width = min(width, room.width())
        height = self._height_for(width - across)
        # A scroll area that once had a bar keeps it where texts wrap: without it they would just fit.
        policy = Qt.ScrollBarPolicy
        fits = height <= room.height()
        self.scroll.setVerticalScrollBarPolicy(
            policy.ScrollBarAlwaysOff if fits else policy.ScrollBarAsNeeded
        )
        if not fits:
            width = min(width + self.scroll.verticalScrollBar().sizeHint().width(), room.width())
        size = QSize(width, min(height, room.height()))
        placed = place_beside(size, self._beside, room)
        self.setGeometry(placed if anew else kept_in_place(self.geometry(), size, self._beside, room))

    def _height_for(self, inner_width: int) -> int:
        """Return the height of the whole form when its lines are so wide; texts are broken into lines."""
        margins = self.layout().contentsMargins()
        around = margins.top() + margins.bottom() + 2 * self.layout().spacing() + 2 * self.frameWidth()
        around += self._head.sizeHint().height() + self.foot.sizeHint().height()
        lines = self.grid.totalHeightForWidth(inner_width) if self.grid.hasHeightForWidth() else -1
        return around + (lines if lines >= 0 else self.grid.sizeHint().height())

    def hide_form(self) -> None:
        """Close, and give the keyboard back to the sheet."""
        if self.isHidden():
            return
        had_keyboard = self.isAncestorOf(self.focusWidget()) if self.focusWidget() else False
        self.hide()
        if had_keyboard:
            self.parentWidget().setFocus()
        self.closed.emit()

    # Lines and the keyboard

    def row(self, key: str) -> FormRow:
        """Return the line of a key, such as "stiffness"; KeyError when there is none."""
        for row in self.rows:
            if row.key == key:
                return row
        raise KeyError(key)

    def clear_rows(self) -> None:
        """Take all lines away."""
        for widget in (one for row in self.rows for one in row.widgets):
            self.grid.removeWidget(widget)
            widget.hide()
            widget.deleteLater()
        self.rows = []

    def lead_keyboard(self, switches: tuple[QWidget, ...]) -> None:
        """Lead Tab through all fields and on to the switches, and Enter from field to field."""
        fields = [field for row in self.rows for field in row.fields]
        for one, following in pairwise((*fields, *switches, self.close_button)):
            QWidget.setTabOrder(one, following)
        for field in fields:
            field.gone_on.connect(lambda field=field: self._go_on(field))

    def _go_on(self, field: QWidget) -> None:
        fields = [one for row in self.rows for one in row.fields]
        if field not in fields:
            return
        after = fields[fields.index(field) + 1 :]
        following = next((one for one in after if not one.isHidden()), None)
        if following is None:
            self.end()
        else:
            self.go_to(following)

    def go_to(self, field: QWidget) -> None:
        """Give the keyboard to a field, its text chosen."""
        field.setFocus()
        if isinstance(field, TypedLine):
            field.selectAll()
        self.scroll.ensureWidgetVisible(field)

    def take_keyboard(self) -> None:
        """Give the keyboard to the first line, with its text chosen."""
        first = next((row.value for row in self.rows if not row.value.isHidden()), None)
        if first is not None:
            self.go_to(first)

    def end(self) -> None:
        """Enter in the last field: close."""
        self.hide_form()

    def keyPressEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Esc closes; no key that a field does not want reaches the sheet below."""
        if event.key() == Qt.Key.Key_Escape:
            self.leave()
        event.accept()

    def keyReleaseEvent(self, event: QKeyEvent) -> None:  # noqa: N802  (Qt's name)
        """Keep it from the sheet, too."""
        event.accept()

    def leave(self) -> None:
        """Close without taking what was typed last."""
        for row in self.rows:
            row.give_back()
        self.hide_form()
