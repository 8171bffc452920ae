#!/usr/bin/env python3
"""Every command of Underbund. On a bare machine the first one makes .venv and goes on inside."""

import os
import sys

OLDEST = (3, 11)
USAGE = """\
Use: python3 manage.py COMMAND [options]

  start              set everything up, then serve the pages and one worker until Ctrl-C
  test [PATHS]       the test suite; --all adds browser, benchmark and fault tests
  appraise PACK      one survey pack: rock line, wall, quantities, estimate, water, cautions
  interpret_sounding FILE
                     one sounding: layers, depth of rock with its range
  worker             a worker alone
  check              look for mistakes in the settings; --deploy before going public
  help               every command; help COMMAND tells its options
"""


def main(arguments):
    if sys.version_info < OLDEST:
        here = "%d.%d" % sys.version_info[:2]  # noqa: UP031 -- an old Python must still read this
        return complain(
            "Underbund needs Python 3.11 or newer, and this is " + here + ". "
            "Start it with a newer one, as: python3.11 manage.py start"
        )
    if not arguments:
        complain(USAGE)
        return 2
    if arguments[0] in ("-h", "--help"):
        print(USAGE)
        return 0
    from pathlib import Path

    from config import venv

    root = Path(__file__).resolve().parent
    try:
        venv.go_inside(root, arguments, tests=arguments[0] == "test")
    except venv.NotReady as reason:
        return complain(str(reason))
    except KeyboardInterrupt:
        return complain("Stopped before the environment was made; the next start mends it.")
    return run(arguments, root)


def run(arguments, root):
    name, *rest = arguments
    if name == "test":
        return run_tests(rest, root)
    if name == "start":
        from config import start

        return start.main(rest, root)
    return run_django(arguments)


def run_tests(options, root):
    kinds = ["-m", ""] if "--all" in options else []
    options = [option for option in options if option != "--all"]
    os.chdir(root)
    # A fresh process, so that coverage sees every line from the first import on.
    command = [sys.executable, "-m", "pytest", *kinds, *options]
    os.execv(command[0], command)  # noqa: S606 -- the same program goes on


def run_django(arguments):
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "config.settings")
    import django
    from django.core.management import execute_from_command_line, get_commands
    from django.db import OperationalError

    django.setup()
    name = arguments[0]
    if name not in get_commands() and name not in ("help", "version", "--version"):
        complain("There is no command '" + name + "'. Look them up with: python3 manage.py help")
        return 2
    try:
        execute_from_command_line(["manage.py", *arguments])
    except OperationalError as error:
        reason = str(error).strip().splitlines()[0]
        return complain("The database cannot do this: " + reason + ". Look at DATABASE_URL.")
    except KeyboardInterrupt:
        return 130  # what a shell gives for a process ended by Ctrl-C
    return 0


def complain(sentence):
    sys.stderr.write(sentence.rstrip() + "\n")
    return 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
