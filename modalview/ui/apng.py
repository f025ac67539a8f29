"""Moving pictures of the PNG family: areas of colour, each put over the picture before, as one file.

Layout of the chunks acTL, fcTL and fdAT: Portable Network Graphics (PNG) Specification, third
edition, W3C 2025.
"""

import struct
import zlib
from collections.abc import Sequence
from dataclasses import dataclass

SIGNATURE = b"\x89PNG\r\n\x1a\n"
_KIND = (8, 2, 0, 0, 0)  # bits of a channel, red-green-blue, and the only ways to pack, filter and order rows
_KEEP, _OVER_ALL = 0, 0  # what becomes of a frame's area afterwards; how it is put down


@dataclass(frozen=True, slots=True)
class Frame:
    """An area that changes.

    Parameters
    ----------
    width, height : int
        Pixels.
    colours : bytes
        Red, green and blue of each pixel, row by row, without gaps.
    x, y : int
        Where its upper left corner lies in the first frame, pixels.
    duration_ms : int
        How long the picture then stands.
    """

    width: int
    height: int
    colours: bytes
    x: int = 0
    y: int = 0
    duration_ms: int = 100


def moving_png(frames: Sequence[Frame]) -> bytes:
    """Return one file that shows the frames one after the other, without end.

    Who knows still pictures only shows the first one.

    Parameters
    ----------
    frames : sequence of Frame
        The first one is the whole picture.

    Raises
    ------
    ValueError
        When there is no frame, or one does not lie inside the first, or has not the colours of its area.
    """
    if not frames:
        raise ValueError("a moving picture needs at least one frame")
    whole = frames[0]
    head = struct.pack(">II5B", whole.width, whole.height, *_KIND)
    parts = [SIGNATURE, _chunk(b"IHDR", head), _chunk(b"acTL", struct.pack(">II", len(frames), 0))]
    sequence = 0
    for number, frame in enumerate(frames):
        _require_inside(number, frame, whole)
        area = (frame.width, frame.height, frame.x, frame.y)
        control = struct.pack(">5I2H2B", sequence, *area, frame.duration_ms, 1000, _KEEP, _OVER_ALL)
        parts.append(_chunk(b"fcTL", control))
        sequence += 1
        if number == 0:
            parts.append(_chunk(b"IDAT", _packed(frame)))
        else:
            parts.append(_chunk(b"fdAT", struct.pack(">I", sequence) + _packed(frame)))
            sequence += 1
    return b"".join((*parts, _chunk(b"IEND", b"")))


def _packed(frame: Frame) -> bytes:
    """Return the rows of a frame packed; flat areas of a window pack best without filters."""
    wide = 3 * frame.width
    rows = (frame.colours[at : at + wide] for at in range(0, len(frame.colours), wide))
    return zlib.compress(b"".join(b"\0" + row for row in rows), 9)


def _require_inside(number: int, frame: Frame, whole: Frame) -> None:
    right, below = frame.x + frame.width, frame.y + frame.height
    if min(frame.x, frame.y) < 0 or right > whole.width or below > whole.height:
        raise ValueError(f"frame {number + 1} does not lie inside the first")
    if len(frame.colours) != 3 * frame.width * frame.height:
        raise ValueError(f"frame {number + 1} has not three bytes for each of its pixels")


def _chunk(name: bytes, content: bytes) -> bytes:
    check = zlib.crc32(name + content)
    return struct.pack(">I", len(content)) + name + content + struct.pack(">I", check)
