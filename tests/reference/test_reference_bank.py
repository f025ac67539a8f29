"""No case of the bank is left out unseen: what is checked, and what waits, adds up to the whole bank."""

from collections import Counter

import pytest
from check_bank import ALSO_CHECKED, GROUPS_CHECKED, LEFT_FOR_LATER, cases, checked, figures


def test_every_case_of_the_checked_groups_is_checked():
    wanted = {name for name, case in cases().items() if case["group"] in GROUPS_CHECKED}
    assert wanted <= set(checked())
    assert Counter(cases()[name]["group"] for name in checked()) == {
        "A": 16,
        "B": 9,
        "C": 9,
        "D": 7,
        "E": 9,
        "F": 12,
        "G": 10,
        "I": 3,
    }


def test_the_cases_left_for_later_are_named():
    left = Counter(case["group"] for name, case in cases().items() if name not in checked())
    assert left == {"H": 11, "I": 8}
    assert set(left) == set(LEFT_FOR_LATER)
    assert set(ALSO_CHECKED) <= {name for name, case in cases().items() if case["group"] == "I"}


def test_every_expected_figure_of_the_checked_cases_is_a_test():
    asked = [figure.id for group in "ABCDEFGI" for figure in figures(group)]
    wanted = [f"{name}-{one['name']}" for name in checked() for one in cases()[name]["expected"]]
    assert sorted(asked) == sorted(wanted)
    assert len(set(asked)) == len(asked)


@pytest.mark.parametrize("name", checked())
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
