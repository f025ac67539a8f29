"""The tools by name: made when first taken in hand, for they need what comes after the first paint."""

from typing import TYPE_CHECKING

from modalview.ui.sketch.choosing import Choose
from modalview.ui.sketch.joining import Join
from modalview.ui.sketch.kinds import ToolKind
from modalview.ui.sketch.placing import PlaceBody, PlaceSupport
from modalview.ui.sketch.pushing import Push
from modalview.ui.sketch.tool import Tool

if TYPE_CHECKING:
    from modalview.ui.sketch.hand import Hand


def make_tool(hand: "Hand", kind: ToolKind) -> Tool:
    """Return the tool of a kind, in a hand."""
    match kind.family:
        case "body":
            return PlaceBody(hand, kind.name)
        case "link":
            return Join(hand, kind.name)
        case "support":
            return PlaceSupport(hand)
        case "force":
            return Push(hand)
        case _:
            return Choose(hand)
