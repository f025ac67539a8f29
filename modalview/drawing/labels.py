"""Places for texts where they meet neither parts nor each other."""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from modalview.drawing.pauses import between_pieces
from modalview.drawing.primitives import Anchor, Floats, Role, Size, Text
from modalview.drawing.textsize import line_height, text_width

Rectangle = tuple[float, float, float, float]  # x, y, width, height
Truths = npt.NDArray[np.bool_]
LEVEL = 6.0  # more pixels beside a link that lies level: its end moves up and down
_BATCH = 8  # spots tried at once: most labels find room among the first


@dataclass(frozen=True, slots=True)
class Line:
    """One line of a label."""

    text: str
    role: Role = Role.INK
    size: Size = Size.NORMAL
    bold: bool = False


@dataclass(frozen=True, slots=True)
class Spot:
    """A place offered to a label: a point, and where the label lies from it.

    ``right`` is -1, 0 or 1: left of the point, centred on it, right of it; ``down`` likewise above to below.
    """

    x: float
    y: float
    right: int
    down: int


@dataclass(frozen=True, slots=True, eq=False)
class Owner:
    """What a label belongs to, and what it could be taken to belong to: it stands nearer to the first.

    Parameters
    ----------
    own : array (m, 4)
        x1, y1, x2, y2 of its own part.
    others : array (n, 4)
        Of the other parts of the same kind.
    also : Owner or None
        A second condition: of two arrows on one body the text stands nearer to its own.
    """

    own: Floats
    others: Floats
    also: "Owner | None" = None

    def owns(self, boxes: Floats) -> Truths:
        """Return which of the boxes (k, 4) stand nearer to the own part than to any other."""
        also = np.ones(len(boxes), dtype=bool) if self.also is None else self.also.owns(boxes)
        if not len(self.others):
            return also
        return np.asarray(also & (_distance(boxes, self.own) <= _distance(boxes, self.others)))


def _distance(boxes: Floats, parts: Floats) -> Floats:
    """Return how far each box (k, 4) is from the nearest of the parts (n, 4)."""
    x1, y1, x2, y2 = (boxes[:, side, None] for side in range(4))
    left, top, right, bottom = parts.T
    across = np.maximum(np.maximum(left - x2, x1 - right), 0.0)
    up = np.maximum(np.maximum(top - y2, y1 - bottom), 0.0)
    return np.asarray(np.hypot(across, up).min(axis=1))


class Board:
    """Rectangles that are taken, and the sheet that labels must stay on."""

    def __init__(self, width: float, height: float, text_scale: float) -> None:
        self.sheet = (width, height)
        self.text_scale = text_scale
        self._taken = np.zeros((64, 4))
        self._count = 0

    def take(self, rectangles: Floats) -> slice:
        """Mark rectangles (n, 4) of x1, y1, x2, y2 as taken; return which of all they are."""
        first = self._count
        need = self._count + len(rectangles)
        while need > len(self._taken):
            self._taken = np.vstack([self._taken, np.zeros_like(self._taken)])
        self._taken[first:need] = rectangles
        self._count = need
        return slice(first, need)

    def size(self, lines: tuple[Line, ...]) -> tuple[float, float]:
        """Return width and height of a label in pixels."""
        wide = max(text_width(li.text, li.size, bold=li.bold, text_scale=self.text_scale) for li in lines)
        return wide, sum(line_height(li.size, text_scale=self.text_scale) for li in lines)

    def place(
        self,
        lines: tuple[Line, ...],
        spots: list[Spot],
        *,
        within: Rectangle | None = None,
        sway: tuple[float, float] = (0.0, 0.0),
        owner: Owner | None = None,
        over: slice | None = None,
    ) -> list[Text]:
        """Put a label at the first free spot and take its room; nothing when none is free.

        Parameters
        ----------
        lines : tuple of Line
        spots : list of Spot
            In order of preference.
        within : Rectangle or None
            Where the label must lie; None is the sheet.
        sway : pair of float
            Pixels that the label moves with its body across and up, to both sides; that room is kept too.
        owner : Owner or None
            What the label belongs to: spots nearer to something else are passed over.
        over : slice or None
            Of what is taken, what the label may cover.
        """
        between_pieces()
        if not spots:
            return []
        size = self.size(lines)
        offered = np.array([(spot.x, spot.y, spot.right, spot.down) for spot in spots]).reshape(-1, 4)
        corners = offered[:, :2] + (offered[:, 2:] - 1) / 2 * size
        boxes = np.hstack([corners - sway, corners + size + sway])
        free = np.flatnonzero(self._inside(boxes, within))
        if not len(free):
            return []
        near = self._near(boxes[free], over)
        for some in np.array_split(free, range(_BATCH, len(free), _BATCH)):
            clear = some[~_meet(boxes[some], near)]
            if owner is not None and len(clear):
                clear = clear[owner.owns(boxes[clear])]
            if len(clear):
                first = int(clear[0])
                self.take(boxes[first : first + 1] + np.array([-3.0, -1.0, 3.0, 1.0]))
                left, top = corners[first].tolist()
                return self._texts(lines, spots[first], (left, top, *size))
        return []

    def _inside(self, boxes: Floats, within: Rectangle | None) -> Truths:
        x, y, width, height = within or (2.0, 2.0, self.sheet[0] - 4.0, self.sheet[1] - 4.0)
        left, top, right, bottom = boxes.T
        return np.asarray((left >= x) & (top >= y) & (right <= x + width) & (bottom <= y + height))

    def _near(self, boxes: Floats, over: slice | None) -> Floats:
        """Return the taken rectangles that any of the boxes could meet."""
        taken = self._taken[: self._count]
        if over is not None:
            taken = np.delete(taken, over, axis=0)
        low, high = boxes[:, :2].min(axis=0), boxes[:, 2:].max(axis=0)
        return taken[_meet(np.array([[*low, *high]]), taken, each=True)]

    def _texts(self, lines: tuple[Line, ...], spot: Spot, box: Rectangle) -> list[Text]:
        left, top, width, _ = box
        anchor = {1: Anchor.LEFT, 0: Anchor.MIDDLE, -1: Anchor.RIGHT}[spot.right]
        x = left + {1: 0.0, 0: 0.5, -1: 1.0}[spot.right] * width
        texts = []
        for line in lines:
            height = line_height(line.size, text_scale=self.text_scale)
            texts.append(Text(x, top + height / 2, line.text, line.role, line.size, anchor, line.bold))
            top += height
        return texts


