"""Steady motion of small models: closed forms, limits, dashpots on massless joints, base motion, infinity."""

import json

import numpy as np
import pytest
import response_models as rm
from scipy.integrate import solve_ivp

from modalview.assembly.assemble import assemble
from modalview.errors import InputError, ModelFaultsError
from modalview.response.bysparse import BySparse
from modalview.response.bystates import ByStates
from modalview.response.dynamic import Damped, Dynamics
from modalview.response.load import load_of, push_of
from modalview.response.strength import strength
from modalview.store import parse_model


def end(name):
    return {"support" if name.startswith("g") else "body": name}


def joined(kind, name, one, other, **values):
    return {"id": name, "kind": kind, "from": end(one), "to": end(other), **values}


def line(masses, links, excitation=None, **more):
    """A single-axis model; masses in kg by name."""
    given = {"id": "1x", "order": 1, "at": {"body": next(iter(masses))}, "magnitude": {"force": "1 N"}}
    tree = {
        "format": "keepclear",
        "version": 1,
        "title": "line",
        "motion": "single axis",
        "bodies": [{"id": name, "mass": f"{mass!r} kg"} for name, mass in masses.items()],
        "supports": [{"id": "g"}],
        "links": links,
        "machines": [{"id": "m", "speed": "600 rpm", "margin": "10 %", "excitations": [excitation or given]}],
        **more,
    }
    return parse_model(json.dumps(tree))


def spring(name, one, other, k, **more):
    return joined("spring", name, one, other, stiffness=f"{k!r} N/m", **more)


def dashpot(name, one, other, c):
    return joined("damper", name, one, other, damping=f"{c!r} N s/m")


class Solved:
    def __init__(self, model):
        self.assembly = assemble(model)
        self.dynamics = Dynamics.of(self.assembly)
        machine = model.machines[0]
        size = strength(model, machine, machine.excitations[0])
        self.push = push_of(self.assembly, self.dynamics.terms, machine.excitations[0], size)
        self.solver = self.dynamics.with_damping()
        self.load = load_of(self.assembly, self.dynamics.terms, self.solver.damping, self.push)

    def steady(self, *omega, solver=None):
        return (solver or self.solver).solve(np.array(omega, dtype=float), self.load)

    def bodies(self, *omega, solver=None):
        return self.dynamics.terms.to_bodies @ self.steady(*omega, solver=solver).coordinates


W = np.array([0.3, 4.0, 19.0, 20.0, 21.5, 300.0])


def test_one_mass_on_a_dashpot():
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0), dashpot("c", "a", "g", 25.0)]))
    exact = 1 / (4000.0 - 10.0 * W**2 + 25.0j * W)
    assert solved.bodies(*W)[0] == pytest.approx(exact, rel=1e-12)


def test_one_mass_with_a_loss_factor():
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0, loss_factor="10 %")]))
    assert solved.bodies(*W)[0] == pytest.approx(1 / (4000.0 * (1 + 0.1j) - 10.0 * W**2), rel=1e-12)


def test_loss_factors_of_their_own_in_two_springs():
    links = [
        spring("k", "a", "g", 4000.0, loss_factor="10 %"),
        spring("l", "a", "b", 900.0, loss_factor="2 %"),
    ]
    solved = Solved(line({"a": 10.0, "b": 3.0}, links))
    assert isinstance(solved.solver.route, ByStates)
    first, second = 4000.0 * (1 + 0.1j), 900.0 * (1 + 0.02j)
    for column, w in enumerate(W):
        D = np.array([[first + second - 10 * w * w, -second], [-second, second - 3 * w * w]])
        assert solved.bodies(*W)[:, column] == pytest.approx(np.linalg.solve(D, [1.0, 0.0]), rel=1e-12)


@pytest.mark.parametrize(
    ("damping", "rate"),
    [({"ratio": "5 %"}, 2 * 0.05 * 20.0), ({"alpha": "0.3 1/s", "beta": "0.004 s"}, 0.3 + 0.004 * 400.0)],
)
def test_damping_of_the_whole_model(damping, rate):
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0)], damping=damping))
    assert solved.bodies(*W)[0] == pytest.approx(1 / (4000.0 - 10 * W**2 + 10j * rate * W), rel=1e-12)


def test_damping_of_the_whole_model_is_ignored_beside_a_dashpot():
    links = [spring("k", "a", "g", 4000.0), dashpot("c", "a", "g", 25.0)]
    solved = Solved(line({"a": 10.0}, links, damping={"ratio": "50 %"}))
    assert solved.solver.damping.kind == "dashpots"
    assert solved.bodies(*W)[0] == pytest.approx(1 / (4000.0 - 10.0 * W**2 + 25.0j * W), rel=1e-12)


