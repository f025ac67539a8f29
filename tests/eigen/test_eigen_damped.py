"""Damped roots against closed forms, an independent QZ solve, and what positive dashpots can never do."""

import json
import sys
from pathlib import Path

import mpmath
import numpy as np
import pytest

from modalview.assembly import statematrix
from modalview.eigen.damped import find_damped_modes
from modalview.eigen.solve import find_modes
from modalview.errors import CancelledError, InputError

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made


def modes_of(text):
    return find_damped_modes(made.terms_of(text))


def oscillator(mass, stiffness, damping):
    return made.line(
        [made.mass("m", mass)], [made.spring("k", "m", "g", stiffness), made.dashpot("c", "m", "g", damping)]
    )


def test_one_mass_oscillates():
    modes = modes_of(oscillator(4.0, 16.0, 9.0))
    assert modes.number == 2
    assert modes.oscillating == 1
    assert modes.damping_ratio == pytest.approx([0.5625], rel=1e-14)
    assert 2 * np.pi * modes.natural_hz == pytest.approx([2.0], rel=1e-14)
    assert 2 * np.pi * modes.damped_hz == pytest.approx([2 * np.sqrt(1 - 0.5625**2)], rel=1e-14)
    assert modes.log_decrement == pytest.approx([2 * np.pi * 0.5625 / np.sqrt(1 - 0.5625**2)], rel=1e-14)
    assert modes.warnings == ()


def test_two_real_roots_of_one_mode_are_partners():
    modes = modes_of(oscillator(1.0, 4.0, 5.0))
    assert modes.oscillating == 0
    assert modes.roots == pytest.approx([-1.0, -4.0], rel=1e-14)
    assert modes.partner.tolist() == [1, 0]
    assert modes.damping_ratio == pytest.approx([1.25, 1.25], rel=1e-14)
    assert np.isnan(modes.log_decrement).all()


def test_critical_damping_is_told_and_its_error_covers_it():
    modes = modes_of(oscillator(1.0, 1.0, 2.0))
    assert "critical damping" in modes.warnings[0]
    assert np.all(np.abs(modes.roots + 1) <= modes.error_per_s)
    assert np.all(modes.error_per_s < 1e-6)


def test_a_spring_and_a_dashpot_in_series_add_one_real_root():
    modes = modes_of(
        made.line(
            [made.mass("m", 1.0), made.mass("j", 0.0)],
            [
                made.spring("k0", "m", "g", 1.0),
                made.spring("k", "m", "j", 4.0),
                made.dashpot("c", "j", "g", 5.0),
            ],
        )
    )
    # (s^2 + 1 + 4)(5 s + 4) = 16
    exact = np.roots([5.0, 4.0, 25.0, 4.0])
    assert modes.number == 3
    assert made.farthest(made.every_root(modes), exact) < 1e-13
    assert modes.partner[-1] == -1
    assert np.isnan(modes.damping_ratio[-1])


def test_dashpots_in_series_act_as_one_and_leave_their_joint_anywhere():
    modes = modes_of(
        made.line(
            [made.mass("m", 1.0), made.mass("j", 0.0)],
            [
                made.spring("k", "m", "g", 4.0),
                made.dashpot("c1", "m", "j", 3.0),
                made.dashpot("c2", "j", "g", 6.0),
            ],
        )
    )
    assert (modes.number, modes.zero_roots, modes.free) == (3, 1, 1)
    assert modes.roots[1] == pytest.approx(-1 + 1j * np.sqrt(3), rel=1e-13)
    assert modes.shapes[1, 1] == pytest.approx(modes.shapes[0, 1] / 3)


@pytest.mark.parametrize(
    ("bodies", "links", "zeros", "real"),
    [
        ([2.0], [("m0", "g", 4.0)], 1, [-2.0]),
        ([2.0, 3.0], [("m0", "m1", 4.0)], 3, [-4 * (1 / 2 + 1 / 3)]),
        ([2.0, 0.0, 3.0], [("m0", "m1", 4.0), ("m1", "m2", 4.0)], 4, [-2 * (1 / 2 + 1 / 3)]),
    ],
)
def test_bodies_on_dashpots_alone_creep(bodies, links, zeros, real):
    text = made.line(
        [made.mass(f"m{i}", kg) for i, kg in enumerate(bodies)],
        [made.dashpot(f"c{i}", *ends) for i, ends in enumerate(links)],
    )
    modes = modes_of(text)
    assert modes.zero_roots == zeros
    assert modes.number == zeros + len(real)
    assert modes.roots[modes.free :] == pytest.approx(real, rel=1e-14)
    assert np.all(modes.roots[: modes.free] == 0)


