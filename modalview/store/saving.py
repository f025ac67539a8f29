"""Guarded saving: the old file survives whatever goes wrong, and nobody else's changes are overwritten."""

import hashlib
import os
import secrets
import shutil
from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path
from typing import BinaryIO

from modalview.errors import FileAccessError, FileChangedError, FileFaultsError, ModelFaultsError
from modalview.model.parts import Model
from modalview.store.reading import parse_bytes, read_bytes
from modalview.store.walk import never
from modalview.store.writing import dump_model

BACKUP_SUFFIX = ".bak"


@dataclass(frozen=True, slots=True)
class FileStamp:
    """What a file was when it was last read or written here.

    Parameters
    ----------
    size : int
        In bytes.
    modified_ns : int
        Time of the last change as the disk tells it; for people, never for the comparison.
    digest : str
        SHA-256 of the bytes, in hexadecimal.
    """

    size: int
    modified_ns: int
    digest: str

    def same_content(self, other: "FileStamp") -> bool:
        """Tell whether both hold the same bytes; a copy or a touched date changes nothing."""
        return (self.size, self.digest) == (other.size, other.digest)


def stamp(path: str | os.PathLike[str]) -> FileStamp:
    """Return the stamp of a file as it is on disk now; FileAccessError when it cannot be read."""
    return _stamp(Path(path), read_bytes(path))


def open_model(
    path: str | os.PathLike[str], *, stopped: Callable[[], bool] = never
) -> tuple[Model, FileStamp]:
    """Read a model and the stamp of exactly the bytes it was read from; CancelledError when called off."""
    data = read_bytes(path)
    return parse_bytes(data, stopped=stopped), _stamp(Path(path), data)


def save_model(model: Model, path: str | os.PathLike[str], *, known: FileStamp | None) -> FileStamp:
    """Save a model, keeping the file it replaces as one backup beside it.

    The text is made and read back in memory first, written to a new file beside the target, flushed to
    the disk, and only then put in the target's place in one step.

    Parameters
    ----------
    model : Model
        Must keep all rules: what could not be opened again is not written.
    path : path
        Of the file; a link is followed.
    known : FileStamp or None
        What the file was when opened; None writes over whatever is there.

    Returns
    -------
    FileStamp
        Of the file as written, to be passed as ``known`` next time.

    Raises
    ------
    FileChangedError
        The file holds something else than ``known``; nothing was written.
    FileAccessError
        It could not be written; the old file is untouched.
    ModelFaultsError
        The model breaks a rule.
    """
    data = _checked_bytes(model)
    try:
        target = Path(os.path.realpath(path))
        _check_target(target, known)
        if target.exists():
            put_in_place(target.with_name(target.name + BACKUP_SUFFIX), target.read_bytes(), like=target)
        put_in_place(target, data, like=target if target.exists() else None)
        return _stamp(target, data)
    except (OSError, ValueError) as fault:
        why = getattr(fault, "strerror", None) or str(fault)
        raise FileAccessError(f"{path} was not saved: {why}; the file on disk is as it was") from fault


def _checked_bytes(model: Model) -> bytes:
    data = dump_model(model).encode("utf-8")
    try:
        again = parse_bytes(data)
    except FileFaultsError as error:
        raise ModelFaultsError(error.faults) from None
    if again != model:
        raise FileAccessError("the model was not saved: read back, it differs from the one in the window")
    return data


def _check_target(target: Path, known: FileStamp | None) -> None:
    if not target.parent.is_dir():
        raise FileAccessError(f"{target} was not saved: there is no folder {target.parent}")
    if target.is_dir():
        raise FileAccessError(f"{target} was not saved: it is a folder")
    if not target.exists():
        return
    if not target.stat().st_mode & 0o200 or not os.access(target, os.W_OK):
        raise FileAccessError(f"{target} was not saved: the file is read-only; save under another name")
    if known is not None and not stamp(target).same_content(known):
        raise FileChangedError(
            f"{target} was changed by another program since it was opened; nothing was saved"
        )


def put_in_place(target: Path, data: bytes, *, like: Path | None = None) -> None:
    """Put ``data`` in the place of ``target`` in one step, with the permissions of ``like``.

    Written beside it, flushed, then renamed: on a full disk (OSError) what was there stays.
    """
    beside = target.with_name(f".{target.name}.{secrets.token_hex(4)}.tmp")
    try:
        with _open_new(beside) as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if like is not None:
            shutil.copymode(like, beside)
        beside.replace(target)
    finally:
        beside.unlink(missing_ok=True)
    _flush_folder(target.parent)


def _open_new(path: Path) -> BinaryIO:
    return path.open("xb")


def _flush_folder(folder: Path) -> None:
    """Bring the new name to the disk too, where folders can be flushed.

    Windows does it by itself, and some network disks refuse: the file is in place either way.
    """
    if os.name == "nt":
        return
    with suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _stamp(path: Path, data: bytes) -> FileStamp:
    try:
        modified = path.stat().st_mtime_ns
    except OSError:  # gone between reading and asking: the bytes are what counts
        modified = 0
    return FileStamp(len(data), modified, hashlib.sha256(data).hexdigest())
