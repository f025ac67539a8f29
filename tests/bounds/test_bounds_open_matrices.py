"""Every bound known before a solve on its right side of the open matrices' eigenvalues."""

import sys
from decimal import Decimal
from functools import cache
from pathlib import Path

import numpy as np
import pytest

from modalview.assembly.pencil import Pencil
from modalview.bounds.before import Bounds, before_solve

sys.path.insert(0, str(Path(__file__).parents[1] / "data"))

import open_data

COPIED = ("mikota_20", "mikota_200", "gnm_1a8o", "gnm_2beg_chains", "gnm_2xhe", "anm_1a8o", "bcsstk02_I")
BESIDE = ("bcsst01", "lund", "shaft", "nos1_I", "nos4_I", "nos5_I")
SLOW = ("anm_2xhe", "bcsst11", "foundation")
NAMES = [*COPIED, *BESIDE, *(pytest.param(name, marks=pytest.mark.slow) for name in SLOW)]
WITH_TERMS = COPIED[:-1]
TURN = 2 * Decimal("3.14159265358979323846264338327950288")

read = cache(open_data.read)


def open_set(name: str) -> open_data.OpenSet:
    if name not in (*COPIED, "anm_2xhe") and not open_data.beside():
        pytest.skip(f"{name} may not be copied; ../shared/data beside the checkout is absent")
    return read(name)


@cache
def by_entries(name: str) -> Bounds:
    return before_solve(read(name).matrices())


def from_terms(name: str) -> Pencil:
    return open_data.mikota_terms(name) if name.startswith("mikota") else open_data.network_terms(name)


def hz(eigenvalue: str) -> Decimal:
    return Decimal(eigenvalue).sqrt() / TURN


def brackets(pair: tuple[float, float], eigenvalue: str) -> bool:
    return Decimal(pair[0]) <= hz(eigenvalue) <= Decimal(pair[1])


@pytest.mark.parametrize("name", NAMES)
def test_highest_is_bracketed(name: str) -> None:
    one = open_set(name)
    assert brackets(by_entries(name).highest_hz, one.highest[-1])


@pytest.mark.parametrize("name", NAMES)
def test_lowest_elastic_is_bracketed(name: str) -> None:
    one = open_set(name)
    lowest = by_entries(name).lowest_hz
    assert lowest is not None
    assert brackets(lowest, one.lowest[one.zero_modes])


@pytest.mark.parametrize("name", NAMES)
def test_zero_modes_are_counted(name: str) -> None:
    assert open_set(name).zero_modes == by_entries(name).rigid_body_modes


@pytest.mark.parametrize("name", NAMES)
def test_norms_lie_above(name: str) -> None:
    highest = Decimal(open_set(name).highest[-1])
    norms = by_entries(name).norms
    given = [norm for norm in (norms.one, norms.infinity, norms.frobenius) if norm is not None]
    assert all(Decimal(norm) >= highest for norm in given)
    assert (len(given) == 1) == (name == "lund")


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("kind", ["rows", "columns", "symmetric"])
def test_every_eigenvalue_lies_in_a_disc(name: str, kind: str) -> None:
    one = open_set(name)
    discs = getattr(by_entries(name), kind)
    if discs is None:
        assert name == "lund"  # its M couples the coordinates
        return
    assert sum(group.number for group in discs.groups) == one.finite
    low, high = discs.centres - discs.radii, discs.centres + discs.radii
    for value in [*one.lowest, *one.highest]:
        assert np.any((low <= float(value)) & (float(value) <= high))


@pytest.mark.parametrize("name", WITH_TERMS)
def test_bounds_from_terms(name: str) -> None:
    one = read(name)
    bounds = before_solve(from_terms(name))
    assert bounds.rigid_body_modes == one.zero_modes
    assert bounds.lowest_hz is not None
    assert brackets(bounds.lowest_hz, one.lowest[one.zero_modes])
    assert brackets(bounds.highest_hz, one.highest[-1])
