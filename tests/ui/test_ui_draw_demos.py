"""Demonstration models drawn from an empty sheet by mouse and keyboard, saved, and held against the files."""

from functools import cache

import pytest
from conftest import settle
from pen import Pen
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QAbstractButton, QApplication, QFileDialog, QLineEdit

from modalview.places import demo_models
from modalview.store import read_model
from modalview.study import Request, Solution, solve
from modalview.ui.newsheet import NewSheet
from modalview.ui.sketch.asking import FindPart

PLAIN = Qt.KeyboardModifier.NoModifier
SHIFT, CTRL, ALT = (
    Qt.KeyboardModifier.ShiftModifier,
    Qt.KeyboardModifier.ControlModifier,
    Qt.KeyboardModifier.AltModifier,
)
SAME = 1e-9
PUMP_SET = ("pump set P-3", "2950 rpm", "15 %")


class Person(Pen):
    """A pen that also goes through menus, dialogs and forms."""

    # Menus and dialogs

    def menu(self, *letters):
        """Go through the menu bar by the underlined letters."""
        self._press(self.window, letters[0], ALT)
        for letter in letters[1:]:
            self._press(QApplication.activePopupWidget(), letter)

    def _press(self, widget, key, held=PLAIN):
        QTest.keyClick(widget, key, held)
        QApplication.processEvents()

    def dialog(self, kind):
        """Return the dialog that is open, with the keyboard, as a window manager gives it."""
        found = next(one for one in self.window.findChildren(kind) if one.isVisible())
        found.activateWindow()
        QApplication.processEvents()
        return found

    def begin(self, title):
        """Choose where to begin, under File, New."""
        self.menu("f", "n")
        dialog = self.dialog(NewSheet)
        while dialog.choice.title != title:
            self._press(dialog.list, Qt.Key.Key_Down)
        return dialog

    def begin_empty(self, title):
        """Begin an empty sheet."""
        self._press(self.begin(title).list, Qt.Key.Key_Return)
        self.back_in_the_window()

    def back_in_the_window(self):
        """Let the window have the keyboard again, as a window manager does."""
        self.window.activateWindow()
        QApplication.processEvents()

    def save_as(self, path):
        """Save under a name, typed in the dialog of the file."""
        self.menu("f", "a")
        name = self.dialog(QFileDialog).findChild(QLineEdit, "fileNameEdit")
        name.setFocus()
        name.selectAll()
        QTest.keyClicks(name, str(path))
        self._press(name, Qt.Key.Key_Return)
        self.back_in_the_window()

    # Forms

    @property
    def form(self):
        """The form on the sheet."""
        sketching = self.window.sketching
        return sketching.form if sketching.form.isVisible() else sketching.force

    def press_on(self, widget):
        """Click on a widget."""
        QTest.mouseClick(widget, Qt.MouseButton.LeftButton)
        QApplication.processEvents()

    def unfold(self):
        """Show the less usual lines of the form."""
        if not self.form.more.isChecked():
            self.press_on(self.form.more)

    def fill(self, **texts):
        """Click on lines of the form and type; the keys are their labels."""
        for key, text in texts.items():
            self.over(self.form.row(key.replace("_", " ")).value, text)

    def over(self, field, text):
        """Type over what stands in a field."""
        self.press_on(field)
        field.selectAll()
        QTest.keyClicks(field, text)
        if not isinstance(field.window(), NewSheet):
            self._press(field, Qt.Key.Key_Return)

    def values_of(self, where, **texts):
        """Ask for the values of a part by a double click and type some."""
        self.double_click(where)
        self.unfold()
        self.fill(**texts)
        self.key(Qt.Key.Key_Escape)

    def chosen_values(self, **texts):
        """Ask for the values of what is chosen by Enter and type some."""
        self.key(Qt.Key.Key_Return)
        self.unfold()
        self.fill(**texts)
        self.key(Qt.Key.Key_Escape)

    def find(self, name):
        """Find a part by its name."""
        self.key(Qt.Key.Key_F, CTRL)
        line = self.dialog(FindPart).line
        QTest.keyClicks(line, name)
        self._press(line, Qt.Key.Key_Return)
        self.back_in_the_window()

    def change_machine(self):
        """Ask for the values of the first machine, among the results."""
        buttons = self.window.results.findChildren(QAbstractButton)
        self.press_on(next(one for one in buttons if one.accessibleName().startswith("Change machine")))
        self.unfold()

    def draw(self, letter, start, stop, *texts):
        """Draw a part and type its values."""
        self.tool(letter)
        self.drag(start, stop)
        self.type(*texts)

    def by_cross(self, *words):
        """Draw with the cross: a tool's letter, ways to go (ten steps), parts to hop to, Enter."""
        ways = {
            "up": (Qt.Key.Key_Up, SHIFT),
            "down": (Qt.Key.Key_Down, SHIFT),
            "left": (Qt.Key.Key_Left, SHIFT),
            "right": (Qt.Key.Key_Right, SHIFT),
            "next": (Qt.Key.Key_PageDown, PLAIN),
            "previous": (Qt.Key.Key_PageUp, PLAIN),
            "enter": (Qt.Key.Key_Return, PLAIN),
        }
        self.laid_out()
        for word in words:
            self.key(*ways.get(word, (word, PLAIN)))

    def push(self, where, *texts):
        """Say what acts at a place."""
        self.tool("F")
        self.click(where)
        self.type(*texts)


