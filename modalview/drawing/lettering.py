"""Texts of a sheet, laid out once and kept clear of parts, arrows and each other."""

from collections import defaultdict
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from modalview.drawing.captions import body_lines, link_lines
from modalview.drawing.excitations import Push, pushes
from modalview.drawing.furniture import MARGIN, axes, title_size
from modalview.drawing.geometry import TWIST, SheetGeometry
from modalview.drawing.labels import (
    Board,
    Line,
    Owner,
    Rectangle,
    Spot,
    along,
    extent,
    ring_about,
    round_about,
)
from modalview.drawing.layout import GROUND
from modalview.drawing.primitives import Floats, Role, Size, Text
from modalview.model.parts import Motion

Indices = npt.NDArray[np.int_]

# Beyond this many links their texts would only cover each other.
MOST_LABELS = 120
MOST_ALIKE = 2  # more links of one text than this are written once
LINK_HALF = 9.0  # half the width that a symbol takes, pixels
SWAY = 14.0  # pixels beside a body that its motion may cover
SAMPLES = 8  # most rectangles along a link
SLANT = 14.0  # pixels of slant for each
CROWD = 24  # with more bodies than this their texts stay on them, or shrink to a name beside
USUAL = 0.6  # times the reach: how far parts move at the amplitude the window starts with
LARGE_TEXT = 1.25  # times the size: texts larger than this fall away rather than stand far off
LEADER_MARKS = 24  # places along a leader at which it is looked at
ALIKE_TRIES = 6  # of links that share their text, so many are tried with a leader
APART = 40.0  # pixels: a text further from its link has a leader
NEAR_RING = 18.0  # the same from a link seen end-on, a mere ring
SHORT = 110.0  # pixels: shorter links may be written at the side of the body they carry


@dataclass(slots=True)
class _Letters:
    labels: list[Text]
    body_labels: list[tuple[int, Text]]
    leaders: list[tuple[float, float, float, float]]
    unlabelled: list[str]
    along_links: tuple[Floats, Indices]  # rectangles along the links, and the link of each
    board: Board  # what is taken outside of bodies


def lettered(geometry: SheetGeometry) -> SheetGeometry:
    """Return the geometry with its excitation arrows and labels placed."""
    board, inner = (Board(geometry.width, geometry.height, geometry.text_scale) for _ in range(2))
    acting = pushes(geometry)
    board.take(np.vstack([_taken(geometry), *(push.box for push in acting)]))
    inner.take(np.vstack([_taken_inside(geometry), *(push.box for push in acting)]))
    letters = _Letters([], [], [], [], _link_boxes(geometry), board)
    _name_bodies(geometry, board, inner, letters)
    _name_pushes(geometry, acting, (board, inner), letters)
    up = np.array([0.0, -1.0, 0.0, 1.0]) * USUAL * geometry.reach
    if geometry.model.motion is Motion.PLANE:
        board.take(geometry.boxes + np.array([-SWAY, 0.0, SWAY, 0.0]))
    elif geometry.model.motion is Motion.SINGLE_AXIS:
        board.take(np.vstack([np.zeros((0, 4)), *(push.box + up for push in acting)]))
        if geometry.text_scale > LARGE_TEXT:
            board.take(geometry.boxes + up)
    _name_links(geometry, letters)
    return replace(
        geometry,
        labels=tuple(letters.labels),
        body_labels=tuple(letters.body_labels),
        body_arrows=tuple((push.body, push.segments) for push in acting),
        leaders=np.array(letters.leaders).reshape(-1, 4),
        unlabelled=tuple(letters.unlabelled),
    )


def arrows_in_the_way(geometry: SheetGeometry) -> bool:
    """Tell whether an excitation's arrow crosses the title block, or leaves a sheet that holds its body."""
    left, _, _, below = _corner(geometry)
    for body, segments in geometry.body_arrows:
        x1, y1, x2, y2 = geometry.boxes[body].tolist()
        if min(x1, y1) < 0 or x2 > geometry.width or y2 > geometry.height:
            continue  # zoomed in: somebody looks at something else
        x, y = segments.reshape(-1, 2).T
        y = y - _sway(geometry)[1]  # it moves with its body
        if (y < 0).any() or ((x > left) & (y < below)).any():
            return True
    return False


def _corner(geometry: SheetGeometry) -> list[float]:
    """Return x1, y1, x2, y2 of the title block with some room about it."""
    sheet = (geometry.width, geometry.height)
    width, height = title_size(geometry.model.title, sheet, geometry.text_scale)
    return [geometry.width - MARGIN - width - 4, 0.0, geometry.width, MARGIN + height + 4]


