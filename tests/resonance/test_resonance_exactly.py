"""Verdicts without rounding, where floating point leaves them open."""

import math
from fractions import Fraction

import pytest
from oscillators import document, looked, machine, model_of, nearly_parallel

from modalview.bounds.exactly import squared_edge
from modalview.errors import CancelledError, InputError
from modalview.resonance.results import Verdict
from modalview.study import Request, look


def exactly(given, **more):
    return look(Request(model_of(given), exact=True, **more))


def test_edges_on_a_mode_are_inside_the_band():
    # 1 kg on (2 pi 50)^2 N/m as the nearest double lies on 50 Hz but for its rounding
    on_edge = machine("3000 rpm", "0 %")
    check = exactly(document([(50.0, None), (80.0, None)], on_edge)).checks[0]
    stored = Fraction(repr((2 * math.pi * 50) ** 2))
    inside = int(squared_edge(Fraction(50), -1)[0] <= stored < squared_edge(Fraction(50), 1)[0])
    assert (check.inside, check.proof) == (inside, "exactly")


def test_the_sentence_says_proven_exactly():
    outlook = exactly(document([(10.0, "5 %"), (80.0, "5 %")], machine("1500 rpm", "10 %")))
    assert outlook.verdict is Verdict.CLEAR
    assert outlook.checks[0].reason.endswith("at any value within tolerance; proven exactly")
    assert any("proven exactly" in note for note in outlook.notes)


def test_a_model_too_large_says_how_large_it_may_be():
    with pytest.raises(InputError, match=r"301 degrees of freedom; exact counts go to \d+"):
        exactly(document([(10.0, None)] * 301, machine()))


def test_exact_counts_tell_progress_and_can_be_stopped():
    told = []
    given = document([(10.0, "5 %"), (80.0, "5 %")], machine())
    exactly(given, progress=lambda what, share: told.append((what, share)))
    shares = [share for _, share in told]
    assert shares == sorted(shares)
    assert 0 < shares[0] <= shares[-1] <= 1
    assert told[0][0] == "exact counts: 1×"
    asked = iter([False] * 4 + [True] * 99)
    with pytest.raises(CancelledError):
        exactly(given, cancelled=lambda: next(asked))


def test_tolerance_cases_are_exact_too():
    given = document([(21.0, "10 %"), (80.0, None)], machine("1500 rpm", "15 %"))
    plain, exact = looked(given).checks[0], exactly(given).checks[0]
    assert exact.verdict is plain.verdict is Verdict.NOMINAL_ONLY
    assert (exact.inside, exact.possible, exact.certain) == (0, 1, 0)
    assert exact.deciding_case == plain.deciding_case == "stiff-light"


@pytest.mark.parametrize(("speed", "inside"), [("9.55 rpm", 1), ("3 rpm", 0)])
def test_what_rounding_leaves_open_is_decided(speed, inside):
    given = nearly_parallel(speed)
    assert looked(given).checks[0].inside is None
    check = exactly(given).checks[0]
    assert (check.inside, check.undecided) == (inside, ())
    assert check.reason.endswith("proven exactly" if inside else "proven exactly at the values as given")
