"""Every control can be reached by keyboard and says what it is."""

from conftest import FAN
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractItemView,
    QAbstractSlider,
    QApplication,
    QComboBox,
    QHeaderView,
    QLineEdit,
    QScrollBar,
)

from modalview.model.parts import Model, Motion
from modalview.ui.newsheet import NewSheet
from modalview.ui.sketch.excitationform import ExcitationForm
from modalview.ui.sketch.partform import PartForm

CONTROLS = (QAbstractButton, QAbstractItemView, QAbstractSlider, QComboBox, QLineEdit)


def controls(window):
    """Return what a person can work with, but for the insides of Qt's own widgets."""
    return [
        one
        for one in window.findChildren(object)
        if isinstance(one, CONTROLS)
        and not isinstance(one, QScrollBar | QHeaderView)
        and not one.objectName().startswith("qt_")
        and not (isinstance(one, QAbstractItemView) and isinstance(one.parent(), QComboBox))
        and not (one.parent() is not None and one.parent().metaObject().className().startswith("QComboBox"))
    ]


def named(widget) -> str:
    """Return what a screen reader is told."""
    told = QAccessible.queryAccessibleInterface(widget)
    return told.text(QAccessible.Text.Name) if told is not None else widget.accessibleName()


def nameless(window) -> list[str]:
    return [f"{type(one).__name__} {one.objectName()}" for one in controls(window) if not named(one).strip()]


def test_every_control_of_the_window_says_what_it_is(pump):
    pump.on_why()
    assert nameless(pump) == []


def test_every_control_of_the_forms_says_what_it_is(window, qtbot):
    window.document.open(FAN, example=True)
    qtbot.waitUntil(lambda: window.sheet.geometry is not None)
    window.sketching.form.show_parts(("skid",), window.sketching.hand.rectangle(("skid",)), fresh=True)
    window.sketching.add_force()
    for form in (PartForm, ExcitationForm):
        assert nameless(window.findChild(form)) == []
    window.on_new()
    dialog = window.findChild(NewSheet)
    dialog.list.setCurrentRow(7)
    assert nameless(dialog) == []
    dialog.close()


def test_every_control_in_sight_is_reached_by_the_tab_key(pump):
    reached, one = set(), pump.sheet
    for _ in range(5000):
        reached.add(one)
        one = one.nextInFocusChain()
        if one is pump.sheet:
            break
    for control in controls(pump):
        if control.isVisible() and control.isEnabled():
            assert control.focusPolicy() & Qt.FocusPolicy.TabFocus, control
            assert control in reached, control


def test_the_sheet_tells_a_reader_what_its_line_says(window):
    window.document.start(Model(motion=Motion.SINGLE_AXIS))
    window.sketching.hand.take("mass")
    assert "drag the outline" in window.sheet.accessibleDescription()
    QApplication.processEvents()