def _taken(geometry: SheetGeometry) -> Floats:
    """Return the rectangles that texts outside of bodies keep clear of."""
    corner = _corner(geometry)
    arrows = axes(geometry.model.motion, geometry.text_scale, corner[0], geometry.view.viewpoint)[1]
    taken = [np.array([corner]), arrows, geometry.boxes]
    taken += [_link_boxes(geometry)[0], _foot_boxes(geometry)]
    train = geometry.train
    if train is None:
        taken += [_arrow_room(geometry)]
    else:
        room = train.dial_radius + 6
        taken += [
            np.hstack([train.dials - room, train.dials + room]),
            train.axes + np.array([0.0, -TWIST, 0.0, TWIST]),
        ]
    return np.vstack(taken)


def _taken_inside(geometry: SheetGeometry) -> Floats:
    taken = [np.zeros((0, 4))]
    marks = geometry.points.rest[geometry.centres]
    if geometry.model.motion in (Motion.PLANE, Motion.SPACE):
        taken.append(np.hstack([marks - 14.0, marks + 14.0]))
    boxes, links = _link_boxes(geometry)
    taken.append(boxes[geometry.links_on_top[links]])  # the others lie behind the bodies
    return np.vstack(taken)


def _arrow_room(geometry: SheetGeometry) -> Floats:
    """Return the room beside each body for the arrows of its motion."""
    x1, y1, _, y2 = geometry.boxes.T
    middle = (y1 + y2) / 2
    level = 26.0 if geometry.model.motion is Motion.SINGLE_AXIS else 48.0
    return np.stack([x1 - level, middle - 22, x1, middle + 22], axis=1)


def _link_boxes(geometry: SheetGeometry) -> tuple[Floats, Indices]:
    """Return rectangles along every link, more of them the more slanted it is, and the link of each."""
    ends = geometry.link_ends
    steps = ends[:, 1] - ends[:, 0]
    slant = np.abs(steps).min(axis=1, initial=np.inf) if len(ends) else np.zeros(0)
    counts = np.clip(np.ceil(slant / SLANT), 1, SAMPLES).astype(int)
    links = np.repeat(np.arange(len(ends)), counts)
    ranks = np.arange(len(links)) - np.repeat(np.cumsum(counts) - counts, counts)
    shares = np.stack([ranks, ranks + 1])[..., None] / counts[links][None, :, None]
    marks = ends[links, 0] + shares * steps[links]
    half = LINK_HALF * geometry.grow
    return np.hstack([marks.min(axis=0) - half, marks.max(axis=0) + half]), links


def _foot_boxes(geometry: SheetGeometry) -> Floats:
    rows, sides = np.nonzero(geometry.link_bodies == GROUND)
    feet = geometry.link_ends[rows, sides]
    step = np.abs(feet - geometry.link_ends[rows, 1 - sides])
    level = step[:, :1] > step[:, 1:]
    half = np.where(level, [[12.0, 25.0]], [[25.0, 12.0]]) * geometry.grow
    return np.hstack([feet - half, feet + half])


def _name_bodies(geometry: SheetGeometry, board: Board, inner: Board, letters: _Letters) -> None:
    many = len(geometry.model.bodies) > MOST_LABELS  # names alone then, and only where they fit inside
    for number, body in enumerate(geometry.model.bodies):
        name, *values = body_lines(geometry.model, body)
        title = (Line(name, bold=True),)
        whole = title + tuple(Line(text, Role.MUTED) for text in (() if many else values))
        if many and not _fits_in(geometry, board, number, title):
            letters.unlabelled.append(body.id)
            continue
        if geometry.text_scale > LARGE_TEXT and not _fits_in(geometry, board, number, whole):
            whole = title
        placed = _by_body(geometry, (board, inner), number, whole)
        if not placed and len(whole) > 1:  # where there is no room the values shrink, then fall away
            small = (*title, *(replace(line, size=Size.SMALL) for line in whole[1:]))
            placed = _by_body(geometry, (board, inner), number, small)
            placed = placed or _by_body(geometry, (board, inner), number, title)
        if not placed and not many and len(geometry.model.bodies) <= CROWD:
            middle = geometry.boxes[number].reshape(2, 2).mean(axis=0)
            owner = _owner(geometry.boxes, number)
            placed = board.place(title, ring_about(*middle.tolist()), sway=_sway(geometry), owner=owner)
            near = round_about(_rectangle(geometry.boxes[number]), 6.0)
            placed = placed or board.place((replace(title[0], size=Size.SMALL),), near, owner=owner)
        letters.body_labels += [(number, text) for text in placed]
        if not placed:
            letters.unlabelled.append(body.id)


