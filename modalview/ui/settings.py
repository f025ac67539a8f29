"""What the program remembers between runs: declared once, with type, default and text."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import QByteArray, QSettings

from modalview.ui.theme import TEXT_PERCENTS


@dataclass(frozen=True, slots=True)
class Setting:
    """One thing remembered.

    Parameters
    ----------
    name : str
        Key in the store.
    kind : type
        bool, int, str, list or QByteArray.
    default : Any
    text : str
        What it does, for help and tool tips.
    choices : tuple
        What is allowed; empty allows everything of the kind.
    """

    name: str
    kind: type
    default: Any
    text: str
    choices: tuple[Any, ...] = ()


AUTOMATIC = Setting(
    "find_modes_automatically",
    bool,
    True,
    "Find modes after each edit, to 300 coordinates.",
)
THEME = Setting(
    "theme", str, "system", "Light or dark, or as the system has it.", ("system", "light", "dark")
)
TEXT_SIZE = Setting("text_percent", int, 100, "Size of all text, of the system's own.", TEXT_PERCENTS)
MOVE = Setting("modes_move", bool, True, "The chosen mode moves; off shows it at its largest.")
AMPLITUDE = Setting("amplitude_percent", int, 60, "How far the chosen mode moves on the sheet.")
DISCS = Setting("show_discs", bool, True, "Gershgorin bounds stand on the frequency scale.")
GEOMETRY = Setting("window_geometry", QByteArray, QByteArray(), "Where the window stood.")
FOLDER = Setting("folder", str, "", "Folder of the last file.")
RECENT = Setting("recent_files", list, [], "Files opened last, latest first.")

ALL = (AUTOMATIC, THEME, TEXT_SIZE, MOVE, AMPLITUDE, DISCS, GEOMETRY, FOLDER, RECENT)

_READ: dict[type, Callable[[Any], Any]] = {
    bool: lambda kept: kept if isinstance(kept, bool) else str(kept).lower() == "true",
    int: int,
    str: str,
    list: lambda kept: [str(one) for one in ([kept] if isinstance(kept, str) else kept or [])],
    QByteArray: QByteArray,
}


class Settings:
    """The settings in one store; a kept value that no longer fits counts as the default."""

    def __init__(self, store: QSettings) -> None:
        self._store = store

    def get(self, setting: Setting) -> Any:
        """Return the kept value, or the default."""
        kept = self._store.value(setting.name)
        if kept is None:
            return setting.default
        try:
            value = _READ[setting.kind](kept)
        except (TypeError, ValueError):
            return setting.default
        return value if not setting.choices or value in setting.choices else setting.default

    def set(self, setting: Setting, value: Any) -> None:
        """Keep a value; one that is not allowed is an error of the program."""
        if setting.choices and value not in setting.choices:
            raise ValueError(f"{setting.name} cannot be {value!r}; it is one of {setting.choices}")
        self._store.setValue(setting.name, value)


def kept_settings() -> Settings:
    """Return the settings of this user."""
    return Settings(QSettings("Keepclear", "Keepclear"))
