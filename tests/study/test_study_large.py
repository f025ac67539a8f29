"""The way of large models, on models small enough to be held against all modes."""

from importlib import import_module
from pathlib import Path

import numpy as np
import pytest

from modalview.assembly.assemble import assemble
from modalview.assembly.parameters import Case
from modalview.bounds.bands import Floating
from modalview.eigen.near_count import GapCounter
from modalview.eigen.solve import find_modes, never
from modalview.errors import InputError
from modalview.factor.counts import Count
from modalview.model.parts import Model
from modalview.store import parse_model, read_model
from modalview.study import Request, solve
from modalview.study.near import require_all_modes, solve_near

DEMOS = sorted((Path(__file__).parents[2] / "demo_models").glob("*/*.keepclear"))


@pytest.fixture
def all_are_large(monkeypatch):
    for name in ("solve", "look", "near"):
        monkeypatch.setattr(import_module(f"modalview.study.{name}"), "LARGEST", 0)


def chain(bodies: int, *, machines: bool = True) -> Model:
    rng = np.random.default_rng(3)
    masses = ",".join(
        f'{{"id": "b{i}", "mass": "{rng.uniform(50, 500):.1f} kg", "tolerance": "3 %"}}'
        for i in range(bodies)
    )
    ends = [f'{{"body": "b{i - 1}"}}' if i else '{"support": "g"}' for i in range(bodies)]
    links = ",".join(
        f'{{"id": "k{i}", "kind": "spring", "from": {{"body": "b{i}"}}, "to": {end}, '
        f'"stiffness": "{10 ** rng.uniform(6, 8):.4e} N/m", "tolerance": "10 %"}}'
        for i, end in enumerate(ends)
    )
    run = (
        '[{"id": "m", "speed": {"from": "1400 rpm", "to": "1480 rpm"}, "margin": "1 %", "excitations": '
        '[{"id": "1x", "order": 1, "at": {"body": "b7"}, "direction": "y"}, {"id": "99x", "order": 99}]}]'
    )
    return parse_model(
        '{"format": "keepclear", "version": 1, "motion": "single axis", "supports": [{"id": "g"}], '
        f'"bodies": [{masses}], "links": [{links}], "machines": {run if machines else "[]"}}}'
    )


def both_ways(model: Model, monkeypatch) -> tuple:
    usual = solve(Request(model))
    for name in ("solve", "look"):
        monkeypatch.setattr(import_module(f"modalview.study.{name}"), "LARGEST", 0)
    return usual, solve(Request(model))


def hold_together(usual, large) -> None:
    assert large.outlook.verdict is usual.outlook.verdict
    known = {mode.number: mode for mode in usual.modes}
    for mode in large.modes:
        other = known[mode.number]
        assert mode.frequency_hz == pytest.approx(other.frequency_hz, rel=1e-12)
        assert mode.range_hz == pytest.approx(other.range_hz, rel=1e-9)
        assert (mode.name, mode.kind) == (other.name, other.kind)
    for check, other in zip(large.checks, usual.checks, strict=True):
        assert (check.verdict, check.reason) == (other.verdict, other.reason)
        assert (check.inside, check.possible, check.certain) == (other.inside, other.possible, other.certain)
        assert check.nearest_mode == other.nearest_mode or check.separation == 0
        assert check.separation == pytest.approx(other.separation, abs=1e-12)
        assert check.worst_separation == pytest.approx(other.worst_separation, abs=1e-9)
        assert check.deciding_case == other.deciding_case


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: f"{path.parent.name}/{path.stem}")
def test_examples_come_out_as_usual(path, monkeypatch):
    hold_together(*both_ways(read_model(path), monkeypatch))


def test_a_chain_comes_out_as_usual(monkeypatch):
    usual, large = both_ways(chain(120), monkeypatch)
    hold_together(usual, large)
    assert 6 <= len(large.modes) < 40
    assert large.raw.complete is True
    assert "of 120 modes found" in large.evidence[0]
    assert large.checks[0].drives


@pytest.mark.usefixtures("all_are_large")
def test_nothing_to_check_is_said():
    with pytest.raises(InputError, match="120 modes, too many"):
        solve(Request(chain(120, machines=False)))


def test_modes_near_a_frequency_with_their_ranges():
    model = chain(90)
    every = solve(Request(model)).modes
    solution, near = solve_near(Request(model), 24.0, 5)
    assert near.numbers == tuple(mode.number for mode in solution.modes)
    for mode in solution.modes:
        assert mode.range_hz == pytest.approx(every[mode.number - 1].range_hz, rel=1e-12)
        assert mode.strain[0].id == every[mode.number - 1].strain[0].id
    assert "none missed (proven by counts)" in solution.evidence[0]


@pytest.mark.usefixtures("all_are_large")
def test_all_modes_of_a_large_model_are_refused():
    with pytest.raises(InputError, match="--near"):
        require_all_modes(chain(20))


@pytest.mark.parametrize("rounding", [0.0, 1.0], ids=["by pivots", "in gaps"])
def test_counts_in_gaps_are_those_by_pivots(rounding):
    pencil = assemble(chain(60)).pencil(Case.SOFT_HEAVY)
    modes = find_modes(pencil)
    usual = Floating(pencil.shifted)
    for omega in (10.0, 150.0, 400.0, float(2 * np.pi * modes.frequency_hz[30]), 1e5):
        counter = GapCounter(pencil, never, _rounding=rounding * omega**2)
        for own, other in (
            (counter.at_most(omega), usual.at_most(omega)),
            (counter.below(omega), usual.below(omega)),
        ):
            assert isinstance(own, Count)
            assert own.number == other.number
            assert ("gaps" in own.method) == bool(rounding)


@pytest.mark.slow
def test_a_hundred_thousand_masses():
    solution = solve(Request(chain(100_000)))
    assert solution.raw.complete is True
    assert [check.verdict.value for check in solution.checks] == ["mode in band", "clear"]
    assert all(check.nearest_mode for check in solution.checks)
