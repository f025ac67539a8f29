"""The one door to the core: a frozen request in, a frozen result with its evidence out."""

from modalview.study.look import look
from modalview.study.matrices import (
    MatrixOutlook,
    MatrixSolution,
    look_at_matrices,
    solve_matrices,
)
from modalview.study.matrices_request import MatrixRequest
from modalview.study.preview import preview
from modalview.study.results import FoundMode, Interval, Outlook, Request, Share, Solution
from modalview.study.solve import solve

__all__ = [
    "FoundMode",
    "Interval",
    "MatrixOutlook",
    "MatrixRequest",
    "MatrixSolution",
    "Outlook",
    "Request",
    "Share",
    "Solution",
    "look",
    "look_at_matrices",
    "preview",
    "solve",
    "solve_matrices",
]