@pytest.fixture
def person(window, qtbot):
    """Somebody in front of the empty window."""
    window.activateWindow()
    return Person(window, qtbot)


@cache
def of_file(name) -> Solution:
    return solve(Request(read_model(demo_models() / f"{name}.keepclear")))


def saved(person, tmp_path, qtbot) -> Solution:
    """Save, read the file, and return what is found in it; the window must show the same verdict."""
    path = tmp_path / "drawn.keepclear"
    settle(qtbot, person.window)
    person.save_as(path)
    qtbot.waitUntil(lambda: path.exists() and not person.window.filing.busy, timeout=2000)
    assert not person.window.document.modified
    solution = solve(Request(read_model(path)))
    assert person.window.analysis.outlook.verdict == solution.outlook.verdict
    return solution


def same(drawn: Solution, name: str, *, loads: bool = True) -> None:
    """Hold what was drawn against a demonstration model."""
    given = of_file(name)
    assert len(drawn.modes) == len(given.modes)
    for one, other in zip(drawn.modes, given.modes, strict=True):
        assert one.frequency_hz == pytest.approx(other.frequency_hz, rel=SAME, abs=1e-9)
        assert one.range_hz == pytest.approx(other.range_hz, rel=SAME, abs=1e-9)
    for one, other in zip(drawn.outlook.checks, given.outlook.checks, strict=True):
        assert one.verdict == other.verdict
        assert one.band.nominal == pytest.approx(other.band.nominal, rel=SAME)
        assert (one.inside, one.possible, one.certain) == (other.inside, other.possible, other.certain)
    for one, other in zip(drawn.checks, given.checks, strict=True):
        assert one.separation == pytest.approx(other.separation, rel=SAME)
        if loads:
            shares, wanted = ([drive.share for drive in check.drives] for check in (one, other))
            assert shares == pytest.approx(wanted, rel=1e-7, abs=1e-9)


def test_the_cooling_water_pump_by_mouse(person, tmp_path, qtbot):
    person.begin_empty("Empty sheet, single axis")
    at, part = person.at, person.part
    person.draw("M", at(-0.9, 1.0), at(-0.1, 1.3), "620 kg", "3 %", "motor")
    person.draw("M", at(0.2, 1.0), at(0.9, 1.3), "380 kg", "3 %", "pump")
    person.draw("M", at(-1.1, 0.4), at(1.1, 0.6), "520 kg", "3 %", "baseplate")
    person.draw("S", part("motor", down=0.9), part("baseplate", 0.25, 0.1), "4.0e8 N/m", "10 %", "")
    person.draw("S", part("pump", down=0.9), part("baseplate", 0.75, 0.1), "3.5e8 N/m", "10 %", "")
    person.draw("S", part("baseplate", down=0.9), at(0.0, -0.2), "175 kN/mm", "25 %", "base support")
    person.push(part("motor"), *PUMP_SET, "1", "", "G 6.3 of 190 kg", "unbalance")
    person.push(part("motor"), "2x", "", "", "misalignment")
    person.push(part("pump"), "7x", "", "", "vane pass")
    same(saved(person, tmp_path, qtbot), "1-cooling-water-pump/as-built")
    assert person.window.modes.row.chosen().number == 1  # the one in the band, not one of a half-drawn model


