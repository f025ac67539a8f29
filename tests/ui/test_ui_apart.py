"""A solve in a process of its own; starting one takes seconds, so most of it is tried in this process."""

import multiprocessing

import pytest
from conftest import PUMP

from modalview.errors import CancelledError
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


def answers_of_the_other_process(*models: Model) -> list:
    ours, theirs = multiprocessing.Pipe()
    for model in models:
        ours.send(model)
    # The end of the line is seen only after what was sent.
    closing = Ended(theirs, len(models))
    apart.serve(closing)
    kept = []
    while ours.poll():
        kept.append(ours.recv())
    return kept


class Ended:
    """A line that ends after so many models, as when the window is gone."""

    def __init__(self, line, models: int) -> None:
        self._line, self._left = line, models
        self.send = line.send

    def recv(self):
        if not self._left:
            raise EOFError
        self._left -= 1
        return self._line.recv()


def test_the_other_process_sends_progress_and_then_what_it_found():
    *before, (kind, found) = answers_of_the_other_process(read_model(PUMP))
    assert {kind for kind, _ in before} <= {"progress"}
    assert kind == "found"
    sent, damped = found
    assert damped is None
    found = apart.unpacked(sent)
    assert found.outlook is None
    assert found.modes[0].frequency_hz == pytest.approx(51.26, abs=0.01)


def test_what_is_packed_is_read_back_with_its_largest_shares():
    model = read_model(PUMP)
    study = load_study()
    solution = study.solve(study.request(model), outlook_of(model))
    again = apart.unpacked(apart.packed(solution))
    assert again.sentence == solution.sentence
    for one, other in zip(again.modes, solution.modes, strict=True):
        assert (one.motion == other.motion).all()
        assert not one.motion.flags.writeable
        assert one.strain == other.strain[: apart.SHARES_SENT]
        assert one.range_hz == other.range_hz


def test_a_model_that_cannot_be_solved_is_told_in_words_and_the_next_is_solved():
    kinds = [kind for kind, _ in answers_of_the_other_process(Model(), read_model(PUMP))]
    assert kinds[0] == "refused"
    assert kinds[-1] == "found"


def untold(*step) -> None:
    """Progress that nobody hears."""


class Process:
    exitcode = -9

    def join(self) -> None:
        pass


def test_a_process_that_ends_by_itself_is_told():
    ours, theirs = multiprocessing.Pipe()
    theirs.close()
    with pytest.raises(apart.ProcessEndedError, match="status -9"):
        apart.await_answer(Process(), ours, lambda: False, untold)


def test_waiting_ends_at_once_when_stopped():
    ours, _theirs = multiprocessing.Pipe()
    with pytest.raises(CancelledError):
        apart.await_answer(Process(), ours, lambda: True, untold)


def test_an_error_of_the_program_comes_with_its_text():
    ours, theirs = multiprocessing.Pipe()
    theirs.send(("failed", "Traceback: division by zero"))
    with pytest.raises(RuntimeError, match="division by zero"):
        apart.await_answer(Process(), ours, lambda: False, untold)


@pytest.mark.slow
def test_a_larger_chain_is_solved_apart_stopped_and_solved_again():
    other = apart.Apart()
    outlook = outlook_of(chain(160))
    told = []
    try:
        found, _ = other.solve(outlook, lambda: False, lambda *step: told.append(step))
        assert found.outlook is outlook
        assert len(found.modes) == 160
        assert told
        with pytest.raises(CancelledError):
            other.solve(outlook, lambda: True, untold)
        assert len(other.solve(outlook, lambda: False, untold)[0].modes) == 160
    finally:
        other.close()
