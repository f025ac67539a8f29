"""The verdict in words, before and after the solve."""

import json
import math

import pytest

from modalview.store import parse_model
from modalview.study import Request, solve
from modalview.study.sentence import NOTHING_TO_CHECK, sentence

FAN = "1× of 1500 rpm (25.0 Hz)"


def model(modes, *, machine=None, free=False):
    """One body of 1 kg for each (frequency in Hz, stiffness tolerance); free: two bodies on one spring."""
    springs = [
        {
            "id": f"k{i}",
            "kind": "spring",
            "from": {"body": f"b{i}"},
            "to": {"support": "ground"},
            "stiffness": {"value": f"{(2 * math.pi * hz) ** 2!r} N/m", **({"tolerance": tol} if tol else {})},
        }
        for i, (hz, tol) in enumerate(modes)
    ]
    if free:
        springs = [springs[0] | {"to": {"body": "b1"}}]
    document = {
        "format": "keepclear",
        "version": 1,
        "title": "t",
        "motion": "single axis",
        "bodies": [{"id": f"b{i}", "mass": "1 kg"} for i in range(len(modes))],
        "supports": [{"id": "ground"}],
        "links": springs,
        "machines": [{"id": "fan", "margin": "20 %", "excitations": [{"id": "1x", "order": 1}], **machine}]
        if machine
        else [],
    }
    return parse_model(json.dumps(document))


def said(modes, **machine):
    return solve(Request(model(modes, machine={"speed": "1500 rpm"} | machine))).sentence


@pytest.mark.parametrize(
    ("modes", "expected"),
    [
        ([(26, None)], ": mode 1 at 26.0 Hz is 4.0 % above; ±20 % is wanted."),
        (
            [(22, None), (26, None), (29, None)],
            ": mode 2 at 26.0 Hz is 4.0 % above, one of 3 modes in the band; ±20 % is wanted.",
        ),
        (
            [(26, "10 %")],
            ": mode 1 at 26.0 Hz (24.7 to 27.3 over tolerance) is 4.0 % above; ±20 % is wanted.",
        ),
        (
            [(19, "20 %")],
            (
                ": mode 1 at 19.0 Hz (17.0 to 20.8 over tolerance) is 24.0 % below, but over tolerance it "
                "comes to −16.7 % (stiff-light); ±20 % is wanted."
            ),
        ),
        ([(40, None)], " is clear (values taken as exact)."),
        ([(10, None)], " is clear in this model (values taken as exact)."),
    ],
)
def test_one_check(modes, expected):
    assert said(modes) == FAN + expected


def test_speed_tolerance_alone():
    assert said([(32, None)], speed_tolerance="10 %") == FAN + (
        ": mode 1 at 32.0 Hz is 28.0 % above, but the speed tolerance "
        "alone brings it into the band; ±20 % is wanted."
    )


def test_the_deciding_check_comes_first_and_the_clear_ones_last():
    excitations = [
        {"id": "a", "order": 0.2, "name": "slow"},
        {"id": "b", "order": 1},
        {"id": "c", "frequency": "1000 Hz"},
    ]
    assert said([(26, None), (90, None)], excitations=excitations) == FAN + (
        ": mode 1 at 26.0 Hz is 4.0 % above; ±20 % is wanted. "
        "0.2× slow is clear (values taken as exact), 1000 Hz is clear in this model (values taken as exact)."
    )


def test_a_range_from_standstill_names_an_elastic_mode():
    machine = {"speed": {"from": "0 rpm", "to": "1500 rpm"}}
    found = solve(Request(model([(10, None), (10, None)], machine=machine, free=True)))
    assert found.sentence.startswith("1× of 0 to 1500 rpm (0 to 25.0 Hz): mode 2 at 14.1 Hz lies within")


def test_without_a_machine():
    found = solve(Request(model([(10, None)])))
    assert found.sentence == sentence(found.outlook.request.model, ()) == NOTHING_TO_CHECK
    assert found.outlook.verdict is None
    assert found.outlook.sentence == NOTHING_TO_CHECK


@pytest.mark.parametrize(
    ("speed", "told"),
    [
        ("1500 rpm", "1500 rpm"),
        ("1e6 rpm", "1e6 rpm"),
        ("999999 rpm", "1e6 rpm"),
        ("100 Hz", "6000 rpm"),
        ("29501.3 rpm", "29501 rpm"),
    ],
)
def test_speeds_are_written_in_one_style(speed, told):
    assert f"1× of {told} (" in said([(26, None)], speed=speed)
