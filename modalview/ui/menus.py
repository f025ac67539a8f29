"""The menu bar as data: what stands where, by which key, and which part of the window does it."""

from collections.abc import Callable
from dataclasses import dataclass
from operator import attrgetter

from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QMainWindow, QMenu

from modalview.ui.sketch.kinds import TOOLS

Key = QKeySequence.StandardKey | str | None


@dataclass(frozen=True, slots=True)
class Item:
    """One line of a menu; ``do`` names a method of the window or of a place in it, or what is filled in.

    ``checkable`` makes it a switch; ``inner`` lines make it a menu of its own.
    """

    text: str
    do: str
    key: Key = None
    checkable: bool = False
    inner: tuple["Item", ...] = ()


SEPARATOR = Item("", "")
_KEYS = QKeySequence.StandardKey

MENUS: dict[str, tuple[Item, ...]] = {
    "&File": (
        Item("&New", "on_new", _KEYS.New),
        Item("New &window", "on_new_window", "Ctrl+Shift+N"),
        Item("&Open…", "on_open", _KEYS.Open),
        Item("Open &example", "examples"),
        Item("Open &recent", "recent"),
        SEPARATOR,
        Item("&Save", "on_save", _KEYS.Save),
        Item("Save &as…", "on_save_as", "Ctrl+Shift+S"),
        Item("Reco&vered models…", "on_recovered"),
        SEPARATOR,
        Item("&Print…", "on_print", _KEYS.Print),
        Item("Print &to PDF…", "on_print_to_pdf", "Ctrl+Shift+P"),
        SEPARATOR,
        Item("&Close the window", "close", _KEYS.Close),
        Item("&Quit", "on_quit", "Ctrl+Q"),
    ),
    "&Edit": (
        Item("&Undo", "undo", _KEYS.Undo),
        Item("&Redo", "redo", _KEYS.Redo),
        SEPARATOR,
        Item("&Copy values", "on_copy"),
        Item("&Paste values", "on_paste"),
        SEPARATOR,
        Item("&Title of the model…", "sketching.ask_title"),
        Item("&Settings…", "on_settings", "Ctrl+,"),
    ),
    "&Parts": (
        Item("&Duplicate", "sketching.editing.duplicate", "Ctrl+D"),
        Item("D&elete", "sketching.hand.delete"),
        Item("C&ut", "sketching.editing.cut"),
        Item("&Copy", "sketching.editing.copy"),
        Item("&Paste", "sketching.editing.paste"),
        SEPARATOR,
        Item("Choose &all", "sketching.editing.choose_all"),
        Item("Choose all of the same &kind", "sketching.editing.choose_alike", "Ctrl+K"),
        Item("&Find a part…", "sketching.editing.find", _KEYS.Find),
        Item("&Type values", "sketching.ask_chosen", "Ctrl+T"),
        Item("Add an &order or frequency…", "sketching.add_force", "Ctrl+Shift+F"),
        SEPARATOR,
        Item("&Mirror left and right", "sketching.editing.mirror_sideways"),
        Item("Mirror a&bove and below", "sketching.editing.mirror_upright"),
        Item("Turn a quarter &left", "sketching.editing.turn_left"),
        Item("Turn a quarter &right", "sketching.editing.turn_right"),
        Item("Tur&n…", "sketching.editing.turn_by"),
        Item(
            "Al&ign",
            "align",
            inner=(
                Item("&Left edges", "sketching.editing.align_left"),
                Item("&Centres sideways", "sketching.editing.align_centre"),
                Item("&Right edges", "sketching.editing.align_right"),
                Item("&Top edges", "sketching.editing.align_top"),
                Item("&Middles upright", "sketching.editing.align_middle"),
                Item("&Bottom edges", "sketching.editing.align_bottom"),
                SEPARATOR,
                Item("&Spread sideways", "sketching.editing.spread_sideways"),
                Item("S&pread upright", "sketching.editing.spread_upright"),
            ),
        ),
    ),
    "&View": (
        Item("&Fit the sheet", "on_fit", "Ctrl+0"),
        Item("Fit what is &chosen", "sketching.editing.zoom_to_chosen", "Ctrl+Shift+0"),
        Item("Zoom &in", "on_zoom_in", _KEYS.ZoomIn),
        Item("Zoom &out", "on_zoom_out", _KEYS.ZoomOut),
        SEPARATOR,
        Item("T&urned view", "viewing.turned", "Ctrl+1"),
        Item("Fro&nt view", "viewing.front", "Ctrl+2"),
        Item("Si&de view", "viewing.side", "Ctrl+3"),
        Item("&Top view", "viewing.top", "Ctrl+4"),
        SEPARATOR,
        Item("Go to the &sheet", "on_go_to_sheet", "Alt+1"),
        Item("Go to the &modes", "on_go_to_modes", "Alt+2"),
        Item("Go to the &values", "on_go_to_values", "Alt+3"),
        Item("Go to the &results", "on_go_to_results", "Alt+4"),
        Item("Go to the complex &plane", "on_go_to_plane", "Alt+5"),
        Item("Go to the r&esponse", "on_go_to_response", "Alt+6"),
        Item("Go to the spee&ds", "on_go_to_speeds", "Alt+7"),
        Item("Go to the mo&unts", "on_go_to_mounts", "Alt+8"),
        Item("Go to the &changes", "on_go_to_changes", "Alt+9"),
        Item("Go to the &measured peaks", "on_go_to_measured", "Alt+0"),
        Item("&Why this verdict", "on_why", "Ctrl+E"),
        SEPARATOR,
        Item("&Gershgorin bounds on the scale", "on_discs", None, checkable=True),
    ),
    "&Modes": (
        Item("&Find modes", "on_find", "Ctrl+Enter"),
        Item("Find modes &automatically", "on_automatic", None, checkable=True),
        SEPARATOR,
        Item("&Next mode", "on_next_mode", "Ctrl+Right"),
        Item("&Previous mode", "on_previous_mode", "Ctrl+Left"),
        Item("Let the mode &move", "on_move", "Ctrl+M", checkable=True),
        Item("Move fas&ter", "on_faster", "Ctrl+Up"),
        Item("Move s&lower", "on_slower", "Ctrl+Down"),
        Item("Phase &on", "on_phase_on", "Ctrl+Shift+Right"),
        Item("Phase &back", "on_phase_back", "Ctrl+Shift+Left"),
    ),
    "&Help": (
        Item("&Keyboard", "on_keyboard", "F1"),
        Item("What the &settings do", "on_settings_help"),
        Item("&About Keepclear", "on_about"),
    ),
}


