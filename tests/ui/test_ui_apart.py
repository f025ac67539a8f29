"""Studies in a process of their own; starting one takes seconds, so most of it is tried in this process."""

from dataclasses import replace

import pytest
from conftest import PUMP

from modalview.errors import CancelledError, KeepclearError
from modalview.model.edits import set_value_text
from modalview.model.parts import Body, Damper, End, Model, Spring, Support
from modalview.model.values import Entry, Value
from modalview.store import read_model
from modalview.ui import apart, served
from modalview.ui.parcels import pieces, unpacked
from modalview.ui.studies import Find, Step
from modalview.units.quantities import DAMPING, LENGTH, MASS, STIFFNESS


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


class Ended:
    """A line with the messages of a window that is gone after the last."""

    def __init__(self, *messages) -> None:
        self._left = list(messages)
        self.sent = []

    def send(self, message) -> None:
        self.sent.append(message)

    def recv(self):
        if not self._left:
            raise EOFError
        return self._left.pop(0)


def answers_of_the_other_process(*messages, stopped=lambda: False) -> list:
    line = Ended(*messages)
    served.serve(line, stopped)
    return line.sent


def ordered(before, model, find=Find.ALWAYS) -> list:
    return [*pieces(before, model), (served.STUDY, find)]


def contents(answers, step) -> list:
    return [content for kind, content in answers if kind == step]


def test_the_other_process_tells_what_is_known_then_the_modes_and_when_it_is_done():
    model = read_model(PUMP)
    answers = answers_of_the_other_process(*ordered(None, model))
    kinds = [kind for kind, _ in answers if kind is not Step.PROGRESSED]
    assert kinds == [Step.LOOKED, Step.DOUBTED, Step.FINDING, Step.SOLVED, Step.DAMPED, served.DONE]
    (known,) = contents(answers, Step.LOOKED)
    assert not hasattr(known, "assembly")
    assert known.coordinates == 3
    (sent,) = contents(answers, Step.SOLVED)
    found = unpacked(Step.SOLVED, sent, known, None)
    assert found.outlook is known
    assert found.modes[0].frequency_hz == pytest.approx(51.26, abs=0.01)


def test_after_an_edit_only_the_changed_part_is_sent_and_its_frequencies_are_foretold():
    model = read_model(PUMP)
    edited = set_value_text(model, ("links", "k3", "stiffness"), "340 kN/mm").apply(model)
    change = ordered(model, edited, Find.NEVER)
    assert change[:-1] == [("links", 3, [(2, edited.links[2])])]
    answers = answers_of_the_other_process(*ordered(None, model), *change)
    (foretold,) = contents(answers, Step.FORETOLD)
    assert foretold[1] == pytest.approx(68.06, abs=0.01)


def test_a_model_that_cannot_be_studied_is_told_in_words_and_the_next_is_studied():
    model = read_model(PUMP)
    answers = answers_of_the_other_process(*ordered(None, Model()), *ordered(Model(), model))
    (words,) = contents(answers, Step.REFUSED)
    assert isinstance(words, str)
    assert len(contents(answers, Step.SOLVED)) == 1
    assert len(contents(answers, served.DONE)) == 2


def test_the_other_process_stops_when_told_to_and_keeps_the_model():
    answers = answers_of_the_other_process(*ordered(None, read_model(PUMP)), stopped=lambda: True)
    assert [kind for kind, _ in answers] == [Step.STOPPED, served.DONE]


def test_an_error_of_the_program_is_told_with_its_text():
    answers = answers_of_the_other_process(
        (served.STUDY, Find.NEVER), ("links", -1, 7), (served.STUDY, Find.NEVER)
    )
    assert "Traceback" in contents(answers, Step.FAILED)[-1]


class Told:
    """Answers that come one by one; ``None`` is nothing within the time asked for."""

    def __init__(self, *answers) -> None:
        self.left = list(answers)
        self.stopped = False
        self.passed_on = []

    def receive(self, _seconds):
        return self.left.pop(0)

    def stop(self) -> None:
        self.stopped = True

    def tell(self, step, content) -> None:
        self.passed_on.append((step, content))


def await_all(told, stopped=lambda: False) -> None:
    apart.await_answers(told.receive, told.stop, stopped, told.tell)


def test_answers_are_passed_on_until_the_last():
    told = Told(None, (Step.LOOKED, 1), (Step.SOLVED, 2), (served.DONE, None), (Step.LOOKED, 3))
    await_all(told)
    assert told.passed_on == [(Step.LOOKED, 1), (Step.SOLVED, 2)]
    assert not told.stopped


def test_an_order_no_longer_wanted_is_stopped_and_the_rest_of_its_answers_dropped():
    told = Told((Step.LOOKED, 1), (Step.STOPPED, None), (served.DONE, None))
    with pytest.raises(CancelledError):
        await_all(told, stopped=lambda: True)
    assert told.stopped
    assert told.passed_on == []


def test_a_process_that_does_not_stop_is_given_up(monkeypatch):
    monkeypatch.setattr(apart, "STOP_PATIENCE_S", -1.0)
    with pytest.raises(apart.TooSlowError):
        await_all(Told(), stopped=lambda: True)


@pytest.mark.parametrize(("step", "kind"), [(Step.REFUSED, KeepclearError), (Step.FAILED, RuntimeError)])
def test_what_went_wrong_is_raised_with_its_text_after_the_last_answer(step, kind):
    told = Told((step, "why it is"), (served.DONE, None))
    with pytest.raises(kind, match="why it is"):
        await_all(told)
    assert told.left == []


def test_by_its_freedoms_a_model_is_large_and_sooner_with_dampers():
    assert not apart.is_large(chain(apart.LARGE_MODEL))
    assert apart.is_large(chain(apart.LARGE_MODEL + 1))
    damped = chain(apart.LARGE_DAMPED + 1)
    assert not apart.is_large(damped)
    damper = Damper(
        id="c", from_=End(body="m0"), to=End(support="g"), damping=Value.typed("1 N s/m", DAMPING)
    )
    assert apart.is_large(replace(damped, links=(*damped.links, damper)))


@pytest.mark.slow
def test_a_larger_chain_is_studied_apart_stopped_and_studied_again():
    other = apart.Apart()
    model, told = chain(160), []
    try:
        other.work(model, Find.ALWAYS, lambda: False, lambda *step: told.append(step))
        process = other._process
        (found,) = contents(told, Step.SOLVED)
        assert found.outlook.request.model is model
        assert len(found.modes) == 160
        with pytest.raises(CancelledError):
            other.work(model, Find.ALWAYS, lambda: True, lambda *_: None)
        edited = set_value_text(model, ("links", "k3", "stiffness"), "1.1 kN/mm").apply(model)
        other.work(edited, Find.NEVER, lambda: False, lambda *step: told.append(step))
        assert other._process is process
        assert len(contents(told, Step.FORETOLD)[0]) == 20
    finally:
        other.close()
