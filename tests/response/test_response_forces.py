"""Forces in links and at supports: closed forms, rigid links, exact gears, held directions, rings."""

import json

import numpy as np
import pytest

from modalview.assembly.assemble import assemble
from modalview.response.dynamic import Dynamics
from modalview.response.forces import ForceMap
from modalview.response.load import load_of, push_of
from modalview.response.quantities import larger_axis
from modalview.response.strength import strength
from modalview.store import parse_model

OMEGA = np.array([3.0, 11.0])


class Pressed:
    def __init__(self, motion, bodies, supports, links, excitation, **more):
        model = parse_model(
            json.dumps(
                {
                    "format": "keepclear",
                    "version": 1,
                    "title": "t",
                    "motion": motion,
                    "bodies": bodies,
                    "supports": supports,
                    "links": links,
                    "machines": [
                        {
                            "id": "machine",
                            "speed": "600 rpm",
                            "margin": "10 %",
                            "excitations": [{"id": "1x", "order": 1, **excitation}],
                        }
                    ],
                    **more,
                }
            )
        )
        machine = model.machines[0]
        self.assembly = assemble(model)
        self.dynamics = Dynamics.of(self.assembly)
        size = strength(model, machine, machine.excitations[0])
        self.push = push_of(self.assembly, self.dynamics.terms, machine.excitations[0], size)
        solver = self.dynamics.with_damping()
        load = load_of(self.assembly, self.dynamics.terms, solver.damping, self.push)
        self.motion = solver.solve(OMEGA, load).coordinates
        self.bodies = self.dynamics.terms.to_bodies @ self.motion
        self.map = ForceMap.of(self.assembly, self.dynamics.terms)
        self.found = self.map.forces(solver, self.push, OMEGA, self.motion)
        self.order = [link.id for link in model.links]

    def on(self, link):
        return self.found.at_to[self.order.index(link)]


def ends(one, other, **offsets):
    def end(name, offset):
        found = {"support" if name.startswith("g") else "body": name}
        return found | ({"offset": offset} if offset else {})

    return {"from": end(one, offsets.get("at")), "to": end(other, offsets.get("to"))}


LINE = [{"id": "a", "mass": "10 kg"}, {"id": "b", "mass": "3 kg"}]
GROUND = [{"id": "g"}]
FORCE = {"at": {"body": "a"}, "magnitude": {"force": "1 N"}}


def test_spring_and_dashpot_press_on_the_ground():
    links = [
        {"id": "k", "kind": "spring", **ends("a", "g"), "stiffness": "4000 N/m", "loss_factor": "10 %"},
        {"id": "c", "kind": "damper", **ends("a", "g"), "damping": "25 N s/m"},
    ]
    found = Pressed("single axis", LINE[:1], GROUND, links, FORCE)
    y = 1 / (4000 * (1 + 0.1j) - 10 * OMEGA**2 + 25j * OMEGA)
    assert found.bodies[0] == pytest.approx(y)
    assert found.on("k")[1] == pytest.approx(4000 * (1 + 0.1j) * y, rel=1e-12)
    assert found.on("c")[1] == pytest.approx(25j * OMEGA * y, rel=1e-12)
    passed = found.found.on_supports[0, 1]
    assert passed == pytest.approx((4000 * (1 + 0.1j) + 25j * OMEGA) * y, rel=1e-12)
    assert found.map.total(found.push, OMEGA, found.motion)[1] == pytest.approx(passed, rel=1e-12)


def test_a_rigid_link_carries_what_moves_the_other_mass():
    links = [
        {"id": "k", "kind": "spring", **ends("a", "g"), "stiffness": "4000 N/m"},
        {"id": "r", "kind": "rigid link", **ends("a", "b")},
    ]
    found = Pressed("single axis", LINE, GROUND, links, FORCE)
    y = 1 / (4000 - 13 * OMEGA**2)
    assert found.on("r")[1] == pytest.approx(-3 * OMEGA**2 * y, rel=1e-12)


@pytest.mark.parametrize("damping", [{"ratio": "5 %"}, {"alpha": "0.4 1/s"}])
def test_damping_of_the_whole_model_slows_each_mass_behind_a_rigid_link(damping):
    """b of 3 kg: its inertia and its share, by mass, of what slows both."""
    links = [
        {"id": "k", "kind": "spring", **ends("a", "g"), "stiffness": "4000 N/m"},
        {"id": "r", "kind": "rigid link", **ends("a", "b")},
    ]
    found = Pressed("single axis", LINE, GROUND, links, FORCE, damping=damping)
    rate = 0.4 if "alpha" in damping else 0.1 * np.sqrt(4000 / 13)
    y = 1 / (4000 - 13 * OMEGA**2 + 13j * rate * OMEGA)
    assert found.on("r")[1] == pytest.approx(3 * (1j * rate * OMEGA - OMEGA**2) * y, rel=1e-12)


def test_two_rigid_links_side_by_side_share_in_an_unknown_way():
    links = [
        {"id": "k", "kind": "spring", **ends("a", "g"), "stiffness": "4000 N/m"},
        {"id": "r", "kind": "rigid link", **ends("a", "b")},
        {"id": "s", "kind": "rigid link", **ends("a", "b")},
    ]
    found = Pressed("single axis", LINE, GROUND, links, FORCE)
    assert np.isnan(found.on("r")[1]).all()
    assert np.isnan(found.on("s")[1]).all()
    assert np.isfinite(found.on("k")).all()