def _fits_in(geometry: SheetGeometry, board: Board, number: int, lines: tuple[Line, ...]) -> bool:
    x1, y1, x2, y2 = geometry.fronts[number].tolist()
    wide, high = board.size(lines)
    return bool(wide <= x2 - x1 - 6 and high <= y2 - y1 - 2)


def _by_body(
    geometry: SheetGeometry, boards: tuple[Board, Board], number: int, lines: tuple[Line, ...]
) -> list[Text]:
    """Write lines on a body, else by its disc, else beside it."""
    board, inner = boards
    x1, y1, x2, y2 = geometry.fronts[number].tolist()
    within = (x1 + 3, y1 + 1, x2 - x1 - 6, y2 - y1 - 2)
    if _fits_in(geometry, board, number, lines):
        spots = _uncovered(geometry, number, _inside(within, board.size(lines)), board.size(lines))
        placed = inner.place(lines, spots, within=within)
        if placed:
            return placed
    if geometry.train is not None:
        placed = board.place(lines, _by_disc(geometry, number))
        if placed:
            return placed
    count = len(geometry.model.bodies)
    if count > MOST_LABELS or (count > CROWD and len(lines) > 1):
        return []
    about = round_about(_rectangle(geometry.boxes[number]), 12.0)
    return board.place(lines, about, sway=_sway(geometry), owner=_owner(geometry.boxes, number))


def _uncovered(
    geometry: SheetGeometry, number: int, spots: list[Spot], size: tuple[float, float]
) -> list[Spot]:
    """Keep the spots on a body that no other one stands before, where a space model is seen straight."""
    if not geometry.view.straight:
        return spots
    nearness = geometry.places.centres @ geometry.view.towards
    before = geometry.boxes[(nearness >= nearness[number]) & (np.arange(len(nearness)) != number)]
    x = np.array([spot.x + (spot.right - 1) / 2 * size[0] for spot in spots])[:, None]
    y = np.array([spot.y + (spot.down - 1) / 2 * size[1] for spot in spots])[:, None]
    x1, y1, x2, y2 = before.T
    covered = ((x < x2) & (x + size[0] > x1) & (y < y2) & (y + size[1] > y1)).any(axis=1)
    return [spot for spot, hidden in zip(spots, covered.tolist(), strict=True) if not hidden]


def _owner(boxes: Floats, number: int) -> Owner:
    """Return a part among others of its kind (n, 4)."""
    return Owner(boxes[number : number + 1], np.delete(boxes, number, axis=0))


def _sway(geometry: SheetGeometry) -> tuple[float, float]:
    """Return how far a body's texts move across and up at the usual amplitude."""
    if geometry.train is not None:
        return 0.0, 0.0
    up = USUAL * geometry.reach
    return (0.0 if geometry.model.motion is Motion.SINGLE_AXIS else up), up


def _rectangle(box: Floats) -> Rectangle:
    x1, y1, x2, y2 = box.tolist()
    return x1, y1, x2 - x1, y2 - y1


def _inside(box: Rectangle, size: tuple[float, float]) -> list[Spot]:
    x, y, width, height = box
    spots = []
    for share in (0.5, 0.3, 0.7, 0.15, 0.85, 0.0, 1.0):
        down = y + size[1] / 2 + share * max(height - size[1], 0.0)
        spots += [Spot(x + width / 2, down, 0, 0), Spot(x + 6, down, 1, 0), Spot(x + width - 6, down, -1, 0)]
    return spots


def _by_disc(geometry: SheetGeometry, number: int) -> list[Spot]:
    """Return spots below and above a disc, past its end view."""
    x1, y1, x2, y2 = geometry.boxes[number].tolist()
    middle = (x1 + x2) / 2
    room = 2 * geometry.train.dial_radius + 20 if geometry.train is not None else 0.0
    below = [Spot(middle, y2 + step, 0, 1) for step in (6.0, 26.0, room)]
    return [*below, Spot(middle, y1 - room, 0, -1), Spot(x2 + 6, y1 - 4, 1, -1)]


