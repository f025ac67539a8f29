"""Open matrices of others: see tests/data/README.md for sources and licences."""

from decimal import Decimal
from functools import cache
from itertools import pairwise

import numpy as np
import open_data
import pytest

from modalview.assembly.pencil import Pencil
from modalview.eigen.modes import Modes
from modalview.eigen.solve import find_modes
from modalview.factor.counts import count_at_most, count_below

UNIT = 2.0**-53

# A solve from the entries of K loses u times highest over lowest eigenvalue; this many such units at most
# (measured: 0.4 on the worst set), beside what is lost anyway (2.3e-15 on lund, whose M is full).
UNITS = 2
FROM_ENTRIES = 4e-15
# From the terms hardly anything is lost. The spring networks' references belong to K as it is rounded in
# the file, which moves eigenvalues by a unit or so of the largest.
FROM_TERMS = 1e-15

COPIED = ("mikota_20", "mikota_200", "gnm_1a8o", "gnm_2beg_chains", "gnm_2xhe", "anm_1a8o", "bcsstk02_I")
WITH_TERMS = ("mikota_20", "mikota_200", "gnm_1a8o", "gnm_2beg_chains", "gnm_2xhe", "anm_1a8o")
BESIDE = ("bcsst01", "lund", "shaft", "nos1_I", "nos4_I", "nos5_I")
SLOW = ("anm_2xhe", "bcsst11", "foundation")
BIG = pytest.mark.slow
ALL = [*COPIED, *BESIDE, *(pytest.param(name, marks=BIG) for name in SLOW)]

# Graded or large sets where rounding leaves counts near the softest modes undecided, honestly: the proven
# uncertainty exceeds 1e-6 of the shift (bcsst11: all but the two highest of ten shifts).
SOME_UNDECIDED = ("shaft", "bcsst11", "anm_2xhe", "foundation")

read = cache(open_data.read)


def open_set(name: str) -> open_data.OpenSet:
    if name not in (*COPIED, "anm_2xhe") and not open_data.beside():
        pytest.skip(f"{name} may not be copied; ../shared/data beside the checkout is absent")
    return read(name)


@cache
def by_entries(name: str) -> Modes:
    return find_modes(read(name).matrices())


def terms(name: str) -> Pencil:
    return open_data.mikota_terms(name) if name.startswith("mikota") else open_data.network_terms(name)


@cache
def by_terms(name: str) -> Modes:
    return find_modes(terms(name))


def references(one: open_data.OpenSet) -> list[tuple[int, str]]:
    """Return (index, eigenvalue) of everything known."""
    whole = one.spectrum()
    if whole is not None:
        return list(enumerate(whole))
    top = one.finite - len(one.highest)
    return [*enumerate(one.lowest), *((top + i, value) for i, value in enumerate(one.highest))]


def errors(one: open_data.OpenSet, modes: Modes) -> list[tuple[float, float]]:
    """Return (relative error, highest over this eigenvalue) of the lowest and the highest ten."""
    top = one.finite - len(one.highest)
    known = [*enumerate(one.lowest), *((top + i, value) for i, value in enumerate(one.highest))]
    elastic = [(index, Decimal(value)) for index, value in known if Decimal(value) != 0]
    highest = Decimal(one.highest[-1])
    return [
        (abs(float(Decimal(float(modes.eigenvalues[i])) / value - 1)), float(highest / value))
        for i, value in elastic
    ]


def assert_enclosed(one: open_data.OpenSet, modes: Modes) -> None:
    for index, value in references(one):
        low, high = Decimal(float(modes.lower[index])), Decimal(float(modes.upper[index]))
        assert low <= Decimal(value) <= high, (one.name, index)
        hz = Decimal(value).sqrt() / (2 * Decimal("3.14159265358979323846264338327950288"))
        off = abs(hz - Decimal(float(modes.frequency_hz[index])))
        assert off <= Decimal(float(modes.numerical_error_hz[index])), (one.name, index)