ROTORS = [{"id": name, "inertia": f"{j} kg m2"} for name, j in (("a", 46.0), ("b", 0.35), ("c", 1.6))]


def test_torque_through_an_exact_gear_and_a_shaft():
    """a drives b at 4.2 times its speed and backwards; b turns c through a shaft."""
    links = [
        {"id": "z", "kind": "gear", **ends("a", "b"), "teeth": [84, 20]},
        {"id": "s", "kind": "shaft", **ends("b", "c"), "stiffness": "1.9e5 N m/rad"},
    ]
    torque = {"at": {"body": "a"}, "magnitude": {"torque": "1 N m"}}
    found = Pressed("shaft train", ROTORS, GROUND, links, torque)
    a, b, c = found.bodies
    assert b == pytest.approx(-4.2 * a, rel=1e-12)
    shaft = found.on("s")[5]
    assert shaft == pytest.approx(1.9e5 * (b - c), rel=1e-9)
    assert shaft == pytest.approx(-1.6 * OMEGA**2 * c, rel=1e-9)
    on_pinion = found.on("z")[5]
    assert on_pinion == pytest.approx(-0.35 * OMEGA**2 * b + shaft, rel=1e-9)
    on_gear = found.found.at_from[0, 5]
    assert on_gear == pytest.approx(4.2 * on_pinion, rel=1e-12)
    assert on_gear == pytest.approx(-46.0 * OMEGA**2 * a - 1.0, rel=1e-9)


def test_a_mount_in_plane_presses_at_its_own_point():
    """A force above the mount: the mount carries it with a moment, in balance with the mass."""
    bodies = [{"id": "a", "mass": "10 kg", "inertia": "4 kg m2", "position": ["0 m", "1 m"]}]
    supports = [{"id": "g", "position": ["0 m", "0 m"]}]
    mount = {
        "id": "m",
        "kind": "mount",
        **ends("a", "g", at=["0 m", "-0.6 m"]),
        "stiffness": {"x": "5000 N/m", "y": "9000 N/m", "rz": "3000 N m/rad"},
    }
    force = {"at": {"body": "a"}, "direction": "x", "magnitude": {"force": "1 N"}}
    found = Pressed("plane", bodies, supports, [mount], force)
    x, _, turn = found.bodies
    on_ground = found.on("m")
    assert on_ground[0] == pytest.approx(1 + 10 * OMEGA**2 * x, rel=1e-12)
    # About the point of the mount, 0.6 m below the centre of gravity.
    assert on_ground[5] == pytest.approx(4 * OMEGA**2 * turn - 0.6 * on_ground[0], rel=1e-12)
    # The support's own moment is about its position, 0.4 m below the mount.
    assert found.found.on_supports[0, 5] == pytest.approx(on_ground[5] - 0.4 * on_ground[0], rel=1e-12)
    about = found.map.total_moment(found.push, OMEGA, found.motion, (0.0, 0.4, 0.0))[2]
    assert about == pytest.approx(on_ground[5], rel=1e-12)


def test_what_held_directions_carry_is_passed_on_too():
    """A force across a body that is held there reaches the surroundings whole."""
    bodies = [{"id": "a", "mass": "10 kg", "inertia": "4 kg m2", "position": ["0 m", "1 m"], "dof": ["y"]}]
    supports = [{"id": "g", "position": ["0 m", "0 m"]}]
    links = [{"id": "k", "kind": "spring", **ends("a", "g"), "stiffness": "4000 N/m"}]
    force = {"at": {"body": "a"}, "direction": "x", "magnitude": {"force": "1 N"}}
    found = Pressed("plane", bodies, supports, links, force)
    assert found.map.total(found.push, OMEGA, found.motion)[0] == pytest.approx(1.0)
    assert np.abs(found.bodies).max() == 0


def test_base_motion_presses_back_on_the_moved_support():
    links = [{"id": "k", "kind": "spring", **ends("g", "a"), "stiffness": "4000 N/m"}]
    base = {"at": {"support": "g"}, "magnitude": {"motion": "1 m"}}
    found = Pressed("single axis", LINE[:1], GROUND, links, base)
    y = 4000 / (4000 - 10 * OMEGA**2)
    assert found.found.on_supports[0, 1] == pytest.approx(4000 * (y - 1), rel=1e-12)
    assert found.found.on_supports[0, 1] == pytest.approx(10 * OMEGA**2 * y, rel=1e-12)


@pytest.mark.parametrize("seed", range(4))
def test_the_larger_axis_is_the_largest_motion_of_a_cycle(seed):
    rng = np.random.default_rng(seed)
    components = rng.standard_normal((3, 5)) + 1j * rng.standard_normal((3, 5))
    phase = np.exp(1j * np.linspace(0, np.pi, 20001))
    for column in range(5):
        largest = np.linalg.norm(np.real(components[:, column : column + 1] * phase), axis=0).max()
        assert larger_axis(components)[column] == pytest.approx(largest, rel=1e-7)
    assert larger_axis(1e-200 * components) == pytest.approx(1e-200 * larger_axis(components), rel=1e-12)
    assert larger_axis(np.zeros((2, 3), dtype=complex)).tolist() == [0.0, 0.0, 0.0]
