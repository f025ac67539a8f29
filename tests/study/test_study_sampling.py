"""Samples: within their ranges, the same whatever works on them, as often in the band as closed forms say."""

import pickle
from concurrent.futures import Executor, Future, ThreadPoolExecutor
from dataclasses import replace

import numpy as np
import pytest
from measured_models import HZ, line, oscillators, spring

from modalview.assembly.assemble import assemble
from modalview.errors import CancelledError, InputError, ModelFaultsError
from modalview.places import demo_models
from modalview.store import read_model
from modalview.study import Request, solve
from modalview.study.amplitudes import amplitudes_at, watchings
from modalview.study.response import respond
from modalview.study.response_results import ResponseRequest
from modalview.study.sampling import Spread, sample
from modalview.study.stacked_motion import stacked_motion
from modalview.study.vary_results import SampleRequest

DEMOS = sorted(demo_models().glob("*/*.keepclear"))
PUMP = read_model(demo_models() / "1-cooling-water-pump" / "as-built.keepclear")
SET = read_model(demo_models() / "4-standby-generator-set" / "raised-mounts.keepclear")
BEAM = read_model(demo_models() / "6-vacuum-pump-absorber" / "absorber-210kg-damped.keepclear")


@pytest.mark.parametrize("path", DEMOS, ids=lambda path: path.stem)
def test_ranges_are_those_that_are_proven(path):
    model = read_model(path)
    drawn = sample(SampleRequest(model, samples=400, seed=3))
    solution = solve(Request(model))
    assert drawn.proven_hz == pytest.approx(np.array([mode.range_hz for mode in solution.modes]), rel=1e-12)
    assert drawn.nominal_hz == pytest.approx([mode.frequency_hz for mode in solution.modes], rel=1e-10)
    slack = 1e-9 * drawn.proven_hz[-1, 1]
    assert np.all(drawn.frequencies_hz >= drawn.proven_hz[:, 0] - slack)
    assert np.all(drawn.frequencies_hz <= drawn.proven_hz[:, 1] + slack)
    assert np.ptp(drawn.frequencies_hz[:, -1]) > 0


def test_one_mass_on_one_spring():
    """k uniform over 1 to 3 times: f^2 is uniform, and its median is at 2."""
    model = line({"a": 1.0}, [spring("k", "a", "g", 2000.0, "50 %")], [])
    drawn = sample(SampleRequest(model, samples=20_000, seed=1))
    squared = (HZ * drawn.frequencies_hz[:, 0]) ** 2
    assert squared == pytest.approx(drawn.values[:, 0], rel=1e-12)
    assert np.quantile(squared, [0.25, 0.5, 0.75]) == pytest.approx([1500, 2000, 2500], rel=0.02)


def test_triangular_is_most_frequent_at_the_value_as_typed():
    spread = Spread(np.array([0.0]), np.array([1.0]), np.array([4.0]), triangular=True)
    drawn = spread.draw(np.random.default_rng(2), 40_000)[:, 0]
    # Closed form: a quarter of the triangle lies below its peak at a quarter of its width.
    assert np.mean(drawn < 1.0) == pytest.approx(0.25, abs=0.01)
    assert np.mean(drawn) == pytest.approx(5 / 3, rel=0.01)


def test_draws_stay_within_to_the_last_bit():
    low, high = np.array([0.1, 5.0]), np.array([np.nextafter(0.1, 1), 5.0])
    drawn = Spread(low, low, high, triangular=False).draw(np.random.default_rng(4), 500)
    assert np.all((drawn >= low) & (drawn <= high))
    assert set(drawn[:, 1]) == {5.0}


def test_same_seed_gives_the_same_whatever_works():
    request = SampleRequest(PUMP, samples=25_001, seed=7)
    alone = sample(request)
    with ThreadPoolExecutor(3) as executor:
        beside = sample(replace(request, executor=executor))
    assert np.array_equal(alone.frequencies_hz, beside.frequencies_hz)
    assert np.array_equal(alone.values, beside.values)
    other = sample(replace(request, seed=8))
    assert not np.array_equal(alone.values, other.values)


class Posting(Executor):
    """Sends every task through pickle, as another process would receive it."""

    def submit(self, fn, /, *args, **kwargs):
        function, given = pickle.loads(pickle.dumps((fn, args)))  # noqa: S301  (our own)
        future = Future()
        future.set_result(pickle.loads(pickle.dumps(function(*given, **kwargs))))  # noqa: S301
        return future


@pytest.mark.parametrize(
    ("values", "response"), [((), False), (("k3=100 to 300 kN/mm",), True)], ids=["stack", "motion"]
)
def test_tasks_can_be_sent(values, response):
    request = SampleRequest(PUMP, values, samples=3, response=response)
    sent = sample(replace(request, executor=Posting()))
    assert np.array_equal(sent.frequencies_hz, sample(request).frequencies_hz)


def test_coordinates_can_be_sent():
    request = SampleRequest(SET, ("m1.from.offset.z=-0.6 to -0.1 m",), samples=3)
    sent = sample(replace(request, executor=Posting()))
    assert np.array_equal(sent.frequencies_hz, sample(request).frequencies_hz)


def test_given_range_goes_before_the_tolerance():
    drawn = sample(SampleRequest(PUMP, ("k3=300 to 400 kN/mm",), samples=200))
    place = [name for name, _ in drawn.drawn].index("k3.stiffness")
    assert drawn.values[:, place].min() >= 3e8
    assert np.all(drawn.frequencies_hz >= drawn.proven_hz[:, 0] * (1 - 1e-12))
    assert drawn.proven_hz[0, 0] > 57.8  # above the range over the tolerance as typed


