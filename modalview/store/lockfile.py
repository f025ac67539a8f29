"""A lock that ends with its process, however that ends: the system lets go of it, not the program."""

import errno
import os
from pathlib import Path
from typing import BinaryIO

# What a file system answers that knows no locks; some network disks do not.
_NO_LOCKS = {errno.ENOLCK, errno.ENOTSUP, errno.EOPNOTSUPP, errno.ENOSYS, errno.EINVAL}


class LockFile:
    """A file that at most one running program holds.

    A process id alone would not do: after a crash the same number is soon somebody else's.
    """

    def __init__(self, path: Path) -> None:
        self.path = path
        self._file: BinaryIO | None = None

    def take(self) -> bool:
        """Hold the lock, made if there is none; False while another program holds it.

        Raises
        ------
        OSError
            The file cannot be made or opened.
        """
        file = self.path.open("a+b")
        if not _locked(file) or not self._is_still(file):
            file.close()
            return False
        self._file = file
        file.seek(0)
        file.truncate()
        file.write(f"{os.getpid()}\n".encode())
        file.flush()
        return True

    def release(self) -> None:
        """Let go; the file stays."""
        if self._file is not None:
            self._file.close()
            self._file = None

    def remove(self) -> None:
        """Take the file away and let go, in an order in which nobody can hold what is gone."""
        if os.name != "nt":
            self.path.unlink(missing_ok=True)
            self.release()
            return
        self.release()
        try:
            self.path.unlink(missing_ok=True)
        except PermissionError:  # another program opened it in between; it is theirs now
            return

    def _is_still(self, file: BinaryIO) -> bool:
        """Tell whether the path still names the file that was opened, not removed by its last holder."""
        try:
            return os.path.samestat(self.path.stat(), os.fstat(file.fileno()))
        except OSError:
            return False


def _locked(file: BinaryIO) -> bool:
    try:
        _lock(file)
    except OSError as fault:
        return fault.errno in _NO_LOCKS and not _holder_lives(file)
    return True


def _holder_lives(file: BinaryIO) -> bool:
    """Tell whether the process named in a lock file runs, where nothing better can be asked."""
    file.seek(0)
    try:
        number = int(file.read(20))
        os.kill(number, 0)
    except (ValueError, ProcessLookupError):
        return False
    except OSError:  # it runs, and is not ours
        return True
    return number != os.getpid()


if os.name == "nt":
    import msvcrt

    # Far behind what is written: a locked byte could not be read by others.
    _BYTE = 1 << 20

    def _lock(file: BinaryIO) -> None:
        file.seek(_BYTE)
        msvcrt.locking(file.fileno(), msvcrt.LK_NBLCK, 1)  # type: ignore[attr-defined]

else:
    import fcntl

    def _lock(file: BinaryIO) -> None:
        fcntl.flock(file.fileno(), fcntl.LOCK_EX | fcntl.LOCK_NB)
