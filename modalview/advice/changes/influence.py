"""How far each tolerance moves the modes that decide a check, to first order."""

from collections.abc import Iterable, Sequence

import numpy as np
import numpy.typing as npt

from modalview.advice.changes.states import State
from modalview.assembly.assemble import Assembly
from modalview.assembly.parameters import Case, values_at
from modalview.eigen.solve import find_modes
from modalview.resonance.results import Check, Verdict

Array = npt.NDArray[np.float64]


def influence(states: Sequence[State], checks: Sequence[Sequence[Check]]) -> dict[str, float]:
    """Return for every parameter the share by which its tolerance moves a deciding mode's eigenvalue at most.

    Parameters
    ----------
    states : sequence of State
    checks : sequence of sequence of Check
        By state; those that are clear at nominal only are looked at.

    Notes
    -----
    d lambda / lambda = energy share times d value / value. Two solves for each state.
    """
    found: dict[str, float] = {}
    for state, own in zip(states, checks, strict=True):
        wanted = [check for check in own if check.verdict is Verdict.NOMINAL_ONLY]
        for case in (Case.SOFT_HEAVY, Case.STIFF_LIGHT) if wanted else ():
            for name, weight in _moved(state.assembly, case, wanted):
                found[name] = max(found.get(name, 0.0), weight)
    return found


def _moved(assembly: Assembly, case: Case, checks: Sequence[Check]) -> Iterable[tuple[str, float]]:
    modes = find_modes(assembly.pencil(case))
    omega = np.sqrt(np.maximum(modes.eigenvalues, 0.0))
    reached = np.zeros(omega.size, dtype=bool)
    for check in checks:
        low, high = check.band.tolerance
        reached |= (omega >= low) & (omega <= high)
    shapes, squares = modes.shapes[:, reached], modes.eigenvalues[reached]
    if not squares.size:
        return ()
    values = values_at(assembly.parameters, case)
    most = np.zeros(len(assembly.parameters) + 1)  # the last one stands for the factor 1
    for terms, scale in ((assembly.structure.stiffness, squares), (assembly.structure.mass, None)):
        share = terms.values(values)[:, None] * np.asarray(terms.rows @ shapes) ** 2
        share = share / scale if scale is not None else share
        total = np.zeros((most.size, squares.size))
        for factors in terms.product_of.T:
            np.add.at(total, factors, share)
        most = np.maximum(most, total.max(axis=1))
    return [
        (p.id, float(size * (p.high - p.low) / p.nominal))
        for p, size in zip(assembly.parameters, most[:-1], strict=True)
        if p.family != "damping" and p.nominal
    ]
