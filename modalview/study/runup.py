"""Modes passed on run-up, as they are shown beside the checks: without a verdict."""

from collections.abc import Sequence

from modalview.assembly.dampedterms import has_dashpots
from modalview.eigen.solve import LARGEST
from modalview.model.parts import Machine, SpeedRange
from modalview.resonance.meetings import order_lines
from modalview.response.runup import Passage, Swept, mode_ratios, passages
from modalview.study.campbell import spans
from modalview.study.completed import ELASTIC
from modalview.study.damped import has_loss_factors, modal_ratio
from modalview.study.matrices import MatrixOutlook, MatrixSolution
from modalview.study.results import Solution

QUASI_STEADY = (
    "slow: the amplitude there comes within about 5 % of the steady one (at least 1.5 cycles per Q in the "
    "half-power band; computed for one oscillator); fast: it stays below"
)


def passed_on_run_up(solution: Solution | MatrixSolution) -> tuple[Passage, ...] | None:
    """Return the modes that each order passes from standstill to the lowest speed of its machine.

    Returns
    -------
    tuple of Passage or None
        By machine and order, as in the file; None where not all modes are known. A fixed frequency passes
        none.
    """
    outlook = solution.outlook
    pencil = outlook.pencil if isinstance(outlook, MatrixOutlook) else outlook.assembly.pencil()
    if pencil.modes > LARGEST:
        return None
    machines = outlook.request.model.machines
    return tuple(one for machine in machines for one in _passed(solution, machine))


def _passed(solution: Solution | MatrixSolution, machine: Machine) -> tuple[Passage, ...]:
    if machine.speed is None:
        return ()
    lowest = machine.speed.from_.si if isinstance(machine.speed, SpeedRange) else machine.speed.si
    lines = order_lines(solution.outlook.request.model, machine)
    orders = [Swept(line.check, line.label, line.rate) for line in lines if line.order is not None]
    acceleration = machine.run_up.acceleration.si if machine.run_up else None
    ratios = None
    if isinstance(solution, Solution) and acceleration is not None:
        ratios = damping_ratios(solution)
    return passages(orders, spans(solution.modes), lowest, ratios, acceleration)


def damping_ratios(solution: Solution) -> Sequence[float]:
    """Return the damping ratio of each elastic mode, 0 where nothing damps it; estimated from energies.

    Dashpots and loss factors go before damping given for the whole model.
    """
    outlook, model = solution.outlook, solution.outlook.request.model
    elastic = [i for i, mode in enumerate(solution.modes) if mode.kind == ELASTIC]
    if has_dashpots(outlook.assembly) or has_loss_factors(model):
        found = mode_ratios(outlook.assembly, solution.raw)
        return [float(found[i]) for i in elastic]
    return [modal_ratio(model, solution.modes[i].frequency_hz) for i in elastic]