def _meet(boxes: Floats, taken: Floats, *, each: bool = False) -> Truths:
    """Return which boxes meet any of the taken ones; with ``each``, which taken ones meet the only box."""
    x1, y1, x2, y2 = (boxes[:, side, None] for side in range(4))
    left, top, right, bottom = taken.T
    meets = np.asarray((left < x2) & (right > x1) & (top < y2) & (bottom > y1))
    return np.asarray(meets[0] if each else meets.any(axis=1))


def extent(texts: list[Text], text_scale: float) -> tuple[float, float, float, float]:
    """Return x1, y1, x2, y2 of texts on the sheet, pixels."""
    left, right, top, bottom = [], [], [], []
    for text in texts:
        width = text_width(text.text, text.size, bold=text.bold, text_scale=text_scale)
        half = line_height(text.size, text_scale=text_scale) / 2
        start = text.x - {Anchor.LEFT: 0.0, Anchor.MIDDLE: 0.5, Anchor.RIGHT: 1.0}[text.anchor] * width
        left.append(start)
        right.append(start + width)
        top.append(text.y - half)
        bottom.append(text.y + half)
    return min(left), min(top), max(right), max(bottom)


def round_about(box: Rectangle, gap: float = 6.0) -> list[Spot]:
    """Return spots beside, above and below a rectangle, then further out."""
    x, y, width, height = box
    middle = (x + width / 2, y + height / 2)
    spots = []
    for step in (gap, gap + 16, gap + 34, gap + 60):
        spots += [
            Spot(x + width + step, middle[1], 1, 0),
            Spot(x - step, middle[1], -1, 0),
            Spot(middle[0], y - step, 0, -1),
            Spot(middle[0], y + height + step, 0, 1),
            Spot(x + width + step / 2, y - step / 2, 1, -1),
            Spot(x + width + step / 2, y + height + step / 2, 1, 1),
            Spot(x - step / 2, y - step / 2, -1, -1),
            Spot(x - step / 2, y + height + step / 2, -1, 1),
        ]
    return spots


def ring_about(x: float, y: float) -> list[Spot]:
    """Return spots on widening rings about a point, for what has found no room beside it."""
    return [Spot(x + dx, y + dy, right, down) for dx, dy, right, down in _RINGS]


_RINGS = tuple(
    (radius * float(np.cos(turn)), radius * float(np.sin(turn)), round(np.cos(turn)), round(np.sin(turn)))
    for radius in (50, 70, 90, 115, 145, 180, 220)
    for turn in np.radians(np.arange(0, 360, 20))
)


def along(start: Floats, stop: Floats, gap: float = 12.0) -> list[Spot]:
    """Return spots beside a link: at its middle first, then towards its ends, then further out."""
    step = stop - start
    upright = abs(step[1]) >= abs(step[0])
    spots = []
    for further in (gap, gap + 14, gap + 40):
        for share in (0.5, 0.6, 0.4, 0.72, 0.28, 0.9, 0.1):
            x, y = start + share * step
            level = further + LEVEL
            sides = [(further, 0.0), (-further, 0.0)] if upright else [(0.0, -level), (0.0, level)]
            spots += [Spot(x + dx, y + dy, int(np.sign(dx)), int(np.sign(dy))) for dx, dy in sides]
    return spots
