"""Make .venv, install what is required into it, go on inside. Standard library only."""

from __future__ import annotations

import errno
import fcntl
import hashlib
import importlib.util
import json
import os
import re
import subprocess
import sys
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Iterator

PIP_OPTIONS: Final = ("--quiet", "--disable-pip-version-check", "--no-input", "--retries", "3")
NO_ROOM: Final = re.compile(r"No space left on device|Errno 28|Disk quota exceeded")
NO_INDEX: Final = re.compile(
    r"NewConnectionError|ConnectionError|Connection refused|Connection to \S+ timed out"
    r"|ConnectTimeout|ReadTimeout|Temporary failure in name resolution|Name or service not known"
    r"|ProxyError|SSLError|Network is unreachable|Max retries exceeded"
)


class NotReady(Exception):  # noqa: N818 -- its text is the sentence that the user reads
    """The environment cannot be made; the text says why and what to do."""


@dataclass(frozen=True, slots=True)
class Place:
    """The files of one environment."""

    root: Path

    @property
    def folder(self) -> Path:
        return self.root / ".venv"

    @property
    def python(self) -> Path:
        return self.folder / "bin" / "python"

    @property
    def settings(self) -> Path:
        return self.folder / "pyvenv.cfg"

    @property
    def lock(self) -> Path:
        return self.root / ".data" / "environment.lock"

    @property
    def unfinished(self) -> Path:
        """Stands there while packages are being written; left over, it tells of a killed start."""
        return self.folder / "unfinished"

    def stamp(self, name: str) -> Path:
        return self.folder / f"{name}-installed.json"


# Which lists of packages there are: the program's own, and what only its tests import.
LISTS: Final = {"program": "requirements.txt", "tests": "tests/requirements.txt"}


def go_inside(root: Path, arguments: list[str], *, tests: bool) -> None:
    """Return when this process runs inside a complete environment, else make it and start again.

    Raises
    ------
    NotReady
        If the environment cannot be made.
    """
    place = Place(root)
    names = ("program", "tests") if tests else ("program",)
    try:
        if not all(is_fresh(place, name) for name in names):
            with _alone(place):
                for name in names:
                    if not is_fresh(place, name):
                        _install(place, name)
    except OSError as error:
        raise NotReady(_about(error, place)) from error
    if Path(sys.prefix).resolve() != place.folder.resolve():
        command = [str(place.python), str(root / "manage.py"), *arguments]
        os.execv(command[0], command)  # noqa: S606 -- the same program goes on