def test_share_in_the_band():
    drawn = sample(SampleRequest(PUMP, samples=2000))
    by_hand = np.any(
        (drawn.frequencies_hz >= 2950 / 60 * 0.85) & (drawn.frequencies_hz <= 2950 / 60 * 1.15), axis=1
    )
    assert drawn.in_band[0].samples == by_hand.sum()
    assert drawn.in_band[1].samples == 0


def test_coordinates_have_no_proven_range():
    drawn = sample(SampleRequest(SET, ("m1.from.offset.z=-0.6 to -0.1 m",), samples=20))
    assert drawn.proven_hz is None
    assert drawn.drawn[-1][0] == "m1.from.offset.z"
    assert np.all((drawn.values[:, -1] >= -0.6) & (drawn.values[:, -1] <= -0.1))
    assert "Coordinates vary: the two cases do not cover them" in " ".join(drawn.notes)


def test_a_coordinate_alone_is_that_of_the_grid():
    """One narrow range: every sample is the model with that coordinate."""
    exact_model = oscillators([10.0], [], tolerance=None)
    with pytest.raises(InputError, match="nothing to draw"):
        sample(SampleRequest(exact_model))
    drawn = sample(SampleRequest(SET, ("set.position.z=0.89999 to 0.90001 m",), samples=2))
    assert drawn.frequencies_hz.shape == (2, 6)


def test_motion_as_typed_is_that_of_the_response():
    drawn = sample(SampleRequest(PUMP, samples=4, response=True))
    (machine,) = respond(ResponseRequest(PUMP)).machines
    curve = next(one for one in machine.curves if one.watch == "motor, y")
    place = list(machine.speeds_rpm).index(2950.0)
    motor = next(one for one in drawn.amplitudes if one.watch == "motor, y")
    assert motor.nominal == pytest.approx(curve.nominal.velocity[place], rel=1e-9)
    assert motor.nominal == pytest.approx(6.70e-3, abs=5e-6)
    assert np.all(motor.sampled > 0)


def test_motion_at_a_sample_is_that_of_the_model_with_these_values():
    """The damping of a dashpot varies, too, where the motion is wanted."""
    drawn = sample(SampleRequest(BEAM, samples=2, response=True))
    assert np.ptp(drawn.amplitudes[0].sampled) > 0


@pytest.mark.parametrize(
    ("path", "off"),
    [
        ("1-cooling-water-pump/as-built", 1e-12),
        ("3-air-compressor-train/as-built", 1e-12),
        ("4-standby-generator-set/raised-mounts", 1e-12),
        ("2-supply-fan/steel-legs", 3e-3),  # a range of speeds: its peaks to about the damping ratio squared
        ("5-raw-water-vertical-pump/after-bump-test", 3e-3),
    ],
)
def test_motion_of_a_stack_is_that_of_each_model_alone(path, off):
    model = read_model(demo_models() / f"{path}.keepclear")
    drawn = sample(SampleRequest(model, samples=3, response=True))
    assembly = assemble(model)
    watching = watchings(assembly)
    assert stacked_motion(assembly, watching) is not None
    index = [one.id for one in assembly.parameters]
    for number, sizes in enumerate(zip(*(one.sampled for one in drawn.amplitudes), strict=True)):
        values = [one.nominal for one in assembly.parameters]
        for (name, _), si in zip(drawn.drawn, drawn.values[number], strict=True):
            values[index.index(name)] = float(si)
        moved = (replace(one, nominal=si) for one, si in zip(assembly.parameters, values, strict=True))
        alone = amplitudes_at(replace(assembly, parameters=tuple(moved)), watching)
        assert list(sizes) == pytest.approx(alone, rel=off)


def test_motion_with_dashpots_is_found_one_by_one():
    assembly = assemble(BEAM)
    assert stacked_motion(assembly, watchings(assembly)) is None


def test_motion_needs_an_excitation_of_known_size():
    with pytest.raises(InputError, match="No machine has both a speed and an excitation"):
        sample(SampleRequest(replace(PUMP, machines=()), samples=2, response=True))
    (machine,) = PUMP.machines
    sizeless = tuple(replace(one, magnitude=None) for one in machine.excitations)
    with pytest.raises(ModelFaultsError, match="1x"):
        sample(
            SampleRequest(
                replace(PUMP, machines=(replace(machine, excitations=sizeless),)), samples=2, response=True
            )
        )


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ({"samples": 0}, "samples: 1 to"),
        ({"seed": -1}, "seed: a whole number from 0"),
        ({"spread": "normal"}, "uniform, triangular"),
        ({"values": ("k3", "k3")}, "chosen twice"),
    ],
)
def test_requests_that_cannot_be(changes, told):
    with pytest.raises(InputError, match=told):
        sample(replace(SampleRequest(PUMP), **changes))


def test_progress_is_told_and_cancel_stops_it():
    told = []
    sample(SampleRequest(PUMP, samples=25_000, progress=lambda what, share: told.append((what, share))))
    assert told[0] == ("random samples", 0.0)
    assert told[-1] == ("random samples", 1.0)
    asked = iter([False, True])
    with pytest.raises(CancelledError, match="random samples"):
        sample(SampleRequest(PUMP, samples=25_000, cancelled=lambda: next(asked)))
