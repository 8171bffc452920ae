"""The program's settings, with less patience: a test cannot wait a minute for a lost worker."""

from __future__ import annotations

from config.settings import *  # noqa: F403 -- the program's own, of which six are changed
from config.settings import INSTALLED_APPS as SHIPPED_APPS
from config.settings import STORAGES as SHIPPED_STORAGES

INSTALLED_APPS = [*SHIPPED_APPS, "trial"]
# No page is served here, so that nothing need be compressed for one.
PLAIN = {"BACKEND": "django.contrib.staticfiles.storage.StaticFilesStorage"}
STORAGES = {**SHIPPED_STORAGES, "staticfiles": PLAIN}
RUN_LEASE_SECONDS = 2
RUN_RESEND_SECONDS = 2
RUN_SWEEP_SECONDS = 0.5
RUN_ATTEMPTS = 10  # a worker killed seven times over must not wear an unlucky run out