def is_fresh(place: Place, name: str) -> bool:
    """Whether the environment is whole and holds exactly what the list asks for."""
    if place.unfinished.exists():
        return False
    if not (place.python.exists() and place.settings.exists()):
        return False
    try:
        written = json.loads(place.stamp(name).read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return False
    return written == _stamp(place, name)


def _stamp(place: Place, name: str) -> dict[str, str]:
    """What must stay the same: the list's text and the Python below the environment."""
    base = place.python.resolve()
    return {
        "requirements_sha256": hashlib.sha256((place.root / LISTS[name]).read_bytes()).hexdigest(),
        "python": str(base),
        "version": _written_version(place),
    }


def _written_version(place: Place) -> str:
    found = re.search(
        r"^version\s*=\s*(\S+)",
        place.settings.read_text(encoding="utf-8"),
        re.MULTILINE,
    )
    return found.group(1) if found else ""


@contextmanager
def _alone(place: Place) -> Iterator[None]:
    """Hold the lock of the environment; a second start waits here and finds it made."""
    place.lock.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
    with place.lock.open("w") as lock:
        # What this start runs holds the lock as well, and goes on when only this start is killed.
        os.set_inheritable(lock.fileno(), True)  # noqa: FBT003 -- takes no keywords
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            _say("Another start is making the environment in .venv; waiting for it.")
            fcntl.flock(lock, fcntl.LOCK_EX)
        yield


def _install(place: Place, name: str) -> None:
    if place.unfinished.exists() or not _is_environment(place):
        _make(place)
    _say(f"Installing the packages of {LISTS[name]} into .venv; this takes a minute or two.")
    place.unfinished.touch()
    pip = [str(place.python), "-m", "pip", "install", *PIP_OPTIONS, "-r", LISTS[name]]
    done = _run(pip, place)
    if done.returncode:
        # pip ends a refused install before it writes packages: what was there is still whole.
        if _is_environment(place) and not NO_ROOM.search(done.stdout):
            place.unfinished.unlink()
        raise NotReady(_about_pip(done.stdout, name))
    half = place.stamp(name).with_suffix(".half")
    half.write_text(json.dumps(_stamp(place, name)), encoding="utf-8")
    place.unfinished.unlink()
    half.replace(place.stamp(name))


def _is_environment(place: Place) -> bool:
    """Whether a whole environment stands there, of this list or of an older one."""
    parts = (place.stamp("program"), place.python, place.settings)
    if not all(part.exists() for part in parts):
        return False
    try:
        written = json.loads(place.stamp("program").read_text(encoding="utf-8"))
    except ValueError:
        return False
    return written.get("python") == str(place.python.resolve())


def _make(place: Place) -> None:
    """Make the environment from nothing: a half-made one may hold half-written packages."""
    if importlib.util.find_spec("venv") is None or importlib.util.find_spec("ensurepip") is None:
        raise NotReady(_no_venv())
    _say("Making the environment in .venv (only this once).")
    if place.folder.is_symlink() or place.folder.is_file():
        raise NotReady(".venv is not a folder of this project. Move it away and start again.")
    for name in LISTS:  # before anything else goes: a stamp must never outlive its packages
        place.stamp(name).unlink(missing_ok=True)
    base = getattr(sys, "_base_executable", None) or sys.executable
    done = _run([base, "-m", "venv", "--clear", str(place.folder)], place)
    if done.returncode == 0:
        return
    if NO_ROOM.search(done.stdout):
        raise NotReady(_no_room(place))
    if "ensurepip" in done.stdout:
        raise NotReady(_no_venv())
    raise NotReady(f"The environment in .venv cannot be made: {_last_line(done.stdout)}")


def _run(command: list[str], place: Place) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        command,
        cwd=place.root,
        check=False,
        close_fds=False,  # the lock goes along
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        errors="replace",
    )


def _about(error: OSError, place: Place) -> str:
    if error.errno in (errno.ENOSPC, errno.EDQUOT):
        return _no_room(place)
    return (
        f"The environment in .venv cannot be made: {error.strerror} ({error.filename}). "
        "Look at who may write there, then start again."
    )


def _about_pip(text: str, name: str) -> str:
    if NO_ROOM.search(text):
        return "The disk is full: the packages do not fit. Free about 1 GB and start again."
    if NO_INDEX.search(text):
        return (
            "No package index answers, so the packages cannot be fetched. Connect this machine, "
            "or name an index that it reaches in PIP_INDEX_URL, then start again."
        )
    return (
        f"The packages of {LISTS[name]} cannot be installed: {_last_line(text)} "
        "Mend that and start again."
    )


def _no_room(place: Place) -> str:
    return f"The disk of {place.root} is full. Free about 1 GB and start again."


def _no_venv() -> str:
    version = f"{sys.version_info.major}.{sys.version_info.minor}"
    return (
        "This Python has no venv module, so no environment can be made. "
        f"Install it (on Debian: apt-get install python{version}-venv) and start again."
    )


def _last_line(text: str) -> str:
    lines = [line.strip() for line in text.splitlines() if line.strip()]
    errors = [line for line in lines if line.startswith("ERROR")]
    line = (errors or lines or ["no reason was given"])[-1].removeprefix("ERROR: ")
    return line if line.endswith(".") else f"{line}."


def _say(sentence: str) -> None:
    # Standard output belongs to results: the first command may be one with --json.
    print(sentence, file=sys.stderr, flush=True)
