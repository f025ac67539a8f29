"""Every region holds every root: discs, Bendixson's rectangle and norms of the balanced state matrix."""

import sys
from pathlib import Path

import numpy as np
import pytest

from modalview.assembly.statematrix import state_matrix
from modalview.bounds.state import state_regions

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import damped_models as made


def regions_of(text):
    terms = made.terms_of(text)
    return terms, state_regions(state_matrix(terms))


RANDOM = [(seed, joints, free) for seed in range(12) for joints in (0, 2) for free in (False, True)]


@pytest.mark.parametrize(("seed", "joints", "free"), RANDOM)
def test_every_root_lies_in_every_region(seed, joints, free):
    rng = np.random.default_rng(100 + seed)
    terms, regions = regions_of(made.random_line(rng, joints=joints, free=free, size=int(rng.integers(2, 8))))
    state = state_matrix(terms)
    roots = np.linalg.eigvals(state.matrix)
    noise = 1e-13 * np.abs(roots).max(initial=0.0)  # of the solve that judges
    assert len(roots) + regions.zero_roots == terms.roots
    for discs in (regions.rows, regions.columns, regions.scaled):
        near = np.abs(roots[:, None] - discs.centres) <= discs.radii + noise
        assert near.any(axis=1).all()
        assert discs.hold(discs.centres.astype(complex)).all()
    inside = roots - np.clip(roots.real, 0, noise)
    assert regions.rectangle.hold(inside).all()
    assert np.all(np.abs(roots) <= regions.circle + noise)
    assert regions.circle == min(regions.one, regions.infinity, regions.frobenius)


def pair(damping):
    links = [made.spring("k", "a", "g", 400.0), made.spring("l", "a", "b", 300.0)]
    links += [made.dashpot("c", "b", "g", damping)]
    return made.line([made.mass("a", 1.0), made.mass("b", 3.0)], links)


def test_the_rectangle_is_sharp():
    """Its height is the highest undamped frequency, its width the largest eigenvalue of C over the masses."""
    terms, regions = regions_of(pair(12.0))
    M, C, K = made.matrices(terms)
    highest = np.sqrt(np.linalg.eigvalsh(K / np.sqrt(np.outer(M.diagonal(), M.diagonal())))[-1])
    assert regions.rectangle.frequency == pytest.approx(highest, rel=1e-12)
    assert regions.rectangle.frequency >= highest * (1 - 1e-15)
    assert regions.rectangle.decay == pytest.approx(12.0 / 3.0, rel=1e-12)
    assert regions.rectangle.decay >= 4.0
    assert C.max() == pytest.approx(12.0)


def test_no_unit_of_length_or_mass_changes_the_discs():
    """Masses and stiffnesses a thousand times larger are the same rates."""
    _, small = regions_of(pair(12.0))
    links = [
        made.spring("k", "a", "g", 4e5),
        made.spring("l", "a", "b", 3e5),
        made.dashpot("c", "b", "g", 12e3),
    ]
    _, large = regions_of(made.line([made.mass("a", 1e3), made.mass("b", 3e3)], links))
    for kind in ("rows", "columns", "scaled"):
        one, other = getattr(small, kind), getattr(large, kind)
        assert one.radii == pytest.approx(other.radii, rel=1e-12)
        assert one.centres == pytest.approx(other.centres, rel=1e-12)


def chain(size):
    links = [made.spring(f"k{i}", f"b{i}", f"b{i - 1}" if i else "g", 1e6 * (1 + i % 3)) for i in range(size)]
    links += [made.dashpot(f"c{i}", f"b{i}", f"b{i - 1}" if i else "g", 30.0) for i in range(size)]
    return made.line([made.mass(f"b{i}", 10.0 + i % 4) for i in range(size)], links)


def test_the_scaling_brings_the_farthest_disc_in():
    terms, regions = regions_of(chain(20))
    farthest = np.abs(np.linalg.eigvals(state_matrix(terms).matrix)).max()
    assert farthest <= regions.scaled.reach <= 1.06 * farthest
    assert regions.rows.reach >= regions.scaled.reach
    assert regions.frobenius >= regions.infinity


def test_a_model_without_a_root_but_zeros_has_empty_regions():
    links = [made.dashpot("c", "a", "b", 0.0)]
    _, regions = regions_of(made.line([made.mass("a", 1.0), made.mass("b", 1.0)], links))
    assert regions.zero_roots == 4
    assert regions.rows.centres.size == 0
    assert regions.circle < 1e-300
