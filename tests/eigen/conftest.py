"""Lets the tests import the reader of the open matrices."""

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))
