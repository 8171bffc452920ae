"""Settings of every process."""

SECRET_KEY = "only for the first tests"  # noqa: S105 -- replaced with the start command
INSTALLED_APPS: list[str] = []
DATABASES = {"default": {"ENGINE": "django.db.backends.sqlite3", "NAME": ":memory:"}}
USE_TZ = True
