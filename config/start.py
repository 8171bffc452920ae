"""`manage.py start`: set up, then web and worker until Ctrl-C. Standard library only.

Each child leads a process group of its own, so that ending it ends whatever it started as well.
"""

from __future__ import annotations

import argparse
import ctypes
import errno
import fcntl
import os
import signal
import socket
import subprocess
import sys
import time
from contextlib import contextmanager, suppress
from dataclasses import dataclass, field
from ipaddress import ip_address
from typing import IO, TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

LOOK_EVERY_S: Final = 0.1
PATIENCE_S: Final = 3.0  # from asking to killing; both children are gone within 5 s
LONGEST_PAUSE_S: Final = 30.0
HEALTHY_AFTER_S: Final = 60.0  # a child that lived so long begins again with the shortest pause
PR_SET_PDEATHSIG: Final = 1  # from linux/prctl.h
OPEN_TO_OTHERS: Final = (
    "Other machines can reach this address, without encryption. Phones keep pages for places "
    "without signal only over TLS: config/deploy/ and the README, 'On a server', say how."
)


class CannotStart(Exception):  # noqa: N818 -- its text is the sentence that the user reads
    """The site cannot be started; the text says why and what to do."""


@dataclass(slots=True)
class Stop:
    """Whether somebody asked for the end."""

    # No Event: a signal that lands while its lock is held would wait for itself for ever.
    asked: bool = False

    def ask(self, *_: object) -> None:
        self.asked = True

    def wait(self) -> bool:
        if not self.asked:
            time.sleep(LOOK_EVERY_S)
        return self.asked


@dataclass(slots=True)
class Child:
    """One program that is kept running."""

    name: str
    command: list[str]
    process: subprocess.Popen[bytes] | None = None
    started_at: float = 0.0
    due_at: float = 0.0
    pause_s: float = field(default=1.0)

    def keep(self, now: float, root: Path) -> None:
        """Start what is due; where the program ended, plan its next start."""
        if self.process is None:
            if now >= self.due_at:
                self.process = _spawn(self.command, root)
                self.started_at = now
            return
        if self.process.poll() is None:
            return
        end_group(self.process, signal.SIGKILL)
        if now - self.started_at >= HEALTHY_AFTER_S:
            self.pause_s = 1.0
        _say(
            f"The {self.name} ended with status {self.process.returncode}; "
            f"it starts again in {self.pause_s:g} s."
        )
        self.process = None
        self.due_at = now + self.pause_s
        self.pause_s = min(2 * self.pause_s, LONGEST_PAUSE_S)


def main(arguments: list[str], root: Path) -> int:
    options = _options(arguments)
    stop = Stop()
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        signal.signal(number, stop.ask)
    try:
        with _only_one(root):
            _check_free(options.bind, options.port)
            _set_up(root, stop, empty=options.empty)
            if not stop.asked:
                _serve(_children(options.bind, options.port), root, stop, _address(options))
    except CannotStart as reason:
        _say(str(reason))
        return 1
    return 0


def _options(arguments: list[str]) -> argparse.Namespace:
    parser = argparse.ArgumentParser(
        prog="manage.py start",
        description="Set everything up, then serve the pages and one worker until Ctrl-C.",
        allow_abbrev=False,
    )
    parser.add_argument("--port", type=_port, default=8000, help="default 8000")
    parser.add_argument("--bind", default="127.0.0.1", help="address, default 127.0.0.1")
    parser.add_argument("--empty", action="store_true", help="load no demo data")
    return parser.parse_args(arguments)


def _port(text: str) -> int:
    port = int(text)
    if not 1 <= port <= 65535:
        raise argparse.ArgumentTypeError("a port lies between 1 and 65535")
    return port


def _address(options: argparse.Namespace) -> str:
    host = f"[{options.bind}]" if ":" in options.bind else options.bind
    return f"http://{host}:{options.port}/"


@contextmanager
def _only_one(root: Path) -> Iterator[None]:
    """Hold the folder of the state; it belongs to one start at a time."""
    state = root / ".data"
    try:
        state.mkdir(mode=0o700, exist_ok=True)
        lock = (state / "start.lock").open("a+")
    except OSError as error:
        raise CannotStart(f"{state} cannot be written: {error.strerror}.") from error
    with lock:
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            raise CannotStart(
                f"Underbund already runs from this folder (process {_holder(lock)}). "
                "Use that one, or stop it first."
            ) from None
        lock.truncate(0)
        lock.write(str(os.getpid()))
        lock.flush()
        yield


