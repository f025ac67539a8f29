"""What the program remembers between runs: one table from which dialog, help and validation are made."""

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
        What it does, for dialog, help and tool tips.
    label : str
        Its name in the dialog; "" for what is remembered without being asked for there.
    choices : tuple of pairs
        What is allowed and how it is called; empty allows everything of the kind.
    low, high : int or None
        Ends of a number, both allowed.
    """

    name: str
    kind: type
    default: Any
    text: str
    label: str = ""
    choices: tuple[tuple[Any, str], ...] = ()
    low: int | None = None
    high: int | None = None

    def allows(self, value: Any) -> bool:
        """Return whether a value may be kept.

        >>> AMPLITUDE.allows(60), AMPLITUDE.allows(300), THEME.allows("purple")
        (True, False, False)
        """
        if not isinstance(value, self.kind) or (self.kind is int and isinstance(value, bool)):
            return False
        if self.choices:
            return value in [one for one, _ in self.choices]
        return (self.low is None or value >= self.low) and (self.high is None or value <= self.high)

    def spoken(self, value: Any) -> str:
        """Return how a value is called.

        >>> THEME.spoken("dark"), DISCS.spoken(True), AMPLITUDE.spoken(60)
        ('dark', 'on', '60')
        """
        if self.choices:
            return dict(self.choices)[value]
        return ("on" if value else "off") if self.kind is bool else str(value)


THEME = Setting(
    "theme",
    str,
    "system",
    "Light or dark paper, or as the desktop has it.",
    "Colours",
    (("system", "as the system"), ("light", "light"), ("dark", "dark")),
)
TEXT_SIZE = Setting(
    "text_percent",
    int,
    100,
    "Size of all text, of the system's own. In a window too small for it the places share tabs.",
    "Text size",
    tuple((percent, f"{percent} %") for percent in TEXT_PERCENTS),
)
MOTION = Setting(
    "reduced_motion",
    str,
    "system",
    "With reduced motion no mode moves by itself; arrows tell how it moves. The play button still moves one.",
    "Reduced motion",
    (("system", "as the system"), ("on", "on"), ("off", "off")),
)
AUTOMATIC = Setting(
    "find_modes_automatically",
    bool,
    True,
    "Find the modes after each edit, in models of up to 300 coordinates. Verdicts need none.",
    "Find modes automatically",
)
DISCS = Setting(
    "show_discs", bool, True, "Gershgorin bounds stand on the frequency scale.", "Gershgorin bounds shown"
)
UNITS = Setting(
    "units_shown",
    str,
    "file",
    "Units in which values are shown beside what was typed. What was typed is never changed.",
    "Units shown",
    (
        ("file", "as the file says, else SI"),
        ("SI", "SI"),
        ("mm-t", "millimetre and tonne"),
        ("inch-pound", "inch and pound"),
    ),
)
PAPER = Setting(
    "paper",
    str,
    "system",
    "Size of paper for printing, across.",
    "Paper",
    (("system", "as usual in the country"), ("A4", "A4"), ("Letter", "Letter")),
)
MOVE = Setting("modes_move", bool, True, "The chosen mode moves; off shows it at its largest.")
AMPLITUDE = Setting(
    "amplitude_percent", int, 60, "How far the chosen mode moves on the sheet.", low=5, high=100
)
SPEED = Setting("speed_steps", int, 0, "How fast it moves, in tenths of a doubling.", low=-20, high=20)
VIEWPOINT = Setting(
    "viewpoint",
    str,
    "turned",
    "From where the window last looked at a model in space.",
    choices=tuple((name, name) for name in ("turned", "front", "side", "top")),
)
GEOMETRY = Setting("window_geometry", QByteArray, QByteArray(), "Where the window stood.")
FOLDER = Setting("folder", str, "", "Folder of the last file.")
RECENT = Setting("recent_files", list, [], "Files opened last, latest first.")

ALL = (
    THEME,
    TEXT_SIZE,
    MOTION,
    AUTOMATIC,
    DISCS,
    UNITS,
    PAPER,
    MOVE,
    AMPLITUDE,
    SPEED,
    VIEWPOINT,
    GEOMETRY,
    FOLDER,
    RECENT,
)
ASKED = tuple(setting for setting in ALL if setting.label)

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
        return value if setting.allows(value) else setting.default

    def set(self, setting: Setting, value: Any) -> None:
        """Keep a value; one that is not allowed is an error of the program."""
        if not setting.allows(value):
            raise ValueError(f"{setting.name} cannot be {value!r}; {setting.text}")
        self._store.setValue(setting.name, value)


def settings_text() -> str:
    """Return what every setting does, in markdown, for the help."""
    lines = ["# Settings", ""]
    for setting in ASKED:
        values = " / ".join(name for _, name in setting.choices) or "on / off"
        lines.append(f"**{setting.label}** ({values}; at first {setting.spoken(setting.default)})  ")
        lines += [setting.text, ""]
    return "\n".join(lines)


def kept_settings() -> Settings:
    """Return the settings of this user."""
    return Settings(QSettings("Keepclear", "Keepclear"))
