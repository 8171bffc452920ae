"""The first command on a bare machine, each time in a folder of its own, without a network."""

from __future__ import annotations

import ast
import hashlib
import os
import signal
import subprocess
import time
import zipfile

import pytest

from config import venv
from tests.config.site_copy import (
    ROOT,
    SYSTEM_PYTHON,
    bare_copy,
    clean_environment,
    command,
    processes_in,
    wait_until,
)

CLOSED_INDEX = "http://127.0.0.1:9/simple"  # port 9 (discard) of this machine is closed
RUN_WITH = "import sys, runpy; {}; sys.argv = ['manage.py', *sys.argv[1:]]; "
RUN_WITH += "runpy.run_path('manage.py', run_name='__main__')"
HELP = ("start", "--help")  # the cheapest command that goes on inside


def wheel(folder):
    """Make a package of one module, as a wheel that pip installs without an index."""
    name = "tiny_clay-1.0"
    files = {
        "tiny_clay.py": "PLASTICITY = 18\n",
        f"{name}.dist-info/METADATA": "Metadata-Version: 2.1\nName: tiny_clay\nVersion: 1.0\n",
        f"{name}.dist-info/WHEEL": "Wheel-Version: 1.0\nRoot-Is-Purelib: true\nTag: py3-none-any\n",
    }
    record = f"{name}.dist-info/RECORD"
    files[record] = "".join(f"{path},,\n" for path in (*files, record))
    path = folder / f"{name}-py3-none-any.whl"
    with zipfile.ZipFile(path, "w") as packed:
        for inside, text in files.items():
            packed.writestr(inside, text)
    return f"./{path.name}\n"


def full_disk_package(folder):
    """Make a package whose building writes to a device that is always full."""
    source = folder / "full"
    source.mkdir()
    (source / "pyproject.toml").write_text(
        '[build-system]\nrequires = []\nbuild-backend = "backend"\nbackend-path = ["."]\n'
        '[project]\nname = "full"\nversion = "1"\n'
    )
    (source / "backend.py").write_text(
        "def build_wheel(folder, config_settings=None, metadata_directory=None):\n"
        "    with open('/dev/full', 'w') as out:\n"
        "        out.write('clay')\n"
    )
    return "./full\n"


def module_works(folder):
    python = folder / ".venv" / "bin" / "python"
    done = subprocess.run([python, "-c", "import tiny_clay"], capture_output=True, check=False)
    return done.returncode == 0


def is_a_sentence(done):
    assert done.stdout == ""
    assert "Traceback" not in done.stderr
    assert done.returncode == 1
    return done.stderr.splitlines()[-1]


def run_with(folder, preparation, *arguments):
    return subprocess.run(
        [SYSTEM_PYTHON, "-c", RUN_WITH.format(preparation), *arguments],
        cwd=folder,
        env=clean_environment(),
        capture_output=True,
        text=True,
        check=False,
    )


def test_without_a_command_the_commands_are_told_and_nothing_is_made(tmp_path):
    done = command(bare_copy(tmp_path))
    assert (done.returncode, done.stdout) == (2, "")
    assert "python3 manage.py COMMAND" in done.stderr
    assert not (tmp_path / ".venv").exists()


def test_asked_for_help_the_commands_go_to_standard_output(tmp_path):
    done = command(bare_copy(tmp_path), "--help")
    assert (done.returncode, done.stderr) == (0, "")
    assert "python3 manage.py COMMAND" in done.stdout


def test_the_first_file_reads_under_old_pythons():
    """Oracle: Python's own grammar of 3.5, by the compiler."""
    ast.parse((ROOT / "manage.py").read_text(), feature_version=(3, 5))


def test_an_old_python_is_refused_with_a_sentence(tmp_path):
    done = run_with(bare_copy(tmp_path), "sys.version_info = (3, 9, 2)", "start")
    assert is_a_sentence(done).startswith("Underbund needs Python 3.11 or newer, and this is 3.9.")


@pytest.mark.parametrize("module", ["venv", "ensurepip"])
def test_a_python_without_the_venv_module_is_refused_with_a_sentence(tmp_path, module):
    done = run_with(bare_copy(tmp_path), f"sys.modules['{module}'] = None", "start")
    sentence = is_a_sentence(done)
    assert sentence.startswith("This Python has no venv module")
    assert "apt-get install python3." in sentence


def test_a_folder_that_cannot_hold_an_environment_is_refused_with_a_sentence(tmp_path):
    (bare_copy(tmp_path) / ".data").touch()
    assert "cannot be made" in is_a_sentence(command(tmp_path, "start"))


@pytest.mark.parametrize("said", ["OSError: [Errno 28] No space left on device", "Errno 28"])
def test_what_pip_says_of_a_full_disk_is_known(said):
    assert venv.NO_ROOM.search(said)


@pytest.mark.fault
def test_it_is_made_once_and_again_only_for_another_list(tmp_path):
    folder = bare_copy(tmp_path, "# nothing\n")
    first = command(folder, *HELP)
    assert (first.returncode, "Making the environment" in first.stderr) == (0, True)
    assert "usage: manage.py start" in first.stdout
    second = command(folder, *HELP)
    assert (second.returncode, second.stderr) == (0, "")
    (folder / "requirements.txt").write_text(wheel(folder))
    third = command(folder, *HELP)
    assert (third.returncode, module_works(folder)) == (0, True)
    assert "Making" not in third.stderr
    assert "Installing" in third.stderr
    text = (folder / "requirements.txt").read_bytes()
    stamp = (folder / ".venv" / "program-installed.json").read_text()
    assert hashlib.sha256(text).hexdigest() in stamp


