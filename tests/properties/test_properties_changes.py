"""Windows, least changes and placed modes of random models, held against counts at many values."""

import math

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, reject, settings
from hypothesis import strategies as st
from random_models import Wishes, documents, parsed

from modalview.advice.changes.ceilings import reach
from modalview.advice.changes.edges import gates_of
from modalview.advice.changes.landscape import landscape
from modalview.advice.changes.least import Search, least_change
from modalview.advice.changes.narrowing import narrowing
from modalview.advice.changes.options import base_of
from modalview.advice.changes.placement import placing_factor
from modalview.advice.changes.results import Found
from modalview.advice.changes.several import least_of
from modalview.advice.changes.values import every_variable, require_apart
from modalview.advice.changes.windows import corners, spans
from modalview.assembly.parameters import Case
from modalview.eigen.solve import find_modes
from modalview.errors import InputError, ModelFaultsError
from modalview.resonance.results import Verdict
from modalview.study import Request, look, solve

quick = settings(
    derandomize=True,
    deadline=None,
    max_examples=6,
    phases=(Phase.explicit, Phase.generate),
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much, HealthCheck.data_too_large],
)
few = settings(quick, max_examples=5)
many = settings(quick, max_examples=150)
RAD_PER_HZ = 2 * math.pi
# Factors nearer to an end than this may count either way: edges move outward by up to 1e-6 of their square.
NEAR = 1e-4
# Searched by brute force too: factors from a quarter to four times, so many to a side.
WIDTH, GRID = math.log(4.0), 17
CALM = Wishes(motions=("single axis", "shaft train", "plane"))


def based(document):
    try:
        return base_of(parsed(document))
    except ModelFaultsError:
        reject()


def clear_at(gates, variables, factors):
    """Whether counts with proven edges say that every check is clear at some factors."""
    named = {one.id: one for one in variables}
    point = dict(zip(named, factors, strict=True))
    soft, _ = corners(named, point, point)
    for gate in gates:
        most = gate.state.counter_with(Case.SOFT_HEAVY, soft).at_most(gate.upper.omega).number
        least = gate.state.counter_with(Case.STIFF_LIGHT, soft).below(gate.lower.omega).number
        if most is None or least is None or most > least:
            return False
    return True


def chosen(base, data, number):
    """Draw some variables that share no term."""
    every = every_variable(base.states[0].assembly)
    if len(every) < number:
        reject()
    found = data.draw(st.permutations(range(len(every))))[:number]
    variables = tuple(every[i] for i in found)
    try:
        require_apart(base.states[0].assembly, variables)
    except InputError:
        reject()
    return variables


def windows_hold(document, data):
    base = based(document)
    (variable,) = chosen(base, data, 1)
    gates = gates_of(base.states)
    found = spans(gates, variable)
    ends = [end for one in found for end in (one.low, one.high)]
    for factor in np.exp(np.linspace(-6.0, 6.0, 25)):
        if all(abs(factor / end - 1) > NEAR for end in ends if 0 < end < math.inf):
            inside = any(one.low < factor < one.high for one in found)
            assert clear_at(gates, (variable,), (factor,)) == inside


@quick
@given(document=documents(), data=st.data())
def test_a_value_clears_everything_just_where_a_window_says(document, data):
    windows_hold(document, data)


@pytest.mark.slow
@many
@given(document=documents(), data=st.data())
def test_windows_hold_over_many_models(document, data):
    windows_hold(document, data)


