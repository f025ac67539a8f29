"""Of any model: the frequencies of samples lie in the ranges that two cases prove."""

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, reject, settings
from hypothesis import strategies as st
from random_models import Wishes, documents, parsed

from modalview.errors import ModelFaultsError
from modalview.study import Request, look
from modalview.study.sampling import sample
from modalview.study.vary_results import TRIANGULAR, UNIFORM, SampleRequest

few, many = (
    settings(
        derandomize=True,
        deadline=None,
        max_examples=examples,
        phases=(Phase.explicit, Phase.generate),
        suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much],
    )
    for examples in (5, 300)
)
# Dense solves are right to this share of the highest eigenvalue: its root of the highest frequency.
ROUNDING = 1e-13


drawn_from = given(documents(Wishes()), st.integers(0, 99), st.sampled_from((UNIFORM, TRIANGULAR)))


@few
@drawn_from
def test_samples_lie_within_the_proven_ranges(document, seed, spread):
    within(document, seed, spread)


@pytest.mark.slow
@many
@drawn_from
def test_samples_of_many_models_lie_within_the_proven_ranges(document, seed, spread):
    within(document, seed, spread)


def within(document, seed, spread):
    model = parsed(document)
    try:
        outlook = look(Request(model))
    except ModelFaultsError:  # random joints may leave no motion
        reject()
    if not outlook.toleranced:
        reject()
    drawn = sample(SampleRequest(model, samples=64, seed=seed, spread=spread))
    low, high = drawn.proven_hz.T
    slack = ROUNDING * high[-1] ** 2
    assert np.all(drawn.frequencies_hz**2 >= low**2 * (1 - 1e-12) - slack)
    assert np.all(drawn.frequencies_hz**2 <= high**2 * (1 + 1e-12) + slack)
