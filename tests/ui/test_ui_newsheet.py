"""The dialog that asks where to begin: what the keyboard does, and what can be read in it."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QWidget
from shiboken6 import isValid

from modalview.model.templates import MACHINE_FIELDS
from modalview.ui.newsheet import CHOICES, NewSheet

MOUNTS = next(at for at, one in enumerate(CHOICES) if one.title == "Machine on four, six or more mounts")


@pytest.fixture
def begun():
    return []


@pytest.fixture
def dialog(qtbot, begun):
    parent = QWidget()
    qtbot.addWidget(parent)  # the dialog deletes itself once closed
    made = NewSheet(begun.append, parent)
    made.show()
    made.activateWindow()
    qtbot.waitUntil(made.isActiveWindow)
    made.list.setFocus()
    yield made
    if isValid(made):
        made.close()


def choose(dialog, row):
    dialog.list.setCurrentRow(row)
    QApplication.processEvents()  # the fields are shown


def test_enter_on_a_starting_point_leads_to_its_numbers_and_does_not_begin(dialog, begun):
    choose(dialog, MOUNTS)
    QTest.keyClick(dialog.list, Qt.Key.Key_Return)
    first = next(iter(dialog.fields.values()))
    assert begun == []
    assert first.hasFocus()
    assert first.selectedText() == first.text()


def test_enter_on_an_empty_sheet_begins_it(dialog, begun):
    QTest.keyClick(dialog.list, Qt.Key.Key_Return)
    assert [one.motion for one in begun] == [CHOICES[0].motion]


def test_a_double_click_on_an_empty_sheet_begins_it(dialog, begun):
    at = dialog.list.visualItemRect(dialog.list.item(1)).center()
    QTest.mouseClick(dialog.list.viewport(), Qt.MouseButton.LeftButton, pos=at)
    QTest.mouseDClick(dialog.list.viewport(), Qt.MouseButton.LeftButton, pos=at)
    assert [one.motion for one in begun] == [CHOICES[1].motion]


def test_tab_leads_from_the_list_through_the_numbers_to_the_button(dialog):
    choose(dialog, MOUNTS)
    expected = [*dialog.fields.values(), dialog.go]
    for field in expected:
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        assert field.hasFocus(), field.accessibleName()


def test_a_value_with_its_unit_can_be_read_whole(dialog):
    for row, choice in enumerate(CHOICES):
        choose(dialog, row)
        for field in dialog.fields.values():
            wide = field.fontMetrics().horizontalAdvance(field.text() or field.placeholderText())
            assert wide + 12 <= field.width(), (choice.title, field.accessibleName())
    assert len(dialog.fields) > len(MACHINE_FIELDS)
