"""The response: amplitude over machine speed at a chosen point, tables, and its motion on the sheet."""

from dataclasses import dataclass, field
from typing import Any

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QWidget

from modalview.model.parts import Model
from modalview.ui.chartpage import ChartPage
from modalview.ui.inquiry import Inquiry, Question
from modalview.ui.questions import CHOSEN, Looked, response
from modalview.ui.responsecanvas import ResponseCanvas
from modalview.ui.responsechoice import ResponseChoice

NO_MACHINE = (
    "No excitation acts yet. Say at which speed a machine runs and what it excites: "
    "a force, an unbalance or a balance grade with the mass of its rotor."
)
NO_SIZE = "No excitation has a magnitude: give a force, an unbalance or a balance grade."


@dataclass(frozen=True, slots=True, eq=False)
class SteadyMotion:
    """A steady motion as the sheet moves it: complex, so that parts move out of step.

    Parameters
    ----------
    motion : array (bodies, 6)
    caption : str
        "response to 1× unbalance at 2950 rpm".
    """

    motion: Any
    caption: str
    kind: str = field(default="response")


class ResponsePage(ChartPage):
    """Chart, controls and tables of the forced response."""

    motion_changed = Signal()
    magnitude_asked = Signal(str)  # id of the machine whose excitations lack something; "" for none yet

    def __init__(self, parent: QWidget | None = None, question: Question = response) -> None:
        super().__init__(ResponseCanvas(), Inquiry("working out the response", question), parent)
        self.choice = ResponseChoice(self)
        self.controls.addWidget(self.choice, 1)
        self.amplitudes = self.room.add_table("Amplitudes")
        self.supports = self.room.add_table("Forces at the supports")
        self.system = "SI"
        self._speed: float | None = None
        self._lacking = ""
        self.motion: SteadyMotion | None = None
        self.choice.changed.connect(self._on_choice)
        self.choice.logarithmic.toggled.connect(self.canvas.set_logarithmic)
        self.canvas.speed_chosen.connect(self.choose_speed)
        self.amplitudes.currentCellChanged.connect(lambda *_: self._show_motion())

    # What is asked

    def follow(self, model: Model | None, *, anew: bool) -> None:
        """Ask for the response of a model."""
        if anew:
            self._speed = None
            self.canvas.read_speed(None)
        if model is not None:
            self.choice.show_model(model, anew=anew)
        self.inquiry.follow(model, self._details(), anew=anew)

    def _details(self) -> tuple[Any, ...]:
        body = self.choice.body
        return tuple(Looked(body, self.choice.way if body else None, self._speed))

    def set_system(self, system: str) -> None:
        """Show figures in another system of units."""
        if system != self.system:
            self.system = system
            self.show_result()

    def _on_choice(self) -> None:
        model = self.inquiry.model
        if model is None:
            return
        if self.choice.quantity.currentData() != self._force():
            self._ask_anew()
        self.show_result()

    def _ask_anew(self) -> None:
        self.inquiry.follow(self.inquiry.model, self._details())

    def choose_body(self, body: str) -> None:
        """Look at a body."""
        self.choice.choose_body(body)

    def choose_speed(self, rpm: float) -> None:
        """Let the sheet show the motion at a speed."""
        self._speed = float(f"{rpm:.6g}")
        self._ask_anew()

    @staticmethod
    def _force() -> str:
        from modalview.drawing.responsechartcontent import FORCE  # noqa: PLC0415  (numpy is late)

        return FORCE

    # What is shown

    def show_result(self) -> None:
        """Show the answer."""
        self.choice.setVisible(self.inquiry.result is not None and bool(self.inquiry.result.machines))
        if self._told_of_nothing():
            self.motion = None
            self.motion_changed.emit()
            return
        from modalview.drawing import responsechartcontent as contents  # noqa: PLC0415  (numpy is late)

        result = self.inquiry.result
        machine = self._machine(result)
        self._offer(machine, contents)
        content = contents.response_content(result, self._chosen(machine, contents))
        self._show_tables(result, machine, content)
        self.room.notes.setText("\n".join((*_left_out(machine, result), *result.notes, *result.evidence)))
        if content is None:
            self.show_missing(_no_curve(machine))
        else:
            self.show_chart(content, self.sentence())
        self._show_motion()

    def _told_of_nothing(self) -> bool:
        model, result = self.inquiry.model, self.inquiry.result
        self._lacking = ""
        if model is not None and not any(one.excitations for one in model.machines):
            self.show_missing(NO_MACHINE, "Add an order or a frequency…")
            return True
        if result is None and self.inquiry.refusal and _nothing_sized(model):
            self._lacking = next(one.id for one in model.machines if one.excitations)
            self.show_missing(f"{NO_SIZE}\n{self.inquiry.refusal}", "Type what acts…")
            return True
        return self.told_of_none()

    def on_help(self) -> None:
        """Ask for what is missing."""
        if self.inquiry.waits:
            super().on_help()
        else:
            self.magnitude_asked.emit(self._lacking)

    def _machine(self, result: Any) -> Any:
        wanted = self.choice.machine.currentData()
        return next((one for one in result.machines if one.machine == wanted), result.machines[0])

    def _offer(self, machine: Any, contents: Any) -> None:
        model = self.inquiry.result.request.model
        offered = [
            (f"{contents.quantity_name(one, model)}, {contents.unit_of(model, one, self.system)[1]}", one)
            for one in contents.QUANTITIES
        ]
        if machine.forces:
            offered.append(("force or moment, peak", contents.FORCE))
        self.choice.show_quantities(offered, contents.VELOCITY)
        if self.choice.quantity.currentData() == contents.FORCE:
            places = contents.force_places(machine)
            self.choice.show_parts([(label, place) for place, label in places])
        else:
            self.choice.show_places([(one.label, one.id) for one in machine.watches], model.bodies)
        force = self.choice.quantity.currentData() == contents.FORCE
        self.choice.show_direction(there=not force and self.choice.body is not None)

    def _chosen(self, machine: Any, contents: Any) -> Any:
        watches = {one.id for one in machine.watches}
        place = self.choice.named if self.choice.body is None else CHOSEN
        if self.choice.quantity.currentData() != contents.FORCE and place not in watches:
            place = machine.watches[0].id if machine.watches else ""  # the answer for it is on its way
        quantity = self.choice.quantity.currentData()
        return contents.Choice(machine.machine, place or "", quantity, self.system)

    def _show_tables(self, result: Any, machine: Any, content: Any) -> None:
        from modalview.drawing import responsecharttable as tables  # noqa: PLC0415  (numpy is late)

        if content is None:
            self.amplitudes.show_figures((), ())
        else:
            self._fill(self.amplitudes, tables.amplitude_table(machine, content))
        self._fill(
            self.supports,
            tables.support_table(result, machine.machine, self._shown_speed(machine), self.system),
        )

    @staticmethod
    def _fill(place: Any, table: Any) -> None:
        rows = [(row.label, *row.cells) for row in table.rows]
        place.show_figures(table.headings, rows, [row.detail for row in table.rows])

    def _shown_speed(self, machine: Any) -> float | None:
        """Return the speed whose motion and forces are shown: the chosen one, else the highest it runs at."""
        known = [one.speed_rpm for one in machine.states if one.speed_rpm is not None]
        if self._speed is not None and any(abs(rpm - self._speed) <= 1e-6 * rpm for rpm in known):
            return min(known, key=lambda rpm: abs(rpm - self._speed))
        return machine.running_rpm[1] if machine.running_rpm is not None else None

    def _show_motion(self) -> None:
        """Give the sheet the motion under the excitation whose row is chosen, at the speed chosen."""
        result = self.inquiry.result
        if result is None or not result.machines:
            return
        from modalview.drawing.responsecharttable import rpm_figure, states_at  # noqa: PLC0415

        machine = self._machine(result)
        speed = self._shown_speed(machine)
        states = states_at(machine, speed)
        row = self.amplitudes.currentRow()
        row = row if 0 <= row < len(states) else 0  # the line of the sum has no motion of its own
        state = states[row] if states else None
        if state is None or state.infinite:
            self.motion = None
        else:
            labels = {one.id: one.label for one in machine.drivers}
            at = f"{rpm_figure(speed)} rpm" if speed is not None else f"{state.frequency_hz:.4g} Hz"
            name = labels.get(state.excitation, state.excitation)
            if self.motion is None or self.motion.motion is not state.motion:
                self.motion = SteadyMotion(state.motion, f"response to {name} at {at}")
        self.motion_changed.emit()

    def sentence(self) -> str:
        """Say what holds against the limits, and how to read the chart."""
        result = self.inquiry.result
        if result is None or not result.machines:
            return ""
        over = [one for machine in result.machines for one in machine.limits if one.exceeded]
        held = [one for machine in result.machines for one in machine.limits]
        if over:
            return f"{', '.join(one.label for one in over)}: exceeded · click a speed to see its motion"
        told = "All limits are kept · " if held else ""
        return f"{told}Move over the chart to read it · click a speed to see its motion on the sheet"


def _nothing_sized(model: Model) -> bool:
    """Return whether no excitation has a size at a point."""
    every = (one for machine in model.machines for one in machine.excitations)
    return not any(one.magnitude is not None and one.at is not None for one in every)


def _left_out(machine: Any, result: Any) -> list[str]:
    """Return what is not in the curves, each with its reason."""
    known = dict.fromkeys((*machine.left_out, *result.left_out))
    return [f"Not in it: {one.id}: {one.reason}" for one in known]


def _no_curve(machine: Any) -> str:
    if machine.running_rpm is None:
        return f"{machine.label} has no speed: its fixed frequencies give one amplitude each, listed below."
    return "Nothing is known of this place yet."
