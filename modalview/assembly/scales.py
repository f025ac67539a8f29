"""Metres per unit of each coordinate, so that translations and rotations compare."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt
import scipy.sparse as sp

from modalview.assembly.kinematics import TRANSLATIONS, Freedom
from modalview.model.parts import Motion


def coordinate_scales(motion: Motion, free: Sequence[Freedom], mass: sp.csc_array) -> npt.NDArray[np.float64]:
    """Return 1 for translations and the radius of gyration sqrt(J/m) for rotations, m.

    Where the cluster has no mass of its own the model's sqrt(sum J / sum m) serves; in a shaft train
    every scale is 1.
    """
    scale = np.ones(len(free))
    if motion in (Motion.SHAFT_TRAIN, Motion.SINGLE_AXIS):
        return scale
    diagonal = mass.diagonal()
    turns = np.array([freedom not in TRANSLATIONS for _, freedom in free])
    carried: dict[str, float] = {}
    for (part, _), inertia, turning in zip(free, diagonal, turns, strict=True):
        if not turning:
            carried[part] = max(carried.get(part, 0.0), float(inertia))
    total = sum(carried.values())
    whole = float(np.sqrt(diagonal[turns].sum() / total)) if total > 0 and diagonal[turns].sum() > 0 else 1.0
    for i in map(int, np.flatnonzero(turns)):
        own = carried.get(free[i][0], 0.0)
        scale[i] = float(np.sqrt(diagonal[i] / own)) if own > 0 and diagonal[i] > 0 else whole
    return scale
