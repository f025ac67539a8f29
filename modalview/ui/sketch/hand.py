"""The hand over the sheet: which tool it holds, what is chosen, and what mouse and keyboard do with them."""

from collections.abc import Callable
from typing import Any

from PySide6.QtCore import QObject, QRect, QSize, Qt, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent

from modalview.errors import InputError
from modalview.model.differences import checked_edit
from modalview.model.parts import Body, Link, Model, Motion, Support
from modalview.ui.document import Document
from modalview.ui.sketch.kinds import BY_KEY, BY_NAME, ToolKind
from modalview.ui.sketch.tool import Number, Pointer, Tool
from modalview.ui.unfinished import invitation

Maker = Callable[[Model], tuple[Model, str]]
_STEPS = {
    Qt.Key.Key_Left: (-1, 0),
    Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, -1),
    Qt.Key.Key_Down: (0, 1),
}
_NOT_OURS = (
    Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.AltModifier | Qt.KeyboardModifier.MetaModifier
)
_NUMBER_BEGINS = "0123456789.,-+"
# Shift with an arrow key goes so many steps of the grid.
LEAP = 10


class Hand(QObject):
    """Passes events of the sheet to the tool, and what the tool makes to the document."""

    tool_changed = Signal(str)
    chosen_changed = Signal(tuple)
    drawn = Signal(str)  # a part that was just drawn: its values are to be typed
    force_asked = Signal(str, tuple)  # body, place (m)
    form_asked = Signal(tuple)  # parts whose values are to be typed
    title_asked = Signal()  # the title block was clicked twice
    begun = Signal()  # the mouse goes to work, or another tool was taken in hand
    told = Signal(str)  # a hint, or why something was not done
    numbers_changed = Signal()
    number_begun = Signal(str)  # a first character was typed during a drag

    def __init__(self, document: Document, sheet: Any) -> None:
        super().__init__(sheet)
        self.document = document
        self._sheet = sheet
        self.editing: Any = None  # ui.sketch.editing.Editing, which knows the clipboard
        # In which units numbers beside a drag are shown; the window knows the settings.
        self.units: Callable[[], str] = lambda: self.model.units or "SI"
        self.hint = ""  # at the foot of the sheet
        self.chosen: tuple[str, ...] = ()
        self.kind: ToolKind = BY_NAME["choose"]
        self._tool: Tool | None = None
        self.locked = False  # the tool stays in hand after use
        self.typing = False  # numbers are typed over: the pointer is not followed
        self._down = False
        self._pressed = self._pointer = Pointer(0.0, 0.0)
        self.cursor: tuple[float, float] | None = None  # cross moved by the arrow keys

    # What tools ask

    @property
    def model(self) -> Model:
        """The model on the sheet."""
        return self.document.model

    @property
    def geometry(self) -> Any:
        """The sheet as laid out (drawing.geometry.SheetGeometry)."""
        return self._sheet.geometry

    @property
    def ready(self) -> bool:
        """Whether there is a sheet to draw on."""
        return self.document.model is not None and self.geometry is not None

    def snap(
        self,
        at: Pointer,
        *,
        start: tuple[float, float] | None = None,
        wish: Any = None,
        through: Any = None,
        geometry: Any = None,
    ) -> Any:
        """Return where a pointer is drawn to (drawing.snap.Snapped)."""
        from modalview.drawing import snap  # noqa: PLC0415  (numpy comes after the first paint)

        own = wish or snap.Wish(free=at.free)
        own = snap.Wish(own.leave_out, own.free, start)
        return snap.snapped(geometry or self.geometry, at.x, at.y, own, through)

    def world(self, x: float, y: float, through: Any = None) -> Any:
        """Return the world point under a pixel, in whole millionths of a metre, as deep as another point."""
        from modalview.drawing import snap  # noqa: PLC0415  (see above)

        return snap.world_at(self.geometry.view, x, y, through).round(6)

    def grid(self, axis: int) -> float:
        """Return the step of the grid across (0) or up (1) the sheet, in metres."""
        from modalview.drawing import snap  # noqa: PLC0415  (see above)

        view = self.geometry.view
        return snap.grid_step((view.scale_x, view.scale_y)[axis])

    def gridded(self, length: float, axis: int) -> float:
        """Return a length rounded to the grid, at least one step."""
        step = self.grid(axis)
        return float(f"{max(round(length / step), 1) * step:.9g}")

    def axes_shown(self) -> tuple[int, int]:
        """Return the numbers of the two axes that can be drawn in."""
        from modalview.drawing import snap  # noqa: PLC0415  (see above)

        return snap.drawn_axes(self.geometry.view)

    def place(self, world: Any) -> tuple[float, ...]:
        """Return a world point with as many numbers as a point of this motion has."""
        count = 3 if self.model.motion is Motion.SPACE else 2
        return tuple(float(f"{number:.9g}") for number in world.tolist()[:count])

    def part_under(self, at: Pointer) -> str | None:
        """Return the id of what is under a pointer."""
        from modalview.drawing import hits, sheet  # noqa: PLC0415  (see above)

        part = sheet.part_at(self.geometry, at.x, at.y)
        return part or hits.foot_at(self.geometry, at.x, at.y)

    def parts_under(self, at: Pointer) -> tuple[str, ...]:
        """Return the ids of all that lies under a pointer, one behind the other in a space model."""
        from modalview.drawing import sheet  # noqa: PLC0415  (see above)

        first = self.part_under(at)
        if first is None or self.model.motion is not Motion.SPACE:
            return () if first is None else (first,)
        return sheet.parts_at(self.geometry, at.x, at.y) or (first,)

    def body_under(self, at: Pointer) -> str | None:
        """Return the id of the body under a pointer."""
        from modalview.drawing import hits  # noqa: PLC0415  (see above)

        number = hits.body_at(self.geometry, at.x, at.y)
        return None if number is None else self.geometry.model.bodies[number].id

    def foot_under(self, at: Pointer) -> str | None:
        """Return the id of the support under a pointer."""
        from modalview.drawing import hits  # noqa: PLC0415  (see above)

        return hits.foot_at(self.geometry, at.x, at.y)

    def box_of(self, part: str) -> tuple[float, float, float, float]:
        """Return x1, y1, x2, y2 about a part on the sheet."""
        from modalview.drawing import hits  # noqa: PLC0415  (see above)

        frame = hits.frame_of(self.geometry, part)
        return (0.0, 0.0, 0.0, 0.0) if frame is None else tuple(frame.tolist())

    def middle_of(self, part: str) -> Any:
        """Return where a body or support is in the world."""
        from modalview.drawing.layout import point  # noqa: PLC0415  (see above)

        return point(self.part(part, self.placed_model()).position)

    def end_of(self, link: str) -> Any:
        """Return where the first end of a link is in the world."""
        from modalview.drawing.layout import point  # noqa: PLC0415  (see above)

        end = self.part(link).from_
        return self.middle_of(end.body or end.support) + point(end.offset)

    def placed_model(self) -> Model:
        """Return the model with a position for every body and support, as the sheet shows them."""
        from modalview.drawing.placing import positioned  # noqa: PLC0415  (see above)

        return positioned(self.document.model)

    def part(self, part: str, model: Model | None = None) -> Body | Support | Link | Any:
        """Return a body, support or link by its id; None when there is none."""
        model = model or self.model
        return next(
            (one for group in (model.bodies, model.supports, model.links) for one in group if one.id == part),
            None,
        )

    def name_of(self, part: str | None) -> str:
        """Return a part's name, or its id."""
        found = self.part(part) if part else None
        return getattr(found, "name", None) or part or ""

    def named(self, parts: tuple[str, ...]) -> str:
        """Return one part's name, or how many there are."""
        return self.name_of(parts[0]) if len(parts) == 1 else f"{len(parts)} parts"

    @property
    def at_work(self) -> bool:
        """Whether something is being drawn or dragged."""
        return self._tool is not None and self._tool.busy

    def movable(self) -> bool:
        """Tell whether a body or a support is among what is chosen."""
        return any(isinstance(self.part(part), Body | Support) for part in self.chosen)

    def slides(self) -> bool:
        """Tell whether links alone are chosen, and may be moved along on their bodies."""
        links = [self.part(part) for part in self.chosen]
        on_places = self.model.motion is not Motion.SHAFT_TRAIN
        return on_places and all(isinstance(one, Link) and one.kind != "gear" for one in links)

    # What tools do

    def make(self, maker: Maker, text: str, *, form: bool = True) -> str | None:
        """Let a function make a part; choose it and ask for its values. Return its id, or None if refused."""
        before = self.document.model
        self.hold_view()
        try:
            after, part = maker(self.placed_model())
            edit = checked_edit(before, after, text)
        except InputError as error:
            self.say(str(error))
            return None
        self.document.push(edit)
        self.choose((part,))
        if not self.locked:
            self.take("choose")
        if form:
            self.drawn.emit(part)
        return part

    def change(self, after: Model, text: str, *, merge: object = None) -> bool:
        """Make a change of the whole model one edit; tell why not."""
        try:
            self.document.push(checked_edit(self.document.model, after, text, merge=merge))
        except InputError as error:
            self.say(str(error))
            return False
        return True

    def ask_force(self, body: str, snapped: Any) -> None:
        """Ask which excitation acts at a place."""
        self.hold_view()
        if not self.locked:
            self.take("choose")
        self.choose((body,))
        self.force_asked.emit(body, self.place(snapped.world))

    def hold_view(self) -> None:
        """Keep scale and place of the sheet from now on: a drawing must not jump under the hand."""
        self._sheet.hold_view()

    def say(self, text: str) -> None:
        """Tell a hint, at the foot of the sheet."""
        self.hint = text
        self.told.emit(text)
        self._sheet.update()

    def said(self, text: str) -> None:
        """Tell why something was not done, if it was not."""
        if text:
            self.say(text)

    # What is chosen

    def choose(self, parts: tuple[str, ...]) -> None:
        """Choose parts."""
        if parts != self.chosen:
            self.chosen = parts
            self.chosen_changed.emit(parts)
            self._sheet.update()

    def toggle(self, part: str) -> None:
        """Add a part to what is chosen, or take it out."""
        rest = tuple(one for one in self.chosen if one != part)
        self.choose(rest if part in self.chosen else (*self.chosen, part))

    def forget_gone(self) -> None:
        """Let go of parts that are no longer there."""
        there = {
            one.id for group in (self.model.bodies, self.model.supports, self.model.links) for one in group
        }
        self.choose(tuple(part for part in self.chosen if part in there))

    # The tool in hand

    def take(self, name: str, *, locked: bool = False) -> None:
        """Take a tool in hand."""
        kind = BY_NAME[name]
        if self.document.model is not None and self.model.motion not in kind.motions:
            self.say(f"A {name} has no meaning in a model of {self.model.motion.value}.")
            return
        self.leave_off()
        self.kind, self._tool, self.locked = kind, None, locked
        if name == "choose":
            self.cursor = None
        self._sheet.setCursor(Qt.CursorShape.ArrowCursor if name == "choose" else Qt.CursorShape.CrossCursor)
        self.tool_changed.emit(name)
        self.say("" if name == "choose" else f"{kind.name.capitalize()}: {kind.hint}. Esc puts it away.")

    @property
    def tool(self) -> Tool:
        """The tool in hand, made when first needed."""
        if self._tool is None:
            from modalview.ui.sketch.cabinet import make_tool  # noqa: PLC0415  (numpy comes later)

            self._tool = make_tool(self, self.kind)
        return self._tool

    def leave_off(self) -> bool:
        """Give up what the tool has begun; tell whether anything was."""
        self._down = self.typing = False
        was = self._tool.cancel() if self._tool is not None else False
        self.numbers_changed.emit()
        self._sheet.update()
        return was

    def numbers(self) -> tuple[Number, ...]:
        """Return the numbers beside the drag."""
        return self._tool.numbers() if self._tool is not None else ()

    def put_number(self, label: str, si: float) -> None:
        """Take a typed number in the place of the pointer's."""
        try:
            self.tool.put(label, si)
        except InputError as error:
            self.say(str(error))
        self._sheet.update()

    def settle(self) -> None:
        """Make what was begun, with the numbers that were typed."""
        self._down = self.typing = False
        self.tool.release(self._pointer)
        self.numbers_changed.emit()
        self._sheet.update()

    def dragged_over(self) -> QRect:
        """Return the rectangle between press and pointer, and what is chosen, on the sheet."""
        one, other = self._pressed, self._pointer
        over = QRect(round(min(one.x, other.x)), round(min(one.y, other.y)), 1, 1)
        over.setSize(QSize(round(abs(one.x - other.x)) + 1, round(abs(one.y - other.y)) + 1))
        return (
            over.united(self.rectangle(self.chosen)) if self.kind.name == "choose" and self.chosen else over
        )

    # The mouse

    def _pointed(self, event: QMouseEvent) -> Pointer:
        held = event.modifiers()
        place = event.position()
        return Pointer(
            place.x(),
            place.y(),
            bool(held & Qt.KeyboardModifier.ShiftModifier),
            bool(held & Qt.KeyboardModifier.ControlModifier),
            bool(held & Qt.KeyboardModifier.AltModifier),
        )

    def press(self, event: QMouseEvent) -> None:
        """Return the left button goes down."""
        if self.ready:
            if self.kind.name == "choose":
                self.hint = ""
            self.begun.emit()
            self._pressed = self._pointer = self._pointed(event)
            self._down, self.cursor = True, None
            self._after(lambda: self.tool.press(self._pointer))

    def move(self, event: QMouseEvent) -> None:
        """Return the pointer moves, with or without the button."""
        if not self.ready or self.typing or (self.kind.name == "choose" and not self._down):
            return
        self._pointer = self._pointed(event)
        if self._down:
            self._after(lambda: self.tool.drag(self._pointer))
        else:
            self._after(lambda: self.tool.hover(self._pointer))

    def release(self, event: QMouseEvent) -> None:
        """Return the left button comes up."""
        if self.typing:
            self._down = False
        elif self.ready and self._down:
            self._pointer, self._down = self._pointed(event), False
            self._after(lambda: self.tool.release(self._pointer))

    def double_click(self, event: QMouseEvent) -> None:
        """Ask for the values of a part that was clicked twice."""
        if self.ready and self.kind.name == "choose":
            at = self._pointed(event)
            clicked = getattr(self.tool, "clicked", None)  # before a second click went on to what is behind
            part = clicked if clicked in self.parts_under(at) else self.part_under(at)
            if part is not None:
                self.choose((part,))
                self.form_asked.emit((part,))
            elif self._on_title(at):
                self.title_asked.emit()
        elif self.ready:  # two quick clicks of a tool are two clicks
            self.press(event)

    def _on_title(self, at: Pointer) -> bool:
        """Tell whether a pointer is on the title block, at the top right of the sheet."""
        from modalview.drawing import furniture  # noqa: PLC0415  (see above)

        geometry = self.geometry
        sheet = geometry.width, geometry.height
        title = furniture.title_lines(self.model).title
        wide, high = furniture.title_size(title, sheet, geometry.text_scale)
        return at.x >= sheet[0] - furniture.MARGIN - wide and at.y <= furniture.MARGIN + high

    def _after(self, do: Callable[[], None]) -> None:
        try:
            do()
        except InputError as error:
            self.say(str(error))
        self.numbers_changed.emit()
        self._sheet.update()

    # The keyboard

    def key(self, event: QKeyEvent) -> bool:
        """Do what a key asks for; tell whether it was one of the hand's."""
        if self.document.model is None:
            return False
        if self.editing is not None and self.editing.key(event):
            return True
        if event.modifiers() & _NOT_OURS:
            return False
        leap = bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
        return self._named_key(Qt.Key(event.key()), LEAP if leap else 1) or self._letter(
            event.text(), keep=leap
        )

    def _named_key(self, key: Qt.Key, times: int) -> bool:
        if key in _STEPS:
            return self.ready and self._step(_STEPS[key], times)
        do = {
            Qt.Key.Key_Escape: self.escape,
            Qt.Key.Key_PageDown: lambda: self._hop(1),
            Qt.Key.Key_PageUp: lambda: self._hop(-1),
            Qt.Key.Key_Return: self._enter,
            Qt.Key.Key_Enter: self._enter,
            Qt.Key.Key_Delete: self.delete,
            Qt.Key.Key_Backspace: self.delete,
        }.get(key)
        return do is not None and do()

    def _letter(self, text: str, *, keep: bool) -> bool:
        if text and text in _NUMBER_BEGINS and self.numbers():
            self.typing = True
            self.number_begun.emit(text)
            return True
        tool = BY_KEY.get(text.upper())
        if tool is None or self.model.motion not in tool.motions:
            return False
        self.take(tool.name, locked=keep)
        return True

    def escape(self) -> bool:
        """Leave off what is begun, else put the tool away, else choose nothing; tell whether it did."""
        if self.leave_off():
            return True
        if self.kind.name != "choose":
            self.take("choose")
            return True
        if self.chosen:
            self.choose(())
            return True
        return False

    def _step(self, step: tuple[int, int], times: int) -> bool:
        """Nudge what is chosen; with a tool in hand, move the cross."""
        if self.kind.name != "choose":
            view = self.geometry.view
            x, y = self.cursor or self._cross_start()
            self.cursor = (
                min(max(x + step[0] * times * self.grid(0) * view.scale_x, 4.0), self.geometry.width - 4.0),
                min(max(y + step[1] * times * self.grid(1) * view.scale_y, 4.0), self.geometry.height - 4.0),
            )
            self._point_with_cross()
            return True
        if not self.movable() and not (self.chosen and self.slides()):
            return False
        self._nudge(step, times)
        return True

    def _nudge(self, step: tuple[int, int], times: int) -> None:
        from modalview.model.moving import moved, slid  # noqa: PLC0415  (used by hand only)

        across, up = self.axes_shown()
        by = [0.0, 0.0, 0.0]
        by[across] = step[0] * times * self.grid(0)
        by[up] = -step[1] * times * self.grid(1)
        count = 3 if self.model.motion is Motion.SPACE else 2
        self.hold_view()
        move = moved if self.movable() else slid
        after = move(self.placed_model(), self.chosen, tuple(by[:count]))
        self.change(after, f"Move {self.named(self.chosen)}", merge=("nudge", self.chosen))

    def _cross_start(self) -> tuple[float, float]:
        if self.chosen:
            x1, y1, x2, y2 = self.box_of(self.chosen[0])
            if x2 > x1:
                return (x1 + x2) / 2, (y1 + y2) / 2
        return self.geometry.width / 2, 0.6 * self.geometry.height

    def _point_with_cross(self) -> None:
        if self.cursor is not None:
            self._pointer = Pointer(*self.cursor)
            follow = self.tool.drag if self.tool.busy else self.tool.hover
            self._after(lambda: follow(self._pointer))

    def _hop(self, by: int) -> bool:
        """Go to the next part: choose it, or lead the cross there."""
        geometry = self.geometry
        if geometry is None or not geometry.model.bodies:
            return False
        if self.kind.name == "choose":
            parts = [one.id for one in (*self.model.bodies, *self.model.links)]
            at = (
                parts.index(self.chosen[0])
                if self.chosen and self.chosen[0] in parts
                else -1
                if by > 0
                else 0
            )
            self.choose((parts[(at + by) % len(parts)],))
            self.say(f"{self.name_of(self.chosen[0])} is chosen: Enter types its values")
            return True
        bodies = [one.id for one in geometry.model.bodies]
        here = self.body_under(Pointer(*self.cursor)) if self.cursor else None
        at = bodies.index(here) if here in bodies else -1 if by > 0 else 0
        part = bodies[(at + by) % len(bodies)]
        x1, y1, x2, y2 = self.box_of(part)
        self.cursor = (x1 + x2) / 2, (y1 + y2) / 2
        self._point_with_cross()
        self.say(f"The cross is on {self.name_of(part)}")
        return True

    def _enter(self) -> bool:
        if self.kind.name == "choose":
            if not self.chosen:
                return False
            self.form_asked.emit(self.chosen)
            return True
        if self.tool.busy and not self._down and self.cursor is None:
            self.settle()
            return True
        if self.cursor is None:
            self.cursor = self._cross_start()
        at = self._pointer = Pointer(*self.cursor)

        def click() -> None:
            self.tool.press(at)
            self.tool.release(at)

        self._after(click)
        return True

    # Menus

    def delete(self) -> bool:
        """Delete what is chosen, with what hangs on it."""
        if not self.chosen:
            return False
        from modalview.model.removing import without  # noqa: PLC0415  (used by hand only)

        text = f"Delete {self.named(self.chosen)}"
        if self.change(without(self.model, self.chosen), text):
            self.choose(())
        return True

    # The sheet

    def items(self) -> tuple[Any, ...]:
        """Return what is drawn over the sheet."""
        if not self.ready:
            return ()
        from modalview.drawing import overlay  # noqa: PLC0415  (see above)

        geometry = self.geometry
        items = overlay.chosen_items(geometry, self.chosen)
        if not self.model.bodies and self.kind.name == "choose":
            words = invitation(self.model.motion)
            items += overlay.invitation_items(words, geometry.width, geometry.height, geometry.text_scale)
        if self._tool is not None:
            items += self._tool.items()
            items += () if self.typing else self._notes()  # a field is shown in their place
        if self.cursor is not None:
            items += overlay.cursor_items(*self.cursor)
        if self.hint:
            items += overlay.hint_line(self.hint, geometry.width, geometry.height, geometry.text_scale)
        return items

    def _notes(self) -> tuple[Any, ...]:
        from modalview.drawing import overlay  # noqa: PLC0415  (see above)
        from modalview.ui.values import converted  # noqa: PLC0415

        system = self.units()
        lines = tuple(f"{one.label} {converted(one.si, one.quantity, system)}" for one in self.numbers())
        lines += self._tool.notes() if self._tool is not None else ()
        geometry = self.geometry
        return overlay.note_items(
            self._pointer.x, self._pointer.y, lines, geometry.text_scale, (geometry.width, geometry.height)
        )

    def rectangle(self, parts: tuple[str, ...]) -> QRect:
        """Return the rectangle about parts, on the sheet."""
        boxes = [self.box_of(part) for part in parts]
        x1, y1 = min(box[0] for box in boxes), min(box[1] for box in boxes)
        x2, y2 = max(box[2] for box in boxes), max(box[3] for box in boxes)
        return QRect(round(x1), round(y1), round(x2 - x1), round(y2 - y1))
