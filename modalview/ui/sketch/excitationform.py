"""The form that asks what acts at a place: which machine, how often, in which direction, how strongly.

Nothing changes until all that is needed is typed; machine and excitation then come as one edit.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import QRect, Signal
from PySide6.QtWidgets import QPushButton, QWidget

from modalview.errors import InputError, ModelFaultsError
from modalview.model.adding import end_at
from modalview.model.adding_machines import add_excitation, add_machine
from modalview.model.composites import read_composite
from modalview.model.differences import checked_edit
from modalview.model.forms import FormLine, bodies_of
from modalview.model.parts import End, Excitation, Margin, Model, Motion, SpeedRange
from modalview.model.rules_values import share
from modalview.model.typed_machines import typed_magnitude, typed_margin, typed_rate, typed_speed
from modalview.model.values import Entry
from modalview.ui.document import Document
from modalview.ui.sketch.floating import FloatingForm
from modalview.ui.sketch.formrow import ChosenWord, FormRow, TypedLine
from modalview.ui.values import converted
from modalview.units import quantities as q
from modalview.units.quantities import Quantity


def _margin(text: str) -> Entry | Margin | None:
    """Read a margin, and hold it to its rule at once: "20" is 2000 %."""
    read = typed_margin(text)
    for one in (read.below, read.above) if isinstance(read, Margin) else (read,):
        for _key, reason in share("margin", one):
            raise InputError(f"a margin {reason}")
    return read


@dataclass(frozen=True, slots=True)
class _Ask:
    """One line.

    Parameters
    ----------
    key, label, hint : str
    read : callable or None
        Reads a text, so that what cannot be read is told at once.
    needed : str
        What is said when it is empty; "" where it may be.
    machine : bool
        Whether it is asked of a new machine only.
    quantity : Quantity or None
        For the converted value beside.
    """

    key: str
    label: str
    hint: str = ""
    read: Callable[[str, Model], Any] | None = None
    needed: str = ""
    machine: bool = False
    quantity: Quantity | None = None


_MARGIN_NEEDED = 'a margin is required and has no default; type the one that you answer for, such as "15 %"'
_ASKED = (
    _Ask("machine", "machine"),
    _Ask("machine name", "name of machine", "such as fan", machine=True),
    _Ask(
        "speed",
        "speed of machine",
        "600 to 1800 rpm",
        lambda text, _: typed_speed(text),
        "an order needs the machine's speed, such as 2950 rpm or 600 to 1800 rpm",
        machine=True,
        quantity=q.SPEED,
    ),
    _Ask(
        "margin",
        "margin wanted",
        "such as 15 %",
        lambda text, _: _margin(text),
        _MARGIN_NEEDED,
        machine=True,
    ),
    _Ask("on", "speed is that of", machine=True),
    _Ask(
        "rate",
        "order or frequency",
        "1x or 100 Hz",
        lambda text, _: typed_rate(text),
        'give an order of the speed, such as "1x", or a fixed frequency, such as "100 Hz"',
        quantity=q.FREQUENCY,
    ),
    _Ask("of", "order of the speed of"),
    _Ask("direction", "direction", "", lambda text, _: read_composite(Excitation, "direction", text)),
    _Ask("magnitude", "how strong", "", lambda text, model: typed_magnitude(text, model.motion)),
    _Ask("name", "name", "such as unbalance"),
)
# Where a fault of the model's rules is told: the field that its path begins with.
_TOLD_AT = {"order": "rate", "frequency": "rate", "at": "rate", "axis": "direction"}
_DIRECTION_HINTS = {
    Motion.SINGLE_AXIS: "such as y",
    Motion.SHAFT_TRAIN: "such as rz",
    Motion.PLANE: "such as y, 30 deg or rotating",
    Motion.SPACE: "such as z or rotating",
}
_STRENGTH_HINTS = {
    Motion.SINGLE_AXIS: "400 N or G 6.3 of 320 kg",
    Motion.SHAFT_TRAIN: "such as 150 N m",
    Motion.PLANE: "400 N or G 6.3 of 320 kg",
    Motion.SPACE: "400 N or G 6.3 of 320 kg",
}
_BLANKS = {"machine": "a new machine", "of": "the machine"}
# A single direction needs no asking.
_ONLY_DIRECTION = {Motion.SINGLE_AXIS: "y", Motion.SHAFT_TRAIN: "rz"}


class ExcitationForm(FloatingForm):
    """Makes an excitation at a place on a body."""

    made = Signal(str, str)  # machine, excitation

    def __init__(self, document: Document, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAccessibleName("what acts here")
        self._document = document
        self._at: End | None = None
        self._machine = ""  # the one chosen last; "" is a new one
        self._system = "SI"
        self.add_button = QPushButton("Add", self, accessibleName="add the excitation")
        self.add_button.setAutoDefault(False)
        self.add_button.clicked.connect(self.end)
        self.foot.addStretch(1)
        self.foot.addWidget(self.add_button)
        document.opened.connect(self.hide_form)

    def show_at(self, body: str, place: tuple[float, ...], beside: QRect, *, system: str = "SI") -> None:
        """Ask what acts on a body.

        Parameters
        ----------
        body : str
            Id of the body.
        place : tuple of float
            Where it acts, in the model's coordinates, m.
        beside : QRect
            What the form must not cover, in pixels of the sheet.
        system : str
            In which values are converted.
        """
        model = self._document.model
        # Along one axis it is all the same where on a body something acts.
        there = End(body=body) if model.motion is Motion.SINGLE_AXIS else end_at(model, body, place)
        self._at, self._system = there, system
        called = dict(bodies_of(model))[body]
        self.title.setText(f"what acts on {called}")
        known = [one.id for one in model.machines]
        if self._machine not in known:
            self._machine = known[-1] if known else ""
        self._build(called)
        self.float_beside(beside)
        first = self.row("rate") if self._machine else self.row("machine name")
        self.go_to(first.value)

    def _build(self, called: str) -> None:
        self.clear_rows()
        at = 0
        for ask in self._asked():
            line = self._line(ask)
            row = FormRow(line, f"what acts on {called}", self._committer(ask), self.fit, self.inside)
            at = row.place(self.grid, at)
            row.show_line(line, "", "", noted=False, several=False)
            self.rows.append(row)
        self.lead_keyboard((self.add_button,))
        self._fold()

    def _asked(self) -> list[_Ask]:
        model = self._document.model
        absent = set() if model.machines else {"machine"}
        if model.motion is Motion.SINGLE_AXIS:
            absent.add("on")
        if model.motion is not Motion.SHAFT_TRAIN:  # elsewhere all shafts of a machine turn alike
            absent.add("of")
        return [one for one in _ASKED if one.key not in absent]

    def _line(self, ask: _Ask) -> FormLine:
        model = self._document.model
        machines = tuple((one.id, one.name or one.id) for one in model.machines)
        choices = {"machine": machines, "on": bodies_of(model), "of": bodies_of(model)}.get(ask.key, ())
        text = {"machine": self._machine, "direction": _ONLY_DIRECTION.get(model.motion, "")}.get(ask.key, "")
        if ask.key == "on" and model.motion is Motion.SHAFT_TRAIN and self._at is not None:
            text = self._at.body or ""
        hints = {"direction": _DIRECTION_HINTS[model.motion], "magnitude": _STRENGTH_HINTS[model.motion]}
        return FormLine(
            key=ask.key,
            label=ask.label,
            address=(),
            text=text,
            quantity=ask.quantity,
            hint=hints.get(ask.key, ask.hint),
            choices=choices,
            blank=_BLANKS.get(ask.key, "not told"),
        )

    def _fold(self) -> None:
        """Ask about the machine only where it is a new one."""
        for ask in self._asked():
            self.row(ask.key).fold(away=ask.machine and bool(self._machine))
        self.fit()

    # What is typed

    def _committer(self, ask: _Ask) -> Callable[[str, str], str]:
        return lambda _slot, text: self._check(ask, text)

    def _check(self, ask: _Ask, text: str) -> str:
        """Read one line; return why it cannot be read, or nothing. The model is left alone."""
        if ask.key == "machine":
            self._machine = text
            self._fold()
            return ""
        row = self.row(ask.key)
        row.tell("", refused=False)
        row.converted.setText("")
        if not text or ask.read is None:
            return ""
        try:
            read = ask.read(text, self._document.model)
        except InputError as error:
            return str(error)
        if ask.quantity is not None:
            row.converted.setText(self._in_units(read, ask.quantity))
        return ""

    def _in_units(self, read: Any, quantity: Quantity) -> str:
        """Return what was read in the units shown."""
        if isinstance(read, SpeedRange):
            both = [converted(one.si, quantity, self._system) for one in (read.from_, read.to)]
            return f"{both[0].removesuffix(' Hz')} to {both[1]}"
        entry = getattr(read, "frequency", read)
        return converted(entry.si, quantity, self._system) if entry is not None else ""

    def _text(self, key: str) -> str:
        field = next((row.value for row in self.rows if row.key == key), None)
        if field is None or field.isHidden():
            return ""
        return field.word if isinstance(field, ChosenWord) else field.text().strip()

    def end(self) -> None:
        """Make the excitation when all that is needed is typed; else go to the first that is not."""
        if self._first_refused() or self._first_missing():
            return
        model = self._document.model
        try:
            after, machine, excitation = self._made(model)
            edit = checked_edit(model, after, f"Add {self._text('name') or self._text('rate')}")
        except ModelFaultsError as error:
            self._tell_faults(error)
            return
        self._machine = machine
        self.hide_form()
        self._document.push(edit)
        self.made.emit(machine, excitation)

    def _first_refused(self) -> bool:
        for row in self.rows:
            if row.value.isHidden() or isinstance(row.value, ChosenWord):
                continue
            if not row.value.enter():
                self.go_to(row.value)
                return True
        return False

    def _first_missing(self) -> bool:
        for ask in self._asked():
            if ask.key == "speed" and not _is_order(self._text("rate")):
                continue  # a fixed frequency needs no speed
            row = self.row(ask.key)
            if ask.needed and not row.value.isHidden() and not self._text(ask.key):
                row.value.refuse(ask.needed)
                self.go_to(row.value)
                return True
        return False

    def _made(self, model: Model) -> tuple[Model, str, str]:
        machine = self._machine
        if not machine:
            model, machine = add_machine(
                model,
                self._text("machine name"),
                self._text("speed"),
                self._text("margin"),
                on=self._text("on") or None,
            )
        direction = self._text("direction")
        model, excitation = add_excitation(
            model,
            machine,
            self._text("rate"),
            at=self._at,
            of=self._text("of") or None,
            direction=read_composite(Excitation, "direction", direction) if direction else None,
            magnitude=self._text("magnitude"),
            name=self._text("name"),
        )
        return model, machine, excitation

    def _tell_faults(self, error: ModelFaultsError) -> None:
        """Show each reason at its line and go to the first."""
        told: dict[str, str] = {}
        for fault in error.faults:
            field = fault.path.split(" . ")[0]
            key = _TOLD_AT.get(field, field)
            typed = any(row.key == key and isinstance(row.value, TypedLine) for row in self.rows)
            key = key if typed else "rate"
            told.setdefault(key, f"{fault.path} {fault.reason}")
        for key, reason in told.items():
            self.row(key).value.refuse(reason)
        self.go_to(next(row.value for row in self.rows if row.key in told))


def _is_order(text: str) -> bool:
    try:
        return typed_rate(text).order is not None
    except InputError:
        return True
