"""Groups A to D of the check bank: closed-form spectra, few masses, rigid bodies on mounts, shaft trains.

Every expected figure is compared with a result of the program. Figures that are facts derived from a
result (a ratio to a uniform string, a node, an equivalent length) say how they follow from it.
"""

import math
from functools import cache, partial
from itertools import pairwise
from typing import Any

import bank_beams
import bank_models
import numpy as np
import pytest
from bank_solved import GENERIC, Solved, ratio, solve_text, solved
from check_bank import Figure, cases, figures

from modalview.factor.counts import count_at_most, count_below

# Edges of an open interval are moved inward by this much, relative: a count may move its edge by 1e-6.
INWARD = 2e-6


def inputs(case: str) -> dict[str, Any]:
    given = cases()[case]["inputs"]
    return {key: one["value"] if isinstance(one, dict) else one for key, one in given.items()}


# --- A: spectra ------------------------------------------------------------------------------------


def widest_gap(found: Solved, _: Any) -> list[float]:
    """The two neighbouring frequencies that lie furthest apart."""
    values = np.array(found.omega)
    place = int(np.argmax(np.diff(values)))
    return values[place : place + 2].tolist()


def inside_gap(found: Solved, _: Any) -> int:
    low, high = (edge**2 for edge in widest_gap(found, _))
    shifted = found.pencil.shifted
    upto, below = count_at_most(shifted, high * (1 - INWARD)), count_below(shifted, low * (1 + INWARD))
    assert upto.number is not None
    assert below.number is not None
    return upto.number - below.number


def over_uniform_string(mode: int, found: Solved, _: Any) -> float:
    """Over the fundamental sqrt(T/mu)/(2 L) of the uniform string, from the inputs."""
    given = inputs("A13")
    mass_per_length = given["total_mass"] / given["length"]
    uniform = math.sqrt(given["tension"] / mass_per_length) / (2 * given["length"])
    return float(found.modes.frequency_hz[mode - 1]) / uniform


@cache
def rods() -> list[float]:
    return [bank_beams.rod(cases()["A14"]["inputs"], pieces).omega[0] for pieces in (4, 8, 16, 32)]


def rod_limit() -> float:
    return bank_beams.limit(rods(), order=2)


@cache
def pinned(pieces: int) -> float:
    return bank_beams.pinned_beam(pieces).omega[0]


def pinned_limit() -> float:
    return bank_beams.limit([pinned(pieces) for pieces in (4, 8, 16, 32)], order=4)


@cache
def cantilever(pieces: int) -> float:
    return bank_beams.cantilever(pieces).omega[0]


def orders(errors: list[float]) -> list[float]:
    """Order of convergence seen between neighbours of halved spacing."""
    return [math.log2(coarse / fine) for coarse, fine in pairwise(errors)]


def cantilever_order() -> float:
    coarse, middle, fine = (cantilever(pieces) for pieces in (20, 40, 80))
    return math.log2((middle - coarse) / (fine - middle))


# --- B: two and three masses -----------------------------------------------------------------------


def third_shape(found: Solved, _: Any) -> list[float]:
    shape = np.array([found.motion(body, "y")[2] for body in ("m1", "m2", "m3")])
    return (shape / shape[0]).tolist()


# --- C: rigid bodies on mounts; the bank's z is the plane's x (bank_models) --------------------------


def node_positions(found: Solved, _: Any) -> list[float]:
    """Where a body stands still: z - x ry = 0 at x = z/ry, in every mode."""
    return sorted(np.divide(found.motion("body", "x"), found.motion("body", "rz")).tolist())


def led_by(freedom: str, found: Solved, _: Any) -> float:
    """Frequency of the mode that one freedom leads, by its share of the kinetic energy."""
    (body,) = found.model.bodies
    place = [one.freedom for one in found.pencil.coordinates].index(freedom)
    inertia = found.pencil.M.diagonal()[place]
    share = inertia * found.motion(body.id, freedom) ** 2  # shapes are M-orthonormal: shares sum to 1
    return found.omega[int(np.argmax(share))]


