import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.eigen.dampedratio import (
    decrement_of_peaks,
    decrement_of_ratio,
    proportional_coefficients,
    proportional_ratios,
    ratio_of_decrement,
    real_pair_ratio,
)
from modalview.errors import InputError


@settings(derandomize=True, max_examples=30)
@given(st.floats(0, 0.999))
def test_ratio_and_decrement_go_there_and_back(ratio):
    assert ratio_of_decrement(decrement_of_ratio(ratio)) == pytest.approx(ratio, rel=1e-12)


@settings(derandomize=True, max_examples=30)
@given(st.floats(1e-6, 10), st.integers(1, 50))
def test_peaks_some_cycles_apart(decrement, cycles):
    assert decrement_of_peaks(1.0, math.exp(-decrement * cycles / 50), cycles) == pytest.approx(
        decrement / 50
    )


def test_proportional_damping_meets_its_two_frequencies():
    alpha, beta = proportional_coefficients(10.0, 30.0, 0.05)
    ratios = proportional_ratios(alpha, beta, np.array([5.0, 10.0, 20.0, 30.0, 60.0]))
    assert ratios[[1, 3]] == pytest.approx([0.05, 0.05])
    assert ratios[2] < 0.05 < min(ratios[0], ratios[4])


def test_rates_of_a_real_pair():
    assert real_pair_ratio(2.0, 2.0) == 1.0
    assert real_pair_ratio(1e-200, 1e-200) == pytest.approx(1.0)


@pytest.mark.parametrize(
    ("call", "found"),
    [
        (lambda: decrement_of_ratio(1.0), "found 1"),
        (lambda: decrement_of_ratio(math.nan), "found nan"),
        (lambda: ratio_of_decrement(-0.1), r"found -0\.1"),
        (lambda: decrement_of_peaks(1.0, 0.0, 1), "found 1, 0, 1"),
        (lambda: decrement_of_peaks(1.0, 0.5, 0), r"found 1, 0\.5, 0"),
        (lambda: proportional_coefficients(10.0, 10.0, 0.05), "found 10 and 10"),
    ],
)
def test_what_means_nothing_is_refused(call, found):
    with pytest.raises(InputError, match=found):
        call()
