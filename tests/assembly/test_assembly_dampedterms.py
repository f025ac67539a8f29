"""Coordinates sorted by what resists them: exact in number, whatever the direction of the dashpots."""

import json
import sys
from pathlib import Path

import numpy as np
import pytest

from modalview.assembly.dampedterms import has_dashpots
from modalview.assembly.statematrix import drifting_motions, state_matrix

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made


def counted(bodies, links):
    terms = made.terms_of(made.line([made.mass(f"m{i}", kg) for i, kg in enumerate(bodies)], links))
    return terms.inertial, terms.creeping, terms.static, terms.free.shape[1], terms.drifting


HOLD = made.spring("k", "m0", "g", 100.0)


@pytest.mark.parametrize(
    ("bodies", "links", "expected"),
    [
        ([1.0], [HOLD], (1, 0, 0, 0, 0)),
        ([1.0, 0.0], [HOLD, made.spring("l", "m0", "m1", 5.0)], (1, 0, 1, 0, 0)),
        ([1.0, 0.0], [HOLD, made.dashpot("c", "m0", "m1", 5.0)], (1, 1, 0, 1, 0)),
        ([1.0, 0.0], [HOLD, made.dashpot("c", "m0", "m1", 0.0)], (1, 0, 0, 0, 0)),
        # a spring between two joints, each on a dashpot of its own
        (
            [1.0, 0.0, 0.0],
            [
                HOLD,
                made.dashpot("c", "m0", "m1", 5.0),
                made.spring("l", "m1", "m2", 5.0),
                made.dashpot("d", "m2", "g", 5.0),
            ],
            (1, 2, 0, 1, 0),
        ),
        # a dashpot between two joints on springs: they creep against each other and follow together
        (
            [1.0, 0.0, 0.0],
            [
                HOLD,
                made.spring("l", "m0", "m1", 5.0),
                made.dashpot("c", "m1", "m2", 5.0),
                made.spring("n", "m2", "g", 5.0),
            ],
            (1, 1, 1, 0, 0),
        ),
        ([1.0, 2.0], [made.dashpot("c", "m0", "m1", 5.0)], (2, 0, 0, 2, 1)),
        (
            [1.0, 2.0],
            [made.spring("l", "m0", "m1", 5.0), made.dashpot("c", "m0", "m1", 5.0)],
            (2, 0, 0, 1, 1),
        ),
        ([1.0, 2.0], [made.spring("l", "m0", "m1", 5.0), made.dashpot("c", "m0", "g", 5.0)], (2, 0, 0, 1, 0)),
    ],
)
def test_numbers(bodies, links, expected):
    assert counted(bodies, links) == expected


def free_plane(angle):
    """Two bodies joined by a spring and dashpots, all turned by an angle; nothing to ground."""
    turn = np.array([[np.cos(angle), -np.sin(angle)], [np.sin(angle), np.cos(angle)]])
    at = [(turn @ place).round(12).tolist() for place in ([0.0, 0.0], [1.3, 0.7], [0.4, 2.0])]
    bodies = [
        {"id": name, "mass": "2 kg", "inertia": "1 kg m2", "position": [f"{c!r} m" for c in place]}
        for name, place in zip("abc", at, strict=True)
    ]
    ends = [("a", "b"), ("b", "c"), ("c", "a")]
    links = [
        {
            "id": f"k{one}{other}",
            "kind": "mount",
            "from": {"body": one},
            "to": {"body": other},
            "stiffness": {"x": "70 N/m", "y": "90 N/m", "rz": "20 N m/rad"},
            "damping": {"x": "3 N s/m", "rz": "2 N m s/rad"},
        }
        for one, other in ends
    ]
    return json.dumps(
        {
            "format": "keepclear",
            "version": 1,
            "title": "free",
            "motion": "plane",
            "bodies": bodies,
            "links": links,
        }
    )


@pytest.mark.parametrize("angle", [0.0, 0.3, 1.1])
def test_a_free_model_drifts_in_every_rigid_motion(angle):
    terms = made.terms_of(free_plane(angle))
    assert (terms.free.shape[1], terms.drifting) == (3, 3)
    drift = drifting_motions(terms)
    assert np.abs(terms.resisting @ drift).max() < 1e-12
    assert np.abs(terms.stretching @ drift).max() < 1e-12
    state = state_matrix(terms)
    assert state.zero_roots == 6
    assert state.size == 2 * 9 - 6
    assert np.abs(np.linalg.eigvals(state.matrix)).min() > 0.1


def test_the_state_matrix_is_balanced():
    """Its symmetric part is the dashpots alone, its skew part the springs alone."""
    rng = np.random.default_rng(3)
    state = state_matrix(made.terms_of(made.random_line(rng, joints=1, size=6)))
    matrix = state.matrix
    symmetric, skew = (matrix + matrix.T) / 2, (matrix - matrix.T) / 2
    split = state.forces
    assert np.all(symmetric[:split, split:] == 0)
    assert np.all(skew[:split, :split] == 0)
    assert np.linalg.eigvalsh(symmetric).max() <= 1e-13 * np.abs(matrix).max()
    assert 0 < state.likely <= state.rounding < 1e-9 * np.abs(matrix).max()


def test_whether_there_are_dashpots():
    bodies = [made.mass("m0", 1.0)]
    links = [HOLD, made.dashpot("c", "m0", "g", 0.0)]
    assert not has_dashpots(made.assembled(made.line(bodies, links)))
    assert has_dashpots(made.assembled(made.line(bodies, [HOLD, made.dashpot("c", "m0", "g", 1.0)])))
