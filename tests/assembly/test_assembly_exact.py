"""Echelon form and null space in rational arithmetic."""

import random
from fractions import Fraction

import pytest

from modalview.assembly.exact import null_space, reduced_echelon


def random_forms(seed, rows, unknowns):
    """Sparse forms with small rational entries, some of them combinations of others."""
    draw = random.Random(seed)  # noqa: S311  (test data, not secrets)
    forms = [
        {u: Fraction(draw.randint(-5, 5), draw.randint(1, 7)) for u in draw.sample(unknowns, 3)}
        for _ in range(rows)
    ]
    for _ in range(rows // 2):
        a, b = draw.sample(forms[:rows], 2)
        forms.append({u: 2 * a.get(u, 0) - Fraction(1, 3) * b.get(u, 0) for u in {*a, *b}})
    draw.shuffle(forms)
    return forms


def rank(forms, unknowns):
    """Plain Gauss elimination on a dense table."""
    table = [[Fraction(form.get(u, 0)) for u in unknowns] for form in forms]
    found = 0
    for column in range(len(unknowns)):
        pivot = next((i for i in range(found, len(table)) if table[i][column]), None)
        if pivot is None:
            continue
        table[found], table[pivot] = table[pivot], table[found]
        for row in table[found + 1 :]:
            weight = row[column] / table[found][column]
            row[:] = [x - weight * y for x, y in zip(row, table[found], strict=True)]
        found += 1
    return found


def value(form, vector):
    return sum(Fraction(entry) * vector.get(unknown, 0) for unknown, entry in form.items())


def test_a_form_is_solved_for_the_unknown_that_stands_last():
    solved = reduced_echelon([{"a": Fraction(2), "b": Fraction(-4)}], "abc")
    assert solved == {"b": {"a": Fraction(1, 2)}}


def test_later_forms_are_put_into_earlier_ones():
    forms = [{"b": 1, "c": -1}, {"a": 1, "b": -3}]
    assert reduced_echelon(forms, "abc") == {"c": {"a": Fraction(1, 3)}, "b": {"a": Fraction(1, 3)}}


def test_contradictory_forms_hold_everything_still():
    assert reduced_echelon([{"a": 1, "b": -2}, {"a": 1, "b": -3}], "ab") == {"b": {}, "a": {}}


def test_no_forms_leave_every_unknown_free():
    assert null_space([], "ab") == [("a", {"a": 1}), ("b", {"b": 1})]


def test_null_space_by_hand():
    # x + y + z = 0 leaves x and y free, z = -x - y.
    found = null_space([{"x": 1, "y": 1, "z": 1}], "xyz")
    assert found == [("x", {"x": 1, "z": -1}), ("y", {"y": 1, "z": -1})]


@pytest.mark.parametrize("seed", range(20))
def test_random_rationals(seed):
    unknowns = [f"u{i}" for i in range(9)]
    forms = random_forms(seed, 3 + seed % 7, unknowns)
    solved, basis = reduced_echelon(forms, unknowns), null_space(forms, unknowns)
    assert len(solved) == rank(forms, unknowns)
    assert len(solved) + len(basis) == len(unknowns)
    for free, vector in basis:
        assert vector[free] == 1
        assert all(value(form, vector) == 0 for form in forms)
        assert not any(other in vector for other, _ in basis if other != free)
    for dependent, row in solved.items():
        assert not set(row) & set(solved)
        assert unknowns.index(dependent) >= 0
