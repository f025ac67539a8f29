"""The menu bar as data: what stands where, by which key, and which part of the window does it."""

from collections.abc import Callable
from dataclasses import dataclass

from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QMainWindow, QMenu

Key = QKeySequence.StandardKey | str | None


@dataclass(frozen=True, slots=True)
class Item:
    """One line of a menu; ``do`` names a method of the window, ``checked`` makes it a switch."""

    text: str
    do: str
    key: Key = None
    checkable: bool = False


SEPARATOR = Item("", "")
_KEYS = QKeySequence.StandardKey

MENUS: dict[str, tuple[Item, ...]] = {
    "&File": (
        Item("&Open…", "on_open", _KEYS.Open),
        Item("Open &example", "examples"),
        Item("Open &recent", "recent"),
        SEPARATOR,
        Item("&Save", "on_save", _KEYS.Save),
        Item("Save &as…", "on_save_as", "Ctrl+Shift+S"),
        SEPARATOR,
        Item("&Quit", "close", "Ctrl+Q"),
    ),
    "&Edit": (
        Item("&Undo", "undo", _KEYS.Undo),
        Item("&Redo", "redo", _KEYS.Redo),
        SEPARATOR,
        Item("&Copy values", "on_copy"),
        Item("&Paste values", "on_paste"),
        SEPARATOR,
        Item("&Settings…", "on_settings", "Ctrl+,"),
    ),
    "&View": (
        Item("&Fit the sheet", "on_fit", "Ctrl+0"),
        Item("Zoom &in", "on_zoom_in", _KEYS.ZoomIn),
        Item("Zoom &out", "on_zoom_out", _KEYS.ZoomOut),
        SEPARATOR,
        Item("Go to the &sheet", "on_go_to_sheet", "Alt+1"),
        Item("Go to the &modes", "on_go_to_modes", "Alt+2"),
        Item("Go to the &values", "on_go_to_values", "Alt+3"),
        Item("Go to the &results", "on_go_to_results", "Alt+4"),
        Item("Go to the complex &plane", "on_go_to_plane", "Alt+5"),
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


def keyboard_text() -> str:
    """Return the list of keys in markdown, read from the menus so that it cannot lie."""
    lines = ["# Keyboard", "", "| what | key |", "| --- | --- |"]
    for items in MENUS.values():
        for item in items:
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
    ("Zoom on the sheet", "wheel, + and -"),
    ("Move the sheet", "arrow keys, middle button, or Space held and left button"),
    ("Next place in the window", "Tab, Shift+Tab"),
)