def test_slow_motion_is_the_static_one():
    links = [spring("k", "a", "g", 4000.0), spring("l", "a", "b", 900.0), dashpot("c", "b", "a", 3.0)]
    excitation = {"id": "1x", "order": 1, "at": {"body": "b"}, "magnitude": {"force": "1 N"}}
    solved = Solved(line({"a": 10.0, "b": 3.0}, links, excitation))
    slow = solved.bodies(1e-9)[:, 0]
    assert slow == pytest.approx([1 / 4000.0, 1 / 4000.0 + 1 / 900.0], rel=1e-9)


def test_force_on_a_massless_joint_adds_its_own_give():
    """A joint between two springs: the static give beside the mode is exact at every frequency."""
    links = [spring("k", "j", "g", 4000.0), spring("l", "a", "j", 900.0)]
    excitation = {"id": "1x", "order": 1, "at": {"body": "j"}, "magnitude": {"force": "1 N"}}
    for damping in ({"ratio": "3 %"}, {"alpha": "0.3 1/s", "beta": "0.004 s"}, None):
        more = {"damping": damping} if damping else {}
        solved = Solved(line({"a": 10.0, "j": 0.0}, links, excitation, **more))
        assert solved.solver.backward_error(W, solved.load, solved.steady(*W)).max() < 1e-13
        if damping and "alpha" in damping:
            for column, w in enumerate(W):
                K = np.array([[900.0, -900.0], [-900.0, 4900.0]])
                M = np.diag([10.0, 0.0])
                D = K * (1 + 0.004j * w) + (0.3j * w - w * w) * M
                assert solved.bodies(*W)[:, column] == pytest.approx(
                    np.linalg.solve(D, [0.0, 1.0]), rel=1e-12
                )


def joint_on_dashpots():
    """A dashpot that ends on a massless joint, in series with a spring: the standard model of a polymer."""
    links = [spring("k", "a", "g", 4000.0), dashpot("c", "a", "j", 40.0), spring("s", "j", "g", 2500.0)]
    return line({"a": 10.0, "j": 0.0}, links)


def test_a_massless_joint_on_a_dashpot():
    solved = Solved(joint_on_dashpots())
    series = 40.0j * W * 2500.0 / (40.0j * W + 2500.0)
    exact = 1 / (4000.0 + series - 10.0 * W**2)
    assert solved.bodies(*W)[0] == pytest.approx(exact, rel=1e-12)
    assert solved.bodies(*W)[1] == pytest.approx(exact * 40.0j * W / (40.0j * W + 2500.0), rel=1e-12)


def test_a_joint_held_by_dashpots_alone():
    links = [spring("k", "a", "g", 4000.0), dashpot("c", "a", "j", 40.0), dashpot("d", "j", "g", 60.0)]
    solved = Solved(line({"a": 10.0, "j": 0.0}, links))
    exact = 1 / (4000.0 + 24.0j * W - 10.0 * W**2)
    assert solved.bodies(*W)[0] == pytest.approx(exact, rel=1e-12)
    assert solved.bodies(*W)[1] == pytest.approx(0.4 * exact, rel=1e-12)


def test_critical_damping_is_solved_without_superposing_roots():
    """The roots coincide, so that their vectors are one: systems are solved at each frequency."""
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0), dashpot("c", "a", "g", 400.0)]))
    assert isinstance(solved.solver.route, ByStates)
    assert solved.solver.route.factor is None
    assert "Hessenberg" in solved.solver.method
    assert solved.bodies(*W)[0] == pytest.approx(1 / (4000.0 - 10.0 * W**2 + 400.0j * W), rel=1e-12)


def test_a_free_model_and_one_without_any_spring():
    free = Solved(line({"a": 10.0, "b": 3.0}, [spring("l", "a", "b", 900.0)]))
    D = [np.array([[900.0 - 10 * w * w, -900.0], [-900.0, 900.0 - 3 * w * w]]) for w in W]
    for column, matrix in enumerate(D):
        assert free.bodies(*W)[:, column] == pytest.approx(np.linalg.solve(matrix, [1.0, 0.0]), rel=1e-10)
    loose = Solved(line({"a": 10.0}, [dashpot("c", "a", "g", 25.0)]))
    assert loose.bodies(*W)[0] == pytest.approx(1 / (25.0j * W - 10.0 * W**2), rel=1e-12)


BASE = {"id": "road", "frequency": "1 Hz", "at": {"support": "g"}, "magnitude": {"motion": "1 m"}}


def test_base_motion_through_a_spring_and_a_dashpot():
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0), dashpot("c", "a", "g", 25.0)], BASE))
    exact = (4000.0 + 25.0j * W) / (4000.0 - 10.0 * W**2 + 25.0j * W)
    assert solved.bodies(*W)[0] == pytest.approx(exact, rel=1e-12)