def _name_pushes(
    geometry: SheetGeometry, acting: tuple[Push, ...], boards: tuple[Board, Board], letters: _Letters
) -> None:
    for number, push in enumerate(acting):
        owner = _owner_of_push(geometry, acting, number)
        lines = tuple(Line(text, Role.WARN) for text in push.texts)
        small = tuple(replace(line, size=Size.SMALL) for line in lines)
        names = [text.partition(",")[0] for text in push.texts]
        heads = tuple(Line(name, Role.WARN, Size.SMALL) for name in names)
        placed: list[Text] = []
        still, sway = (0.0, 0.0), _sway(geometry)
        # The text moves with its arrow: by it, the two cannot meet however little room is kept.
        by_arrow = replace(push, spots=push.spots[: push.near])
        for some, room in ((lines, sway), (lines, still)):
            placed = placed or _by_push(geometry, by_arrow, boards, some, _Room(room, False, owner))
        for some, room, far in (
            (lines, sway, False),
            (small, sway, False),
            (lines, still, False),
            (small, sway, True),
            (small, still, True),
            (heads, still, True),
            ((Line(", ".join(names), Role.WARN, Size.SMALL),), still, True),
        ):
            placed = placed or _by_push(geometry, push, boards, some, _Room(room, far, owner))
        letters.body_labels += [(push.body, text) for text in placed]
        if not placed:
            letters.unlabelled.append(push.texts[0])


def _owner_of_push(geometry: SheetGeometry, acting: tuple[Push, ...], number: int) -> Owner:
    """Return an arrow with its body among other arrows and bodies, and among those on the same body."""
    push, nothing = acting[number], np.zeros((0, 4))
    rest = [other for other in acting if other is not push]
    same = np.vstack([nothing, *(other.box for other in rest if other.body == push.body)])
    apart = [other.box for other in rest if other.body != push.body]
    others = np.vstack([*apart, np.delete(geometry.boxes, push.body, axis=0)])
    return Owner(np.vstack([push.box, geometry.boxes[push.body]]), others, Owner(push.box, same))


@dataclass(frozen=True, slots=True)
class _Room:
    """How much a text keeps for its motion, and whether it may stand far from its arrow."""

    sway: tuple[float, float]
    far: bool
    owner: Owner


def _by_push(
    geometry: SheetGeometry,
    push: Push,
    boards: tuple[Board, Board],
    lines: tuple[Line, ...],
    room: "_Room",
) -> list[Text]:
    """Write lines by an arrow: on its body where it acts there, else by it, about it, on the body."""
    board, inner = boards
    x1, y1, x2, y2 = push.box[0].tolist()
    within = _rectangle(geometry.fronts[push.body])
    placed: list[Text] = []
    if push.on_body:
        about = round_about((x1, y1, x2 - x1, y2 - y1), 4.0)
        about = _uncovered(geometry, push.body, about, board.size(lines))
        placed = inner.place(lines, about, within=within)
    spots = [*push.spots, *ring_about(x1, y1)] if room.far else list(push.spots)
    placed = placed or board.place(lines, spots, sway=room.sway, owner=room.owner)
    if placed or not room.far:
        return placed
    return inner.place(lines, _inside(within, board.size(lines)), within=within)


def _name_links(geometry: SheetGeometry, letters: _Letters) -> None:
    links = geometry.model.links
    if len(links) > MOST_LABELS:
        letters.unlabelled += [link.id for link in links]
        return
    texts = [link_lines(geometry.model, link) for link in links]
    alike: dict[tuple[str, ...], list[int]] = defaultdict(list)
    for number, text in enumerate(texts):
        alike[text[1:]].append(number)
    for number, (name, *values) in enumerate(texts):
        group = alike[tuple(values)]
        if len(group) > MOST_ALIKE:
            if number == group[0]:
                _name_alike(geometry, letters, group, tuple(values))
            continue
        _name_link(geometry, letters, number, _link_label(name, tuple(values)))


def _name_link(geometry: SheetGeometry, letters: _Letters, number: int, lines: tuple[Line, ...]) -> None:
    """Write name and values by a link; the name alone where there is no room, and for large texts far off."""
    middle = geometry.link_ends[number].mean(axis=0)
    beside = _beside(geometry, number)
    boxes, links = letters.along_links
    owner = Owner(boxes[links == number], boxes[links != number])
    clear, still = _Room((0.0, _sway(geometry)[1]), False, owner), _Room((0.0, 0.0), False, owner)
    led = replace(still, owner=Owner(owner.own, boxes[:0]))  # a leader alone tells whose the text is
    if _placed_beside(geometry, letters, number, lines, beside, clear):
        return
    far = _free_of_texts(geometry, letters, middle, ring_about(*middle.tolist()))
    whole, name = lines, lines[:1]
    tries = [(whole, beside, still), (name, beside, still), (name, far, still), (name, far, led)]
    if geometry.text_scale <= LARGE_TEXT:
        first = [(whole, far, clear), (name, beside, clear)]
        tries = [*first, tries[0], (whole, far, still), *tries[1:3], (whole, far, led), tries[3]]
    for some, spots, room in tries:
        if _placed_beside(geometry, letters, number, some, spots, room):
            return
    letters.unlabelled.append(geometry.model.links[number].id)


