"""The tools as data: key, name, what to do with it, and in which motions it has a meaning."""

from dataclasses import dataclass

from modalview.model.parts import LINK_KINDS, Model, Motion
from modalview.model.rules_links import KINDS as LINKS_IN

_EVERYWHERE = tuple(Motion)
_MOVING = (Motion.SINGLE_AXIS, Motion.PLANE, Motion.SPACE)


@dataclass(frozen=True, slots=True)
class ToolKind:
    """One tool.

    Parameters
    ----------
    name : str
        Of the part it draws; "choose" draws none.
    key : str
        One letter that takes it in hand.
    hint : str
        What to do with it, for the line under the sheet and the tool tip.
    motions : tuple of Motion
        Where it has a meaning; elsewhere it is absent.
    family : str
        "choose", "body", "support", "link" or "force".
    """

    name: str
    key: str
    hint: str
    motions: tuple[Motion, ...]
    family: str


def _link(name: str, key: str, hint: str) -> ToolKind:
    motions = tuple(motion for motion in Motion if LINK_KINDS[name] in LINKS_IN[motion])
    return ToolKind(name, key, hint, motions, "link")


_DRAG_LINK = "Press on a body and drag to another, or to empty ground"

TOOLS: tuple[ToolKind, ...] = (
    ToolKind(
        "choose",
        "V",
        "Click a part to choose it, drag it to move it, double-click to type its values",
        _EVERYWHERE,
        "choose",
    ),
    ToolKind("mass", "M", "Click, or drag the outline of the mass", _MOVING, "body"),
    ToolKind(
        "body",
        "B",
        "Click, or drag the outline of the rigid body; it turns too",
        (Motion.PLANE, Motion.SPACE),
        "body",
    ),
    ToolKind(
        "disc", "O", "Click, or drag the outline of the disc", (Motion.SHAFT_TRAIN, Motion.PLANE), "body"
    ),
    ToolKind("junction", "J", "Click where massless parts meet", _EVERYWHERE, "body"),
    _link("spring", "S", _DRAG_LINK),
    _link("damper", "D", _DRAG_LINK),
    _link("mount", "T", f"{_DRAG_LINK}; it holds in several directions"),
    _link("shaft", "H", "Press on a disc and drag to another; it twists"),
    _link("gear", "G", "Press on one gear and drag to the other"),
    _link("beam", "E", f"{_DRAG_LINK}; it bends"),
    _link("rigid link", "L", "Press on a body and drag to another; they move as one"),
    ToolKind("support", "U", "Click where the ground is", _MOVING, "support"),
    ToolKind(
        "force",
        "F",
        "Click on a body where a machine's order or a fixed frequency acts",
        _EVERYWHERE,
        "force",
    ),
)
BY_NAME = {tool.name: tool for tool in TOOLS}
BY_KEY = {tool.key: tool for tool in TOOLS}


def tools_in(motion: Motion) -> tuple[ToolKind, ...]:
    """Return the tools that have a meaning in a motion.

    >>> [tool.name for tool in tools_in(Motion.SHAFT_TRAIN)]
    ['choose', 'disc', 'junction', 'damper', 'shaft', 'gear', 'rigid link', 'force']
    """
    return tuple(tool for tool in TOOLS if motion in tool.motions)


def kind_of(model: Model, part: str) -> str:
    """Return of which kind a part is, for choosing all of that kind; "" when there is no such part."""
    if any(body.id == part for body in model.bodies):
        return "body"
    if any(support.id == part for support in model.supports):
        return "support"
    return next((link.kind for link in model.links if link.id == part), "")
