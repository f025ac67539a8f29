"""What a rule about one part must know of the rest of the model."""

import math
from collections.abc import Iterator
from dataclasses import dataclass

from modalview.model.parts import FREEDOMS, Body, End, Model, Motion, Point, Support

# Longer ids and keys are cut in messages.
LONGEST_NAME = 60

# A rule's finding: the field it concerns, seen from its part, and what is wrong.
Finding = tuple[str, str]
Findings = Iterator[Finding]

# Ends nearer than this share of their coordinates have no direction that could be trusted.
COINCIDENT = 1e-9


def cut(name: str, longest: int = LONGEST_NAME) -> str:
    r"""Return a name fit for a message: short, and on one line.

    >>> print(cut("pump\nset"))
    pump\u000aset
    """
    short = name if len(name) <= longest else f"{name[:longest]}..."
    return "".join(sign if sign.isprintable() else f"\\u{ord(sign):04x}" for sign in short)


def place_of(group: str, number: int, name: str) -> str:
    """Return the place of a part in a list, counted from 0 as in the file.

    >>> place_of("bodies", 2, "pump")
    'bodies[2] "pump"'
    """
    return f'{group}[{number}] "{cut(name)}"'


@dataclass(frozen=True, slots=True)
class Context:
    """Motion, bodies and supports of a model, by id."""

    motion: Motion
    bodies: dict[str, Body]
    supports: dict[str, Support]

    @classmethod
    def of(cls, model: Model) -> "Context":
        """Collect what the rules ask for."""
        return cls(
            model.motion,
            {body.id: body for body in model.bodies},
            {support.id: support for support in model.supports},
        )

    @property
    def dimensions(self) -> int:
        """How many numbers a point has: three in space, two elsewhere."""
        return 3 if self.motion is Motion.SPACE else 2

    @property
    def freedoms(self) -> tuple[str, ...]:
        """The directions a body can move in."""
        return FREEDOMS[self.motion]

    @property
    def drawn_only(self) -> bool:
        """True where positions do not matter to the numbers."""
        return self.motion in (Motion.SINGLE_AXIS, Motion.SHAFT_TRAIN)

    def place(self, end: End) -> tuple[float, ...] | None:
        """Return where an end stands in m; None when it cannot be told."""
        part = self.bodies.get(end.body or "") or self.supports.get(end.support or "")
        if part is None or part.position is None or len(part.position) != self.dimensions:
            return None
        offset = end.offset
        if offset is None:
            return tuple(one.si for one in part.position)
        if len(offset) != self.dimensions:
            return None
        return tuple(one.si + more.si for one, more in zip(part.position, offset, strict=True))

    def line(self, start: End, stop: End) -> tuple[float, ...] | None:
        """Return the vector between two ends; zero when they coincide, None when it cannot be told."""
        here, there = self.place(start), self.place(stop)
        if here is None or there is None:
            return None
        line = tuple(b - a for a, b in zip(here, there, strict=True))
        if any(math.isnan(number) for number in line):
            return None  # a position that could not be read is told where it stands
        scale = max(abs(number) for number in (*here, *there))
        return line if math.hypot(*line) > COINCIDENT * scale else (0.0,) * len(line)


def points(key: str, point: Point | None, context: Context, *, required: bool) -> Findings:
    """Yield what is wrong with a position or an offset."""
    if point is None:
        if required:
            yield (
                key,
                f"is missing; in {context.motion.value} it places the springs: give {_numbers(context)}",
            )
    elif len(point) != context.dimensions:
        yield key, f"has {len(point)} numbers; in {context.motion.value} it needs {_numbers(context)}"


def _numbers(context: Context) -> str:
    return 'three, ["x", "y", "z"]' if context.dimensions == 3 else 'two, ["x", "y"]'
