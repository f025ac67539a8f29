"""Mode names in words, from who moves and how."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from modalview.assembly.locks import speed_ratios
from modalview.assembly.parameters import shown_name
from modalview.model.parts import FREEDOMS, Model, Motion

Array = npt.NDArray[np.float64]

# A body that moves less than this share of the largest motion is not named.
STILL = 0.2
# A direction with less than this share of the kinetic energy is not named; below MAIN it is "some".
SOME = 0.1
MAIN = 0.3
# More names than this on one side become "the others".
NAMED = 2

_DIRECTION_WORDS = {
    Motion.PLANE: {"x": "sway", "y": "bounce", "rz": "rocking"},
    Motion.SPACE: {"x": "surge", "y": "sway", "z": "bounce", "rx": "roll", "ry": "pitch", "rz": "yaw"},
}


def mode_names(model: Model, motion: Array, direction_shares: Array) -> list[str]:
    """Return every mode's name in words.

    Parameters
    ----------
    model : Model
    motion : array (modes, bodies, 6)
        Motion of every body.
    direction_shares : array (modes, 6)
        Share of the kinetic energy in each freedom, summed over bodies.

    Examples
    --------
    "motor against pump", "all in step", "sway with some rocking".
    """
    names = [shown_name(body) for body in model.bodies]
    if model.motion is Motion.SINGLE_AXIS:
        return [_sides(names, row) for row in motion[:, :, 1]]
    if model.motion is Motion.SHAFT_TRAIN:
        # Seen from one shaft, so that parts that turn together through reversing gears are in step.
        ratios = speed_ratios(model)
        seen = motion[:, :, 5] / [float(ratios[body.id][1]) for body in model.bodies]
        return [_sides(names, row) for row in seen]
    words = _DIRECTION_WORDS[model.motion]
    return [
        _directions(words, shares) + _leader(names, row)
        for row, shares in zip(motion, direction_shares, strict=True)
    ]


def _sides(names: Sequence[str], amounts: Array) -> str:
    size = np.abs(amounts)
    largest = float(size.max(initial=0.0))
    if largest == 0:
        return "nothing moves"
    moving = size >= STILL * largest
    sides = (np.flatnonzero(moving & (amounts > 0)), np.flatnonzero(moving & (amounts < 0)))
    ahead, back = ([names[i] for i in side.tolist()] for side in sides)
    if not ahead or not back:
        return _one_side(ahead or back, len(names))
    first, second = (ahead, back) if len(ahead) <= len(back) else (back, ahead)
    return f"{_listed(first)} against {_listed(second)}"


def _one_side(names: Sequence[str], bodies: int) -> str:
    if len(names) == 1:
        return f"{names[0]} alone" if bodies > 1 else names[0]
    return "all in step" if len(names) == bodies else f"{_listed(names)} in step"


def _listed(names: Sequence[str]) -> str:
    if len(names) > NAMED:
        return f"{names[0]} and {len(names) - 1} others"
    return " and ".join(names)


def _directions(words: dict[str, str], shares: Array) -> str:
    of_freedom = dict(zip(FREEDOMS[Motion.SPACE], shares.tolist(), strict=True))
    ranked = sorted(((of_freedom[key], word) for key, word in words.items()), reverse=True)
    main = [word for share, word in ranked if share >= MAIN] or [ranked[0][1]]
    some = [word for share, word in ranked if SOME <= share < MAIN and word not in main]
    name = " and ".join(main)
    return f"{name} with some {' and '.join(some)}" if some else name


def _leader(names: Sequence[str], motion: Array) -> str:
    """Return " of" the body that moves alone, if one does, in a model of several."""
    if len(names) == 1:
        return ""
    size = np.linalg.norm(motion[:, :3], axis=1)
    moving = np.flatnonzero(size >= STILL * max(float(size.max()), 1e-300))
    return f" of {names[int(moving[0])]}" if moving.size == 1 else ""
