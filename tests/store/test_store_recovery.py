"""Recovery files: whatever a window held comes back, and only from programs that no longer run."""

import errno
import json
import os
import subprocess
import sys
from pathlib import Path
from typing import ClassVar

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from modalview.errors import FileAccessError
from modalview.model.parts import Body, End, Model, Spring
from modalview.model.rules import faults
from modalview.model.values import Value
from modalview.store import dump_model, recovery, save_model, saving, stamp
from modalview.store.lockfile import LockFile
from modalview.store.recovery import Draft, Session
from modalview.units.quantities import MASS, STIFFNESS

PUMP = Model(title="Pump P-3", bodies=(Body(id="pump", mass=Value.typed("380 kg", MASS)),))
HALF_DRAWN = Model(
    title="Half drawn",
    bodies=(Body(id="pump"), Body(id="pump")),
    links=(Spring(id="k", from_=End(body="gone"), to=End(), stiffness=Value.typed("-1 N/m", STIFFNESS)),),
)
NOON = 1_800_000_000.0


def draft(model=PUMP, path=None, known=None, *, example=False):
    return Draft(model, path, example, known, NOON)


@pytest.fixture
def folder(tmp_path):
    return tmp_path / "data" / "recovery"


class _Kept(Session):
    """Lets go of its locks at the end of a test, as the end of a process does."""

    made: ClassVar[list[Session]] = []

    def __init__(self, folder):
        super().__init__(folder)
        self.made.append(self)


@pytest.fixture(autouse=True)
def _let_go():
    yield
    for session in _Kept.made:
        for lock in (session._lock, *session._claims.values()):
            lock.release()
    _Kept.made.clear()


def crashed(folder, *drafts):
    """Leave what a session leaves that ended without closing."""
    session = _Kept(folder)
    for key, one in enumerate(drafts, start=1):
        session.write(key, one)
    session._lock.release()  # as the system does when the process is gone
    return session


def test_what_a_crash_left_is_found_with_all_it_knew(folder, tmp_path):
    path = tmp_path / "pump.keepclear"
    known = save_model(Model(title="Pump P-3"), path, known=None)
    crashed(folder, draft(path=path, known=known))
    (one,), unreadable = _Kept(folder).recoveries()
    assert unreadable == ()
    assert (one.name, one.path, one.stamp, one.edited) == ("Pump P-3", path, known, NOON)
    assert one.process == os.getpid()
    assert one.read() == (PUMP, ())


def test_a_half_drawn_model_comes_back_as_it_was(folder):
    assert faults(HALF_DRAWN)
    crashed(folder, draft(HALF_DRAWN))
    (one,), _ = _Kept(folder).recoveries()
    assert one.read() == (HALF_DRAWN, ())


@pytest.mark.parametrize(
    "sample", sorted(Path(__file__).with_name("samples").iterdir()), ids=lambda p: p.stem
)
def test_every_key_comes_back(folder, sample):
    from modalview.store import read_model

    model = read_model(sample)
    crashed(folder, draft(model))
    (one,), _ = _Kept(folder).recoveries()
    assert one.read() == (model, ())


@settings(max_examples=8, deadline=None)
@given(st.text(max_size=30), st.text(max_size=30))
def test_any_text_comes_back_even_what_no_file_can_keep(tmp_path_factory, title, name):
    folder = tmp_path_factory.mktemp("any")
    model = Model(title=title, bodies=(Body(id=name, name="\ud800 half a character"),))
    crashed(folder, draft(model))
    session = Session(folder)
    (one,), _ = session.recoveries()
    assert one.read()[0] == model
    session.close()


def test_a_running_program_is_not_taken_for_a_crash(folder):
    running = _Kept(folder)
    running.write(1, draft())
    other = _Kept(folder)
    assert other.recoveries() == ((), ())
    running._lock.release()
    assert len(other.recoveries()[0]) == 1


def test_another_process_holds_its_lock_until_it_is_killed(folder):
    script = (
        "import sys; from pathlib import Path; from modalview.store.recovery import Session;"
        "session = Session(Path(sys.argv[1])); print('there', flush=True); sys.stdin.read()"
    )
    words = [sys.executable, "-c", script, str(folder)]
    with subprocess.Popen(words, stdin=subprocess.PIPE, stdout=subprocess.PIPE) as run:  # noqa: S603
        assert run.stdout.readline() == b"there\n"
        (path,) = folder.glob("*.lock")
        lock = LockFile(path)
        assert not lock.take()
        run.kill()
        run.wait()
    assert lock.take()
    lock.release()


def test_what_one_program_found_is_not_offered_by_another(folder):
    crashed(folder, draft())
    first, second = _Kept(folder), _Kept(folder)
    assert len(first.recoveries()[0]) == 1
    assert second.recoveries()[0] == ()
    assert len(first.recoveries()[0]) == 1, "and still by the first"
    first.close()
    assert len(second.recoveries()[0]) == 1


def test_a_process_number_used_again_is_not_taken_for_the_one_that_crashed(folder):
    left = crashed(folder, draft())
    left._lock.path.write_text("1\n")  # somebody who certainly runs
    assert len(_Kept(folder).recoveries()[0]) == 1


def test_where_disks_know_no_locks_the_process_number_tells(folder, monkeypatch):
    left = crashed(folder, draft())

    def no_locks(_):
        raise OSError(errno.ENOLCK, "No locks available")

    monkeypatch.setattr("modalview.store.lockfile._lock", no_locks)
    left._lock.path.write_text("1\n")
    other = _Kept(folder)
    assert other.recoveries()[0] == ()
    left._lock.path.write_text("99999999\n")
    assert len(other.recoveries()[0]) == 1


