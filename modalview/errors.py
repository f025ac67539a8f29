"""Every expected failure of the program, in one tree.

KeepclearError
    InputError                something a person gave cannot be used; a message for them, never a traceback
        UnitError             a typed value cannot be read in the unit its field needs
        UsageError            the command line's words do not fit together
        FaultsError           a list of faults, each with its place
            FileFaultsError   faults of a model file
            ModelFaultsError  faults of a model that reads well but cannot be analysed
            RecipeFaultsError faults of the dimensions given to an entry of the handbook
        FileAccessError       a file cannot be read or written
            FileChangedError  it changed on disk since it was opened; nothing was written
    NumericalError            a computation could not reach what was asked
        NotConvergedError     carries the partial result
    CancelledError            the person stopped it
"""

from dataclasses import dataclass
from typing import Any


class KeepclearError(Exception):
    """Root of the expected failures."""


class InputError(KeepclearError):
    """Something a person gave cannot be used."""


class UnitError(InputError):
    """A typed value cannot be read in the unit its field needs."""


class UsageError(InputError):
    """The command line's words do not fit together."""


@dataclass(frozen=True, slots=True)
class Fault:
    """One fault: where it is and which rule it breaks.

    Parameters
    ----------
    path : str
        Place in the file or the model, such as ``links[2] "M3" . from``.
    reason : str
        The rule, the value found and what to do, in one sentence.
    """

    path: str
    reason: str

    def __str__(self) -> str:
        return f"{self.path}: {self.reason}" if self.path else self.reason


class FaultsError(InputError):
    """A list of faults, all told at once."""

    def __init__(self, faults: tuple[Fault, ...]) -> None:
        self.faults = faults
        super().__init__("\n".join(str(fault) for fault in faults))


class FileFaultsError(FaultsError):
    """Faults of a model file."""


class ModelFaultsError(FaultsError):
    """Faults of a model that reads well but cannot be analysed."""


class RecipeFaultsError(FaultsError):
    """Faults of the dimensions given to an entry of the handbook."""


class FileAccessError(InputError):
    """A file cannot be read or written."""


class FileChangedError(FileAccessError):
    """A file changed on disk since it was opened; nothing was written, so that the person can be asked."""


class NumericalError(KeepclearError):
    """A computation could not reach what was asked."""


class NotConvergedError(NumericalError):
    """An iteration ended early; the partial result is kept.

    Parameters
    ----------
    message : str
        What did not converge, how far it came and what to do.
    partial : Any
        The result so far.
    """

    def __init__(self, message: str, partial: Any = None) -> None:
        super().__init__(message)
        self.partial = partial


class CancelledError(KeepclearError):
    """The person stopped the computation."""
