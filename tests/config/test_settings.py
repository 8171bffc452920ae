"""The settings in force, read in a process of their own as a visitor's machine would."""

from __future__ import annotations

import json
import os
import re
import secrets
import subprocess
import sys
from pathlib import Path

import pytest

from config import checks
from config.env import VARIABLES, read_environment

ROOT = Path(__file__).resolve().parents[2]
SERVERS = {
    "DATABASE_URL": "postgres://dam@127.0.0.1/dams",
    "QUEUE_URL": "redis://127.0.0.1/0",
    "ALLOWED_HOSTS": "dams.example.org",
}
ASK = """
import json, sys
from django.conf import settings
print(json.dumps({name: getattr(settings, name) for name in sys.argv[1:]}, default=str))
"""


def process(environ, *command):
    ours = {one.name for one in VARIABLES} | {"PYTHONWARNINGS"}
    clean = {name: value for name, value in os.environ.items() if name not in ours}
    return subprocess.run(
        [sys.executable, *command],
        cwd=ROOT,
        env={**clean, "DJANGO_SETTINGS_MODULE": "config.settings", **environ},
        capture_output=True,
        text=True,
        check=False,
    )


def settings_with(environ, *names):
    done = process(environ, "-c", ASK, *names)
    assert done.returncode == 0, done.stderr
    return json.loads(done.stdout)


def test_the_embedded_default_keeps_its_state_in_one_folder_and_debug_off():
    read = settings_with(
        {}, "DEBUG", "DATABASES", "QUEUE_FOLDER", "MEDIA_ROOT", "STATIC_ROOT", "SECURE_SSL_REDIRECT"
    )
    state = ROOT / ".data"
    database = read["DATABASES"]["default"]
    assert read["DEBUG"] is False
    assert read["SECURE_SSL_REDIRECT"] is False
    assert database["NAME"] == str(state / "underbund.sqlite3")
    assert database["OPTIONS"] == {"transaction_mode": "IMMEDIATE", "timeout": 20}
    assert [read["QUEUE_FOLDER"], read["MEDIA_ROOT"], read["STATIC_ROOT"]] == [
        str(state / name) for name in ("queue", "files", "static")
    ]


def test_a_site_with_a_name_of_its_own_insists_on_tls():
    read = settings_with(
        SERVERS,
        *("SECURE_SSL_REDIRECT", "SESSION_COOKIE_SECURE", "CSRF_COOKIE_SECURE"),
        *("SECURE_HSTS_SECONDS", "SECURE_PROXY_SSL_HEADER"),
    )
    assert read == {
        "SECURE_SSL_REDIRECT": True,
        "SESSION_COOKIE_SECURE": True,
        "CSRF_COOKIE_SECURE": True,
        "SECURE_HSTS_SECONDS": 31_536_000,
        "SECURE_PROXY_SSL_HEADER": ["HTTP_X_FORWARDED_PROTO", "https"],
    }


def test_a_wrong_variable_ends_any_process_with_its_sentence():
    done = process({"DEBUG": "perhaps"}, "manage.py", "check")
    assert (done.returncode, done.stdout) == (1, "")
    assert done.stderr == "DEBUG is 'perhaps'. Write yes or no.\n"


def test_the_deployment_check_passes_on_servers_with_a_long_secret():
    done = process(
        {**SERVERS, "SECRET_KEY": secrets.token_urlsafe(60)},
        *("manage.py", "check", "--deploy", "--fail-level", "WARNING"),
    )
    assert done.returncode == 0, done.stderr


def test_the_deployment_check_finds_every_weakness_of_an_open_site_at_once():
    done = process(
        {"ALLOWED_HOSTS": "*", "DEBUG": "yes", "SECRET_KEY": ""},
        *("manage.py", "check", "--deploy", "--fail-level", "WARNING"),
    )
    assert done.returncode == 1
    found = re.findall(r"\((\w+\.\w+)\)", done.stderr)
    assert sorted(found) == [
        *("config.W001", "config.W002", "config.W003"),
        "security.W018",
    ]


@pytest.mark.parametrize(
    ("name", "value", "check"),
    [
        ("SECRET_KEY", "", checks.check_secret),
        ("ALLOWED_HOSTS", "*", checks.check_hosts),
        ("ALLOWED_HOSTS", "", checks.check_hosts),
        ("ALLOWED_HOSTS", "localhost", checks.check_hosts),
        ("DATABASE_URL", "", checks.check_servers),
        ("DATABASE_URL", "sqlite:////srv/dams.sqlite3", checks.check_servers),
        ("QUEUE_URL", "", checks.check_servers),
    ],
)
def test_a_check_speaks_only_where_its_variable_is_weak(settings, name, value, check):
    def findings(environ):
        settings.ENVIRONMENT = read_environment(environ)
        return check()

    sound = {**SERVERS, "SECRET_KEY": secrets.token_urlsafe(60)}
    assert findings(sound) == []
    assert len(findings({**sound, name: value})) == 1