@pytest.mark.parametrize("name", ALL)
def test_entries_give_the_reachable_accuracy(name: str) -> None:
    one = open_set(name)
    modes = by_entries(name)
    assert modes.number == one.finite
    assert all(error <= FROM_ENTRIES + UNITS * UNIT * ratio for error, ratio in errors(one, modes))


@pytest.mark.parametrize("name", ALL)
def test_truth_lies_inside_every_error_bound(name: str) -> None:
    assert_enclosed(open_set(name), by_entries(name))


@pytest.mark.parametrize("name", ALL)
def test_zero_modes_and_completeness(name: str) -> None:
    one = open_set(name)
    modes = by_entries(name)
    assert modes.rigid_body_modes == one.zero_modes
    assert modes.unstable == 0
    assert modes.complete is True
    assert np.all(modes.frequency_hz[: one.zero_modes] == 0)
    assert np.all(modes.frequency_hz[one.zero_modes :] > 0)


@pytest.mark.parametrize("name", [*WITH_TERMS, pytest.param("anm_2xhe", marks=BIG)])
def test_terms_give_full_accuracy(name: str) -> None:
    one = read(name)
    modes = by_terms(name)
    rounded = UNITS * UNIT if name.startswith("anm") else 0.0
    assert all(error <= FROM_TERMS + rounded * ratio for error, ratio in errors(one, modes))
    assert modes.rigid_body_modes == one.zero_modes
    assert np.all(modes.numerical_error_hz[: one.zero_modes] == 0)
    assert modes.complete is True


@pytest.mark.parametrize("name", WITH_TERMS)
def test_truth_lies_inside_the_bounds_from_terms(name: str) -> None:
    assert_enclosed(read(name), by_terms(name))


@pytest.mark.parametrize("name", WITH_TERMS)
def test_error_bounds_from_terms_are_narrow(name: str) -> None:
    modes = by_terms(name)
    half = (modes.upper - modes.lower)[modes.elastic] / modes.eigenvalues[modes.elastic] / 2
    assert np.median(half) <= 1e-14


@pytest.mark.parametrize("name", ALL)
def test_counts_at_ten_shifts(name: str) -> None:
    """At the widest gaps between neighbouring references, and outward at the eigenvalues themselves."""
    one = open_set(name)
    shifted = one.matrices().shifted
    known = [(index, Decimal(value)) for index, value in references(one)]
    gaps = [
        (float(high / low - 1), index + 1, float((low + high) / 2))
        for (index, low), (following, high) in pairwise(known)
        if following == index + 1 and low > 0
    ]
    widest = sorted(gaps, reverse=True)[:10]
    assert len(widest) == 10
    decided = 0
    for _, below, shift in widest:
        for count in (count_at_most(shifted, shift), count_below(shifted, shift)):
            assert count.number in (below, None)
            decided += count.number is not None
    assert decided == 20 or (name in SOME_UNDECIDED and decided >= 4)


@pytest.mark.parametrize("name", COPIED)
def test_counts_at_eigenvalues_err_outward(name: str) -> None:
    one = read(name)
    shifted = one.matrices().shifted
    for index, value in references(one)[one.zero_modes :: 9]:
        at = float(value)
        inside, outside = count_at_most(shifted, at), count_below(shifted, at)
        assert inside.number is None or inside.number >= index + 1
        assert outside.number is None or outside.number <= index


def test_networks_match_their_matrices() -> None:
    for name in WITH_TERMS:
        one, built = read(name), terms(name)
        assert abs(built.K - one.K).max() <= 1e-14 * abs(one.K).max(), name
        assert abs(built.M - one.M).max() == 0, name


def test_repeated_frequencies_are_subspaces() -> None:
    """The five chains of 2BEG are partly equal: frequencies repeat, most exactly, some to 1e-9."""
    truth = [Decimal(value) for value in read("gnm_2beg_chains").spectrum()]
    apart = [i + 1 for i, (one, two) in enumerate(pairwise(truth)) if two - one > Decimal("1e-9") * two]
    modes = by_terms("gnm_2beg_chains")
    assert modes.groups == tuple(pairwise([0, *apart, len(truth)]))
    assert len(modes.repeated) == 26
