"""Matrices in fractions are those in doubles, and exact verdicts are those of decided floating counts."""

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, reject, settings
from random_models import documents, parsed

from modalview.assembly.assemble import assemble
from modalview.assembly.exactly import ExactForms
from modalview.assembly.parameters import Case
from modalview.errors import ModelFaultsError
from modalview.study import Request, look

quick = settings(
    derandomize=True,
    deadline=None,
    max_examples=25,
    phases=(Phase.explicit, Phase.generate),
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much],
)


def assembled(document):
    try:
        return assemble(parsed(document))
    except ModelFaultsError:
        reject()


def dense(entries, n):
    matrix = np.zeros((n, n))
    for (i, j), entry in entries.items():
        matrix[i, j] = matrix[j, i] = float(entry)
    return matrix


@pytest.mark.parametrize("case", list(Case))
@quick
@given(document=documents())
def test_matrices_in_fractions_are_those_in_doubles(case, document):
    assembly = assembled(document)
    exact, pencil = ExactForms(assembly).pencil(case), assembly.pencil(case)
    apart = np.abs(dense(exact.stiffness, exact.n) - pencil.K.toarray())
    assert np.all(apart <= 1e-13 * pencil.formation.toarray())
    mass = pencil.M.toarray()
    assert np.allclose(dense(exact.mass, exact.n), mass, rtol=1e-13, atol=1e-13 * mass.max())


@quick
@given(document=documents())
def test_exact_verdicts_are_those_of_decided_counts(document):
    model = parsed(document)
    try:
        plain = look(Request(model))
    except ModelFaultsError:
        reject()
    exact = look(Request(model, exact=True), plain)
    for ours, proven in zip(plain.checks, exact.checks, strict=True):
        assert proven.proof == "exactly"
        assert not proven.undecided
        if not ours.undecided:
            assert (ours.verdict, ours.inside, ours.possible, ours.certain) == (
                proven.verdict,
                proven.inside,
                proven.possible,
                proven.certain,
            )
