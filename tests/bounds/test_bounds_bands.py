"""Counts of a band at nominal values, at some and at all values within tolerance."""

import itertools
from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace

import numpy as np
import pytest
import scipy.sparse as sp

from modalview.assembly.pencil import pencil_of_matrices, pencil_of_terms
from modalview.bounds.bands import Cases, Floating, Sharpened, count_band, count_band_by

ROWS = sp.csr_array(np.array([[1.0, 0.0], [-1.0, 1.0], [0.0, 1.0]]))
STIFFNESS, MASS = np.array([1000.0, 500.0, 2000.0]), np.array([5.0, 10.0])


def pencil(stiffness_factor=1.0, mass_factor=1.0):
    return pencil_of_terms(ROWS, STIFFNESS * stiffness_factor, MASS * mass_factor)


def tolerance_cases():
    # every stiffness +/-10 %, every mass +/-5 %; frequencies 14.14 and 18.71 rad/s, ranges by
    # sqrt(0.9/1.05) and sqrt(1.1/0.95): [13.0931, 15.2177] and [17.3205, 20.1311]
    nominal = pencil().shifted
    return Cases(
        nominal=nominal,
        soft_heavy=pencil(0.9, 1.05).shifted,
        stiff_light=pencil(1.1, 0.95).shifted,
    )


@pytest.mark.parametrize(
    ("band", "expected"),
    [
        ((1.0, 13.09), (0, 0, 0)),
        ((1.0, 13.10), (0, 1, 0)),
        ((15.22, 17.32), (0, 0, 0)),
        ((15.21, 17.32), (0, 1, 0)),
        ((15.22, 17.33), (0, 1, 0)),
        ((13.0, 14.15), (1, 1, 0)),
        ((13.0, 15.3), (1, 1, 1)),
        ((14.0, 19.0), (2, 2, 0)),
        ((13.0, 21.0), (2, 2, 2)),
        ((20.14, 50.0), (0, 0, 0)),
        ((0.0, 13.0), (0, 0, 0)),
    ],
)
def test_bands_over_tolerance(band, expected):
    counted = count_band(tolerance_cases(), band)
    assert (counted.inside, counted.possible, counted.certain) == expected
    assert counted.undecided == ()


def test_the_corners_of_the_tolerances_stay_within_possible_and_certain():
    spectra = []
    for factors in itertools.product((0.9, 1.1), (0.9, 1.1), (0.9, 1.1), (0.95, 1.05), (0.95, 1.05)):
        corner = pencil_of_terms(ROWS, STIFFNESS * factors[:3], MASS * factors[3:])
        spectra.append(np.sqrt(np.linalg.eigvalsh(corner.standard.toarray())))
    for band in ((13.5, 15.0), (12.0, 18.0), (14.5, 19.5)):
        counted = count_band(tolerance_cases(), band)
        inside = [((omega >= band[0]) & (omega <= band[1])).sum() for omega in spectra]
        assert counted.certain <= min(inside)
        assert max(inside) <= counted.possible


def test_a_clear_band_costs_two_counts_and_exact_values_never_more():
    assert len(count_band(tolerance_cases(), (15.5, 17.0)).evidence) == 2
    one = pencil().shifted
    counted = count_band(Cases(one, one, one), (14.0, 15.0))
    assert (counted.inside, counted.possible, counted.certain) == (1, 1, 1)
    assert [edge.case for edge in counted.evidence] == ["nominal", "nominal"]


def test_the_speed_tolerance_widens_only_what_is_possible():
    one = pencil().shifted
    counted = count_band(Cases(one, one, one), (15.0, 17.0), (14.0, 17.0))
    assert (counted.inside, counted.possible, counted.certain) == (0, 1, 0)
    assert (counted.below, counted.upto) == (1, 1)


def test_a_mode_on_the_very_edge_is_inside():
    one = pencil_of_terms(sp.csr_array(np.eye(1)), np.array([9.0]), np.array([1.0])).shifted
    for band in ((3.0, 5.0), (1.0, 3.0), (3.0, 3.0)):
        assert count_band(Cases(one, one, one), band).inside == 1


def test_a_mode_on_the_edge_over_tolerance_is_not_called_certain():
    nominal = pencil_of_terms(sp.csr_array(np.eye(1)), np.array([9.0]), np.array([1.0])).shifted
    stiff = pencil_of_terms(sp.csr_array(np.eye(1)), np.array([16.0]), np.array([1.0])).shifted
    counted = count_band(Cases(nominal, nominal, stiff), (2.0, 4.0))
    assert (counted.inside, counted.possible, counted.certain) == (1, 1, 0)


def test_rigid_body_modes_lie_in_no_band():
    rows = sp.csr_array(np.array([[1.0, -1.0]]))
    free = pencil_of_terms(rows, np.array([2.0]), np.array([1.0, 1.0]), rigid_body=np.ones((2, 1))).shifted
    assert count_band(Cases(free, free, free), (0.0, 1.9)).inside == 0
    assert count_band(Cases(free, free, free), (0.0, 2.1)).inside == 1


def test_what_rounding_leaves_open_is_named():
    rows = sp.csr_array(np.array([[1.0, 0, 0], [-1, 1, 0], [0, -1, 1]]))
    stiffness = np.diag([1.0, 1e13, 1e13])
    stiff = pencil_of_matrices(sp.csc_array(rows.T @ stiffness @ rows), sp.csc_array(np.eye(3))).shifted
    counted = count_band(Cases(stiff, stiff, stiff), (0.5, 0.6))
    assert counted.inside is None
    assert counted.possible is None
    assert counted.undecided == ("nominal, at most 0.6 rad/s", "nominal, below 0.5 rad/s")


def test_two_counts_at_once_find_what_one_after_the_other_finds():
    alone = tolerance_cases().counters()
    with ThreadPoolExecutor(1) as beside:
        together = replace(tolerance_cases().counters(), beside=beside)
        for band in ((1.0, 13.09), (13.0, 14.15), (13.0, 21.0), (15.21, 17.32)):
            one, other = (count_band_by(counters, band, band) for counters in (alone, together))
            assert one == other


def test_a_sharper_counter_keeps_what_is_sharp_enough_and_counts_the_rest_anew():
    rough = Floating(pencil().shifted, 0.5)
    sharp = Sharpened(rough)
    kept = rough.at_most(15.0)
    assert sharp.at_most(15.0).number == kept.number == 1
    moved = replace(kept, edge=1.2 * kept.edge, number=2)  # as if an edge had to move far
    rough._made[15.0, "at most"] = moved
    assert rough.at_most(15.0) is moved
    found = sharp.at_most(15.0)
    assert found.number == 1
    assert abs(found.edge - 225.0) < 1e-6 * 225.0
    rough._made[15.0, "below"] = replace(kept, number=None)
    assert sharp.below(15.0).number == 1