def test_a_session_that_ends_in_order_leaves_nothing(folder):
    session = _Kept(folder)
    session.write(1, draft())
    session.drop(1)
    session.drop(2)
    session.close()
    assert list(folder.iterdir()) == []


def test_discarding_the_last_one_tidies_up(folder):
    crashed(folder, draft(), draft(HALF_DRAWN))
    session = _Kept(folder)
    found, _ = session.recoveries()
    session.discard(found[0].file)
    assert len(session.recoveries()[0]) == 1
    session.discard(found[1].file)
    session.close()
    assert list(folder.iterdir()) == []


def test_what_was_half_written_is_taken_away(folder):
    left = crashed(folder, draft())
    half = folder / f".{left.name}.2.recovery.1a2b3c4d.tmp"
    half.write_text("{", encoding="utf-8")
    assert len(_Kept(folder).recoveries()[0]) == 1
    assert not half.exists()


def test_what_is_kept_for_later_is_offered_at_the_next_start(folder):
    crashed(folder, draft())
    session = _Kept(folder)
    session.recoveries()
    session.close()
    assert len(_Kept(folder).recoveries()[0]) == 1


def test_what_is_put_aside_is_offered_now_and_later(folder):
    session = _Kept(folder)
    session.write(1, draft(HALF_DRAWN))
    session.set_aside(1)
    session.write(1, draft())
    assert [one.read()[0] for one in session.recoveries()[0]] == [HALF_DRAWN]
    session.drop(1)
    session.close()
    assert [one.read()[0] for one in _Kept(folder).recoveries()[0]] == [HALF_DRAWN]


def test_a_recovery_that_its_file_holds_already_is_no_recovery(folder, tmp_path):
    path = tmp_path / "pump.keepclear"
    crashed(folder, draft(path=path))
    save_model(PUMP, path, known=None)
    session = _Kept(folder)
    assert session.recoveries() == ((), ())
    session.close()
    assert list(folder.iterdir()) == []


def damaged(file, text):
    header, _, model = text.partition("\n")
    tree = json.loads(header)
    return {
        "empty": "",
        "no json": "pump\n" + model,
        "a list": "[1]\n" + model,
        "another format": json.dumps({**tree, "format": "x"}) + "\n" + model,
        "a later version": json.dumps({**tree, "version": 2}) + "\n" + model,
        "no path": json.dumps({key: one for key, one in tree.items() if key != "path"}) + "\n" + model,
        "a wrong time": json.dumps({**tree, "edited": "noon"}) + "\n" + model,
        "a wrong stamp": json.dumps({**tree, "stamp": 3}) + "\n" + model,
        "half a model": header + "\n" + model[: len(model) // 2],
    }[file]


@pytest.mark.parametrize(
    "how",
    [
        "empty",
        "no json",
        "a list",
        "another format",
        "a later version",
        "no path",
        "a wrong time",
        "a wrong stamp",
        "half a model",
    ],
)
def test_a_damaged_file_is_told_and_hides_no_other(folder, how):
    session = crashed(folder, draft(), draft(HALF_DRAWN))
    file = session.file(1)
    file.write_text(damaged(how, file.read_text(encoding="utf-8")), encoding="utf-8")
    (one,), (unreadable,) = _Kept(folder).recoveries()
    assert one.name == "Half drawn"
    assert unreadable.file == file
    assert unreadable.reason


def test_a_disk_that_fails_keeps_the_recovery_written_before(folder, monkeypatch):
    session = _Kept(folder)
    session.write(1, draft())

    def fail(_):
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(saving, "_open_new", fail)
    with pytest.raises(OSError, match="No space left"):
        session.write(1, draft(HALF_DRAWN))
    session._lock.release()
    (one,), _ = _Kept(folder).recoveries()
    assert one.read()[0] == PUMP


def test_a_folder_that_cannot_be_is_an_error_with_its_reason(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(FileAccessError, match="no recovery files"):
        Session(tmp_path / "file" / "recovery")


@pytest.mark.skipif(os.name == "nt", reason="Windows has no such permissions")
def test_the_folder_is_for_its_owner_alone(folder):
    _Kept(folder)
    assert folder.stat().st_mode & 0o777 == 0o700


def test_a_lock_removed_by_its_last_holder_is_not_held_by_who_waited_for_it(tmp_path, monkeypatch):
    path = tmp_path / "x.lock"
    first, second = LockFile(path), LockFile(path)
    assert first.take()

    def lock_when_gone(_):
        first.remove()
        monkeypatch.undo()

    monkeypatch.setattr("modalview.store.lockfile._lock", lock_when_gone)
    assert not second.take()
    assert second.take()
    second.release()


def test_a_recovery_names_what_it_is(folder):
    crashed(folder, draft(Model()), draft(Model(), Path("there") / "fan.keepclear"))
    found, _ = _Kept(folder).recoveries()
    assert sorted(one.name for one in found) == ["a model without a title", "fan"]


def test_the_text_of_a_recovery_file_is_that_of_the_model(folder):
    session = crashed(folder, draft())
    assert session.file(1).read_text(encoding="utf-8").split("\n", 1)[1] == dump_model(PUMP)
    assert recovery.SUFFIX in session.file(1).name
    assert stamp(session.file(1)).size > 0