class Menus:
    """The built menus: actions and submenus by the name of what they do."""

    def __init__(self, window: QMainWindow) -> None:
        self.actions: dict[str, QAction] = {}
        self.submenus: dict[str, QMenu] = {}
        for title, items in MENUS.items():
            menu = window.menuBar().addMenu(title)
            for item in items:
                self._add(menu, item, window)

    def _add(self, menu: QMenu, item: Item, window: QMainWindow) -> None:
        if item is SEPARATOR:
            menu.addSeparator()
        elif item.do in ("undo", "redo"):
            self._add_undo(menu, item, window)
        elif item.inner:
            inner = menu.addMenu(item.text)
            for one in item.inner:
                self._add(inner, one, window)
        elif "." in item.do:  # a place in the window, which comes after its menus
            self._add_action(menu, item, _when_asked(window, item.do))
        elif hasattr(window, item.do):
            self._add_action(menu, item, getattr(window, item.do))
        else:
            self.submenus[item.do] = menu.addMenu(item.text)

    def _add_action(self, menu: QMenu, item: Item, do: Callable[..., object]) -> None:
        action = menu.addAction(item.text)
        action.setCheckable(item.checkable)
        if item.key is not None:
            action.setShortcut(item.key)
        if item.do == "on_find":
            action.setShortcuts(["Ctrl+Enter", "Ctrl+Return"])  # the first is the one shown
        if item.checkable:
            action.toggled.connect(do)
        else:
            action.triggered.connect(lambda _checked=False: do())
        self.actions[item.do] = action

    def _add_undo(self, menu: QMenu, item: Item, window: QMainWindow) -> None:
        stack = window.document.stack
        make = stack.createUndoAction if item.do == "undo" else stack.createRedoAction
        action = make(window, item.text.replace("&", ""))
        action.setShortcuts(item.key)
        menu.addAction(action)
        self.actions[item.do] = action


