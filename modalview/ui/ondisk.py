"""Notices when somebody else changes, moves or deletes the open file, and says so quietly."""

import difflib
from collections.abc import Callable
from dataclasses import dataclass
from enum import Enum
from functools import partial
from pathlib import Path

from PySide6.QtCore import QFileSystemWatcher, QObject, QTimer, Signal
from PySide6.QtGui import QFontDatabase
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QPushButton, QWidget

from modalview.errors import CancelledError, FileAccessError
from modalview.model.parts import Model
from modalview.store import FileStamp, dump_model, stamp
from modalview.store.reading import read_bytes
from modalview.store.walk import never
from modalview.ui.dialogs import TextDialog
from modalview.ui.document import Document
from modalview.ui.errand import Errand
from modalview.ui.filing import Filing

# Programs that save by deleting and renaming leave no file for a moment; nothing is told before it is over.
SETTLE_MS = 300
# Beyond these lines comparing can take seconds, and nobody reads what comes of it.
MOST_LINES = 10_000
# Differing lines beyond these are only counted: filling in all of 10,000 would stop the window.
MOST_SHOWN = 2_000
_BLINK_MS = 150
_COMPARE = "Compare…"


class State(Enum):
    """What the file on disk is to the window."""

    SAME = "what was last read or written here"
    CHANGED = "changed by another program"
    GONE = "moved or deleted"


@dataclass(frozen=True, slots=True)
class Found:
    """A file as it was found on the disk.

    Parameters
    ----------
    there : bool
        Whether anything is there.
    quick : tuple of int or None
        Size and time; None where it could not be read.
    stamp : FileStamp or None
    anew : bool
        Whether size or time are others than before, so that it was read.
    """

    there: bool
    quick: tuple[int, int] | None = None
    stamp: FileStamp | None = None
    anew: bool = False


def found(path: Path, quick: tuple[int, int] | None, known: FileStamp | None) -> Found:
    """Look at a file, and read it where size or time are not those at which it was ``known``."""
    try:
        facts = path.stat()
        now = (facts.st_size, facts.st_mtime_ns)
        anew = now != quick
        return Found(there=True, quick=now, stamp=stamp(path) if anew else known, anew=anew)
    except (OSError, FileAccessError):
        return Found(there=path.exists())


class FileWatch(QObject):
    """Follows the file of one document.

    The system tells of changes where it can; on network disks it often cannot, so that the window also asks
    when it comes to the front. The file is looked at and read in a thread.
    """

    state_changed = Signal(object)

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self.state = State.SAME
        self._watcher = QFileSystemWatcher(self)
        self._settle = QTimer(self, singleShot=True, interval=SETTLE_MS)
        self._settle.timeout.connect(self.look)
        self.looking = Errand(self)
        self._watcher.fileChanged.connect(lambda _: self._settle.start())
        self._watcher.directoryChanged.connect(lambda _: self._settle.start())
        self._quick: tuple[int, int] | None = None  # size and time of the file when it was last read
        self._found: FileStamp | None = None
        self._accepted: FileStamp | None = None  # another version that the person chose to keep apart
        document.opened.connect(self.follow)
        document.saved.connect(self.follow)

    def follow(self) -> None:
        """Follow the document's file, which is what the window has just read or written."""
        self.looking.call_off()
        self._quick = self._found = self._accepted = None
        watched = [*self._watcher.files(), *self._watcher.directories()]
        if watched:
            self._watcher.removePaths(watched)
        self._watch()
        self._become(State.SAME)
        if self._document.recovered:
            self.look()

    def _watch(self) -> None:
        path = self._path()
        if path is None:
            return
        # The folder too: a file that is replaced is another one, and its own watch ends with it.
        known = {*self._watcher.files(), *self._watcher.directories()}
        wanted = [str(one) for one in (path, path.parent) if one.exists() and str(one) not in known]
        if wanted:
            self._watcher.addPaths(wanted)

    def _path(self) -> Path | None:
        return None if self._document.example else self._document.path

    def look(self) -> None:
        """Compare the file with what was last read or written here."""
        path = self._path()
        if path is None or self._document.stamp is None:
            return
        if self._document.saving:  # what is being written here is no change; looked at when it is over
            self._settle.start()
            return
        self._watch()
        look = partial(found, path, self._quick, self._found)
        self.looking.run("", lambda _stopped: look(), self._on_looked)

    def _on_looked(self, now: Found | None, error: Exception | None) -> None:
        if error is not None:
            raise error
        if self._document.saving:
            self._settle.start()
            return
        self._quick, self._found = now.quick, now.stamp
        if now.stamp is None:
            self._become(State.SAME if now.there else State.GONE)
            return
        known = [one for one in (self._document.stamp, self._accepted) if one is not None]
        same = any(now.stamp.same_content(one) for one in known)
        self._become(State.SAME if same else State.CHANGED, anew=now.anew)

    def close(self) -> None:
        """Look no more, and wait for the thread."""
        self._settle.stop()
        self.looking.close()

    def accept(self) -> None:
        """Leave the version on disk apart; only another change is told again."""
        self._accepted = self._found
        self._become(State.SAME)

    def _become(self, state: State, *, anew: bool = False) -> None:
        if state is self.state and not (anew and state is State.CHANGED):
            return
        self.state = state
        if state is State.GONE:
            self._document.lose_file()
        self.state_changed.emit(state)


