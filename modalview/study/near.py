"""The modes of a model nearest to a frequency, with their ranges over all tolerances."""

from dataclasses import replace
from time import perf_counter

from modalview.assembly.assemble import assemble
from modalview.eigen.near import NearModes, find_near
from modalview.eigen.shares import modal_mass
from modalview.eigen.solve import LARGEST
from modalview.errors import InputError
from modalview.model.parts import FREEDOMS, Model
from modalview.study.found import found_modes
from modalview.study.large import window_text
from modalview.study.located import RAD_PER_HZ, ranges_by_number
from modalview.study.look import look
from modalview.study.results import Request, Solution


def solve_near(request: Request, frequency_hz: float, count: int) -> tuple[Solution, NearModes]:
    """Find the modes nearest to a frequency, proven complete by counts where rounding lets them.

    Parameters
    ----------
    request : Request
        Its machines are left aside: nothing is checked.
    frequency_hz : float
        Not below zero.
    count : int
        1 to 80; ties may bring in more.

    Returns
    -------
    solution : Solution
        The modes found, by their numbers among all (0: undecided), and no checks.
    near : NearModes
        Certificate and history of residuals.

    Raises
    ------
    InputError
        A count or frequency out of range, or the model cannot be analysed.
    CancelledError, NumericalError
    """
    start = perf_counter()
    outlook = look(replace(request, model=replace(request.model, machines=())))
    assembly = outlook.assembly
    near = find_near(
        assembly.pencil(),
        (frequency_hz * RAD_PER_HZ) ** 2,
        count,
        cancelled=request.cancelled,
        progress=request.progress,
    )
    raw = near.modes
    ranges = ranges_by_number(assembly, near, request.cancelled)
    modes = found_modes(assembly, raw, ranges, near.numbers or (0,) * raw.number)
    solution = Solution(
        outlook=outlook,
        raw=raw,
        modes=modes,
        modal_mass=tuple(map(float, modal_mass(assembly.pencil(), raw))),
        checks=(),
        sentence="",
        evidence=(_proven(near), raw.method, *raw.warnings),
        seconds=perf_counter() - start,
    )
    return solution, near


def require_all_modes(model: Model) -> None:
    """Refuse a model that is too large for all of its modes at once.

    Raises
    ------
    InputError
        Says how many modes there are and to ask for those near a frequency.
    ModelFaultsError
        The model cannot be analysed.
    """
    if len(model.bodies) * len(FREEDOMS[model.motion]) <= LARGEST:
        return
    modes = assemble(model).pencil().modes
    if modes > LARGEST:
        raise InputError(
            f"The model has {modes} modes; all at once are found up to {LARGEST}. Ask for those near a "
            'frequency: modes FILE --near "1480 rpm" --count 6. The checks need no such choice.'
        )


def _proven(near: NearModes) -> str:
    number = "1 mode" if near.modes.number == 1 else f"{near.modes.number} modes"
    place = f"{number} between {window_text(near)}".replace(" to ", " and ")
    return {
        True: f"{place}, none missed (proven by counts)",
        False: f"{place}; counts disagree: do not rely on this",
        None: f"{number}; counts are undecided: others may lie between, numbers are not told",
    }[near.modes.complete]
