"""Least changes, tolerances to narrow, and what may be changed at all."""

import math
from dataclasses import replace

import numpy as np
import pytest

from modalview.advice.changes.edges import gates_of
from modalview.advice.changes.least import Search
from modalview.advice.changes.narrowing import narrowing
from modalview.advice.changes.numbers import DOWN, UP, Written, rounded
from modalview.advice.changes.options import base_of
from modalview.advice.changes.placed import placement
from modalview.advice.changes.results import Found
from modalview.advice.changes.several import least_of
from modalview.advice.changes.values import every_variable, variable_named, variables_named
from modalview.errors import CancelledError, InputError
from modalview.model.parts import VaryLimits
from modalview.model.values import Entry
from modalview.units.quantities import INERTIA, STIFFNESS

TWO = {"id": "fan", "margin": "20 %", "excitations": [{"id": "a", "frequency": "10 Hz"}]}


def spring(name, body, other, stiffness, **more):
    to = {"body": other} if other != "g" else {"support": "g"}
    return {"id": name, "kind": "spring", "from": {"body": body}, "to": to, "stiffness": stiffness, **more}


@pytest.fixture
def parallel(model):
    """One mass of 100 kg on two springs beside each other: only their sum counts."""

    def make(one="200 N/mm", other="200 N/mm", machines=(TWO,)):
        return model(
            "single axis",
            bodies=[{"id": "m", "mass": "100 kg"}],
            supports=[{"id": "g"}],
            links=[spring("a", "m", "g", one), spring("b", "m", "g", other)],
            machines=list(machines),
        )

    return make


def least(model, weights=(1.0, 1.0), **search):
    base = base_of(model)
    chosen = variables_named(base.states[0].assembly, ("a.stiffness", "b.stiffness"))
    return least_of(base, gates_of(base.states), chosen, Search(weights, **search))


def test_the_cheaper_of_two_springs_is_changed(parallel):
    """The sum must fall from 400 to 252.7 N/mm, or rise to 568.5: ln (368.5 / 200) for one spring alone."""
    found = least(parallel(), weights=(1.0, 3.0))
    assert found.status is Found.FOUND
    assert found.factors[1] == 1.0
    upper = 1.44 * 100 * (20 * math.pi) ** 2
    assert found.amount == pytest.approx(math.log((upper - 2e5) / 2e5), abs=0.02)
    assert found.least == pytest.approx(math.log((upper - 2e5) / 2e5), abs=1e-3)


def test_what_no_spring_may_do_is_proven_to_exist_nowhere(parallel):
    free = parallel()
    limits = VaryLimits(low="150 N/mm", high="250 N/mm")
    both = replace(free, links=tuple(replace(one, vary_limits=limits) for one in free.links))
    found = least(both)
    assert found.status is Found.NONE_EXISTS
    assert found.option is None
    assert found.boxes >= 1
    assert "Proven by counts" in found.sentence
    assert "150 N/mm to 250 N/mm" in found.sentence


def test_a_search_cut_short_says_none_found(parallel):
    found = least(parallel(), most_boxes=0)
    assert found.status is Found.NONE_FOUND
    assert "no proof" in found.sentence


def test_a_search_cut_short_does_not_call_what_it_found_the_least(parallel):
    found = least(parallel(), most_boxes=1)
    assert found.status is Found.FOUND
    assert found.least < found.amount
    assert "perhaps not the least" in found.sentence


def test_a_search_can_be_stopped_and_tells_how_far_it_is(parallel):
    with pytest.raises(CancelledError):
        least(parallel(), cancelled=lambda: True)
    shares = []
    least(parallel(), progress=lambda _what, share: shares.append(share))
    assert shares
    assert all(0 <= share <= 1 for share in shares)


def test_springs_that_are_alike_or_stand_on_the_ground_change_by_one_factor_too(parallel):
    known = every_variable(base_of(parallel()).states[0].assembly)
    assert [one.id for one in known] == ["m.mass", "a.stiffness", "b.stiffness", "a.stiffness+b.stiffness"]
    assert known[-1].label == "stiffness of a and b"
    different = every_variable(base_of(parallel(other="201 N/mm")).states[0].assembly)
    assert different[-1].id == "a.stiffness+b.stiffness"
    assert different[-1].label == "stiffness of all 2 links to ground"