def test_base_motion_with_a_modal_ratio_acts_on_relative_motion():
    """One mass: the ratio is then a dashpot to the base, and the response that of the dashpot."""
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0)], BASE, damping={"ratio": "10 %"}))
    c = 2 * 0.1 * 10.0 * 20.0
    exact = (4000.0 + 1j * c * W) / (4000.0 - 10.0 * W**2 + 1j * c * W)
    assert solved.bodies(*W)[0] == pytest.approx(exact, rel=1e-12)
    assert solved.solver.backward_error(W, solved.load, solved.steady(*W)).max() < 1e-13


def test_base_motion_of_two_masses_relative_to_the_base():
    """With z = q - y: M z'' + C z' + K z = -M 1 y'', by a dense solve with modal damping."""
    links = [spring("k", "a", "g", 4000.0), spring("l", "a", "b", 900.0)]
    solved = Solved(line({"a": 10.0, "b": 3.0}, links, BASE, damping={"ratio": "4 %"}))
    K, M = np.array([[4900.0, -900.0], [-900.0, 900.0]]), np.diag([10.0, 3.0])
    values, shapes = np.linalg.eigh(K / np.sqrt(np.outer(M.diagonal(), M.diagonal())))
    shapes = shapes / np.sqrt(M.diagonal())[:, None]
    C = M @ shapes @ np.diag(0.08 * np.sqrt(values)) @ shapes.T @ M
    for column, w in enumerate(W):
        z = np.linalg.solve(K + 1j * w * C - w * w * M, w * w * M @ np.ones(2))
        assert solved.bodies(*W)[:, column] == pytest.approx(z + 1, rel=1e-10)


def test_the_large_route_takes_a_ratio_within_its_bound():
    """i zeta (K + w^2 M) for 2 i zeta w omega_j: at most the share zeta of each mode off."""
    links = [spring("k", "a", "g", 4000.0), spring("l", "a", "b", 900.0)]
    for given in (None, BASE):
        solved = Solved(line({"a": 10.0, "b": 3.0}, links, given, damping={"ratio": "4 %"}))
        sparse = Damped(
            solved.dynamics, solved.solver.damping, BySparse.of(solved.dynamics.terms, solved.solver.damping)
        )
        w = np.array([10.0, 15.0, 16.5, 22.0])
        exact, near = solved.bodies(*w), solved.bodies(*w, solver=sparse)
        assert np.abs(near - exact).max() < 0.04 * np.abs(exact).max()
        assert sparse.backward_error(w, solved.load, solved.steady(*w, solver=sparse)).max() < 1e-13
        own = np.sqrt(solved.dynamics.undamped_modes.eigenvalues)
        at = solved.bodies(*own, solver=sparse), solved.bodies(*own)
        assert np.abs(at[0] - at[1]).max() < 0.005 * np.abs(at[1]).max()


def test_an_undamped_resonance_is_infinite():
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0)]))
    steady = solved.steady(20.0, 20.1)
    assert steady.unbounded.tolist() == [True, False]
    assert np.all(np.isfinite(steady.coordinates))


def test_an_undamped_mode_beside_dashpots_is_infinite_too():
    """Two equal masses with a dashpot between them: in step they move it not at all."""
    links = [spring("k", "a", "g", 4000.0), spring("l", "b", "g", 4000.0), dashpot("c", "a", "b", 30.0)]
    solved = Solved(line({"a": 10.0, "b": 10.0}, links))
    assert isinstance(solved.solver.route, ByStates)
    steady = solved.steady(20.0, 20.2)
    assert steady.unbounded.tolist() == [True, False]
    # What is left is the mode against each other: 1/2 of the force on each, on k and 2 c.
    rest = 0.5 / (60.0j * 20.0)
    found = solved.dynamics.terms.to_bodies @ steady.coordinates[:, 0]
    assert found[0] - found[1] == pytest.approx(2 * rest, rel=1e-9)


def test_an_undamped_mode_that_the_force_does_not_drive_stays_finite():
    """A force on the middle of three equal masses in a row does not drive the mode in which it rests."""
    links = [spring("k", "a", "mid", 100.0), spring("l", "b", "mid", 100.0), spring("s", "mid", "g", 70.0)]
    excitation = {"id": "1x", "order": 1, "at": {"body": "mid"}, "magnitude": {"force": "1 N"}}
    solved = Solved(line({"a": 1.0, "b": 1.0, "mid": 1.0}, links, excitation))
    steady = solved.steady(10.0)
    assert not steady.unbounded.any()
    found = (solved.dynamics.terms.to_bodies @ steady.coordinates)[:, 0]
    # At 10 rad/s each outer mass is a tuned absorber: the middle rests, they take half of the force each.
    assert found == pytest.approx([-0.005, -0.005, 0.0], abs=1e-15)


