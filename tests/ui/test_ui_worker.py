"""The worker and what the window keeps of its answers, with a study that waits to be told."""

from dataclasses import replace
from threading import Event
from types import SimpleNamespace

import pytest

from modalview.errors import CancelledError, ModelFaultsError
from modalview.errors import Fault as OneFault
from modalview.model.parts import Body, Model
from modalview.ui.analysis import Analysis
from modalview.ui.apart import LARGE_MODEL
from modalview.ui.studydoor import Study
from modalview.ui.worker import Find, Step, Worker

FIRST, SECOND = Model(title="first"), Model(title="second")


class Bench:
    """A study whose solve waits for ``go`` and whose models can be told to fail."""

    def __init__(self) -> None:
        self.go, self.solving = Event(), Event()
        self.error: Exception | None = None
        self.coordinates = 3
        self.dashpots = False

    def request(self, model, **more):
        return SimpleNamespace(model=model, **more)

    def look(self, request, previous):
        del previous
        if self.error is not None:
            raise self.error
        return SimpleNamespace(
            request=request, coordinates=self.coordinates, dashpots=self.dashpots, doubts=()
        )

    def solve(self, request, outlook):
        self.solving.set()
        request.progress("halfway", 0.5)
        while not self.go.wait(0.002):
            if request.cancelled():
                raise CancelledError("stopped")
        return SimpleNamespace(outlook=outlook, modes=())

    def study(self):
        return Study(
            self.request,
            self.look,
            self.solve,
            foretell=lambda _solution, _outlook: {1: 12.5},
            damped=lambda _request, found: SimpleNamespace(outlook=found.outlook),
            plane=lambda _outlook, _found, _damped: "plane",
        )


@pytest.fixture
def bench():
    return Bench()


@pytest.fixture
def worker(qapp, bench):
    del qapp
    made = Worker(load=bench.study)
    made.start()
    yield made
    made.close()
    assert made._thread.isFinished()


@pytest.fixture
def answers(worker):
    kept = []
    worker.answered.connect(kept.append)
    return kept


def steps(answers):
    return [answer.step for answer in answers]


def test_an_order_is_looked_at_and_a_small_model_solved(worker, bench, answers, qtbot):
    bench.go.set()
    worker.order(FIRST, Find.IF_SMALL)
    qtbot.waitUntil(lambda: Step.DAMPED in steps(answers))
    assert steps(answers) == [
        Step.LOOKED,
        Step.DOUBTED,
        Step.FINDING,
        Step.PROGRESSED,
        Step.SOLVED,
        Step.DAMPED,
    ]


def test_a_model_that_is_not_small_is_solved_only_when_asked(worker, bench, answers, qtbot):
    bench.go.set()
    bench.coordinates = 301
    worker.order(FIRST, Find.IF_SMALL)
    qtbot.waitUntil(lambda: Step.LOOKED in steps(answers))
    worker.order(FIRST, Find.ALWAYS)
    qtbot.waitUntil(lambda: Step.SOLVED in steps(answers))
    assert steps(answers).count(Step.FINDING) == 1


def test_a_large_model_is_studied_apart(worker, answers, qtbot):
    many = Model(bodies=tuple(Body(id=f"b{n}") for n in range(LARGE_MODEL + 1)))

    class Elsewhere:
        def work(self, model, find, stopped, tell):
            assert find is Find.NEVER
            assert not stopped()
            tell(Step.LOOKED, model)

        def close(self):
            pass

    worker._desk._apart = Elsewhere()
    worker.order(many, Find.NEVER)
    qtbot.waitUntil(lambda: Step.LOOKED in steps(answers))
    assert answers[0].content is many


def test_answers_to_an_older_order_are_dropped_and_its_solve_is_stopped(worker, bench, answers, qtbot):
    worker.order(FIRST, Find.ALWAYS)
    qtbot.waitUntil(bench.solving.is_set)
    worker.order(SECOND, Find.NEVER)
    qtbot.waitUntil(lambda: any(a.number == 2 and a.step is Step.LOOKED for a in answers))
    assert Step.SOLVED not in steps(answers)
    looked = [answer for answer in answers if answer.step is Step.LOOKED]
    assert looked[-1].content.request.model is SECOND


