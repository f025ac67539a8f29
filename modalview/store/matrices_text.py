"""The text of a Matrix Market file: header, comments, size line and numbers."""

import gzip
import io
import re
import zlib
from dataclasses import dataclass
from pathlib import Path
from typing import NoReturn

import numpy as np
import numpy.typing as npt

from modalview.errors import Fault, FileAccessError, FileFaultsError
from modalview.store.reading import LARGEST_BYTES, read_bytes
from modalview.units.show import short

Array = npt.NDArray[np.float64]

BANNER = "%%MatrixMarket matrix coordinate real symmetric"
LARGEST_ENTRY = 1e30
# Whole numbers beyond this are not all floating-point numbers.
LARGEST_WHOLE = 2.0**53
LONGEST_SHOWN = 60

_GZIP = b"\x1f\x8b"
_NUMBER = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?"

# What the banner may say beside what is read, and why not.
_REFUSED = {
    "complex": "its entries are complex; stiffness and mass are real, and damping is not read from matrices",
    "pattern": "it holds places without values",
    "skew-symmetric": "a skew-symmetric matrix is neither a stiffness nor a mass",
    "hermitian": "a Hermitian matrix has complex entries; stiffness and mass are real",
    "vector": "it holds a vector, not a matrix",
}


@dataclass(frozen=True, slots=True)
class Header:
    """What a file says of its matrix before the numbers.

    Parameters
    ----------
    dense : bool
        Every entry is listed, column by column; otherwise row, column and value of each.
    whole : bool
        The entries are whole numbers.
    symmetric : bool
        One triangle is given.
    rows, columns, entries : int
        ``entries`` is the number of lines to come.
    line : int
        Number of the size line, from 1.
    start : int
        Where the numbers start in the text.
    """

    dense: bool
    whole: bool
    symmetric: bool
    rows: int
    columns: int
    entries: int
    line: int
    start: int


def read_text(path: Path) -> str:
    """Return the text of a file, unpacked where it is gzipped, at most 200 MB either way."""
    data = read_bytes(path)
    if data.startswith(_GZIP):
        data = _unpacked(data, path)
    return data.decode("latin-1")  # names in comments may be anything; numbers are plain digits


def _unpacked(data: bytes, path: Path) -> bytes:
    try:
        with gzip.open(io.BytesIO(data)) as file:
            found = file.read(LARGEST_BYTES + 1)
    except (OSError, EOFError, zlib.error) as error:
        raise FileAccessError(f"{path} cannot be unpacked: {error}; the file is damaged or cut off") from None
    if len(found) > LARGEST_BYTES:
        raise FileAccessError(
            f"{path} is larger than {LARGEST_BYTES // 1_000_000} MB when unpacked, the most a matrix may be"
        )
    return found


def read_header(text: str, name: str) -> Header:
    """Read banner, comments and size line; raise FileFaultsError naming the line."""
    if not text.strip():
        _refuse(name, 1, f'the file is empty; a matrix file starts with "{BANNER}"')
    at, line = 0, 0
    banner = ""
    while at < len(text):
        stop = text.find("\n", at)
        stop = len(text) if stop < 0 else stop
        words, at, line = text[at:stop].strip(), stop + 1, line + 1
        if line == 1:
            banner = words
            dense, whole, symmetric = _form(banner, name)
        elif words and not words.startswith("%"):
            return _sized(words, (dense, whole, symmetric), (name, line, at))
    reason = "the file ends before the line with the number of rows, columns and entries"
    raise FileFaultsError((Fault(f"{name}, line {line}", reason),))


def _form(banner: str, name: str) -> tuple[bool, bool, bool]:
    words = banner.lower().split()
    if not words or words[0] != "%%matrixmarket":
        _refuse(name, 1, f'must start with "{BANNER}" or the like; found {_shown(banner)}')
    for word in words[1:]:
        if word in _REFUSED:
            _refuse(name, 1, f"{_REFUSED[word]}; found {_shown(banner)}")
    known = (("matrix",), ("coordinate", "array"), ("real", "double", "integer"), ("general", "symmetric"))
    if len(words) != 5 or any(word not in ones for word, ones in zip(words[1:], known, strict=True)):
        ways = " ".join("|".join(ones) for ones in known)
        _refuse(name, 1, f"must read %%MatrixMarket {ways}; found {_shown(banner)}")
    return words[2] == "array", words[3] == "integer", words[4] == "symmetric"