def _free_of_texts(
    geometry: SheetGeometry, letters: _Letters, middle: Floats, spots: list[Spot]
) -> list[Spot]:
    """Keep the spots whose leader to a link crosses no body and no text; all of them if each does."""
    if geometry.model.motion is Motion.SPACE or len(geometry.model.bodies) > CROWD:
        return spots
    texts = [*letters.labels, *(text for _, text in letters.body_labels)]
    written = np.array([extent([text], geometry.text_scale) for text in texts]).reshape(-1, 4)
    return _uncrossed(middle, spots, np.vstack([written, geometry.boxes])) or spots


def _uncrossed(middle: Floats, spots: list[Spot], taken: Floats) -> list[Spot]:
    """Keep the spots whose leader to a place crosses none of the rectangles (n, 4)."""
    ends = np.array([(spot.x, spot.y) for spot in spots])
    shares = np.linspace(0.05, 0.95, LEADER_MARKS)[:, None, None]
    marks = middle + shares * (ends - middle)
    x, y = marks[..., 0, None], marks[..., 1, None]
    crossed = (x > taken[:, 0]) & (x < taken[:, 2]) & (y > taken[:, 1]) & (y < taken[:, 3])
    free = np.flatnonzero(~np.asarray(crossed.any(axis=(0, 2))))
    return [spots[number] for number in free.tolist()]


def _placed_beside(
    geometry: SheetGeometry,
    letters: _Letters,
    number: int,
    lines: tuple[Line, ...],
    spots: list[Spot],
    room: "_Room",
) -> bool:
    """Write lines by a link, with a leader where they stand apart; tell whether there was room."""
    middle = geometry.link_ends[number].mean(axis=0)
    placed = letters.board.place(lines, spots, sway=room.sway, owner=room.owner)
    letters.labels += placed
    if placed:
        x1, y1, x2, y2 = extent(placed, geometry.text_scale)
        foot = np.clip(middle, (x1 - 3, y1), (x2 + 3, y2))
        if np.hypot(*(foot - middle)) > (NEAR_RING if geometry.links_end_on[number] else APART):
            letters.leaders.append((*foot.tolist(), *middle.tolist()))
    return bool(placed)


def _name_alike(
    geometry: SheetGeometry, letters: _Letters, group: list[int], values: tuple[str, ...]
) -> None:
    """Write the values of links that share them once, at the first with room for it."""
    kind = geometry.model.links[group[0]].kind
    lines = _link_label(f"each of {len(group)} {kind}s", values)
    boxes, links = letters.along_links
    alike = np.isin(links, group)
    room = _Room((0.0, 0.0), False, Owner(boxes[alike], boxes[~alike]))
    for number in group:
        if _placed_beside(geometry, letters, number, lines, _beside(geometry, number), room):
            return
    for number in group[:ALIKE_TRIES]:
        spots = ring_about(*geometry.link_ends[number].mean(axis=0).tolist())
        if _placed_beside(geometry, letters, number, lines, spots, room):
            return
    letters.unlabelled += [geometry.model.links[number].id for number in group]


def _link_label(name: str, values: tuple[str, ...]) -> tuple[Line, ...]:
    return Line(name, Role.MUTED, Size.SMALL), *(Line(text, Role.INK, Size.SMALL) for text in values)


def _beside(geometry: SheetGeometry, number: int) -> list[Spot]:
    start, stop = geometry.link_ends[number]
    spots = along(start, stop)
    if np.hypot(*(stop - start)) > SHORT:
        return spots
    low, high = np.minimum(start, stop), np.maximum(start, stop)
    about = round_about((low[0], low[1], high[0] - low[0], high[1] - low[1]), 14.0)
    if geometry.model.motion is not Motion.SPACE and len(geometry.model.bodies) <= CROWD:
        # Past a body a text would seem to be that body's.
        about = _uncrossed((start + stop) / 2, about, geometry.boxes)
    spots += about
    for body in geometry.link_bodies[number]:
        if body == GROUND:
            continue
        x1, _, x2, _ = geometry.boxes[body].tolist()
        for share in (0.5, 0.2, 0.8):
            y = float(start[1] + share * (stop[1] - start[1]))
            for further in (8, 34):
                spots += [Spot(x2 + further, y, 1, 0), Spot(x1 - further, y, -1, 0)]
    return spots
