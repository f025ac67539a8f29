"""Windows of values against closed forms: one mass on one spring, and what belongs to it."""

import math

import pytest

from modalview.advice.changes.edges import gates_of
from modalview.advice.changes.options import base_of
from modalview.advice.changes.single import value_windows, window_options
from modalview.advice.changes.values import variable_named
from modalview.errors import ModelFaultsError

TEN_HZ = (20 * math.pi) ** 2
SHARE = 2e-3  # four digits, rounded inward
EXCITED = [{"id": "fan", "margin": "20 %", "excitations": [{"id": "blade", "frequency": "10 Hz"}]}]


def spring(stiffness, tolerance=None, **more):
    value = {"value": stiffness, "tolerance": tolerance} if tolerance else stiffness
    ends = {"from": {"body": "m"}, "to": {"support": "g"}}
    return {"id": "k", "kind": "spring", **ends, "stiffness": value, **more}


@pytest.fixture
def oscillator(model):
    def make(link=None, mass="100 kg", **more):
        return model(
            "single axis",
            bodies=[{"id": "m", "mass": mass}],
            supports=[{"id": "g"}],
            links=[link or spring("400 N/mm")],
            **{"machines": EXCITED, **more},
        )

    return make


def found(model, value="k.stiffness"):
    base = base_of(model)
    return value_windows(base, gates_of(base.states), variable_named(base.states[0].assembly, value), None)


def ends(model, value="k.stiffness"):
    return [(one.low, one.high) for one in found(model, value).windows]


def test_a_spring_is_clear_below_and_above_the_band(oscillator):
    """k = m (2 pi f)**2 at 8 Hz and 12 Hz."""
    (below, above) = ends(oscillator())
    assert below == (0.0, pytest.approx(100 * 0.64 * TEN_HZ, rel=SHARE))
    assert above == (pytest.approx(100 * 1.44 * TEN_HZ, rel=SHARE), math.inf)
    assert below[1] <= 100 * 0.64 * TEN_HZ
    assert above[0] >= 100 * 1.44 * TEN_HZ


def test_a_mass_is_clear_above_and_below_the_band(oscillator):
    (light, heavy) = ends(oscillator(), "m.mass")
    assert light == (0.0, pytest.approx(4e5 / (1.44 * TEN_HZ), rel=SHARE))
    assert heavy == (pytest.approx(4e5 / (0.64 * TEN_HZ), rel=SHARE), math.inf)


@pytest.mark.parametrize(
    ("tolerance", "low", "high"),
    [
        ("10 %", 0.9, 1.1),
        ({"minus": "5 %", "plus": "30 %"}, 0.95, 1.3),
        ({"from": "380 N/mm", "to": "500 N/mm"}, 0.95, 1.25),
    ],
)
def test_the_tolerance_moves_along_with_its_value(oscillator, tolerance, low, high):
    below, above = ends(oscillator(spring("400 N/mm", tolerance)))
    assert below[1] == pytest.approx(64 * TEN_HZ / high, rel=SHARE)
    assert above[0] == pytest.approx(144 * TEN_HZ / low, rel=SHARE)


def test_limits_of_a_tolerance_are_written_anew_with_the_value(oscillator):
    model = oscillator(spring("400 N/mm", {"from": "380 N/mm", "to": "500 N/mm"}))
    base = base_of(model)
    variable = variable_named(base.states[0].assembly, "k.stiffness")
    options = list(window_options(base, variable, found(model)))
    assert [one.clears for one in options] == [True, True]
    for option in options:
        value = option.edit.apply(model).links[0].stiffness
        assert value.tolerance.low.si / value.si == pytest.approx(0.95, rel=1e-6)
        assert value.tolerance.high.si / value.si == pytest.approx(1.25, rel=1e-6)
        assert value.source == "proposed; before: 400 N/mm"


def test_a_value_keeps_the_unit_it_was_typed_in(oscillator):
    texts = [one.text for one in found(oscillator(spring("2284 lbf/in"))).windows]
    assert texts[0].endswith(" lbf/in")
    assert "N" not in texts[0]


def test_a_dynamic_ratio_counts(oscillator):
    plain, faster = ends(oscillator()), ends(oscillator(spring("400 N/mm", dynamic_ratio="1.6")))
    assert faster[0][1] == pytest.approx(plain[0][1] / 1.6, rel=SHARE)


def test_limits_for_changes_cut_the_windows(oscillator):
    link = spring("400 N/mm", vary_limits={"low": "100 N/mm", "high": "600 N/mm"})
    (below, above) = found(oscillator(link)).windows
    assert (below.low, below.bound_by) == (1e5, ("your limit", "fan/blade, stiff-light"))
    assert (above.high, above.bound_by) == (6e5, ("fan/blade, soft-heavy", "your limit"))


