"""A real site with one trench at work, and phones of the people who work at it."""

from __future__ import annotations

import json
import os
import re
import subprocess

import pytest

from tests.config.site_copy import ROOT, clean_environment, wait_until, whole_copy
from tests.config.test_site import started
from tests.journeys.browser.conftest import PATIENCE_S, Window
from tests.journeys.browser.office.rooms import PASSWORD, sign_in

PHONE = {"width": 360, "height": 740}
# A browser remarks on requests that do not arrive, and on the answer that a session is over.
REMARK = re.compile("ERR_INTERNET_DISCONNECTED|status of 401")
# Run inside the site's own folder: the trench of the tests, its people with a password.
SEED = """
import json, os, django
os.environ["DJANGO_SETTINGS_MODULE"] = "config.settings"
django.setup()
from tests.structures.wells import a_well, readings_of
from tests.trench import DAY, TODAY, a_trench, dig, look
trench = a_trench()
for person in (trench.field, trench.engineer, trench.other):
    person.set_password({password!r})
    person.save()
for number in (1, 2):
    strip = dig(trench, number)
    look(trench, day=TODAY, strip=strip)
place = trench.structure.site
readings_of(a_well(place.watershed, trench.field, site=place), trench.field)
names = ("field", "engineer", "other")
print(json.dumps({{name: getattr(trench, name).username for name in names}}))
"""


@pytest.fixture(scope="session")
def site(tmp_path_factory):
    folder = whole_copy(tmp_path_factory.mktemp("trench"))
    with started(folder) as site:
        wait_until(site.is_ready, PATIENCE_S)
        yield site


@pytest.fixture(scope="session")
def people(site):
    """Logins by what they do at the trench."""
    done = subprocess.run(
        [ROOT / ".venv" / "bin" / "python", "-c", SEED.format(password=PASSWORD)],
        cwd=site.folder,
        env=clean_environment(PYTHONPATH=f"{site.folder}{os.pathsep}{ROOT}"),
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
    )
    assert done.returncode == 0, done.stderr
    return json.loads(done.stdout.splitlines()[-1])


@pytest.fixture
def phone(chromium, site, people):
    """Hand out phones; each has a memory of its own. At the end none asked a stranger."""
    handed = []

    def hand_out(name, **options):
        place = {"latitude": 15.72, "longitude": 77.44, "accuracy": 6}
        usual = {"viewport": PHONE, "permissions": ["geolocation"], "geolocation": place}
        window = Window(chromium, site, **{**usual, **options})
        handed.append(window)
        sign_in(window.page, people[name])
        return window.page

    yield hand_out
    for window in handed:
        window.context.close()
        assert window.strangers() == []
        assert [one for one in window.complaints if not REMARK.search(one)] == []
