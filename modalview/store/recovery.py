"""Recovery files: what a window holds beyond its file, so that a crash loses next to nothing.

One running program is one session: a lock that the system lets go of when the process ends, and beside it
one file for each window. What is left of a session whose lock nobody holds is what a crash left behind. A
recovery file is a line of JSON that says where the model belongs, then the text of the model as it would be
saved: it can be read by people. It holds whatever the window held, half-drawn models that break rules too.
"""

import hashlib
import json
import os
import secrets
import time
from collections.abc import Iterator
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from modalview.errors import Fault, FaultsError, FileAccessError
from modalview.model.parts import Model
from modalview.store.lockfile import LockFile
from modalview.store.reading import parse_unchecked, read_bytes
from modalview.store.saving import FileStamp, put_in_place
from modalview.store.writing import dump_model

FORMAT = "keepclear recovery"
VERSION = 1
SUFFIX, LOCK_SUFFIX = ".recovery", ".lock"
# Text that no file can keep (half a character) is kept here all the same.
_LENIENT = "surrogatepass"


@dataclass(frozen=True, slots=True)
class Draft:
    """What a window holds.

    Parameters
    ----------
    model : Model
    path : Path or None
        Its file; None for a model that was never saved.
    example : bool
        The file is a bundled example, which is never written.
    stamp : FileStamp or None
        The file when it was last opened or saved.
    edited : float
        Time of the last edit, seconds since the epoch.
    """

    model: Model
    path: Path | None
    example: bool
    stamp: FileStamp | None
    edited: float


@dataclass(frozen=True, slots=True)
class Recovery:
    """What a crash left of one window; the fields are those of its `Draft`.

    Parameters
    ----------
    file : Path
        The recovery file.
    title : str
        Of the model.
    process : int
        The program that wrote it; for people.
    """

    file: Path
    title: str
    path: Path | None
    example: bool
    stamp: FileStamp | None
    edited: float
    process: int

    @property
    def name(self) -> str:
        """Return what to call the model: its title, else its file, else what it is."""
        return self.title or (self.path.stem if self.path else "a model without a title")

    def read(self) -> tuple[Model, tuple[Fault, ...]]:
        """Return the model as it was, and what of it could not be read or breaks a form.

        Raises
        ------
        FileAccessError
            The file is gone, or damaged.
        """
        _, text = _split(self.file)
        try:
            return parse_unchecked(text)
        except FaultsError as error:
            raise FileAccessError(f"{self.file} cannot be read: {error}") from None


@dataclass(frozen=True, slots=True)
class Unreadable:
    """A recovery file that says nothing, and why."""

    file: Path
    reason: str


