"""Checks before a site goes public: `manage.py check --deploy`."""

from __future__ import annotations

from django.conf import settings
from django.core.checks import Tags, Warning, register  # noqa: A004 -- its own name


@register(Tags.security, deploy=True)
def check_secret(**_: object) -> list[Warning]:
    if settings.ENVIRONMENT.secret_key:
        return []
    return [
        Warning(
            "SECRET_KEY is not set; the one in .data/secret holds on this machine only.",
            hint="Set SECRET_KEY to 50 random characters or more, the same for every process.",
            id="config.W001",
        )
    ]


@register(Tags.security, deploy=True)
def check_hosts(**_: object) -> list[Warning]:
    if settings.ENVIRONMENT.public and "*" not in settings.ENVIRONMENT.allowed_hosts:
        return []
    return [
        Warning(
            "ALLOWED_HOSTS does not name the public site.",
            hint="Set ALLOWED_HOSTS to the host names by which people reach it, not to '*'.",
            id="config.W002",
        )
    ]


@register(Tags.database, deploy=True)
def check_servers(**_: object) -> list[Warning]:
    said = settings.ENVIRONMENT
    local = [
        *(["DATABASE_URL"] if not said.database_url.startswith("postgres") else []),
        *(["QUEUE_URL"] if not said.queue_url else []),
    ]
    if not local:
        return []
    return [
        Warning(
            f"{' and '.join(local)} not set to a server: one web process and one worker at most.",
            hint="Set DATABASE_URL to PostgreSQL and QUEUE_URL to Redis or RabbitMQ.",
            id="config.W003",
        )
    ]
