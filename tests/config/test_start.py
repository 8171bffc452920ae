"""Keeping children and ending them, with real processes that live for a moment."""

from __future__ import annotations

import os
import signal
import socket
import subprocess
import sys
import time
from pathlib import Path

import pytest

from config import start

HERE = Path(__file__).parent
LINGERING = "trap '' TERM; sleep 300 & echo $!; wait; wait"


def ended(number):
    """Whether a process is gone, or dead and only waiting for its parent to notice."""
    try:
        state = Path(f"/proc/{number}/stat").read_text().rpartition(")")[2].split()[0]
    except FileNotFoundError:
        return True
    return state == "Z"


def wait_until(true, patience_s=10.0):
    until = time.monotonic() + patience_s
    while not true():
        assert time.monotonic() < until
        time.sleep(0.02)


def group_of(command):
    return subprocess.Popen(command, stdout=subprocess.PIPE, start_new_session=True, text=True)


def test_pauses_double_up_to_thirty_seconds():
    """Oracle: 1, 2, 4 … 30 s by the brief of the start command."""
    child = start.Child("child", ["false"])
    now, pauses = 0.0, []
    for _ in range(7):
        child.keep(now, HERE)
        child.process.wait()
        child.keep(now, HERE)
        pauses.append(child.due_at - now)
        child.keep(child.due_at - 0.01, HERE)
        assert child.process is None
        now = child.due_at
    assert pauses == [1.0, 2.0, 4.0, 8.0, 16.0, 30.0, 30.0]


def test_a_minute_of_health_begins_again_with_the_shortest_pause():
    child = start.Child("child", ["false"], pause_s=16.0)
    child.keep(0.0, HERE)
    child.process.wait()
    child.keep(60.0, HERE)
    assert child.due_at == 61.0


def test_a_living_child_is_left_alone():
    child = start.Child("child", ["sleep", "60"])
    child.keep(0.0, HERE)
    first = child.process
    child.keep(1.0, HERE)
    assert child.process is first
    start.end_all([first])
    assert first.returncode == -signal.SIGTERM


def test_children_deaf_to_being_asked_are_killed_with_what_they_started_within_five_seconds():
    deaf = [group_of(["sh", "-c", LINGERING]) for _ in range(2)]
    grandchildren = [int(process.stdout.readline()) for process in deaf]
    began = time.monotonic()
    start.end_all(deaf)
    assert time.monotonic() - began < 5.0
    assert [process.returncode for process in deaf] == [-signal.SIGKILL] * 2
    wait_until(lambda: all(map(ended, grandchildren)))
    for process in deaf:
        process.stdout.close()


def test_what_a_dead_child_left_behind_is_ended_before_the_next_start():
    child = start.Child("child", [])
    child.process = group_of(["sh", "-c", "sleep 300 & echo $!"])
    grandchild = int(child.process.stdout.readline())
    child.process.wait()
    child.process.stdout.close()
    assert not ended(grandchild)
    child.keep(0.0, HERE)
    wait_until(lambda: ended(grandchild))


def test_children_die_with_a_supervisor_that_is_killed(tmp_path):
    code = (
        "from pathlib import Path; import time; from config import start; "
        "print(start._spawn(['sleep', '300'], Path('.')).pid, flush=True); time.sleep(300)"
    )
    root = HERE.parents[1]
    supervisor = subprocess.Popen(
        [sys.executable, "-c", code], cwd=root, stdout=subprocess.PIPE, text=True
    )
    child = int(supervisor.stdout.readline())
    supervisor.kill()
    supervisor.communicate()
    wait_until(lambda: ended(child))


def test_a_taken_port_is_refused_with_a_sentence(tmp_path, capfd):
    with socket.create_server(("127.0.0.1", 0)) as taken:
        port = taken.getsockname()[1]
        assert start.main(["--port", str(port)], tmp_path) == 1
    said = capfd.readouterr().err
    assert said == (
        f"Port {port} of 127.0.0.1 is taken by another program. Choose one with --port.\n"
    )


def test_an_address_of_another_machine_is_refused_with_a_sentence(tmp_path, capfd):
    """192.0.2.1 belongs to no machine: it is kept for documentation (RFC 5737)."""
    assert start.main(["--bind", "192.0.2.1"], tmp_path) == 1
    assert capfd.readouterr().err.startswith("Port 8000 of 192.0.2.1 cannot be opened: ")


def test_a_second_start_in_the_same_folder_is_refused_with_a_sentence(tmp_path, capfd):
    with start._only_one(tmp_path):
        assert start.main([], tmp_path) == 1
    assert capfd.readouterr().err == (
        f"Underbund already runs from this folder (process {os.getpid()}). "
        "Use that one, or stop it first.\n"
    )


def test_a_state_folder_that_is_a_file_is_refused_with_a_sentence(tmp_path, capfd):
    (tmp_path / ".data").touch()
    assert start.main([], tmp_path) == 1
    assert "cannot be written" in capfd.readouterr().err


def test_a_set_up_that_fails_is_told(tmp_path, capfd):
    (tmp_path / "manage.py").write_text("raise SystemExit('The set-up says why.')")
    with pytest.raises(start.CannotStart, match="did not come to its end"):
        start._set_up(tmp_path, start.Stop(), empty=True)
    assert capfd.readouterr().err == "The set-up says why.\n"


@pytest.mark.parametrize("options", [["--port", "0"], ["--port", "70000"], ["--port", "x"], ["y"]])
def test_wrong_use_ends_with_status_two(options, tmp_path, capfd):
    with pytest.raises(SystemExit) as leaving:
        start.main(options, tmp_path)
    assert leaving.value.code == 2


@pytest.fixture(autouse=True)
def signals_of_the_test_run():
    """`main` takes the signals over; the test run wants its own back."""
    numbers = (signal.SIGINT, signal.SIGTERM, signal.SIGHUP)
    kept = {number: signal.getsignal(number) for number in numbers}
    yield
    for number, action in kept.items():
        signal.signal(number, action)
