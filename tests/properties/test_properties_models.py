"""Properties that hold for every model."""

import json
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, reject, settings
from hypothesis import strategies as st
from random_models import (
    Wishes,
    documents,
    in_other_units,
    moved,
    parsed,
    renumbered,
    turned,
)

from modalview.assembly.assemble import assemble
from modalview.assembly.loads import unit_force
from modalview.assembly.parameters import Case
from modalview.eigen.solve import find_modes
from modalview.errors import ModelFaultsError
from modalview.resonance.drive import mode_drives
from modalview.store import dump_model, parse_model
from modalview.study import Request, look, solve

quick = settings(
    derandomize=True,
    deadline=None,
    max_examples=12,
    phases=(Phase.explicit, Phase.generate),
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much],
)
RAD_PER_HZ = 2 * np.pi
# Rounding of a frequency, beside the largest of the model: eigenvalues err by parts of the largest one.
ROUNDING = 1e-9


def studied(model):
    """The solution, or none where the random joints leave no motion."""
    try:
        return solve(Request(model))
    except ModelFaultsError as error:
        if "no motion is left" in str(error) or "cannot turn" in str(error):
            reject()
        raise


def eigenvalues(assembly, parameters):
    """Eigenvalues with other parameter values, from dense matrices condensed by hand."""
    structure = assembly.structure
    K = structure.stiffness.form.matrix(structure.stiffness.values(parameters)).toarray()
    M = structure.mass.form.matrix(structure.mass.values(parameters)).toarray()
    light = structure.coordinates.massless
    if light.any():
        kept = ~light
        K = K[np.ix_(kept, kept)] - K[np.ix_(kept, light)] @ np.linalg.solve(
            K[np.ix_(light, light)], K[np.ix_(light, kept)]
        )
        M = M[np.ix_(kept, kept)]
    root = np.linalg.cholesky(M)
    S = np.linalg.solve(root, np.linalg.solve(root, K).T)
    return np.linalg.eigvalsh((S + S.T) / 2)


def nominal(assembly):
    return np.array([p.nominal for p in assembly.parameters])


def verdicts(solution):
    return [(c.band.check, c.verdict, c.wording, c.inside, c.possible, c.certain) for c in solution.checks]


def alike(one, other):
    """Frequencies, ranges, counts and verdicts of two solutions agree."""
    top = one.raw.frequency_hz[-1]
    tolerance = {"rtol": 1e-9, "atol": 1e-12 * top}
    np.testing.assert_allclose(other.raw.frequency_hz, one.raw.frequency_hz, **tolerance)
    for a, b in zip(one.modes, other.modes, strict=True):
        np.testing.assert_allclose(b.range_hz, a.range_hz, **tolerance)
    assert one.raw.rigid_body_modes == other.raw.rigid_body_modes
    assert verdicts(one) == verdicts(other)


@quick
@given(documents())
def test_bounds_hold_the_modes(document):
    solution = studied(parsed(document))
    bounds, raw = solution.outlook.bounds, solution.raw
    assert bounds.rigid_body_modes == raw.rigid_body_modes
    assert raw.complete is not False
    assert raw.unstable == 0
    elastic = raw.frequency_hz[raw.elastic]
    slack = raw.numerical_error_hz[-1] + 1e-14 * raw.frequency_hz[-1]
    assert bounds.highest_hz[0] - slack <= raw.frequency_hz[-1] <= bounds.highest_hz[1] + slack
    if elastic.size:
        assert bounds.lowest_hz[0] - slack <= elastic[0] <= bounds.lowest_hz[1] + slack
    else:
        assert bounds.lowest_hz is None


@quick
@given(documents())
def test_groups_of_discs_hold_as_many_eigenvalues_as_discs(document):
    solution = studied(parsed(document))
    found, bounds = solution.raw.eigenvalues, solution.outlook.bounds
    slack = 1e-13 * found[-1]
    for discs in (bounds.rows, bounds.columns, bounds.symmetric):
        assert sum(group.number for group in discs.groups) == found.size
        for group in discs.groups:
            inside = np.sum((found >= group.low - slack) & (found <= group.high + slack))
            assert inside == group.number