def test_an_undamped_resonance_of_the_large_route_is_infinite():
    solved = Solved(line({"a": 1.0}, [spring("k", "a", "g", 4.0)]))
    damping = solved.solver.damping
    sparse = Damped(solved.dynamics, damping, BySparse.of(solved.dynamics.terms, damping))
    assert sparse.solve(np.array([2.0]), solved.load).unbounded.tolist() == [True]
    assert sparse.solve(np.array([2.0 + 4e-16]), solved.load).unbounded.tolist() == [True]


@pytest.mark.parametrize("omega", [0.0, -3.0, np.inf, np.nan])
def test_a_frequency_that_is_none_is_refused(omega):
    solved = Solved(line({"a": 1.0}, [spring("k", "a", "g", 4.0)]))
    with pytest.raises(InputError, match="omega: steady motion"):
        solved.steady(omega)


def test_half_and_double_damping():
    solved = Solved(line({"a": 10.0}, [spring("k", "a", "g", 4000.0), dashpot("c", "a", "g", 25.0)]))
    for factor in (0.5, 2.0):
        exact = 1 / (4000.0 - 10.0 * W**2 + 25.0j * factor * W)
        found = solved.bodies(*W, solver=solved.dynamics.with_damping(factor))
        assert found[0] == pytest.approx(exact, rel=1e-12)


def test_a_push_into_nothing_is_refused():
    """A joint in plane that nothing holds across: a force there would move it without bound."""
    tree = {
        "format": "keepclear",
        "version": 1,
        "title": "loose",
        "motion": "plane",
        "bodies": [
            {"id": "a", "mass": "1 kg", "inertia": "1 kg m2", "position": ["0 m", "0 m"]},
            {"id": "j", "mass": "0 kg", "position": ["1 m", "0 m"]},
        ],
        "supports": [{"id": "g", "position": ["2 m", "0 m"]}],
        "links": [
            joined("spring", "k", "a", "j", stiffness="100 N/m"),
            joined("spring", "l", "j", "g", stiffness="100 N/m"),
        ],
        "machines": [
            {
                "id": "m",
                "speed": "600 rpm",
                "margin": "10 %",
                "excitations": [
                    {
                        "id": "1x",
                        "order": 1,
                        "at": {"body": "j"},
                        "direction": "y",
                        "magnitude": {"force": "1 N"},
                    }
                ],
            }
        ],
    }
    with pytest.raises(ModelFaultsError, match="massless joint in a direction that nothing resists"):
        Solved(parse_model(json.dumps(tree)))


def test_base_motion_of_a_support_that_carries_nothing_is_refused():
    model = line(
        {"a": 10.0},
        [spring("k", "a", "g", 4000.0)],
        {**BASE, "at": {"support": "g2"}},
        supports=[{"id": "g"}, {"id": "g2"}],
    )
    with pytest.raises(ModelFaultsError, match="g2 moves nothing"):
        Solved(model)


# --- in time -------------------------------------------------------------------------------------------


def settled(M, C, K, force, omega):
    """Complex amplitude of the steady motion from integrating in time from rest until it has settled."""
    n = len(M)
    rates = np.linalg.eigvals(
        np.block([[np.zeros((n, n)), np.eye(n)], [-np.linalg.solve(M, K), -np.linalg.solve(M, C)]])
    )
    period = 2 * np.pi / omega
    start = np.ceil(30.0 / np.abs(rates.real).min() / period) * period

    def slope(t, x):
        q, v = x[:n], x[n:]
        return np.concatenate([v, np.linalg.solve(M, force * np.cos(omega * t) - C @ v - K @ q)])

    times = start + period * np.arange(8) / 8
    run = solve_ivp(slope, (0, times[-1]), np.zeros(2 * n), "DOP853", times, rtol=1e-11, atol=1e-13)
    return 2 * np.mean(run.y[:n] * np.exp(-1j * omega * times), axis=1)


def test_integration_in_time_settles_to_the_same_motion():
    links = [spring("k", "a", "g", 40.0), dashpot("c", "a", "b", 2.0), spring("l", "a", "b", 9.0)]
    solved = Solved(line({"a": 1.0, "b": 0.5}, links))
    K, C = np.array([[49.0, -9.0], [-9.0, 9.0]]), np.array([[2.0, -2.0], [-2.0, 2.0]])
    omega = 5.0
    exact = settled(np.diag([1.0, 0.5]), C, K, np.array([1.0, 0.0]), omega)
    assert solved.bodies(omega)[:, 0] == pytest.approx(exact, rel=1e-6)


def test_random_models_are_parsed():
    """The judge of the properties sees what the program sees: one mass, one spring, one dashpot."""
    model = line({"a": 10.0}, [spring("k", "a", "g", 4000.0), dashpot("c", "a", "g", 25.0)])
    judge = rm.Judge(model)
    assert judge.dynamic(3.0) == pytest.approx(np.array([[4000 - 90 + 75j]]))