def test_cancel_stops_the_solve_and_keeps_what_is_known(worker, bench, qtbot):
    analysis = Analysis(worker)
    analysis.follow(FIRST)
    qtbot.waitUntil(bench.solving.is_set)
    qtbot.waitUntil(lambda: analysis.progress == ("halfway", 0.5))
    assert analysis.finding
    analysis.cancel()
    qtbot.waitUntil(lambda: not analysis.finding)
    assert analysis.outlook.request.model is FIRST
    assert analysis.solution is None


def test_modes_are_current_only_for_the_model_they_were_found_for(worker, bench, qtbot):
    bench.go.set()
    analysis = Analysis(worker)
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: analysis.solution_current)
    analysis.automatic = False
    analysis.follow(SECOND)
    assert analysis.solution is not None
    assert not analysis.solution_current


def test_an_edit_that_is_undone_gives_its_modes_back(worker, bench, qtbot):
    bench.go.set()
    analysis = Analysis(worker)
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: analysis.solution_current)
    solution, analysis.automatic = analysis.solution, False
    analysis.follow(SECOND)
    assert not analysis.solution_current
    analysis.follow(replace(SECOND, title=FIRST.title))
    assert analysis.solution is solution
    assert analysis.solution_current


def test_what_modes_become_by_an_edit_is_foretold_until_they_are_found_anew(worker, bench, qtbot):
    bench.go.set()
    analysis = Analysis(worker)
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: analysis.solution_current)
    analysis.automatic = False
    analysis.follow(SECOND)
    assert analysis.foretold == {}
    qtbot.waitUntil(lambda: analysis.foretold == {1: 12.5})
    assert not analysis.solution_current
    analysis.find()
    qtbot.waitUntil(lambda: analysis.solution_current)
    assert analysis.foretold == {}


def test_nothing_is_foretold_where_no_modes_are_shown(worker, bench, qtbot):
    bench.go.set()
    analysis = Analysis(worker)
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: analysis.solution_current)
    analysis.forget()
    analysis.automatic = False
    analysis.follow(SECOND)
    qtbot.waitUntil(lambda: analysis.plane is not None)
    assert analysis.foretold == {}


def test_damped_modes_of_before_an_edit_stay_and_are_out_of_date(worker, bench, qtbot):
    bench.go.set()
    bench.dashpots = True
    analysis = Analysis(worker)
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: analysis.damped_current)
    analysis.automatic = False
    analysis.plane = None
    analysis.follow(SECOND)
    qtbot.waitUntil(lambda: analysis.plane is not None)
    assert analysis.damped is not None
    assert not analysis.damped_current


def test_a_model_that_cannot_be_studied_is_told_and_the_next_one_is_studied(worker, bench, qtbot):
    analysis = Analysis(worker)
    bench.error = ModelFaultsError((OneFault("bodies[0]", "hangs in the air"),))
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: analysis.refusal is not None)
    assert analysis.outlook is None
    assert not analysis.looking
    bench.error = None
    bench.go.set()
    analysis.follow(SECOND)
    qtbot.waitUntil(lambda: analysis.solution_current)
    assert analysis.refusal is None


def test_an_error_of_the_program_is_passed_on_and_the_thread_goes_on(worker, bench, qtbot):
    analysis = Analysis(worker)
    failures = []
    analysis.failed.connect(failures.append)
    bench.error = ZeroDivisionError("a bug")
    analysis.follow(FIRST)
    qtbot.waitUntil(lambda: bool(failures))
    bench.error = None
    bench.go.set()
    analysis.follow(SECOND)
    qtbot.waitUntil(lambda: analysis.solution_current)


def test_closing_while_a_solve_runs_ends_the_thread(worker, bench, qtbot):
    worker.order(FIRST, Find.ALWAYS)
    qtbot.waitUntil(bench.solving.is_set)
    worker.close()
    assert worker._thread.isFinished()


def test_a_worker_closed_before_it_was_started_never_starts(qapp):
    del qapp
    made = Worker(load=lambda: Study(SimpleNamespace, None, None))
    made.close()
    made.start()
    assert not made._thread.isRunning()
