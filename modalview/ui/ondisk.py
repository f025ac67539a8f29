"""Notices when somebody else changes, moves or deletes the open file, and says so quietly."""

import difflib
from collections.abc import Callable
from enum import Enum
from pathlib import Path

from PySide6.QtCore import QFileSystemWatcher, QObject, QTimer, Signal
from PySide6.QtGui import QFontDatabase
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QPushButton, QWidget

from modalview.errors import FileAccessError
from modalview.store import FileStamp, dump_model, stamp
from modalview.store.reading import read_bytes
from modalview.ui.dialogs import TextDialog
from modalview.ui.document import Document
from modalview.ui.filing import Filing

# Programs that save by deleting and renaming leave no file for a moment; nothing is told before it is over.
SETTLE_MS = 300
# Beyond these lines comparing can take seconds, and nobody reads what comes of it.
MOST_LINES = 10_000


class State(Enum):
    """What the file on disk is to the window."""

    SAME = "what was last read or written here"
    CHANGED = "changed by another program"
    GONE = "moved or deleted"


class FileWatch(QObject):
    """Follows the file of one document.

    The system tells of changes where it can; on network disks it often cannot, so that the window also asks
    when it comes to the front.
    """

    state_changed = Signal(object)

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self.state = State.SAME
        self._watcher = QFileSystemWatcher(self)
        self._settle = QTimer(self, singleShot=True, interval=SETTLE_MS)
        self._settle.timeout.connect(self.look)
        self._watcher.fileChanged.connect(lambda _: self._settle.start())
        self._watcher.directoryChanged.connect(lambda _: self._settle.start())
        self._quick: tuple[int, int] | None = None  # size and time of the file when it was last read
        self._found: FileStamp | None = None
        self._accepted: FileStamp | None = None  # another version that the person chose to keep apart
        document.opened.connect(self.follow)
        document.saved.connect(self.follow)

    def follow(self) -> None:
        """Follow the document's file, which is what the window has just read or written."""
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
        self._watch()
        try:
            facts = path.stat()
            quick = (facts.st_size, facts.st_mtime_ns)
            anew = quick != self._quick
            if anew:
                self._found, self._quick = stamp(path), quick
        except (OSError, FileAccessError):
            self._found = self._quick = None
            self._become(State.SAME if path.exists() else State.GONE)
            return
        known = [one for one in (self._document.stamp, self._accepted) if one is not None]
        same = any(self._found.same_content(one) for one in known)
        self._become(State.SAME if same else State.CHANGED, anew=anew)

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
        self.compare = self._button("Compare…", self._compare, "Show the lines that differ")
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
        path, model = self._document.path, self._document.model
        try:
            theirs = read_bytes(path).decode("utf-8-sig", "replace")
        except FileAccessError as error:
            TextDialog("What differs", f"{path.name} cannot be read.", str(error), self.window()).open()
            return
        lead = f"Lines of {path.name} on disk begin with a minus sign, those of the window with a plus sign."
        dialog = TextDialog("What differs", lead, differences(theirs, dump_model(model)), self.window())
        dialog.text.setFont(QFontDatabase.systemFont(QFontDatabase.SystemFont.FixedFont))
        dialog.open()


def differences(theirs: str, mine: str) -> str:
    """Return the lines that differ between two texts, with a line around them.

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
    lines = list(difflib.unified_diff(one, other, lineterm="", n=1))[2:]
    return "\n".join(lines) or "No line differs; only the way lines end, or a mark at the start, does."