def _holder(lock: IO[str]) -> str:
    lock.seek(0)
    return lock.read().strip() or "not known"


def _check_free(bind: str, port: int) -> None:
    try:
        family, kind, protocol, _, address = socket.getaddrinfo(
            bind, port, type=socket.SOCK_STREAM, flags=socket.AI_PASSIVE
        )[0]
    except OSError as error:
        raise CannotStart(f"{bind} is no address of this machine: {error.strerror}.") from error
    with socket.socket(family, kind, protocol) as trial:
        trial.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            trial.bind(address)
        except OSError as error:
            if error.errno == errno.EADDRINUSE:
                why = f"Port {port} of {bind} is taken by another program. Choose one with --port."
            else:
                why = f"Port {port} of {bind} cannot be opened: {error.strerror}."
            raise CannotStart(why) from error


def _set_up(root: Path, stop: Stop, *, empty: bool) -> None:
    command = [sys.executable, "manage.py", "set_up", *(["--empty"] if empty else [])]
    process = _spawn(command, root)
    try:
        while process.poll() is None and not stop.wait():
            pass
    finally:
        end_all([process])
    if process.returncode and not stop.asked:
        raise CannotStart("The set-up did not come to its end; the lines above say why.")


def _children(bind: str, port: int) -> list[Child]:
    host = f"[{bind}]" if ":" in bind else bind
    web = [
        *(sys.executable, "-m", "waitress", f"--listen={host}:{port}", "--threads=8"),
        # A proxy on this machine says how the visitor came; from anyone else it is not believed.
        *("--trusted-proxy=127.0.0.1", "--clear-untrusted-proxy-headers"),
        *("--trusted-proxy-headers=x-forwarded-for x-forwarded-proto x-forwarded-host",),
        "config.wsgi:application",
    ]
    return [
        Child("web server", web),
        Child("worker", [sys.executable, "manage.py", "worker"]),
    ]


def _serve(children: list[Child], root: Path, stop: Stop, address: str) -> None:
    told = False
    try:
        while not stop.wait():
            for child in children:
                child.keep(time.monotonic(), root)
            if not told and _answers(address):
                told = True
                _tell(address)
    finally:
        end_all([child.process for child in children if child.process is not None])
    _say("Stopped.")


def _answers(address: str) -> bool:
    host, _, port = address.removeprefix("http://").rstrip("/").rpartition(":")
    near = {"0.0.0.0": "127.0.0.1", "[::]": "::1"}.get(host, host.strip("[]"))  # noqa: S104 -- read
    try:
        socket.create_connection((near, int(port)), timeout=1).close()
    except OSError:
        return False
    return True


def _tell(address: str) -> None:
    print(f"Underbund is at {address} - Ctrl-C stops it.", flush=True)
    host = address.removeprefix("http://").rpartition(":")[0].strip("[]")
    with suppress(ValueError):
        if not ip_address(host).is_loopback:
            _say(OPEN_TO_OTHERS)


def _spawn(command: list[str], root: Path) -> subprocess.Popen[bytes]:
    return subprocess.Popen(
        command,
        cwd=root,
        stdin=subprocess.DEVNULL,
        start_new_session=True,
        preexec_fn=_die_with(os.getpid()),  # noqa: PLW1509 -- this process has one thread
    )


def _die_with(parent: int):
    """Have the kernel end a child whose supervisor is killed, where it can (Linux)."""
    if not sys.platform.startswith("linux"):
        return None
    kernel = ctypes.CDLL(None)

    def ask() -> None:
        kernel.prctl(PR_SET_PDEATHSIG, signal.SIGKILL)
        if os.getppid() != parent:  # it was killed between the fork and this line
            os._exit(1)

    return ask


def end_group(process: subprocess.Popen[bytes], number: signal.Signals) -> None:
    """Signal the child and whatever it started; the group outlives its leader."""
    with suppress(ProcessLookupError):
        os.killpg(process.pid, number)


def end_all(processes: list[subprocess.Popen[bytes]]) -> None:
    """Ask all at once, wait a little for all together, then kill what is left."""
    for process in processes:
        end_group(process, signal.SIGTERM)
    until = time.monotonic() + PATIENCE_S
    for process in processes:
        with suppress(subprocess.TimeoutExpired):
            process.wait(max(until - time.monotonic(), 0.0))
    for process in processes:
        end_group(process, signal.SIGKILL)
        process.wait()


def _say(sentence: str) -> None:
    print(sentence, file=sys.stderr, flush=True)
