"""What the complex-plane view shows, taken from the study's results."""

from dataclasses import dataclass, field

import numpy as np
import numpy.typing as npt

from modalview.bounds.discs import Discs, Group
from modalview.bounds.state import StateDiscs, StateRegions
from modalview.drawing.primitives import Floats
from modalview.study.damped import DampedMode, DampedSolution, damped_regions
from modalview.study.results import Outlook, Solution
from modalview.units.show import significant

RAD_PER_HZ = 2 * np.pi
ROW_TITLES = {
    "rows": "Gershgorin discs by rows of M⁻¹K",
    "columns": "Gershgorin discs by columns of M⁻¹K",
    "symmetric": "Gershgorin discs of the scaled S",
}
SEPARATED = "Discs of S, each group under a scaling of its own"


@dataclass(frozen=True, slots=True)
class PlaneRoot:
    """One root, or the upper one of a pair.

    Parameters
    ----------
    place : complex, 1/s
    number, text : str
        Its number, and number with figures, for where there is room.
    oscillates : bool
    """

    place: complex
    number: str
    text: str
    oscillates: bool


@dataclass(frozen=True, slots=True, eq=False)
class PlaneContent:
    """A model with dashpots.

    Parameters
    ----------
    regions : StateRegions
    roots : tuple of PlaneRoot
        Empty before a solve; roots at 0 are left to ``zero_roots``.
    zero_roots : int
    """

    regions: StateRegions
    roots: tuple[PlaneRoot, ...] = ()
    zero_roots: int = 0


@dataclass(frozen=True, slots=True, eq=False)
class LambdaRow:
    """Discs of one kind on the axis of lambda.

    Parameters
    ----------
    title : str
    centres, radii : arrays (n,)
        rad**2/s**2; empty where only the groups are known.
    groups : tuple of Group
        Discs that overlap, with the number of modes that each group holds.
    """

    title: str
    centres: Floats
    radii: Floats
    groups: tuple[Group, ...]


def _none() -> Floats:
    return np.zeros(0)


@dataclass(frozen=True, slots=True, eq=False)
class LambdaContent:
    """A model without dashpots.

    Parameters
    ----------
    rows : tuple of LambdaRow
        Empty where discs mean nothing.
    eigenvalues : array (m,)
        Found ones, rad**2/s**2; empty before a solve.
    """

    rows: tuple[LambdaRow, ...]
    eigenvalues: npt.NDArray[np.float64] = field(default_factory=_none)


def plane_content(
    outlook: Outlook, solution: Solution | None = None, damped: DampedSolution | None = None
) -> PlaneContent | LambdaContent:
    """Take what the complex-plane view shows: of the damped roots where there are dashpots, else of lambda.

    Parameters
    ----------
    outlook : Outlook
    solution : Solution or None
        Undamped modes, when found.
    damped : DampedSolution or None
        Damped modes, when found.
    """
    regions = damped_regions(outlook)
    if regions is None:
        found = (outlook.bounds.rows, outlook.bounds.columns, outlook.bounds.symmetric)
        rows = tuple(lambda_row(ROW_TITLES[discs.kind], discs) for discs in found if discs is not None)
        if outlook.bounds.separated:
            rows += (LambdaRow(SEPARATED, _none(), _none(), outlook.bounds.separated),)
        return LambdaContent(rows, _none() if solution is None else solution.raw.eigenvalues)
    modes = damped.modes if damped is not None else ()
    roots = tuple(_root(mode) for mode in modes if mode.root != 0)
    return PlaneContent(regions, roots, regions.zero_roots)


def lambda_row(title: str, discs: Discs) -> LambdaRow:
    """Return a row of the view for discs of any kind."""
    return LambdaRow(title, discs.centres, discs.radii, discs.groups)


def _root(mode: DampedMode) -> PlaneRoot:
    if mode.damped_hz > 0:
        ratio = 100 * (mode.damping_ratio or 0.0)
        figures = (
            f"{significant(mode.damped_hz, 3)} Hz, {significant(ratio, 2)} %"
            if ratio >= 1e-8
            else (f"{significant(mode.damped_hz, 3)} Hz, undamped")
        )
        return PlaneRoot(mode.root, str(mode.number), f"{mode.number}  {figures}", oscillates=True)
    text = f"{mode.number}  decays, {significant(mode.decay_per_s, 3)} 1/s"
    return PlaneRoot(mode.root, str(mode.number), text, oscillates=False)


def disc_kinds(regions: StateRegions) -> tuple[StateDiscs, StateDiscs, StateDiscs]:
    """Return the discs in the order they are painted."""
    return regions.rows, regions.columns, regions.scaled