def _when_asked(window: QMainWindow, name: str) -> Callable[[], object]:
    """Return what does what a place in the window is named to do, looked up when it is asked for."""

    def do() -> object:
        return attrgetter(name)(window)()

    return do


def keyboard_text() -> str:
    """Return the list of keys in markdown, read from the menus so that it cannot lie."""
    lines = ["# Keyboard", "", "| what | key |", "| --- | --- |"]
    for items in MENUS.values():
        for item in (inner for one in items for inner in (one, *one.inner)):
            if item.key is not None:
                key = QKeySequence(item.key).toString(QKeySequence.SequenceFormat.NativeText)
                lines.append(f"| {item.text.replace('&', '').rstrip('…')} | {key} |")
    lines += [f"| {what} | {key} |" for what, key in _ELSEWHERE]
    return "\n".join(lines)


_ELSEWHERE = (
    ("Edit the value under the cursor", "Enter, F2 or just type"),
    ("Take the edit / leave it", "Enter / Esc"),
    ("Copy and paste values, as a spreadsheet does", "Ctrl+C, Ctrl+V in the values"),
    ("Fold the reasoning", "Esc in it"),
    ("Choose a mode", "arrow keys in the row of modes"),
    ("Read the response / go from peak to peak", "arrow keys / Page Up, Page Down in its chart"),
    ("See the motion at the speed that is read", "Enter in the response chart"),
    ("Try the option of the line", "Enter in the options of the changes"),
    ("Read a value / go from window to window", "arrow keys / Page Up, Page Down on its axis"),
    (
        "Type a cell / tick a value to tune",
        "Enter, F2 or just type / Space in its list, on the measured page",
    ),
    ("Go from meeting to meeting", "left and right arrow key in the chart of speeds"),
    ("Zoom on the sheet", "wheel, two fingers drawn apart, + and -"),
    ("Move the sheet", "arrow keys, middle button, two fingers, or Space held and left button"),
    *((f"Tool: {tool.name}", f"{tool.key} on the sheet") for tool in TOOLS),
    ("Keep a tool in hand", "Shift with its key"),
    ("Move the cross of a tool / what is chosen", "arrow keys; ten steps with Shift"),
    ("Lead the cross to the next part / choose the next part", "Page Down, Page Up"),
    ("Put a part, or an end of a link, where the cross is", "Enter"),
    ("Choose what lies behind, in space", "click again at the same place"),
    ("Lead a link away from the eye, in space", "two clicks at one place on a body, seen straight"),
    ("Type over the numbers beside a drag", "any digit"),
    ("Type the values of what is chosen", "Enter"),
    ("Keep straight / be drawn to nothing while drawing", "Shift / Alt held"),
    ("Leave off, put the tool away, choose nothing", "Esc"),
    ("Delete what is chosen, with what hangs on it", "Del on the sheet"),
    ("Copy, cut and paste parts, also between windows", "Ctrl+C, Ctrl+X, Ctrl+V on the sheet"),
    ("Choose all parts", "Ctrl+A on the sheet"),
    ("Next place in the window", "Tab, Shift+Tab"),
)