@pytest.mark.slow
def test_the_supply_fan_by_mouse(person, tmp_path, qtbot):
    person.begin_empty("Empty sheet, plane")
    at, part = person.at, person.part
    person.draw("B", at(-0.9, 0.4), at(0.9, 2.0), "1800 kg", "", "620 kg m2", "", "skid")
    person.values_of(
        part("skid"),
        position_y="1.2 m",
        tolerance_of_the_part="5 %",
        drawn_width="1.9 m",
        drawn_height="1.7 m",
    )
    person.draw("M", at(-1.7, -0.3), at(1.9, 0.0), "5200 kg", "5 %", "floor")
    person.values_of(part("floor"), moves_in="y")
    for x, below in ((-0.75, -0.85), (0.95, 0.85)):
        person.draw("S", part("skid", 0.5 + x / 2.5, 0.99), part("floor", 0.5, 0.01), "6.0e7 N/m", "20 %", "")
        person.chosen_values(**{"first end, offset x": f"{x} m", "second end, offset x": f"{below} m"})
    for x, outside in ((-0.75, -1.9), (0.95, 2.1)):
        start = part("skid", 0.5 + x / 2.5, 0.99)
        person.tool("S")
        person.drag(start, QPoint(at(outside, 0.35).x(), start.y()), SHIFT)
        person.type("4.0e7 N/m", "20 %", "")
        person.chosen_values(**{"first end, offset x": f"{x} m"})
    person.tool("S")
    person.drag(part("floor", 0.5, 0.95), at(0.1, -0.9), SHIFT)
    person.type("5.2e7 N/m", "25 %", "floor bay")
    grade = "G 6.3 of 320 kg at 1800 rpm"
    fan = ("supply fan SF-2", "600 to 1800 rpm", "20 %", "")
    person.push(part("skid", 0.7, 0.3), *fan, "1x", "rotating", grade, "unbalance")
    person.push(part("skid", 0.7, 0.3), "12x", "y", "", "blade pass")
    person.change_machine()
    for order in ("1x", "12x"):
        person.fill(
            **{f"{order}: where it acts, offset x": "0.3 m", f"{order}: where it acts, offset y": "0.25 m"}
        )
    same(saved(person, tmp_path, qtbot), "2-supply-fan/steel-legs")


@pytest.mark.slow
def test_the_air_compressor_train_by_mouse(person, tmp_path, qtbot):
    person.begin_empty("Empty sheet, shaft train")
    at, part = person.at, person.part
    person.draw("O", at(-2.2, -0.4), at(-1.6, 0.4), "GD2 184 kgf m2", "5 %", "motor")
    person.draw("O", at(-0.1, -0.4), at(0.1, 0.4), "14 kg m2", "5 %", "wheel")
    person.draw("O", at(-0.1, 0.5), at(0.1, 0.7), "0.35 kg m2", "5 %", "pinion")
    person.draw("O", at(1.2, 0.4), at(2.0, 0.8), "1.6 kg m2", "5 %", "compressor")
    person.draw("H", part("motor"), part("wheel"), "6.0e5 N m/rad", "10 %", "")
    person.draw("G", part("wheel"), part("pinion"), "84:20", "", "gear pair")
    person.draw("H", part("pinion"), part("compressor"), "1.9e5 N m/rad", "10 %", "")
    train = ("air compressor train", "1485 rpm", "10 %", "")
    person.push(part("motor"), *train, "1x", "", "", "120 N m", "motor shaft")
    person.push(part("motor"), "2x", "", "", "60 N m", "motor shaft")
    person.tool("F")
    person.click(part("compressor"))
    person.type("1x")
    person.type_on("c")  # the first letter of one in the list: the compressor
    person.type("", "", "25 N m", "compressor shaft")
    person.push(part("motor"), "100 Hz", "", "", "90 N m", "twice line frequency")
    same(saved(person, tmp_path, qtbot), "3-air-compressor-train/as-built")


@pytest.mark.slow
def test_the_generator_set_from_a_starting_point(person, tmp_path, qtbot):
    dialog = person.begin("Machine on four, six or more mounts")
    given = {"number": "6", "mass": "3200 kg", "Ixx": "820 kg m2", "Iyy": "3650 kg m2", "Izz": "3720 kg m2"}
    given |= {"length": "2.25 m", "width": "0.96 m", "below": "0.62 m"}
    given |= {"upright": "9.0e5 N/m", "sideways": "5.4e5 N/m"}
    for name, text in given.items():
        person.over(dialog.fields[name], text)
    person.press_on(dialog.go)
    person.back_in_the_window()
    person.values_of(person.part("b1"), tolerance_of_the_part="5 %")
    for name, x in (("mount 1", "-1.05 m"), ("mount 2", "0.15 m"), ("mount 3", "1.2 m")):
        for side in ("right", "left"):
            person.find(f"{name} {side}")
            person.chosen_values(**{"first end, offset x": x})
    person.key(Qt.Key.Key_K, CTRL)
    person.chosen_values(tolerance_of_the_part="15 %", dynamic_ratio="1.8")
    person.key(Qt.Key.Key_Escape)
    for texts in (
        ("generator set", "1500 rpm", "15 %", "", "0.5x", "rx", "300 N m", "half order"),
        ("1x", "rotating", "G 6.3 of 700 kg", "unbalance"),
        ("3x", "rx", "1800 N m", "firing"),
    ):
        person.key(Qt.Key.Key_F, CTRL | SHIFT)
        person.type(*texts)
    person.change_machine()
    for axis, place in (("x", "0.9 m"), ("z", "0.1 m")):
        person.fill(**{f"1x: where it acts, offset {axis}": place})
    same(saved(person, tmp_path, qtbot), "4-standby-generator-set/dynamic-stiffness")