def test_a_dashpot_of_zero_resists_nothing():
    links = [made.dashpot("c", "a", "b", 0.0), made.dashpot("d", "b", "g", 3.0)]
    modes = modes_of(made.line([made.mass("a", 1.0), made.mass("b", 2.0)], links))
    assert (modes.zero_roots, modes.number) == (3, 4)


def chain(size, dashpots):
    links = [made.spring(f"k{i}", f"b{i}", f"b{i - 1}" if i else "g", 100.0 + 7 * i) for i in range(size)]
    links += [made.dashpot(f"c{i}", f"b{i}", "g", damping) for i, damping in enumerate(dashpots)]
    return made.line([made.mass(f"b{i}", 1.0 + 0.2 * i) for i in range(size)], links)


def test_no_damping_gives_the_undamped_modes():
    assembly = made.assembled(chain(20, [0.0]))
    found = find_damped_modes(made.damped_terms(assembly))
    exact = find_modes(assembly.pencil())
    assert found.natural_hz == pytest.approx(exact.frequency_hz, rel=1e-12)
    assert found.undamped == 20
    assert np.all(found.roots.real <= 0)
    assert np.all(found.decay_per_s <= found.error_per_s)
    assert np.abs(found.shapes.imag).max() < 1e-10


def test_a_little_damping_changes_frequencies_by_its_square():
    assembly = made.assembled(chain(12, [1e-5] * 12))
    found = find_damped_modes(made.damped_terms(assembly))
    exact = find_modes(assembly.pencil())
    assert found.damped_hz == pytest.approx(exact.frequency_hz, rel=1e-10)
    share = 1e-5 * np.einsum("im,im->m", exact.shapes, exact.shapes)
    assert found.decay_per_s == pytest.approx(share / 2, rel=1e-8)


@pytest.mark.parametrize("size", [1, 2, 9, 40])
def test_proportional_damping_in_closed_form(size):
    alpha, beta = 0.04, 0.002
    mass = [1.0 + 0.2 * i for i in range(size)]
    stiffness = [100.0 + 7 * i for i in range(size)]
    ends = [f"b{i - 1}" if i else "g" for i in range(size)]
    links = [made.spring(f"k{i}", f"b{i}", ends[i], stiffness[i]) for i in range(size)]
    links += [made.dashpot(f"c{i}", f"b{i}", ends[i], beta * stiffness[i]) for i in range(size)]
    links += [made.dashpot(f"a{i}", f"b{i}", "g", alpha * mass[i]) for i in range(size)]
    assembly = made.assembled(made.line([made.mass(f"b{i}", kg) for i, kg in enumerate(mass)], links))
    found = find_damped_modes(made.damped_terms(assembly))
    omega = 2 * np.pi * find_modes(assembly.pencil()).frequency_hz
    ratio = (alpha / omega + beta * omega) / 2
    exact = omega * (-ratio + 1j * np.sqrt(1 - ratio**2))
    assert found.damping_ratio == pytest.approx(ratio, rel=1e-11)
    assert np.all(np.abs(found.roots - exact) <= found.error_per_s)
    assert np.all(found.error_per_s <= 1e-11 * np.abs(found.roots).max())


RANDOM = [(seed, joints, free) for seed in range(8) for joints in (0, 1, 3) for free in (False, True)]


@pytest.mark.parametrize(("seed", "joints", "free"), RANDOM)
def test_random_models_against_an_independent_solve(seed, joints, free):
    rng = np.random.default_rng(seed)
    terms = made.terms_of(made.random_line(rng, joints=joints, free=free, size=int(rng.integers(2, 7))))
    modes = find_damped_modes(terms)
    exact = made.judge(terms)
    assert modes.number == terms.roots
    assert modes.number == modes.zero_roots + len(exact)
    assert modes.warnings == ()
    if not len(exact):
        return
    scale = np.abs(exact).max()
    assert made.farthest(made.every_root(modes), exact) <= 1e-9 * scale
    assert np.all(modes.roots.real <= 0)
    assert np.all(modes.roots.imag >= 0)
    assert modes.rate_sum_found == pytest.approx(modes.rate_sum_expected, abs=1e-11 * scale)
    M, C, K = made.matrices(terms)
    for root, shape in zip(modes.roots, modes.shapes.T, strict=True):
        left = root**2 * (M @ shape) + root * (C @ shape) + K @ shape
        size = (abs(root) ** 2 * np.abs(M) + abs(root) * np.abs(C) + np.abs(K)).max()
        assert np.abs(left).max() <= 1e-11 * size


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_the_estimate_covers_the_error_of_graded_models(seed):
    """Against forty digits: stiffness over six decades, mass over three."""
    rng = np.random.default_rng(seed)
    names = ["a", "b", "c"]
    links = [
        made.spring(f"k{i}", name, names[i - 1] if i else "g", float(10 ** rng.uniform(2, 8)))
        for i, name in enumerate(names)
    ]
    links += [
        made.dashpot(f"c{i}", name, "g", float(10 ** rng.uniform(0, 3))) for i, name in enumerate(names)
    ]
    terms = made.terms_of(
        made.line([made.mass(name, float(10 ** rng.uniform(0, 3))) for name in names], links)
    )
    modes = find_damped_modes(terms)
    with mpmath.workdps(40):
        exact = mpmath.eig(exact_companion(terms), left=False, right=False)
        apart = [float(min(abs(mpmath.mpc(root) - one) for one in exact)) for root in modes.roots.tolist()]
    assert np.all(apart <= modes.error_per_s)
    assert np.all(apart <= 1e-14 * np.abs(modes.roots))


