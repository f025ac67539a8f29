"""The unexpected: an error of the program is shown with its text, and the window goes on."""

import logging
import sys
import traceback
from types import TracebackType

from PySide6.QtWidgets import QApplication

from modalview.ui.dialogs import TextDialog

_log = logging.getLogger(__name__)
_LEAD = (
    "Something went wrong that should not have. The model and the window are kept; save under another name "
    "before going on. The text below says what happened; it holds no part of the model."
)


def error_text(error: BaseException) -> str:
    """Return an error as a text that can be passed on."""
    return "".join(traceback.format_exception(error))


def show_unexpected(kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
    """Show an error nobody caught; the hook of the program."""
    if issubclass(kind, KeyboardInterrupt):
        sys.__excepthook__(kind, error, trace)
        return
    _log.error("unexpected error", exc_info=(kind, error, trace))
    try:
        TextDialog("Unexpected error", _LEAD, error_text(error), QApplication.activeWindow()).open()
    except Exception:  # noqa: BLE001  (an error while telling of an error must not hide the first)
        sys.__excepthook__(kind, error, trace)