@pytest.mark.slow
def test_the_generator_set_by_mouse_from_the_front_and_from_above(person, tmp_path, qtbot):
    person.begin_empty("Empty sheet, space")
    person.key(Qt.Key.Key_2, CTRL)
    person.draw("B", person.at(-1.5, 0.0, 0.4), person.at(1.5, 0.0, 1.6))
    person.unfold()
    person.fill(mass="3200 kg", Ixx="820 kg m2", Iyy="3650 kg m2", Izz="3720 kg m2")
    person.fill(position_z="1.05 m", tolerance_of_the_part="5 %", drawn_height="1.24 m")
    person.key(Qt.Key.Key_Escape)
    person.key(Qt.Key.Key_4, CTRL)
    for x in (-1.0, 0.2, 1.2):
        for y in (-0.5, 0.5):
            person.tool("T")
            person.click(person.at(x, y, 1.05))
            person.click(person.at(x, y, 1.05))
            person.fill(stiffness_x="5.4e5 N/m", stiffness_y="5.4e5 N/m", stiffness_z="9.0e5 N/m")
            person.unfold()
            place = {"x": {-1.0: "-1.05 m", 0.2: "0.15 m", 1.2: "1.2 m"}[x], "y": f"{0.96 * y:g} m"}
            person.fill(**{f"first end, offset {axis}": text for axis, text in place.items()})
            person.fill(tolerance_of_the_part="15 %", dynamic_ratio="1.8")
            person.key(Qt.Key.Key_Escape)
    person.key(Qt.Key.Key_2, CTRL)
    middle = person.part("b1")
    person.push(middle, "generator set", "1500 rpm", "15 %", "", "0.5x", "rx", "300 N m", "half order")
    person.push(person.at(0.9, 0.0, 1.15), "1x", "rotating", "G 6.3 of 700 kg", "unbalance")
    person.push(middle, "3x", "rx", "1800 N m", "firing")
    person.change_machine()
    for axis, place in (("x", "0.9 m"), ("z", "0.1 m")):
        person.fill(**{f"1x: where it acts, offset {axis}": place})
    same(saved(person, tmp_path, qtbot), "4-standby-generator-set/dynamic-stiffness")


@pytest.mark.slow
def test_the_vacuum_pump_with_its_absorber_by_mouse(person, tmp_path, qtbot):
    person.begin_empty("Empty sheet, single axis")
    at, part = person.at, person.part
    person.draw("M", at(-1.3, 0.7), at(1.3, 1.1), "2100 kg", "5 %", "beam")
    person.draw("M", at(0.4, 1.6), at(1.0, 1.9), "105 kg", "1 %", "absorber")
    person.draw("S", part("beam", down=0.9), at(0.0, 0.0), "3.28e7 N/m", "5 %", "floor beam")
    person.draw("S", part("absorber", down=0.9), part("beam", 0.8, 0.1), "1.60e6 N/m", "3 %", "arm")
    person.push(part("beam"), "vacuum pump", "1180 rpm", "10 %", "1x", "", "400 N", "shaking force")
    same(saved(person, tmp_path, qtbot), "6-vacuum-pump-absorber/absorber-105kg")


def test_the_cooling_water_pump_by_keyboard_alone(person, tmp_path, qtbot):
    person.begin_empty("Empty sheet, single axis")
    person.by_cross("m", "up", "left", "enter")
    person.type("620 kg", "3 %", "motor")
    person.by_cross("m", "right", "right", "enter")
    person.type("380 kg", "3 %", "pump")
    person.by_cross("m", "left", "down", "enter")
    person.type("520 kg", "3 %", "baseplate")
    person.by_cross("s", "next", "enter", "next", "next", "enter")
    person.type("4.0e8 N/m", "10 %", "motor pedestal")
    person.by_cross("s", "next", "next", "enter", "next", "enter")
    person.type("3.5e8 N/m", "10 %", "pump pedestal")
    person.by_cross("s", "previous", "enter", "down", "enter")
    person.type("175 kN/mm", "25 %", "base support")
    person.by_cross("f", "next", "enter")
    person.type(*PUMP_SET, "1", "", "G 6.3 of 190 kg", "unbalance")
    person.by_cross("f", "next", "enter")
    person.type("2x", "", "", "misalignment")
    person.by_cross("f", "next", "next", "enter")
    person.type("7x", "", "", "vane pass")
    same(saved(person, tmp_path, qtbot), "1-cooling-water-pump/as-built")