def coupled(freedoms: tuple[str, str], found: Solved, _: Any) -> list[float]:
    """Frequencies of the modes in which these two freedoms hold all the kinetic energy."""
    (body,) = found.model.bodies
    places = [[one.freedom for one in found.pencil.coordinates].index(freedom) for freedom in freedoms]
    inertia = found.pencil.M.diagonal()[places]
    moved = np.array([found.motion(body.id, freedom) for freedom in freedoms])
    share = inertia @ moved**2
    return [value for value, part in zip(found.omega, share, strict=True) if part > 0.999]


def coupling(found: Solved, _: Any) -> float:
    return float(found.pencil.K.toarray()[1, 3])


def elastic_centre_height(found: Solved, _: Any) -> float:
    """Above the mounts: a sway force there does not roll the body, K_y,rx = -K_yy z_e."""
    K = found.pencil.K.toarray()
    mounts_below = -cases()["C11"]["model"]["springs"][0]["ends"][1]["point_m"][2]
    return mounts_below - float(K[1, 3] / K[1, 1])


# --- D: torsional ----------------------------------------------------------------------------------


def node_from(disc: str, other: str, length: float, mode: int, found: Solved, _: Any) -> float:
    """Distance of the node from a disc: the twist runs straight from disc to disc."""
    here, there = (found.motion(body, "rz")[mode - 1] for body in (disc, other))
    return float(length * here / (here - there))


def equivalent_length(found: Solved, _: Any) -> float:
    """Length of a 60 mm shaft between motor and reflected pump that gives the program's frequency."""
    motor, pump = 400.0, 1500.0 / 9
    stiffness = found.omega[1] ** 2 * motor * pump / (motor + pump)
    return inputs("D06")["G"] * math.pi * 0.06**4 / 32 / stiffness


def shaft_as_beam() -> Solved:
    """The shaft of D12 from its dimensions: a beam in space that may only twist."""
    given = inputs("D12")
    second, area = math.pi * given["d"] ** 4 / 64, math.pi * given["d"] ** 2 / 4
    disc = {
        "id": "disc",
        "mass": f"{given['disc_mass']} kg",
        "inertia": {"Ixx": "75 kg m2", "Iyy": "37.5 kg m2", "Izz": "37.5 kg m2"},
        "position": [f"{given['l']} m", "0 m", "0 m"],
        "dof": ["rx"],
    }
    shaft = {
        "id": "shaft",
        "kind": "beam",
        "from": {"support": "wall"},
        "to": {"body": "disc"},
        "E": "206e9 Pa",
        "G": f"{given['G']!r} Pa",
        "A": f"{area!r} m2",
        "Iy": f"{second!r} m4",
        "Iz": f"{second!r} m4",
        "J": f"{2 * second!r} m4",
    }
    wall = {"id": "wall", "position": ["0 m", "0 m", "0 m"]}
    return solve_text(bank_models.text("D12", "space", [disc], [shaft], [wall]))


def driver_in_antisymmetric_mode(found: Solved, _: Any) -> float:
    """Driver over end disc in the mode where the branches move against each other."""
    return float(found.motion("driver", "rz")[1] / found.motion("e1", "rz")[1])


