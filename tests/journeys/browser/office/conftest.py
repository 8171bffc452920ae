"""The demo district on a real site, and a window for each of its people."""

from __future__ import annotations

import pytest

from tests.config.site_copy import wait_until, whole_copy
from tests.config.test_site import started
from tests.journeys.browser.office.rooms import PASSWORD, sign_in, wait_for_the_worker

LOADING_S = 600.0  # the whole demo goes in through its intake, on a machine with other work


@pytest.fixture(scope="session")
def site(tmp_path_factory):
    folder = whole_copy(tmp_path_factory.mktemp("office"))
    with started(folder, (), DEMO_PASSWORD=PASSWORD) as site:
        wait_until(site.is_ready, LOADING_S)
        wait_for_the_worker(site)
        yield site


@pytest.fixture(scope="session")
def sessions():
    """Cookies by login: everybody signs in once."""
    return {None: None}


@pytest.fixture
def desk(window, sessions):
    """Open a window in which somebody of the demo is signed in, or nobody."""

    def sit_down(login, **options):
        page = window(storage_state=sessions.get(login), **options)
        if login not in sessions:
            sign_in(page, login)
            sessions[login] = page.context.storage_state()
        return page

    return sit_down