@quick
@given(documents(), st.data())
def test_stiffness_never_lowers_and_mass_never_raises_a_frequency(document, data):
    model = parsed(document)
    assembly = studied(model).outlook.assembly
    values = nominal(assembly)
    which = data.draw(st.integers(0, values.size - 1))
    more = values.copy()
    more[which] *= data.draw(st.sampled_from((1.001, 1.7, 40.0)))
    before, after = eigenvalues(assembly, values), eigenvalues(assembly, more)
    sign = 1 if assembly.parameters[which].family == "stiffness" else -1
    assert np.all(sign * (after - before) >= -1e-12 * max(before[-1], after[-1]))
    # The program's own ordered modes agree with the dense ones.
    found = find_modes(assembly.pencil()).eigenvalues
    np.testing.assert_allclose(found, before, rtol=1e-8, atol=1e-11 * before[-1])


@quick
@given(documents(), st.integers(0, 2**32 - 1), st.floats(0.2, 3.0), st.floats(0.02, 1.0))
def test_random_values_within_tolerance_stay_within_range_and_counts(document, seed, place, width):
    solution = studied(parsed(document))
    assembly = solution.outlook.assembly
    ends = [
        np.array([p.at(case) for p in assembly.parameters]) for case in (Case.SOFT_HEAVY, Case.STIFF_LIGHT)
    ]
    shares = np.random.default_rng(seed).random((5, len(assembly.parameters)))
    corners = np.round(shares[3:])
    middle = solution.raw.frequency_hz[-1] * place
    band = (middle / (1 + width), middle * (1 + width))
    pencils = [assembly.pencil(case) for case in Case]
    count = count_between(pencils, band)
    for share in (*shares[:3], *corners):
        squares = np.maximum(eigenvalues(assembly, ends[0] + share * (ends[1] - ends[0])), 0)
        found = np.sqrt(squares) / RAD_PER_HZ
        slack = 1e-9 * found + 1e-7 * found[-1]  # the square root of rounding near zero
        for mode, frequency, reach in zip(solution.modes, found, slack, strict=True):
            assert mode.range_hz[0] - reach <= frequency <= mode.range_hz[1] + reach
        elastic = found[solution.raw.rigid_body_modes :]
        inside = np.sum((elastic >= band[0]) & (elastic <= band[1]))
        assert count.certain <= inside <= count.possible


def count_between(pencils, band):
    from modalview.bounds.bands import Cases, count_band

    return count_band(Cases(*(pencil.shifted for pencil in pencils)), tuple(RAD_PER_HZ * f for f in band))


@quick
@given(documents(), st.data())
def test_renumbering_changes_nothing(document, data):
    bodies = data.draw(st.permutations(range(len(document["bodies"]))))
    links = data.draw(st.permutations(range(len(document["links"]))))
    alike(studied(parsed(document)), studied(parsed(renumbered(document, bodies, links))))


@quick
@given(documents(), st.tuples(*[st.integers(-999, 999).map(lambda i: i / 8)] * 3))
def test_moving_the_whole_model_changes_nothing(document, shift):
    alike(studied(parsed(document)), studied(parsed(moved(document, shift))))


@quick
@given(documents())
def test_other_units_change_nothing(document):
    one, other = studied(parsed(document)), studied(parsed(in_other_units(document)))
    alike(one, other)
    for mine, theirs in zip(
        (one.outlook.bounds.rows, one.outlook.bounds.symmetric),
        (other.outlook.bounds.rows, other.outlook.bounds.symmetric),
        strict=True,
    ):
        np.testing.assert_allclose(
            theirs.radii, mine.radii, rtol=1e-9, atol=1e-9 * np.abs(mine.centres).max()
        )


@quick
@given(documents(Wishes(motions=("plane", "space"), turnable=True)))
def test_turning_the_model_changes_no_mode_count_or_verdict(document):
    alike(studied(parsed(document)), studied(parsed(turned(document))))


@quick
@given(documents(Wishes(gears=False, joints=False, free=True)), st.integers(0, 2**32 - 1))
def test_a_rigid_motion_of_a_free_model_stretches_nothing(document, seed):
    model = parsed(document)
    assembly = assemble(model)
    rows = assembly.structure.stiffness.rows
    motion = rigid_motion(model, np.random.default_rng(seed).standard_normal(6))
    moved_so = dict(zip(((b.id, f) for b in model.bodies for f in freedoms(model)), motion, strict=True))
    coordinates = assembly.structure.coordinates.of_motion(moved_so)
    stretch = rows @ coordinates
    size = abs(rows) @ np.abs(coordinates)
    assert np.all(np.abs(stretch) <= 1e-13 * size)


