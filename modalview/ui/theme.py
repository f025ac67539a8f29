"""Colours, spacing and type of the window, as tokens filled into one style sheet."""

from dataclasses import asdict, dataclass, fields
from string import Template

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPalette
from PySide6.QtWidgets import QApplication

from modalview.places import resources

# Text sizes offered in the View menu, in per cent of the system's own.
TEXT_PERCENTS = (100, 125, 150, 175, 200)
_PX_PER_PT = 4 / 3
_SIZES = ("text", "small", "heading", "verdict", "sentence", "knob", "knob_half", "knob_out", "box", "drop")
_SIGNS = ("tick", "down")  # pictures in resources, one for each theme


@dataclass(frozen=True, slots=True)
class Theme:
    """Colour tokens; each says what it is for, not what it looks like."""

    name: str
    window: str  # behind everything
    paper: str  # sheet and scale
    card: str  # boxes on the window
    field: str  # where something can be typed
    line: str  # thin borders
    ink: str  # text and outlines
    quiet: str  # second text
    accent: str  # what can be pressed, found modes
    on_accent: str
    accent_pale: str  # hover and selection
    clear: str
    nominal: str
    in_band: str
    in_band_pale: str
    order: str  # excitations

    @property
    def dark(self) -> bool:
        """Whether text is lighter than what is behind it."""
        return self.name == "dark"


LIGHT = Theme(
    name="light",
    window="#f1eee5",
    paper="#fcfbf6",
    card="#ffffff",
    field="#ffffff",
    line="#d9d5c8",
    ink="#1b2733",
    quiet="#55616b",
    accent="#0b5a8a",
    on_accent="#ffffff",
    accent_pale="#dceaf3",
    clear="#2b7145",
    nominal="#8a5200",
    in_band="#9e1c20",
    in_band_pale="#f7e3e2",
    order="#a85200",
)

DARK = Theme(
    name="dark",
    window="#20282f",
    paper="#171d23",
    card="#283139",
    field="#171d23",
    line="#414c56",
    ink="#e8ebed",
    quiet="#b0bac2",
    accent="#6fbdec",
    on_accent="#0d1a24",
    accent_pale="#2b4457",
    clear="#7fcf9b",
    nominal="#f0c266",
    in_band="#ff8f8a",
    in_band_pale="#4a2b2d",
    order="#f2a65a",
)


def chosen_theme(choice: str, application: QApplication) -> Theme:
    """Return the theme for a setting: "light", "dark" or "system"."""
    if choice == "system":
        dark = application.styleHints().colorScheme() == Qt.ColorScheme.Dark
        return DARK if dark else LIGHT
    return DARK if choice == "dark" else LIGHT


def style_sheet(theme: Theme, point_size: float) -> str:
    """Return the style sheet with the tokens of ``theme`` filled in; sizes follow ``point_size`` (pt)."""
    template = Template((resources() / "style.qss").read_text(encoding="utf-8"))
    sizes = {
        "text": f"{point_size:.1f}pt",
        "small": f"{0.9 * point_size:.1f}pt",
        "heading": f"{1.05 * point_size:.1f}pt",
        "verdict": f"{1.3 * point_size:.1f}pt",
        "sentence": f"{1.1 * point_size:.1f}pt",
    }
    knob, box = (2 * round(share * point_size * _PX_PER_PT / 2) for share in (1.0, 0.95))
    sizes |= {"knob": f"{knob}px", "knob_half": f"{knob // 2}px", "knob_out": f"{1 - knob // 2}px"}
    sizes |= {"box": f"{box}px", "drop": f"{2 * box}px"}
    signs = {name: (resources() / f"{name}-{theme.name}.svg").as_posix() for name in _SIGNS}
    return template.substitute(asdict(theme), **signs, **sizes)


def palette(theme: Theme) -> QPalette:
    """Return the palette for what the style sheet does not reach: dialogs, tool tips, selections."""
    roles = QPalette.ColorRole
    colours = {
        roles.Window: theme.window,
        roles.Base: theme.field,
        roles.AlternateBase: theme.paper,
        roles.Button: theme.card,
        roles.ToolTipBase: theme.card,
        roles.WindowText: theme.ink,
        roles.Text: theme.ink,
        roles.ButtonText: theme.ink,
        roles.ToolTipText: theme.ink,
        roles.PlaceholderText: theme.quiet,
        roles.Highlight: theme.accent,
        roles.HighlightedText: theme.on_accent,
        roles.Link: theme.accent,
    }
    made = QPalette()
    for role, colour in colours.items():
        made.setColor(role, QColor(colour))
    for role in (roles.WindowText, roles.Text, roles.ButtonText):
        made.setColor(QPalette.ColorGroup.Disabled, role, QColor(theme.quiet))
    return made


def token_names() -> tuple[str, ...]:
    """Return the names a style sheet may use."""
    return (*(one.name for one in fields(Theme)), *_SIZES, *_SIGNS)


def apply_theme(application: QApplication, choice: str, text_percent: int) -> Theme:
    """Dress the whole program and return the theme used."""
    theme = chosen_theme(choice, application)
    own = application.property("systemPointSize")
    if own is None:
        own = application.font().pointSizeF()
        application.setProperty("systemPointSize", own)
    size = float(own) * text_percent / 100
    font = application.font()
    font.setPointSizeF(size)
    application.setFont(font)
    application.setPalette(palette(theme))
    application.setStyleSheet(style_sheet(theme, size))
    return theme
