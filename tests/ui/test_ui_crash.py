"""The window killed at random while it is edited and saved: the file opens, and next to nothing is lost."""

import os
import random
import subprocess
import sys
import time
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path

import pytest
from conftest import PUMP

from modalview.store import read_model
from modalview.store.recovery import Session
from modalview.ui.autosave import FOLDER_VARIABLE

DRIVER = Path(__file__).with_name("edits_until_killed.py")
# In place of the half minute of the program.
INTERVAL_S = 0.25
# A recovery file is written in a few hundredths of a second; a busy machine takes longer.
WRITE_S = 0.35
AT_ONCE = 5
PATIENCE_S = 40.0


@dataclass
class Run:
    """One window on its way to being killed."""

    folder: Path
    process: subprocess.Popen
    lives_s: float
    saves: bool

    @property
    def file(self) -> Path:
        return self.folder / "pump.keepclear"


def started(folder: Path, seed: int, *, saves: bool) -> Run:
    chance = random.Random(seed)  # noqa: S311  (no secret)
    folder.mkdir()
    (folder / "pump.keepclear").write_bytes(PUMP.read_bytes())
    share = 0.03 if saves else 0.0
    words = [sys.executable, str(DRIVER), str(folder / "pump.keepclear"), str(folder), str(seed)]
    words += [str(round(1000 * INTERVAL_S)), str(share)]
    environment = {**os.environ, "QT_QPA_PLATFORM": "offscreen", FOLDER_VARIABLE: str(folder)}
    process = subprocess.Popen(words, stdout=subprocess.PIPE, env=environment)  # noqa: S603  (our own words)
    return Run(folder, process, chance.uniform(0.0, 4 * INTERVAL_S), saves)


def number(model) -> int:
    """Return which edit a model holds; 0 for the file as it was."""
    word = model.title.split()[-1]
    return int(word) if model.title.startswith("edit ") else 0


def killed(run: Run) -> bool:
    """Kill a window, check what is left, and return whether a recovery was offered."""
    said = b""
    patience = time.monotonic() + PATIENCE_S
    # Without saves it lives until a recovery file is there for certain, and then as long as the others.
    while not said.endswith(b"ready\n" if run.saves else b"kept\n"):
        line = run.process.stdout.readline()
        assert line, "it ended by itself"
        assert time.monotonic() < patience, "no recovery file was written"
        said += line
    with pytest.raises(subprocess.TimeoutExpired):
        run.process.wait(run.lives_s)
    run.process.kill()
    at = time.monotonic()
    lines = (said + run.process.stdout.read()).decode().splitlines()
    run.process.wait()
    run.process.stdout.close()
    edits = {int(words[0]): float(words[1]) for words in (line.split() for line in lines) if len(words) == 2}

    saved = number(read_model(run.file))
    session = Session(run.folder / "recovery")
    recoveries, unreadable = session.recoveries()
    assert unreadable == ()
    assert len(recoveries) <= 1
    held = saved
    for one in recoveries:
        model, faults = one.read()
        assert faults == ()
        assert one.path == run.file
        held = max(saved, number(model))
    lost = [made for edit, made in edits.items() if edit > held]
    assert not lost or at - min(lost) <= INTERVAL_S + WRITE_S + _longest_stall([*edits.values(), at])
    session.close()
    return bool(recoveries)


def _longest_stall(times: list[float]) -> float:
    """Return for how long the machine gave the window no time: neither edit nor clock went on."""
    return max((later - earlier for earlier, later in pairwise(times)), default=0.0)


def kill_many(folder: Path, count: int) -> int:
    """Kill so many windows, some at a time, and return for how many a recovery was offered."""
    offered = 0
    for first in range(0, count, AT_ONCE):
        runs = [
            started(folder / str(seed), seed, saves=seed % AT_ONCE != 0)
            for seed in range(first, first + AT_ONCE)
        ]
        try:
            answers = [killed(run) for run in runs]
        finally:
            for run in runs:
                run.process.kill()
                run.process.wait()
                run.process.stdout.close()
        assert answers[0], "never saved, it must be offered"
        offered += sum(answers)
    return offered


@pytest.mark.skipif(os.name == "nt", reason="Windows knows no SIGKILL")
def test_killed_at_random_the_file_opens_and_an_interval_is_lost_at_most(tmp_path):
    assert kill_many(tmp_path, 5) >= 1


@pytest.mark.slow
@pytest.mark.skipif(os.name == "nt", reason="Windows knows no SIGKILL")
def test_a_hundred_kills(tmp_path):
    offered = kill_many(tmp_path, 100)
    assert offered >= 100 // AT_ONCE
    print(f"{offered} of 100 were offered a recovery")  # noqa: T201  (for who runs it by hand)
