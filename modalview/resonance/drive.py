"""Whether a force at a point drives a mode; shown beside a verdict, never part of it."""

import numpy as np
import numpy.typing as npt

from modalview.assembly.pencil import Pencil
from modalview.eigen.modes import Modes
from modalview.resonance.results import Drive, ModeDrive

# A mode whose largest motion under the force stays below this share of the free bodies' own answer to
# it is called hardly excited. A chosen threshold, not a published one.
HARDLY = 0.05
# A force whose standard form is this small against its entries only feels rounding.
NOTHING = 1e-12


def mode_drives(
    pencil: Pencil, modes: Modes, force: npt.NDArray[np.complex128] | None
) -> tuple[ModeDrive, ...]:
    """Return how strongly a unit force drives each mode.

    Parameters
    ----------
    pencil : Pencil of n coordinates
    modes : Modes
        Of this pencil, M-orthonormal.
    force : complex array (n,) or None
        From the excitation's point and direction; None when it has none.

    Returns
    -------
    tuple of ModeDrive
        One per mode, in order. The share |phi^T f|^2 / (f^H M^-1 f) sums to 1 over all modes, rigid-body
        ones included; f is condensed with the massless coordinates. Whether a mode is hardly excited is
        not decided by the share (a light part can swing hard on a small one) but by
        max_j |s_j phi_j| |phi^T f| / max_j |s_j (M^-1 f)_j| below 5 %, with s the scale of each
        coordinate, summed over a repeated subspace.
    """
    if force is None:
        return tuple(ModeDrive(i + 1, None, Drive.UNKNOWN) for i in range(modes.number))
    basis = pencil.basis
    standard = np.asarray(basis.T @ force)
    felt = float(np.linalg.norm(standard))
    if felt <= NOTHING * float(np.linalg.norm(np.asarray(abs(basis).T @ np.abs(force)))):
        return tuple(ModeDrive(i + 1, 0.0, Drive.NOTHING) for i in range(modes.number))
    amounts = modes.shapes.T @ force
    shares = np.abs(amounts) ** 2 / felt**2
    whole = float(np.abs(pencil.scale * np.asarray(basis @ standard)).max())
    drives = [Drive.EXCITED] * modes.number
    for start, stop in modes.groups:
        moved = modes.shapes[:, start:stop] @ amounts[start:stop]
        if float(np.abs(pencil.scale * moved).max()) < HARDLY * whole:
            drives[start:stop] = [Drive.HARDLY] * (stop - start)
    return tuple(
        ModeDrive(i + 1, float(share), drive)
        for i, (share, drive) in enumerate(zip(shares, drives, strict=True))
    )
