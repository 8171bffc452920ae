"""Workers that die, fall silent or are called off: every run is done once or not at all."""

from __future__ import annotations

import time

import numpy as np
import pytest

from tests.faults.pausing import go_on, pause
from tests.faults.program import PATIENCE_S, wait_until

pytestmark = pytest.mark.fault

RUNS = 200
KILLS = 5
WORKERS = 2  # at work side by side; the killed one is followed by a new one
SEED = 20261201


def test_two_hundred_runs_outlive_five_workers_killed_at_work(program):
    """Oracle: as many effects as runs were asked for, whatever happened on the way."""
    rng = np.random.default_rng(SEED)
    marks = np.sort(rng.choice(np.arange(3, 170), KILLS, replace=False))
    asking = program.begin("queue_trials", "trial.short", "--count", str(RUNS))
    workers = [program.worker() for _ in range(WORKERS)]
    for mark, pause_s in zip(marks, rng.uniform(0.0, 0.1, KILLS), strict=True):
        wait_until(lambda mark=mark: program.states().get("done", 0) >= mark)
        time.sleep(pause_s)
        killed = workers.pop(0)
        killed.kill()
        killed.wait()
        workers.append(program.worker())
    assert asking.wait(PATIENCE_S) == 0, program.said(asking, "err")
    wait_until(lambda: program.states() == {"done": RUNS})
    assert program.effects() == (RUNS, RUNS)
    again = program.sql("SELECT count(*) FROM structures_run WHERE attempts > 1")[0][0]
    assert again > 0, "no kill met a run at work"


def test_a_run_that_takes_its_worker_down_is_done_by_the_next(program):
    """Once while it computes, once when result and effect are written and not yet committed."""
    program.command("queue_trials", "trial.fatal", "--count", "2")
    worker = program.worker()

    def all_done():
        nonlocal worker
        if worker.poll() is not None:
            worker = program.worker()
        return program.states() == {"done": 2}

    wait_until(all_done)
    assert program.effects() == (2, 2)
    assert program.sql("SELECT attempts FROM structures_run") == [(2,), (2,)]


def test_a_worker_silent_beyond_its_lease_writes_nothing(program, tmp_path):
    gate = tmp_path / "gate"
    program.command("queue_trials", "trial.gated", "--gate", str(gate))
    stale = program.worker()
    wait_until(lambda: program.run()[:2] == ("running", 1))
    pause(stale.pid, program.file)
    fresh = program.worker()
    wait_until(lambda: program.run()[:2] == ("running", 2))
    gate.touch()
    wait_until(lambda: program.run()[0] == "done")
    go_on(stale.pid)
    wait_until(lambda: "taken over by another worker" in program.said(stale, "err"))
    assert program.effects() == (1, 1)
    assert program.run()[:2] == ("done", 2)
    assert str(fresh.pid) in str(program.sql("SELECT result FROM structures_run"))


def test_a_run_called_off_at_work_stops_and_keeps_nothing(program):
    program.command("queue_trials", "trial.long")
    worker = program.worker()
    wait_until(lambda: program.run()[2] > 0.0)
    program.command("cancel_trials")
    wait_until(lambda: program.run()[0] == "cancelled")
    ended = program.run()
    assert ended[3] == "Stopped as asked; nothing was kept."
    assert program.sql("SELECT result FROM structures_run") == [(None,)]

    program.command("queue_trials", "trial.short")
    wait_until(lambda: program.states() == {"cancelled": 1, "done": 1})
    assert program.effects() == (1, 1)
    assert worker.poll() is None
    left = program.sql(
        "SELECT state, fence, progress, message FROM structures_run WHERE state = 'cancelled'"
    )
    assert left == [ended]