class DiskStrip(QFrame):
    """One line under the banner with what can be done; hidden while file and window agree."""

    def __init__(self, watch: FileWatch, document: Document, filing: Filing, parent: QWidget) -> None:
        super().__init__(parent)
        self.setObjectName("diskStrip")
        self._watch, self._document, self._filing = watch, document, filing
        self.words = QLabel(self)
        self.words.setWordWrap(True)
        self.comparing = Errand(self)
        self.comparing.busy_changed.connect(self._on_comparing)
        self.compare = self._button(_COMPARE, self._compare, "Show the lines that differ")
        # What is compared in a blink is not told of.
        self._patience = QTimer(self, singleShot=True, interval=_BLINK_MS)
        self._patience.timeout.connect(lambda: self.compare.setText("Stop comparing"))
        self.reload = self._button(
            "Reload", self._reload, "Open the version on disk; unsaved edits are asked about"
        )
        self.mine = self._button("Keep mine", watch.accept, "Say no more of this version; saving still asks")
        self.again = self._button("Save it again", filing.save, "Write the model where its file was")
        self.elsewhere = self._button("Save as…", filing.save_as, "Write the model elsewhere")
        self.later = self._button("Later", self.hide, "Fold this line; saving still asks")
        row = QHBoxLayout(self)
        row.setContentsMargins(16, 5, 12, 5)
        row.addWidget(self.words, 1)
        for button in (self.compare, self.reload, self.mine, self.again, self.elsewhere, self.later):
            row.addWidget(button)
        self.hide()
        watch.state_changed.connect(self.show_state)

    def _button(self, text: str, do: Callable[[], object], tip: str) -> QPushButton:
        button = QPushButton(text, self)
        button.setToolTip(tip)
        button.clicked.connect(lambda _checked=False: do())
        return button

    def show_state(self, state: State) -> None:
        """Say what happened to the file."""
        if state is not State.CHANGED:
            self.comparing.call_off()
        name = self._document.name
        mine = " The window holds unsaved changes." if self._document.modified else ""
        if self._document.recovered:
            mine = " The window holds the recovered model."
        gone = "is no longer there: it was moved, renamed or deleted. The model is kept in the window."
        changed = f"was changed by another program.{mine}"
        self.words.setText(f"{name} {changed if state is State.CHANGED else gone}")
        for button in (self.compare, self.reload, self.mine):
            button.setVisible(state is State.CHANGED)
        for button in (self.again, self.elsewhere):
            button.setVisible(state is State.GONE)
        self.setVisible(state is not State.SAME)

    def _reload(self) -> None:
        path = self._document.path
        self._filing.guard(lambda: self._filing.read(path))

    def _compare(self) -> None:
        """Compare in a thread; pressed again, it is given up."""
        if self.comparing.busy:
            self.comparing.call_off()
            return
        path, model = self._document.path, self._document.model

        def then(text: str | None, error: Exception | None) -> None:
            if isinstance(error, FileAccessError):
                TextDialog("What differs", f"{path.name} cannot be read.", str(error), self.window()).open()
            elif error is not None:
                raise error
            else:
                self._show_differences(path, text)

        self.comparing.run("comparing", partial(_compared, path, model), then)

    def _on_comparing(self, what: str) -> None:
        if what:
            self._patience.start()
        else:
            self._patience.stop()
            self.compare.setText(_COMPARE)

    def _show_differences(self, path: Path, text: str) -> None:
        lead = f"Lines of {path.name} on disk begin with a minus sign, those of the window with a plus sign."
        dialog = TextDialog("What differs", lead, text, self.window())
        dialog.text.setFont(QFontDatabase.systemFont(QFontDatabase.SystemFont.FixedFont))
        dialog.open()

    def close_thread(self) -> None:
        """Give up comparing and wait for the thread."""
        self.comparing.close()


