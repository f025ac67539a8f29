"""One Qt application for all tests: the picture command would make one that the window cannot use."""

import pytest


@pytest.fixture(autouse=True)
def application(qapp):
    return qapp