def _sized(words: str, form: tuple[bool, bool, bool], place: tuple[str, int, int]) -> Header:
    (dense, whole, symmetric), (name, line, start) = form, place
    wanted = 2 if dense else 3
    if not re.fullmatch(rf"\d{{1,15}}(?:\s+\d{{1,15}}){{{wanted - 1}}}", words, re.ASCII):
        what = "rows and columns" if dense else "rows, columns and entries"
        _refuse(name, line, f"needs the number of {what}, whole numbers; found {_shown(words)}")
    sizes = [int(word) for word in words.split()]
    rows, columns = sizes[:2]
    full = rows * (rows + 1) // 2 if symmetric else rows * columns
    return Header(dense, whole, symmetric, rows, columns, full if dense else sizes[2], line, start)


def numbers(text: str, header: Header, name: str) -> Array:
    """Return the numbers after the header (entries, 1 or 3), all finite.

    Raises
    ------
    FileFaultsError
        Too few or too many lines, or one that is no number to its end; the line is named.
    """
    wide = 1 if header.dense else 3
    body = io.StringIO(text)
    body.seek(header.start)
    if not text[header.start :].strip():
        _refuse_number(0, header, name)
    try:
        found: Array = np.loadtxt(body, dtype=float, comments=None, ndmin=2)
    except ValueError:
        _refuse_line(text, header, name, wide)
    if found.shape[1] != wide:
        _refuse_line(text, header, name, wide)
    if len(found) != header.entries:
        _refuse_number(len(found), header, name)
    values = found[:, -1]
    wrong = ~(np.abs(values) <= LARGEST_ENTRY)
    if header.whole:
        wrong |= np.abs(values) > LARGEST_WHOLE
    if wrong.any():
        at = int(np.flatnonzero(wrong)[0])
        _refuse_value(float(values[at]), f"{name}, entry {at + 1}")
    return found


def _refuse_value(value: float, place: str) -> NoReturn:
    if np.isfinite(value):
        reason = f"is {short(value)}; no machine has such a stiffness or mass"
    else:
        reason = f"is {value}; every entry must be a finite number"
    raise FileFaultsError((Fault(place, reason),))


def _refuse_number(found: int, header: Header, name: str) -> NoReturn:
    how = "is cut off" if found < header.entries else "goes on"
    noun = "entry" if header.entries == 1 else "entries"
    reason = f"announces {header.entries} {noun} and holds {found}: the file {how}"
    raise FileFaultsError((Fault(f"{name}, line {header.line}", reason),))


def _refuse_line(text: str, header: Header, name: str, wide: int) -> NoReturn:
    """Find the first line that cannot be read; only after the fast reader has failed."""
    good = re.compile(rf"\s*(?:\d+\s+\d+\s+)?{_NUMBER}\s*" if wide == 3 else rf"\s*{_NUMBER}\s*", re.ASCII)
    wanted = "row, column and value" if wide == 3 else "one value"
    for number, line in enumerate(text[header.start :].split("\n"), header.line + 1):
        if line.strip() and (not good.fullmatch(line) or len(line.split()) != wide):
            _refuse(
                name, number, f"needs {wanted}, with a decimal point and plain digits; found {_shown(line)}"
            )
    _refuse(name, header.line, f"is followed by lines that are not all {wanted}")


def _refuse(name: str, line: int, reason: str) -> NoReturn:
    raise FileFaultsError((Fault(f"{name}, line {line}", reason),))


def _shown(words: str) -> str:
    plain = words.strip()
    return f'"{plain}"' if len(plain) <= LONGEST_SHOWN else f'"{plain[:LONGEST_SHOWN]}..."'
