"""A solve in a process of its own; starting one takes seconds, so most of it is tried in this process."""

import multiprocessing

import pytest
from conftest import PUMP

from modalview.errors import CancelledError, KeepclearError
from modalview.model.parts import Body, End, Model, Spring, Support
from modalview.model.values import Entry, Value
from modalview.store import read_model
from modalview.ui import apart
from modalview.ui.studydoor import load_study
from modalview.units.quantities import LENGTH, MASS, STIFFNESS


def at(height: int) -> tuple[Entry, Entry]:
    return Entry.typed("0 m", LENGTH), Entry.typed(f"{height} m", LENGTH)


def chain(number: int) -> Model:
    """Equal masses one above the other, the lowest on the ground."""
    mass, stiffness = Value.typed("1 kg", MASS), Value.typed("1 kN/mm", STIFFNESS)
    ends = [End(support="g"), *(End(body=f"m{n}") for n in range(number))]
    return Model(
        bodies=tuple(Body(id=f"m{n}", mass=mass, position=at(n + 1)) for n in range(number)),
        supports=(Support(id="g", position=at(0)),),
        links=tuple(
            Spring(id=f"k{n}", from_=ends[n], to=ends[n + 1], stiffness=stiffness) for n in range(number)
        ),
    )


def outlook_of(model: Model):
    study = load_study()
    return study.look(study.request(model), None)


def test_the_other_process_sends_progress_and_then_what_it_found():
    receiver, sender = multiprocessing.Pipe(duplex=False)
    apart._solve(sender, read_model(PUMP))
    kinds = []
    while receiver.poll():
        kind, content = receiver.recv()
        kinds.append(kind)
    assert set(kinds[:-1]) <= {"progress"}
    assert kinds[-1] == "found"
    assert content.outlook is None
    assert content.modes[0].frequency_hz == pytest.approx(51.26, abs=0.01)


def test_a_model_that_cannot_be_solved_is_told_in_words():
    receiver, sender = multiprocessing.Pipe(duplex=False)
    apart._solve(sender, Model())
    kind, content = receiver.recv()
    assert kind == "refused"
    assert "\n" not in content.strip() or "Traceback" not in content


class Process:
    exitcode = -9


def test_a_process_that_ends_by_itself_is_told():
    receiver, sender = multiprocessing.Pipe(duplex=False)
    sender.close()
    with pytest.raises(KeepclearError, match="status -9"):
        apart._await(receiver, Process(), lambda: False, lambda what, share: None)


def test_waiting_ends_at_once_when_stopped():
    receiver, _ = multiprocessing.Pipe(duplex=False)
    with pytest.raises(CancelledError):
        apart._await(receiver, Process(), lambda: True, lambda what, share: None)


@pytest.mark.slow
def test_a_large_chain_is_solved_apart_and_its_modes_belong_to_the_outlook():
    outlook = outlook_of(chain(600))
    told = []
    found = apart.solve_apart(outlook, lambda: False, lambda what, share: told.append(share))
    assert found.outlook is outlook
    assert len(found.modes) == 600
    assert told


@pytest.mark.slow
def test_a_large_solve_can_be_stopped():
    outlook = outlook_of(chain(600))
    with pytest.raises(CancelledError):
        apart.solve_apart(outlook, lambda: True, lambda what, share: None)