def _compared(path: Path, model: Model, stopped: Callable[[], bool]) -> str:
    theirs = read_bytes(path).decode("utf-8-sig", "replace")
    return differences(theirs, dump_model(model), stopped=stopped)


def differences(theirs: str, mine: str, *, stopped: Callable[[], bool] = never) -> str:
    """Return the lines that differ between two texts, with a line around them; CancelledError when stopped.

    >>> print(differences("a b c".replace(" ", chr(10)), "a B c".replace(" ", chr(10))))
    @@ -1,3 +1,3 @@
     a
    -b
    +B
     c
    """
    one, other = theirs.splitlines(), mine.splitlines()
    if max(len(one), len(other)) > MOST_LINES:
        return (
            f"The versions have {len(one)} and {len(other)} lines, too many to be compared here. "
            "Save yours under another name and compare the two files with a text tool."
        )
    lines: list[str] = []
    for group in _Matcher(one, other, stopped).get_grouped_opcodes(1):
        lines += _hunk(group, one, other)
    if len(lines) > MOST_SHOWN:
        lines[MOST_SHOWN:] = [f"… and {len(lines) - MOST_SHOWN} more lines"]
    return "\n".join(lines) or "No line differs; only the way lines end, or a mark at the start, does."


class _Matcher(difflib.SequenceMatcher):
    """Asks before each of its searches whether it is to stop."""

    def __init__(self, one: list[str], other: list[str], stopped: Callable[[], bool]) -> None:
        super().__init__(None, one, other)
        self._stopped = stopped

    def find_longest_match(self, *among: int) -> difflib.Match:
        if self._stopped():
            raise CancelledError("Stopped by the user.")
        return super().find_longest_match(*among)


def _hunk(group: list[tuple[str, int, int, int, int]], one: list[str], other: list[str]) -> list[str]:
    """Return one run of changes in the form in which text tools show them."""
    of_one = _counted(group[0][1], group[-1][2])
    of_other = _counted(group[0][3], group[-1][4])
    lines = [f"@@ -{of_one} +{of_other} @@"]
    for what, start, end, other_start, other_end in group:
        if what == "equal":
            lines += [f" {line}" for line in one[start:end]]
        else:
            lines += [f"-{line}" for line in one[start:end]]
            lines += [f"+{line}" for line in other[other_start:other_end]]
    return lines


def _counted(start: int, end: int) -> str:
    """Return where a run of lines begins, and how many there are unless one."""
    number = end - start
    return f"{start + 1}" if number == 1 else f"{start + (number > 0)},{number}"
