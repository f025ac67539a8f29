"""One Qt application for all tests: the picture command would make one that the window cannot use."""

import os

import pytest

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")


@pytest.fixture(autouse=True)
def application(qapp):
    return qapp
