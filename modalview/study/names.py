"""Mode names in words, from who moves and how."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from modalview.assembly.locks import speed_ratios
from modalview.assembly.parameters import shown_name
from modalview.model.parts import Model, Motion

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


def mode_name(model: Model, motion: Array, direction_shares: dict[str, float]) -> str:
    """Return a mode's name in words.

    Parameters
    ----------
    model : Model
    motion : array (bodies, 6)
        Motion of every body.
    direction_shares : mapping
        Share of the kinetic energy in each freedom ("x", "rz", ...), summed over bodies.

    Examples
    --------
    "motor against pump", "all in step", "sway with some rocking".
    """
    if model.motion is Motion.SINGLE_AXIS:
        return _sides(model, motion[:, 1])
    if model.motion is Motion.SHAFT_TRAIN:
        # Seen from one shaft, so that parts that turn together through reversing gears are in step.
        ratios = speed_ratios(model)
        return _sides(model, motion[:, 5] / [float(ratios[body.id][1]) for body in model.bodies])
    words = _DIRECTION_WORDS[model.motion]
    name = _directions(words, direction_shares)
    leader = _leader(model, motion)
    return f"{name} of {leader}" if leader else name


def _sides(model: Model, amounts: Array) -> str:
    largest = float(np.abs(amounts).max(initial=0.0))
    if largest == 0:
        return "nothing moves"
    moving = [
        (shown_name(body), float(amount))
        for body, amount in zip(model.bodies, amounts, strict=True)
        if abs(amount) >= STILL * largest
    ]
    ahead = [name for name, amount in moving if amount > 0]
    back = [name for name, amount in moving if amount < 0]
    if not ahead or not back:
        return _one_side(ahead or back, len(model.bodies))
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


def _directions(words: dict[str, str], shares: dict[str, float]) -> str:
    ranked = sorted(((share, words[key]) for key, share in shares.items() if key in words), reverse=True)
    main = [word for share, word in ranked if share >= MAIN] or [ranked[0][1]]
    some = [word for share, word in ranked if SOME <= share < MAIN and word not in main]
    name = " and ".join(main)
    return f"{name} with some {' and '.join(some)}" if some else name


def _leader(model: Model, motion: Array) -> str:
    """Return the body that moves alone, if one does, in a model of several."""
    if len(model.bodies) == 1:
        return ""
    size = np.linalg.norm(motion[:, :3], axis=1)
    moving = np.flatnonzero(size >= STILL * max(float(size.max()), 1e-300))
    return shown_name(model.bodies[int(moving[0])]) if moving.size == 1 else ""