@pytest.mark.fault
def test_the_status_of_the_command_comes_through(tmp_path):
    assert command(bare_copy(tmp_path), "start", "--port", "x").returncode == 2


@pytest.mark.fault
def test_no_index_gets_a_sentence_and_the_next_start_goes_on(tmp_path):
    folder = bare_copy(tmp_path, "tiny_clay==1.0\n")
    done = command(folder, *HELP, PIP_INDEX_URL=CLOSED_INDEX)
    assert is_a_sentence(done).startswith("No package index answers")
    (folder / "requirements.txt").write_text(wheel(folder))
    assert command(folder, *HELP).returncode == 0


@pytest.mark.fault
def test_a_whole_environment_outlives_a_failed_change(tmp_path):
    folder = bare_copy(tmp_path)
    old = wheel(folder)
    (folder / "requirements.txt").write_text(old)
    assert command(folder, *HELP).returncode == 0
    (folder / "requirements.txt").write_text("another_clay==1.0\n")
    assert command(folder, *HELP, PIP_INDEX_URL=CLOSED_INDEX).returncode == 1
    (folder / "requirements.txt").write_text(old)
    back = command(folder, *HELP)
    assert (back.returncode, back.stderr) == (0, "")


@pytest.mark.fault
def test_a_full_disk_gets_a_sentence(tmp_path):
    folder = bare_copy(tmp_path)
    (folder / "requirements.txt").write_text(full_disk_package(folder))
    done = command(folder, *HELP, PIP_INDEX_URL=CLOSED_INDEX)
    assert is_a_sentence(done).startswith("The disk is full")


@pytest.mark.fault
def test_a_disk_that_is_full_for_the_stamp_gets_a_sentence(tmp_path):
    folder = bare_copy(tmp_path, "# nothing\n")
    assert command(folder, *HELP).returncode == 0
    (folder / "requirements.txt").write_text("# nothing new\n")
    (folder / ".venv" / "program-installed.half").symlink_to("/dev/full")
    assert "is full. Free about 1 GB" in is_a_sentence(command(folder, *HELP))


@pytest.mark.fault
def test_a_start_killed_while_making_is_mended_by_the_next(tmp_path):
    folder = bare_copy(tmp_path)
    (folder / "requirements.txt").write_text(wheel(folder))
    first = subprocess.Popen(
        [SYSTEM_PYTHON, "manage.py", *HELP],
        cwd=folder,
        env=clean_environment(),
        stderr=subprocess.DEVNULL,
        start_new_session=True,
    )
    wait_until(lambda: list((folder / ".venv").glob("lib/*/site-packages/*")))
    os.killpg(first.pid, signal.SIGKILL)
    first.wait()
    wait_until(lambda: not processes_in(folder))
    done = command(folder, *HELP)
    assert (done.returncode, module_works(folder)) == (0, True)
    assert "Making the environment" in done.stderr


@pytest.mark.fault
def test_packages_half_written_by_a_killed_start_are_written_again(tmp_path):
    folder = bare_copy(tmp_path)
    (folder / "requirements.txt").write_text(wheel(folder))
    assert command(folder, *HELP).returncode == 0
    for module in (folder / ".venv").glob("lib/*/site-packages/tiny_clay.py"):
        module.unlink()
    (folder / ".venv" / "unfinished").touch()
    assert not module_works(folder)
    assert (command(folder, *HELP).returncode, module_works(folder)) == (0, True)


@pytest.mark.fault
def test_what_a_killed_start_left_running_is_waited_for(tmp_path):
    folder = bare_copy(tmp_path)
    (folder / "requirements.txt").write_text(wheel(folder))
    first = subprocess.Popen(
        [SYSTEM_PYTHON, "manage.py", *HELP],
        cwd=folder,
        env=clean_environment(),
        stderr=subprocess.DEVNULL,
    )
    wait_until(lambda: len(processes_in(folder)) > 1)
    first.kill()
    first.wait()
    done = command(folder, *HELP)
    assert (done.returncode, module_works(folder)) == (0, True)
    assert "waiting for it" in done.stderr


@pytest.mark.fault
def test_an_environment_without_its_settings_file_is_made_again(tmp_path):
    folder = bare_copy(tmp_path)
    (folder / "requirements.txt").write_text(wheel(folder))
    assert command(folder, *HELP).returncode == 0
    (folder / ".venv" / "pyvenv.cfg").unlink()
    assert (command(folder, *HELP).returncode, module_works(folder)) == (0, True)


@pytest.mark.fault
def test_two_starts_at_once_make_it_once(tmp_path):
    folder = bare_copy(tmp_path)
    (folder / "requirements.txt").write_text(wheel(folder))
    both = []
    for _ in range(2):
        both.append(
            subprocess.Popen(
                [SYSTEM_PYTHON, "manage.py", *HELP],
                cwd=folder,
                env=clean_environment(),
                stdout=subprocess.DEVNULL,
                stderr=subprocess.PIPE,
                text=True,
            )
        )
        time.sleep(0.5)
    said = "".join(process.communicate()[1] for process in both)
    assert [process.returncode for process in both] == [0, 0]
    assert (said.count("Making"), said.count("waiting for it")) == (1, 1)
    assert module_works(folder)
