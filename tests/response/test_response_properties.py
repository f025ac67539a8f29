"""Properties of the steady motion of every model, against equations that know no route of the program."""

import numpy as np
import pytest
import response_models as rm
from hypothesis import HealthCheck, Phase, given, reject, settings

from modalview.assembly.assemble import assemble
from modalview.errors import ModelFaultsError
from modalview.response.bysparse import BySparse
from modalview.response.bystates import ByStates
from modalview.response.damping import RATIO
from modalview.response.dynamic import Damped, Dynamics
from modalview.response.energy import power_fed, power_lost
from modalview.response.forces import ForceMap
from modalview.response.load import load_of, push_of
from modalview.response.states import states_of, undamped_part
from modalview.response.strength import strength

quick = settings(
    derandomize=True,
    deadline=None,
    max_examples=8,
    phases=(Phase.explicit, Phase.generate),
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much],
)
many = settings(quick, max_examples=300)
# Not too far below the stiffest motion: there plain equations, the judge's too, lose their digits.
OMEGA = np.array([57.0, 157.1, 800.0])
# A force on what is held moves nothing but rounding; 1 N on 1e8 N/m is 1e-4 here.
NO_MOTION = 1e-7


class Case:
    """A random model with its one force, solved."""

    def __init__(self, tree):
        try:
            self.model = rm.parsed(tree)
            self.assembly = assemble(self.model)
            self.dynamics = Dynamics.of(self.assembly)
            machine = self.model.machines[0]
            excitation = machine.excitations[0]
            size = strength(self.model, machine, excitation)
            self.push = push_of(self.assembly, self.dynamics.terms, excitation, size)
        except ModelFaultsError:
            reject()
        self.solver = self.dynamics.with_damping()
        self.load = load_of(self.assembly, self.dynamics.terms, self.solver.damping, self.push)
        self.steady = self.solver.solve(OMEGA, self.load)
        self.bodies = self.dynamics.terms.to_bodies @ self.steady.coordinates
        self.judge = rm.Judge(self.model)

    def felt(self, motion):
        """Stretches times sqrt k, speeds times sqrt m: what of a motion anything feels."""
        rows = [np.sqrt(value) * row for _, _, value, _, row in self.judge.terms]
        return np.vstack([np.sqrt(np.abs(self.judge.M)) * 30, *rows]) @ motion

    def apart(self, one, other):
        return np.linalg.norm(self.felt(one - other)) / (np.linalg.norm(self.felt(one)) + NO_MOTION)


def judged(case, omega):
    """Motion of the bodies by the judge, with the damping of the whole model where that holds."""
    damping, judge = case.solver.damping, case.judge
    D, basis = judge.dynamic(omega), judge.basis()
    if damping.kind == RATIO:
        C, basis = judge.modal_damping(damping.ratio)
        D = basis.T @ D @ basis + 1j * omega * C
        return basis @ np.linalg.solve(D, basis.T @ judge.force())
    D = D + 1j * omega * (damping.alpha * judge.M + damping.beta * judge.K.real)
    return basis @ np.linalg.solve(basis.T @ D @ basis, basis.T @ judge.force())


def against_the_judge(tree):
    case = Case(tree)
    for column, omega in enumerate(OMEGA):
        assert case.apart(judged(case, omega), case.bodies[:, column]) < 1e-6
    errors = case.solver.backward_error(OMEGA, case.load, case.steady)
    assert errors.max() < 1e-10


@quick
@given(rm.damped_documents(dampings=("dashpots", "both")))
def test_dashpots_agree_with_dense_equations_before_constraints(tree):
    against_the_judge(tree)


@quick
@given(rm.damped_documents(dampings=("losses", "ratio", "proportional")))
def test_other_dampings_agree_with_dense_equations_before_constraints(tree):
    against_the_judge(tree)


@pytest.mark.slow
@many
@given(rm.damped_documents())
def test_every_damping_agrees_with_dense_equations_before_constraints(tree):
    against_the_judge(tree)


def routes_agree(tree):
    case = Case(tree)
    dynamics, damping = case.dynamics, case.solver.damping
    states = ByStates.of(states_of(dynamics.terms, undamped_part(dynamics.terms), damping))
    for route in (states, states.unsuperposed(), BySparse.of(dynamics.terms, damping)):
        other = Damped(dynamics, damping, route).solve(OMEGA, case.load)
        bodies = dynamics.terms.to_bodies @ other.coordinates
        for column in range(OMEGA.size):
            assert case.apart(case.bodies[:, column], bodies[:, column]) < 1e-7


@quick
@given(rm.damped_documents(dampings=("dashpots", "both", "losses", "none")))
def test_every_route_gives_the_same_motion(tree):
    routes_agree(tree)


@pytest.mark.slow
@many
@given(rm.damped_documents(dampings=("dashpots", "both", "losses", "none")))
def test_every_route_gives_the_same_motion_on_many_models(tree):
    routes_agree(tree)


@quick
@given(rm.damped_documents(dampings=("dashpots", "both", "losses", "ratio", "proportional")))
def test_power_fed_is_power_lost(tree):
    case = Case(tree)
    fed = power_fed(case.solver, case.push, OMEGA, case.steady.coordinates)
    lost = power_lost(case.solver, case.push, OMEGA, case.steady.coordinates)
    swung = OMEGA * np.linalg.norm(case.push.bodies) * np.linalg.norm(case.bodies, axis=0)
    assert np.all(lost >= 0)
    assert np.all(np.abs(fed - lost) <= 1e-9 * np.maximum(fed, lost) + 1e-13 * swung)


@quick
@given(rm.damped_documents())
def test_forces_of_links_keep_every_body_in_balance(tree):
    """M x'' = f + what all links do at their ends: with rigid links and exact gears, by another route."""
    case = Case(tree)
    if case.solver.damping.kind in ("ratio", "proportional", "modal ratio"):
        reject()  # forces of damping that belongs to no part
    found = ForceMap.of(case.assembly, case.dynamics.terms).forces(
        case.solver, case.push, OMEGA, case.steady.coordinates
    )
    if np.isnan(found.at_to).any():
        return
    given_force = case.push.bodies[:, None] + OMEGA**2 * (case.judge.M @ case.bodies)
    missing = rm.summed_at_centres(case.model, found) + given_force
    held = [
        i
        for i, (body, name) in enumerate(case.judge.names)
        for one in case.model.bodies
        if one.id == body and one.dof is not None and name not in one.dof
    ]
    missing[held] = 0
    size = np.abs(case.push.bodies).max() + np.abs(given_force).max() + np.abs(found.at_to).max()
    assert np.abs(missing).max() < 1e-8 * size


@quick
@given(rm.damped_documents())
def test_motion_is_reciprocal(tree):
    """The motion at one place from a force at another is the other way round the same (Maxwell, Rayleigh)."""
    case = Case(tree)
    rng = np.random.default_rng(len(str(tree)))
    # Forces that the model can bear: combinations of what its springs, dashpots and masses feel.
    first, second = (case.judge.M @ rng.standard_normal(len(case.judge.M)) for _ in range(2))
    moved = []
    for force in (first, second):
        push = type(case.push)(case.push.strength, force.astype(complex), case.push.moved)
        load = load_of(case.assembly, case.dynamics.terms, case.solver.damping, push)
        moved.append(case.dynamics.terms.to_bodies @ case.solver.solve(OMEGA, load).coordinates)
    there, back = second @ moved[0], first @ moved[1]
    size = np.linalg.norm(second) * np.linalg.norm(moved[0], axis=0)
    assert np.all(np.abs(there - back) <= 1e-9 * size)