def test_values_that_are_not_there_are_refused_with_those_that_are(parallel):
    assembly = base_of(parallel()).states[0].assembly
    with pytest.raises(InputError, match=r'no value "c.stiffness". There are m.mass, a.stiffness'):
        variable_named(assembly, "c.stiffness")
    with pytest.raises(InputError, match="cannot change by one factor"):
        variable_named(assembly, "m.mass+a.stiffness")
    chosen = variables_named(assembly, ("a.stiffness", "a.stiffness"))
    with pytest.raises(InputError, match="named twice"):
        least_of(base_of(parallel()), (), chosen, Search((1.0, 1.0)))


def test_e_and_i_of_one_beam_are_not_varied_apart(model):
    beam = {"id": "c", "kind": "beam", "E": "210 GPa", "A": "50 cm2", "I": "800 cm4"}
    standing = model(
        "plane",
        bodies=[{"id": "m", "mass": "300 kg", "inertia": "20 kg m2", "position": ["0 m", "2 m"]}],
        supports=[{"id": "g", "position": ["0 m", "0 m"]}],
        links=[beam | {"from": {"support": "g"}, "to": {"body": "m"}}],
        machines=[TWO],
    )
    base = base_of(standing)
    assembly = base.states[0].assembly
    assert [one.id for one in every_variable(assembly) if one.family == "stiffness"] == ["c.A", "c.I"]
    with pytest.raises(InputError, match="act on one spring"):
        least_of(base, (), variables_named(assembly, ("c.E", "c.I")), Search((1.0, 1.0)))


def test_limits_of_a_mount_are_shares_of_each_direction(model):
    mounted = model(
        "plane",
        bodies=[{"id": "m", "mass": "300 kg", "inertia": "20 kg m2", "position": ["0 m", "1 m"]}],
        supports=[{"id": "g", "position": ["0 m", "0 m"]}],
        links=[
            {
                "id": "s",
                "kind": "mount",
                "from": {"body": "m"},
                "to": {"support": "g"},
                "stiffness": {"x": "300 N/mm", "y": "500 N/mm", "rz": "1e6 N m/rad"},
                "vary_limits": {"low": "50 %", "high": "200 %"},
            }
        ],
        machines=[TWO],
    )
    assembly = base_of(mounted).states[0].assembly
    whole = variable_named(assembly, "s.stiffness")
    assert whole.limits == (0.5, 2.0)
    assert whole.members == ("s.stiffness.x", "s.stiffness.y", "s.stiffness.rz")
    assert variable_named(assembly, "s.stiffness.y").limits == (0.5, 2.0)


NARROW = {"id": "fan", "margin": "4 %", "excitations": [{"id": "a", "frequency": "10 Hz"}]}


def test_the_one_tolerance_that_matters_is_narrowed_as_little_as_does(parallel):
    """10.066 Hz at nominal, 10.4 Hz wanted; at 11 Hz nominal a sum of 478 N/mm must stay above 427.1."""
    loose = {"value": "378 N/mm", "tolerance": "20 %"}
    found = narrowing(
        base_of(parallel(one=loose, other={"value": "100 N/mm", "tolerance": "3 %"}, machines=(NARROW,)))
    )
    assert (found.possible, found.smallest) == (True, True)
    (option,) = found.options
    (change,) = option.changes
    assert change.value == "a.stiffness.tolerance"
    edge = (1.04 * 20 * math.pi) ** 2 * 100
    exact = (378e3 - (edge - 97e3)) / 378e3
    assert 0.12 < exact < 0.13  # rounded down to two digits
    assert change.after_si == pytest.approx(0.12)
    assert option.clears
    assert option.text.startswith("Know stiffness of a to ±")


@pytest.mark.parametrize(
    ("tolerance", "written"),
    [
        ({"minus": "20 %", "plus": "30 %"}, "minus"),
        ({"from": "300 N/mm", "to": "450 N/mm"}, "from"),
    ],
)
def test_a_tolerance_is_narrowed_as_it_was_written(parallel, tolerance, written):
    model = parallel(one={"value": "378 N/mm", "tolerance": tolerance}, other="100 N/mm", machines=(NARROW,))
    (option,) = narrowing(base_of(model)).options
    new = option.edit.apply(model).links[0].stiffness.tolerance
    assert (new.minus is not None) == (written == "minus")
    assert (new.low is not None) == (written == "from")
    assert new.limits(378e3)[0] >= (1.04 * 20 * math.pi) ** 2 * 100 - 100e3