def least_holds(document, data):
    """The least change clears by counts, and no point of a grid is cheaper; "none exists" has none at all."""
    base = based(document)
    variables = tuple(
        type(one)(one.id, one.label, one.family, one.members, (math.exp(-WIDTH), math.exp(WIDTH)))
        for one in chosen(base, data, 2)
    )
    gates = gates_of(base.states)
    found = least_of(base, gates, variables, Search((1.0, 2.0), most_boxes=6_000))
    scene = landscape(gates, variables)
    axis = np.linspace(-WIDTH, WIDTH, GRID)
    points = np.stack(np.meshgrid(axis, axis, indexing="ij"), axis=-1).reshape(-1, 2)
    clear = scene.clear(np.exp(points))
    costs = np.abs(points) @ np.array([1.0, 2.0])
    cheapest = float(costs[clear].min(initial=math.inf))
    if found.status is Found.FOUND:
        after = look(Request(found.option.edit.apply(base.model)))
        assert after.verdict is Verdict.CLEAR
        assert found.least <= cheapest + 1e-3
        assert found.least <= found.amount + 1e-9
        assert clear_at(gates, variables, found.factors)
    elif found.status is Found.NONE_EXISTS:
        assert not clear.any()
        sample = points[:: GRID + 3]
        assert not any(clear_at(gates, variables, np.exp(one)) for one in sample)
    elif found.status is Found.CLEAR_NOW:
        assert base.clear
    return found.status


@few
@given(document=documents(CALM), data=st.data())
def test_no_change_of_two_values_is_smaller_than_the_least_one(document, data):
    least_holds(document, data)


@pytest.mark.slow
@many
@given(document=documents(), data=st.data())
def test_the_least_change_holds_over_many_models(document, data):
    least_holds(document, data)


@quick
@given(document=documents(CALM), data=st.data(), share=st.floats(0.05, 0.95))
def test_a_placed_mode_lies_where_it_was_wanted(document, data, share):
    base = based(document)
    state = base.states[0]
    (variable,) = chosen(base, data, 1)
    rigid = state.assembly.structure.rigid_body.shape[1]
    modes = state.assembly.pencil().modes
    if rigid == modes:
        reject()
    mode = data.draw(st.integers(rigid + 1, modes))
    span = reach(state, variable)
    low, high = sorted((span.at_zero[mode - 1], span.at_infinity[mode - 1]))
    if not high > low * (1 + 1e-3) or high == math.inf:
        reject()
    wanted = low + share * (high - low)
    factor = placing_factor(state, variable, mode, wanted)
    assert factor is not None
    after = state.pencil_with(Case.NOMINAL, dict.fromkeys(variable.members, factor))
    assert find_modes(after).frequency_hz[mode - 1] == pytest.approx(wanted, rel=1e-6)
    for beyond in (low * 0.98, high * 1.02):
        if beyond > 0:
            assert placing_factor(state, variable, mode, beyond) is None


@quick
@given(document=documents(CALM), data=st.data())
def test_modes_come_near_their_ceilings_at_extreme_values(document, data):
    base = based(document)
    state = base.states[0]
    (variable,) = chosen(base, data, 1)
    found = reach(state, variable)
    far = {
        "at_zero": dict.fromkeys(variable.members, 1e-9),
        "at_infinity": dict.fromkeys(variable.members, 1e9),
    }
    for end, factors in far.items():
        ceiling = getattr(found, end)
        there = find_modes(state.pencil_with(Case.NOMINAL, factors)).frequency_hz
        finite = (ceiling > 0) & (ceiling < math.inf)
        assert np.all(np.diff(ceiling[ceiling < math.inf]) >= -1e-9 * ceiling[finite].max(initial=1.0))
        assert there[finite] == pytest.approx(ceiling[finite], rel=1e-3)


@few
@given(document=documents(CALM))
def test_narrowed_tolerances_prove_the_checks_they_name(document):
    base = based(document)
    found = narrowing(base)
    for option in (found.options if found else ())[:2]:
        after = solve(Request(option.edit.apply(base.model)))
        clear = {one.band.check for one in after.checks if one.verdict is Verdict.CLEAR}
        assert set(found.checks) <= clear
        assert all(one.after_si < one.before_si for one in option.changes)


@few
@given(document=documents(CALM), data=st.data())
def test_a_search_that_ends_early_claims_nothing(document, data):
    base = based(document)
    variables = chosen(base, data, 2)
    scene = landscape(gates_of(base.states), variables)
    found = least_change(scene, Search((1.0, 1.0), most_boxes=1))
    if found.status is Found.NONE_EXISTS:
        assert found.boxes == 1
        assert not scene.clear(np.exp(np.random.default_rng(1).uniform(-4, 4, (200, 2)))).any()