def exact_companion(terms):
    """[[0, 1], [-K/m, -C/m]] without rounding, from the stored terms."""
    size = terms.inertial
    matrix = mpmath.zeros(2 * size)
    for i in range(size):
        matrix[i, size + i] = 1
    kinds = ((terms.stretching, terms.stiffness, 0), (terms.resisting, terms.damping, size))
    for rows, values, shift in kinds:
        for row, value in zip(rows.toarray().tolist(), values.tolist(), strict=True):
            for i, j in np.ndindex(size, size):
                kg = mpmath.mpf(float(terms.mass[i, i]))
                matrix[size + i, shift + j] -= mpmath.mpf(value) * row[i] * row[j] / kg
    return matrix


PLANE = {
    "format": "keepclear",
    "version": 1,
    "title": "plane",
    "motion": "plane",
    "bodies": [
        {"id": "a", "mass": "4 kg", "inertia": "1 kg m2", "position": ["0 m", "0 m"]},
        {"id": "j", "mass": "0 kg", "position": ["3 m", "4 m"]},
    ],
    "supports": [{"id": "g", "position": ["0 m", "-1 m"]}, {"id": "h", "position": ["6 m", "8 m"]}],
}


def mount(name, far, kind, amount, unit):
    values = dict.fromkeys(("x", "y"), f"{amount} {unit}")
    return {"id": name, "kind": "mount", "from": {"body": "a"}, "to": far, kind: values}


def test_a_joint_held_in_one_direction_only_has_one_root():
    skew = {
        "id": "c",
        "kind": "damper",
        "from": {"body": "a"},
        "to": {"body": "j"},
        "damping": "5 N s/m",
    }
    ground = {
        "id": "d",
        "kind": "damper",
        "from": {"body": "j"},
        "to": {"support": "h"},
        "damping": "5 N s/m",
    }
    hold = mount("k", {"support": "g"}, "stiffness", 100, "N/m")
    terms = made.terms_of(json.dumps({**PLANE, "links": [hold, skew, ground]}))
    # Both dashpots lie on one line: across it and in rotation nothing moves or resists the joint.
    assert (terms.inertial, terms.creeping, terms.static) == (3, 1, 0)
    modes = find_damped_modes(terms)
    assert modes.number == 7


def test_numbers_of_a_result_cannot_be_changed():
    modes = modes_of(oscillator(1.0, 4.0, 1.0))
    for name in ("roots", "shapes", "error_per_s", "damping_ratio", "partner"):
        assert not getattr(modes, name).flags.writeable


def test_too_many_roots_say_what_to_do(monkeypatch):
    monkeypatch.setattr(statematrix, "LARGEST", 3)
    with pytest.raises(InputError, match=r"4 damped roots; .* up to 3\. Hold directions"):
        modes_of(chain(2, [1.0]))


def test_cancel_stops_between_steps():
    told = []
    with pytest.raises(CancelledError):
        find_damped_modes(
            made.terms_of(chain(3, [1.0])),
            cancelled=lambda: len(told) == 1,
            progress=lambda what, _: told.append(what),
        )
    assert told == ["state matrix"]


def test_a_stiff_machine_on_soft_mounts_keeps_its_digits():
    """Stiffness over ten decades: the two soft roots from the rigid limit, to the order of its error."""
    links = [
        made.spring("k", "a", "g", 100.0),
        made.dashpot("c", "a", "g", 1.0),
        made.spring("stiff", "a", "b", 1e12),
    ]
    modes = modes_of(made.line([made.mass("a", 1.0), made.mass("b", 3.0)], links))
    omega, ratio = 5.0, 1 / (2 * np.sqrt(100.0 * 4.0))
    assert 2 * np.pi * modes.natural_hz[0] == pytest.approx(omega, rel=1e-9)
    assert modes.damping_ratio[0] == pytest.approx(ratio, rel=1e-8)
