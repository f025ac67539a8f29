"""The command line: what is known before a solve, the modes, the verdict, a picture."""

from modalview.cli.main import main

__all__ = ["main"]