def test_no_tolerance_helps_against_the_tolerance_of_the_speed(parallel):
    machine = {
        "id": "fan",
        "speed": "600 rpm",
        "speed_tolerance": "20 %",
        "margin": "4 %",
        "excitations": [{"id": "1x", "order": 1}],
    }
    found = narrowing(base_of(parallel(one="378 N/mm", other="100 N/mm", machines=(machine,))))
    assert not found.possible
    assert found.sentence == "No value has a tolerance: only the tolerance of the speed reaches the band."


def test_nothing_is_narrowed_where_nothing_is_clear_at_nominal_only(parallel):
    assert narrowing(base_of(parallel())) is None


def test_a_mode_is_placed_or_told_how_far_it_goes(parallel):
    base = base_of(parallel())
    spring_a = variable_named(base.states[0].assembly, "a.stiffness")
    found = placement(base, spring_a, 1, 12.0)
    assert found.factor == pytest.approx(((24 * math.pi) ** 2 * 100 - 2e5) / 2e5, rel=1e-9)
    assert found.option.claim == "mode 1 at 12.00 Hz"
    low = math.sqrt(2e5 / 100) / (2 * math.pi)
    beyond = placement(base, spring_a, 1, 5.0)
    assert (beyond.factor, beyond.option) == (None, None)
    assert beyond.reach_hz == (pytest.approx(low), math.inf)
    assert "cannot put mode 1 at 5.000 Hz: it moves it from 7.118 Hz upward" in beyond.sentence
    with pytest.raises(InputError, match="modes 1 to 1"):
        placement(base, spring_a, 2, 12.0)
    with pytest.raises(InputError, match="above zero"):
        placement(base, spring_a, 1, 0.0)


@pytest.mark.parametrize("number", [270631.0, 0.0123456, 1.0, 9.9999e8, 4.7259e8])
@pytest.mark.parametrize("digits", [2, 4])
def test_rounding_to_a_side_never_crosses_the_number(number, digits):
    assert rounded(number, digits, DOWN) <= number <= rounded(number, digits, UP)
    assert rounded(number, digits, UP) - rounded(number, digits, DOWN) <= number * 10.0 ** (1 - digits)


def test_a_number_without_a_unit_of_its_own_is_written_in_one_that_is_shown():
    flywheel = Written(INERTIA, Entry.typed("GD2 184 kgf m2", INERTIA))
    assert flywheel.entry_of(40.123456, 4).text == "40.12 kg m2"
    sag = Written(STIFFNESS, Entry.typed("35 mm under 900 kg", STIFFNESS), "inch-pound")
    assert sag.entry_of(1.75e5, 4, DOWN).text.endswith("lbf/in")
    assert sag.entry_of(1.75e5, 4, DOWN).si <= 1.75e5 <= sag.entry_of(1.75e5, 4, UP).si


def test_counts_at_all_factors_are_those_of_new_factorizations(parallel):
    base = base_of(parallel())
    gate = gates_of(base.states)[0]
    chosen = variables_named(base.states[0].assembly, ("a.stiffness", "m.mass"))
    flexible = gate.upper.flexible(chosen)
    factors = np.array([[1.0, 1.0], [0.1, 1.0], [30.0, 1.0], [1.0, 0.01], [30.0, 100.0], [1.0, 3.0]])
    numbers, decided = flexible.counts(factors)
    sums, masses = 2e5 * (1 + factors[:, 0]), 100 * factors[:, 1]
    assert decided.all()
    assert numbers.tolist() == (sums / masses < gate.upper.omega**2).astype(int).tolist()


def test_many_terms_are_counted_by_new_factorizations_and_few_by_a_small_matrix(parallel):
    gate = gates_of(base_of(parallel()).states)[0]
    chosen = variables_named(gate.state.assembly, ("a.stiffness+b.stiffness", "m.mass"))
    factors = np.exp(np.random.default_rng(3).uniform(-3, 3, (40, 2)))
    for edge in (gate.upper, gate.lower):
        few, sure = edge.flexible(chosen).counts(factors)
        many, also = edge._refactored(chosen).counts(factors)
        assert sure.all()
        assert also.all()
        assert few.tolist() == many.tolist()
        assert len(set(few.tolist())) == 2