def test_every_machine_and_fixed_frequency_counts(oscillator):
    second = {"id": "pump", "speed": "1500 rpm", "margin": "10 %", "excitations": [{"id": "1x", "order": 1}]}
    windows = ends(oscillator(machines=[*EXCITED, second]))
    assert len(windows) == 3
    assert windows[1][1] == pytest.approx(100 * (2 * math.pi * 22.5) ** 2, rel=SHARE)
    assert windows[2][0] == pytest.approx(100 * (2 * math.pi * 27.5) ** 2, rel=SHARE)


def test_a_tolerance_of_the_speed_widens_the_band(oscillator):
    machine = {
        "id": "pump",
        "speed": "600 rpm",
        "speed_tolerance": "5 %",
        "margin": "20 %",
        "excitations": [{"id": "1x", "order": 1}],
    }
    below, above = ends(oscillator(machines=[machine]))
    assert below[1] == pytest.approx(100 * (0.95 * 0.8) ** 2 * TEN_HZ, rel=SHARE)
    assert above[0] == pytest.approx(100 * (1.05 * 1.2) ** 2 * TEN_HZ, rel=SHARE)


def test_a_window_clears_every_load_case(oscillator):
    full = {"id": "full", "name": "full drum", "changes": [{"part": "m", "key": "mass", "value": "150 kg"}]}
    below, above = found(oscillator(load_cases=[full])).windows
    assert below.high == pytest.approx(64 * TEN_HZ, rel=SHARE)
    assert above.low == pytest.approx(1.5 * 144 * TEN_HZ, rel=SHARE)
    assert above.bound_by[0] == "fan/blade (full drum), soft-heavy"


def test_a_value_that_a_load_case_sets_stays_there(oscillator):
    """In the case it is 200 kg, at 7.1 Hz, whatever the mass is; 100 kg in the band spoils every mass."""
    full = {"id": "full", "changes": [{"part": "m", "key": "mass", "value": "200 kg"}]}
    assert ends(oscillator(load_cases=[full]), "m.mass") == ends(oscillator(), "m.mass")
    near = {"id": "near", "changes": [{"part": "m", "key": "mass", "value": "100 kg"}]}
    assert ends(oscillator(spring("400 N/mm"), mass="500 kg", load_cases=[near]), "m.mass") == []


def test_a_load_case_that_cannot_be_analysed_is_named(model):
    full = {"id": "full", "changes": [{"part": "m", "key": "mass", "value": "0 kg"}]}
    bad = model(
        "single axis",
        bodies=[{"id": "m", "mass": "100 kg"}],
        supports=[{"id": "g"}],
        links=[spring("400 N/mm")],
        machines=EXCITED,
        load_cases=[full],
    )
    with pytest.raises(ModelFaultsError, match="full"):
        base_of(bad)


def test_inertia_reflected_through_gears_has_its_windows(model):
    """Two inertias on one rigid gear pair of 3 : 1 on a shaft to a third one held fixed: J = J1 + 9 J2."""
    turning = model(
        "shaft train",
        bodies=[
            {"id": "wall", "inertia": "5000 kg m2"},
            {"id": "one", "inertia": "10 kg m2"},
            {"id": "two", "inertia": "1 kg m2"},
        ],
        links=[
            {
                "id": "s",
                "kind": "shaft",
                "from": {"body": "wall"},
                "to": {"body": "one"},
                "stiffness": "9000 N m/rad",
            },
            {"id": "g", "kind": "gear", "from": {"body": "one"}, "to": {"body": "two"}, "ratio": 3.0},
        ],
        machines=[{"id": "fan", "margin": "20 %", "excitations": [{"id": "e", "frequency": "5 Hz"}]}],
    )
    above = ends(turning, "two.inertia")[-1]
    # 1 / J + 1 / 5000 = (0.8 * 10 pi)**2 / 9000
    wanted = 1 / ((0.8 * 10 * math.pi) ** 2 / 9000 - 1 / 5000)
    assert above[0] == pytest.approx((wanted - 10) / 9, rel=SHARE)


def test_a_value_narrower_than_four_digits_is_told_with_more(oscillator):
    machines = [
        {"id": "low", "margin": "1 %", "excitations": [{"id": "e", "frequency": "10 Hz"}]},
        {"id": "high", "margin": "1 %", "excitations": [{"id": "e", "frequency": "10.2034 Hz"}]},
    ]
    middle = found(oscillator(machines=machines)).windows[1]
    assert middle.exact[0] <= middle.low < middle.high <= middle.exact[1]
    assert middle.high - middle.low > 0.9 * (middle.exact[1] - middle.exact[0])
    assert middle.proven