def freedoms(model):
    from modalview.model.parts import FREEDOMS

    return FREEDOMS[model.motion]


def rigid_motion(model, amounts):
    """Motion of every body's freedoms when the whole turns and shifts as one."""
    names = freedoms(model)
    shift, turn = amounts[:3], amounts[3:] * [0, 0, 1] if len(names) < 6 else amounts[3:]
    found = []
    for body in model.bodies:
        place = np.zeros(3)
        if body.position and len(names) > 1:
            place[: len(body.position)] = [c.si for c in body.position]
        whole = dict(zip(("x", "y", "z"), shift + np.cross(turn, place), strict=True))
        whole |= dict(zip(("rx", "ry", "rz"), turn, strict=True))
        if len(names) == 1:
            whole["y"] = shift[1]
        found += [whole[name] for name in names]
    return np.array(found)


@quick
@given(documents())
def test_saved_and_reopened_is_equal(document):
    model = parsed(document)
    text = dump_model(model)
    again = parse_model(text)
    assert again == model
    assert dump_model(again) == text
    assert json.loads(text)["motion"] == document["motion"]


@quick
@given(documents())
def test_energy_shares_sum_to_one_and_give_the_sensitivities(document):
    solution = studied(parsed(document))
    assembly, raw = solution.outlook.assembly, solution.raw
    for mode in solution.modes:
        assert sum(share.fraction for share in mode.kinetic) == pytest.approx(1, abs=1e-9)
        if mode.kind == "elastic":
            assert sum(share.fraction for share in mode.strain) == pytest.approx(1, abs=1e-9)
    alone = [
        i
        for i in range(raw.number)
        if i >= raw.rigid_body_modes
        and gap(raw.eigenvalues, i) > 1e-2
        and raw.eigenvalues[i] > 1e-4 * raw.eigenvalues[-1]
    ]
    if not alone:
        return
    mode, values, step = solution.modes[alone[0]], nominal(assembly), 1e-4
    for share in mode.sensitivity[:3]:
        which = next(i for i, p in enumerate(assembly.parameters) if p.id == share.id)
        more, less = values.copy(), values.copy()
        more[which] *= 1 + step
        less[which] *= 1 - step
        ratio = eigenvalues(assembly, more)[alone[0]] / eigenvalues(assembly, less)[alone[0]]
        slope = np.log(ratio) / 2 / np.log((1 + step) / (1 - step))
        assert share.fraction == pytest.approx(slope, abs=1e-4)


def gap(eigenvalues, i):
    """Distance to the nearest other eigenvalue, relative."""
    others = np.delete(eigenvalues, i)
    return np.min(np.abs(others - eigenvalues[i]), initial=np.inf) / eigenvalues[i]


@quick
@given(documents(Wishes(motions=("single axis", "plane", "space"))), st.data())
def test_drive_shares_sum_to_one(document, data):
    model = parsed(document)
    body = data.draw(st.sampled_from(model.bodies))
    machine = document["machines"][0]
    machine["excitations"][0] |= {
        "at": {"body": body.id},
        "direction": data.draw(st.sampled_from(("x", "y", "rotating"))),
    }
    if document["motion"] == "single axis":
        machine["excitations"][0]["direction"] = "y"
    solution = studied(parsed(document))
    assembly = solution.outlook.assembly
    excitation = solution.outlook.request.model.machines[0].excitations[0]
    drives = mode_drives(assembly.pencil(), solution.raw, unit_force(assembly, excitation))
    total = sum(drive.share for drive in drives)
    assert total == pytest.approx(1, abs=1e-9) or total == 0
    assert all(drive.share >= 0 for drive in drives)


@quick
@given(documents())
def test_a_look_after_an_edit_equals_a_fresh_look(document):
    model = parsed(document)
    before = studied(model).outlook
    links = tuple(
        replace(
            link,
            stiffness=replace(link.stiffness, entry=replace(link.stiffness.entry, si=2 * link.stiffness.si)),
        )
        if link.kind in ("spring", "shaft")
        else link
        for link in model.links
    )
    edited = replace(model, links=links)
    after, fresh = look(Request(edited), before), look(Request(edited))
    assert after.assembly.structure is before.assembly.structure
    assert after.checks == fresh.checks
    assert after.bounds.lowest_hz == fresh.bounds.lowest_hz
    assert after.bounds.highest_hz == fresh.bounds.highest_hz