OWN = {
    "A11-gap_edges": widest_gap,
    "A11-omega_max": lambda found, _: found.omega[-1],
    "A11-modes_strictly_inside_gap": inside_gap,
    "A13-ratio_mode1_to_uniform_fundamental": partial(over_uniform_string, 1),
    "A13-ratio_mode2_to_uniform_fundamental": partial(over_uniform_string, 2),
    "A13-ratio_mode3_to_uniform_fundamental": partial(over_uniform_string, 3),
    # The program knows no continuous rod: its lumped rods are extrapolated to spacing zero.
    "A14-omega1_continuous": lambda *_: rod_limit(),
    "A14-ratio_lumped_to_continuous": lambda *_: [value / rod_limit() for value in rods()],
    "A14-observed_order": lambda *_: orders([rod_limit() - value for value in rods()]),
    "A16-omega1_normalised": lambda *_: [pinned(pieces) for pieces in (2, 3, 4, 8)],
    "A16-continuous_limit": lambda *_: pinned_limit(),
    "A16-observed_order": lambda *_: orders([pinned_limit() - pinned(n) for n in (4, 8, 16)]),
    "A18-omega1_N1": lambda *_: cantilever(1),
    "A18-richardson_limit_from_N20_N40_order2": lambda *_: bank_beams.limit(
        [cantilever(20), cantilever(40)], order=2
    ),
    "A18-observed_order": lambda *_: cantilever_order(),
    "B02-second_mode_ratio_x1_over_x2": lambda found, _: ratio("m1", "m2")(found, _)[1],
    "B10-third_shape_normalised_to_first": third_shape,
    "B11-omega3": lambda found, _: found.omega[2],
    "C01-mode_ratio_z_over_theta": lambda found, _: ratio_z_over_theta(found),
    "C05-mode_ratio_z_over_theta": lambda found, _: ratio_z_over_theta(found),
    "C07-node_positions_x_sorted": node_positions,
    "C09-omega_x_ry_pair": partial(coupled, ("x", "ry")),
    "C09-omega_y_rx_pair": partial(coupled, ("y", "rx")),
    "C11-elastic_centre_height": elastic_centre_height,
    "C11-coupling_K_y_rx": coupling,
    "D01-node_distance_from_disc1": partial(node_from, "J1", "J2", 1.0, 2),
    "D02-two_node_mode_node_from_rotor1": partial(node_from, "J1", "J2", 1.5, 3),
    "D02-two_node_mode_node_from_rotor3": partial(node_from, "J3", "J2", 1.0, 3),
    "D06-equivalent_length_on_60mm_shaft": equivalent_length,
    "D09-driver_amplitude_in_antisymmetric_mode": driver_in_antisymmetric_mode,
    "D12-stiffness": lambda *_: float(shaft_as_beam().pencil.K.toarray()[0, 0]),
}
OWN |= {f"C08-omega_{one}": partial(led_by, one) for one in ("x", "y", "z", "rx", "ry", "rz")}
OWN |= {f"C11-omega_{one}": partial(led_by, one) for one in ("y", "z", "rx")}


def ratio_z_over_theta(found: Solved) -> list[float]:
    return np.divide(found.motion("body", "x"), found.motion("body", "rz")).tolist()


SPECTRA = [figure for group in "ABCD" for figure in figures(group)]


@pytest.mark.parametrize("figure", SPECTRA, ids=lambda figure: figure.id)
def test_figure(figure: Figure):
    compute = OWN.get(figure.id) or GENERIC[figure.name]
    found = solved(figure.case["id"]) if "model" in figure.case else None
    figure.check(compute(found, figure.expected))


def test_every_figure_of_its_own_is_in_the_bank():
    assert set(OWN) <= {figure.id for figure in SPECTRA}


def test_zero_frequencies_are_exactly_zero():
    """The bank allows 1e-5 of the largest; rigid-body modes of models with terms are known exactly."""
    for case in ("A03", "A04", "A06", "A08", "A11", "A21", "A22", "A23", "B10", "D01", "D07", "D09"):
        assert solved(case).omega[0] == 0.0


def test_a_full_mass_at_the_tip_of_a_rod_lowers_the_order_to_one():
    """The trap of A14."""
    given = cases()["A14"]["inputs"]
    errors = [rod_limit() - bank_beams.rod(given, pieces, tip=1.0).omega[0] for pieces in (16, 32)]
    assert orders(errors) == pytest.approx([1.0], abs=0.05)
