"""No case of the bank is left out unseen."""

from collections import Counter

import pytest
from check_bank import GROUPS, cases, figures


def test_every_case_is_in_a_checked_group():
    assert {case["group"] for case in cases().values()} == set(GROUPS)
    assert Counter(case["group"] for case in cases().values()) == {
        "A": 16,
        "B": 9,
        "C": 9,
        "D": 7,
        "E": 9,
        "F": 12,
        "G": 10,
        "H": 11,
        "I": 11,
    }


def test_every_expected_figure_is_a_test():
    asked = [figure.id for group in GROUPS for figure in figures(group)]
    wanted = [f"{name}-{one['name']}" for name, case in cases().items() for one in case["expected"]]
    assert sorted(asked) == sorted(wanted)
    assert len(set(asked)) == len(asked)


@pytest.mark.parametrize("name", cases())
def test_every_case_names_its_source_and_why_its_tolerance(name):
    case = cases()[name]
    assert case["source"]["citation"]
    assert case["source"]["status"] in {
        "figures seen in the source",
        "formula seen in the source",
        "inputs seen, answer recomputed",
        "from memory",
        "common practice",
    }
    assert case["tolerance_reason"]
    assert all({"exact", "abs", "rel"} & set(one["tolerance"]) for one in case["expected"])


def test_a_figure_off_by_more_than_its_tolerance_fails_and_tells_the_source():
    (figure,) = (one for one in figures("A") if one.id == "A01-omega")
    figure.check(figure.expected)
    with pytest.raises(AssertionError, match=r"French, Vibrations and Waves.*formula seen in the source"):
        figure.check([value * (1 + 1e-8) for value in figure.expected])
    with pytest.raises(AssertionError):
        figure.check(figure.expected[:-1])
