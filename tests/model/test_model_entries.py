"""Lengths nobody typed: short texts that read back to the same number."""

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.errors import UnitError
from modalview.model.entries import length_entry, length_like, point_of
from modalview.model.values import Entry
from modalview.units.parse import read
from modalview.units.quantities import LENGTH

quick = settings(derandomize=True, deadline=None, max_examples=60)
systems = st.sampled_from(("SI", "mm-t", "inch-pound"))


@pytest.mark.parametrize(
    ("metres", "system", "text"),
    [
        (-0.5, "SI", "-0.5 m"),
        (0.1 + 0.2, "SI", "0.3 m"),
        (0.3, "mm-t", "300 mm"),
        (0.3175, "inch-pound", "12.5 in"),
        (0.3, "inch-pound", "0.3 m"),  # 11.8110236... in is no length that anybody means
        (-0.0, "SI", "0 m"),
        (1e-31, "SI", "0 m"),  # no machine's length, but rounding of zero
    ],
)
def test_a_length_is_written_as_a_person_types_it(metres, system, text):
    assert length_entry(metres, system).text == text


@quick
@given(st.floats(-1e4, 1e4), systems)
def test_the_text_reads_back_to_the_number(metres, system):
    entry = length_entry(metres, system)
    assert read(entry.text, LENGTH) == entry.si
    assert entry.si == pytest.approx(metres, rel=1e-14, abs=1e-30)


@quick
@given(st.integers(-(10**9), 10**9), systems)
def test_a_typed_decimal_survives_exactly(micrometres, system):
    metres = micrometres / 1e6
    assert length_entry(metres, system).si == metres


def test_a_changed_length_keeps_its_unit_and_an_unchanged_one_stays_itself():
    old = Entry("850 mm", 0.85)
    assert length_like(old, 0.85) is old
    assert length_like(old, 0.95) == Entry("950 mm", 0.95)
    assert length_like(Entry("12 in", 0.3048), 0.1).text == "0.1 m"


def test_what_is_not_finite_is_refused():
    with pytest.raises(UnitError, match="finite"):
        point_of((0.0, float("nan")))