class Session:
    """The recovery files of this running program, and the claim to those that crashes left.

    Parameters
    ----------
    folder : Path
        Of all recovery files of this person; made if there is none, for this person alone.

    Raises
    ------
    FileAccessError
        Nothing can be written there.
    """

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self._claims: dict[str, LockFile] = {}
        try:
            folder.mkdir(mode=0o700, parents=True, exist_ok=True)
            self._lock = self._taken_lock()
        except OSError as fault:
            why = fault.strerror or str(fault)
            raise FileAccessError(f"{folder}: no recovery files can be kept there: {why}") from fault
        self.name = self._lock.path.stem

    def _taken_lock(self) -> LockFile:
        # Another program that tidies up may take the lock in the moment between making and taking it.
        while True:
            name = f"{time.strftime('%Y%m%d-%H%M%S')}-{os.getpid()}-{secrets.token_hex(3)}"
            lock = LockFile(self.folder / f"{name}{LOCK_SUFFIX}")
            if lock.take():
                return lock

    def file(self, key: int) -> Path:
        """Return where the recovery file of a window lies."""
        return self.folder / f"{self.name}.{key}{SUFFIX}"

    def write(self, key: int, draft: Draft) -> None:
        """Keep what a window holds, in the place of what was kept of it; OSError, and the old one stays."""
        text = dump_model(draft.model).encode("utf-8", _LENIENT)
        stamp = draft.stamp
        header = {
            "format": FORMAT,
            "version": VERSION,
            "title": draft.model.title,
            "path": None if draft.path is None else str(draft.path),
            "example": draft.example,
            "stamp": None if stamp is None else [stamp.size, stamp.modified_ns, stamp.digest],
            "edited": draft.edited,
            "process": os.getpid(),
            "model_sha256": hashlib.sha256(text).hexdigest(),
        }
        put_in_place(self.file(key), json.dumps(header).encode("ascii") + b"\n" + text)

    def drop(self, key: int) -> None:
        """Let go of what was kept of a window: it was saved, or given up."""
        self.file(key).unlink(missing_ok=True)

    def set_aside(self, key: int) -> None:
        """Keep what was kept of a window for later, whatever the window does next; OSError if it cannot."""
        self.file(key).rename(self.folder / f"{self.name}.{key}-{secrets.token_hex(3)}{SUFFIX}")

    def recoveries(self) -> tuple[tuple[Recovery, ...], tuple[Unreadable, ...]]:
        """Return what crashes left behind or was set aside, latest first, and the files that say nothing.

        What is found is claimed until the program ends: another one that starts meanwhile is not offered
        the same. A recovery whose model is, byte for byte, what its file holds is taken away silently.
        """
        found: list[Recovery] = []
        unreadable: list[Unreadable] = []
        for name in sorted(self._left_behind()):
            _sort(self._files(name), found, unreadable)
            self._tidy(name)
        _sort([one for one in self._files(self.name) if "-" in one.suffixes[0]], found, unreadable)
        found.sort(key=lambda one: -one.edited)
        return tuple(found), tuple(unreadable)

    def _left_behind(self) -> Iterator[str]:
        names = {one.name.split(".", 1)[0] for one in self._listed()}
        for name in names - {self.name}:
            if name not in self._claims:
                lock = LockFile(self.folder / f"{name}{LOCK_SUFFIX}")
                try:
                    taken = lock.take()
                except OSError:  # not ours to open
                    continue
                if not taken:  # its program runs
                    continue
                self._claims[name] = lock
            yield name

    def _listed(self) -> list[Path]:
        try:
            return [one for one in self.folder.iterdir() if one.suffix in (SUFFIX, LOCK_SUFFIX)]
        except OSError:
            return []

    def _files(self, name: str) -> list[Path]:
        return sorted(
            one for one in self._listed() if one.suffix == SUFFIX and one.name.startswith(f"{name}.")
        )

    def _tidy(self, name: str) -> None:
        """Take away what is of no use: a file half written, and the lock of a session without files."""
        for half in self.folder.glob(f".{name}.*.tmp"):
            with suppress(OSError):
                half.unlink(missing_ok=True)
        if not self._files(name):
            self._claims.pop(name).remove()

    def discard(self, file: Path) -> None:
        """Take away a recovery file that was opened or is not wanted."""
        file.unlink(missing_ok=True)
        name = file.name.split(".", 1)[0]
        if name in self._claims:
            self._tidy(name)

    def close(self) -> None:
        """End the session in order; what was not dropped is offered at the next start."""
        for name, lock in list(self._claims.items()):
            lock.release() if self._files(name) else lock.remove()
        self._claims.clear()
        self._lock.release() if self._files(self.name) else self._lock.remove()


def _sort(files: list[Path], found: list[Recovery], unreadable: list[Unreadable]) -> None:
    for file in files:
        try:
            one = _told(file)
        except (FileAccessError, ValueError, TypeError) as fault:
            unreadable.append(Unreadable(file, str(fault)))
            continue
        if one is not None:
            found.append(one)
            continue
        with suppress(OSError):
            file.unlink(missing_ok=True)


def _told(file: Path) -> Recovery | None:
    """Return what a recovery file says; None where its model is what its own file holds."""
    header, text = _split(file)
    if header.get("format") != FORMAT or header.get("version") != VERSION:
        raise ValueError("it was written by another version of the program, or is no recovery file")
    if header["model_sha256"] != hashlib.sha256(text.encode("utf-8", _LENIENT)).hexdigest():
        raise ValueError("its model is damaged: the text is not the one that was written")
    path = Path(header["path"]) if header["path"] else None
    if path is not None and _holds(path, header["model_sha256"]):
        return None
    stamp = FileStamp(*header["stamp"]) if header["stamp"] else None
    return Recovery(
        file,
        str(header["title"]),
        path,
        bool(header["example"]),
        stamp,
        float(header["edited"]),
        int(header["process"]),
    )


def _split(file: Path) -> tuple[dict[str, Any], str]:
    data = read_bytes(file)
    try:
        line, text = data.split(b"\n", 1)
        header = json.loads(line)
        return _Header(header), text.decode("utf-8", _LENIENT)
    except (ValueError, TypeError):
        raise FileAccessError(f"{file.name} is damaged: it does not begin as a recovery file") from None


class _Header(dict[str, Any]):
    """A missing key is a damaged file, told like the others."""

    def __missing__(self, key: str) -> Any:
        raise ValueError(f'it is damaged: it does not say its "{key}"')


def _holds(path: Path, digest: str) -> bool:
    try:
        return hashlib.sha256(read_bytes(path)).hexdigest() == digest
    except FileAccessError:
        return False
