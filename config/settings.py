"""Settings of every process: embedded in .data/ by default, servers by environment."""

from __future__ import annotations

import os
import sys
from datetime import timedelta
from pathlib import Path
from urllib.parse import parse_qs, unquote, urlsplit

import dj_database_url
from csp.constants import NONE, SELF
from whitenoise.compress import Compressor

from config.env import WrongEnvironment, read_environment
from config.secret import own_secret

ROOT = Path(__file__).resolve().parent.parent
DATA = ROOT / ".data"

try:
    ENVIRONMENT = read_environment(os.environ)
except WrongEnvironment as wrong:
    sys.exit(str(wrong))

DEBUG = ENVIRONMENT.debug
SECRET_KEY = ENVIRONMENT.secret_key or own_secret(DATA / "secret")
ALLOWED_HOSTS = list(ENVIRONMENT.allowed_hosts)
CURRENCY = ENVIRONMENT.currency
DEMO_PASSWORD = ENVIRONMENT.demo_password

INSTALLED_APPS = [
    "django.contrib.contenttypes",
    "django.contrib.auth",
    "django.contrib.sessions",
    "django.contrib.messages",
    "django.contrib.staticfiles",
    "axes",
    "rest_framework",
    "knox",
    "django_filters",
    "drf_spectacular",
    "drf_spectacular_sidecar",
    "config",
    "structures",
    "costing",
]
MIDDLEWARE = [
    "django.middleware.security.SecurityMiddleware",
    "whitenoise.middleware.WhiteNoiseMiddleware",
    "csp.middleware.CSPMiddleware",
    "django.contrib.sessions.middleware.SessionMiddleware",
    "django.middleware.locale.LocaleMiddleware",
    "django.middleware.common.CommonMiddleware",
    "django.middleware.csrf.CsrfViewMiddleware",
    "django.contrib.auth.middleware.AuthenticationMiddleware",
    "django.contrib.messages.middleware.MessageMiddleware",
    "structures.web.sessions.SessionMiddleware",
    "django.middleware.clickjacking.XFrameOptionsMiddleware",
    "structures.web.refusals.RefusalMiddleware",
    "axes.middleware.AxesMiddleware",  # last, so that nothing rewrites its answer
]
ROOT_URLCONF = "config.urls"
WSGI_APPLICATION = "config.wsgi.application"
TEMPLATES = [
    {
        "BACKEND": "django.template.backends.django.DjangoTemplates",
        "DIRS": [ROOT / "templates"],
        "APP_DIRS": True,
        "OPTIONS": {
            "context_processors": [
                "django.template.context_processors.request",
                "django.contrib.auth.context_processors.auth",
                "django.contrib.messages.context_processors.messages",
                "structures.web.frame.frame",
            ],
        },
    },
]

# --- Database ---------------------------------------------------------------------------------
CONNECTION_LIFE_SECONDS = 600
SQLITE_OPTIONS = {
    # A transaction that reads and then writes takes its lock at once instead of failing half-way.
    "transaction_mode": "IMMEDIATE",
    "timeout": 20,
}
POSTGRES_OPTIONS = {"connect_timeout": 5}
DATABASES = {
    "default": dj_database_url.parse(
        ENVIRONMENT.database_url or f"sqlite:///{DATA / 'underbund.sqlite3'}",
        conn_max_age=CONNECTION_LIFE_SECONDS,
        conn_health_checks=True,
    )
}
DATABASES["default"].setdefault("OPTIONS", {}).update(
    SQLITE_OPTIONS if DATABASES["default"]["ENGINE"].endswith("sqlite3") else POSTGRES_OPTIONS
)
DEFAULT_AUTO_FIELD = "django.db.models.BigAutoField"

# --- Queue and runs ---------------------------------------------------------------------------
QUEUE_URL = ENVIRONMENT.queue_url
QUEUE_FOLDER = DATA / "queue"
RUN_LEASE_SECONDS = 60  # a worker silent for longer has lost its run
RUN_RESEND_SECONDS = 30  # a run that waits longer has lost its message
RUN_SWEEP_SECONDS = 5
RUN_ATTEMPTS = 5
WORKER_SILENT_SECONDS = 30  # without a sign of life for longer, a worker does not count

# --- Mail -------------------------------------------------------------------------------------
_MAIL = urlsplit(ENVIRONMENT.email_url)
MAIL_IS_SET = bool(ENVIRONMENT.email_url)
EMAIL_HOST = _MAIL.hostname or "localhost"
EMAIL_PORT = _MAIL.port or {"smtps": 465, "smtp+tls": 587}.get(_MAIL.scheme, 25)  # RFC 8314, 6409
EMAIL_HOST_USER = unquote(_MAIL.username or "")
EMAIL_HOST_PASSWORD = unquote(_MAIL.password or "")
EMAIL_USE_TLS = _MAIL.scheme == "smtp+tls"
EMAIL_USE_SSL = _MAIL.scheme == "smtps"
EMAIL_TIMEOUT = 20
DEFAULT_FROM_EMAIL = parse_qs(_MAIL.query).get("from", ["underbund@localhost"])[0]

# --- People -----------------------------------------------------------------------------------
AUTH_USER_MODEL = "structures.User"
LOGIN_URL = "structures:sign-in"
LOGIN_REDIRECT_URL = "structures:sites"
AUTHENTICATION_BACKENDS = [
    "axes.backends.AxesStandaloneBackend",
    "structures.queries.accounts.AccountBackend",
]
# A name is locked for the address that guessed, so that a stranger cannot lock its owner out.
AXES_LOCKOUT_PARAMETERS = [["username", "ip_address"]]
AXES_FAILURE_LIMIT = 5
AXES_COOLOFF_TIME = timedelta(minutes=15)
AXES_RESET_COOL_OFF_ON_FAILURE_DURING_LOCKOUT = False  # the page says how long, and it is true
AXES_RESET_ON_SUCCESS = True
AXES_CLIENT_IP_CALLABLE = "config.visitor.address"
AXES_LOCKOUT_CALLABLE = "structures.web.accounts.locked"
AXES_DISABLE_ACCESS_LOG = True  # who came when is written down nowhere but in the attempts
AXES_ENABLE_ADMIN = False
AXES_VERBOSE = False
PASSWORD_HASHERS = [
    "django.contrib.auth.hashers.Argon2PasswordHasher",
    "django.contrib.auth.hashers.PBKDF2PasswordHasher",
]
_VALIDATION = "django.contrib.auth.password_validation"
AUTH_PASSWORD_VALIDATORS = [
    {"NAME": f"{_VALIDATION}.MinimumLengthValidator", "OPTIONS": {"min_length": 12}},
    {"NAME": f"{_VALIDATION}.UserAttributeSimilarityValidator"},
    {"NAME": f"{_VALIDATION}.CommonPasswordValidator"},
]

# --- The API ----------------------------------------------------------------------------------
KNOX_TOKEN_MODEL = "structures.DeviceToken"  # noqa: S105 -- the name of a table
MIGRATION_MODULES = {"knox": None}  # its own table of tokens would stand empty beside ours
REST_KNOX = {"TOKEN_TTL": timedelta(days=14)}  # a field season's phone signs in twice a month
REST_FRAMEWORK = {
    # The first one names what a 401 asks for.
    "DEFAULT_AUTHENTICATION_CLASSES": [
        "structures.api.tokens.DeviceAuthentication",
        "rest_framework.authentication.SessionAuthentication",
    ],
    "DEFAULT_PERMISSION_CLASSES": ["rest_framework.permissions.IsAuthenticated"],
    "DEFAULT_RENDERER_CLASSES": ["rest_framework.renderers.JSONRenderer"],
    "DEFAULT_PARSER_CLASSES": ["rest_framework.parsers.JSONParser"],
    "DEFAULT_PAGINATION_CLASS": "structures.api.paging.Pages",
    "DEFAULT_FILTER_BACKENDS": [
        "django_filters.rest_framework.DjangoFilterBackend",
        "rest_framework.filters.OrderingFilter",
    ],
    "DEFAULT_THROTTLE_CLASSES": ["rest_framework.throttling.UserRateThrottle"],
    "DEFAULT_THROTTLE_RATES": {"user": "1200/min", "sign-in": "60/min"},
    "NUM_PROXIES": 0,  # the server's word on where a request came from, never a header's
    "DEFAULT_SCHEMA_CLASS": "drf_spectacular.openapi.AutoSchema",
    "EXCEPTION_HANDLER": "structures.api.problems.answer",
}
SPECTACULAR_SETTINGS = {
    "TITLE": "Underbund",
    "VERSION": "1",
    "OAS_VERSION": "3.1.1",
    "DESCRIPTION": (
        "Sites, surveys, rates and estimates of subsurface dams. Lists come in pages and hold what "
        "the asker's postings cover. What goes wrong is told as `application/problem+json`."
    ),
    "SCHEMA_PATH_PREFIX": "/api/v1",
    "SERVE_PERMISSIONS": ["rest_framework.permissions.AllowAny"],
    "SERVE_INCLUDE_SCHEMA": False,
    "SWAGGER_UI_DIST": "SIDECAR",
    "SWAGGER_UI_FAVICON_HREF": "SIDECAR",
    "COMPONENT_SPLIT_REQUEST": True,
    "ENUM_NAME_OVERRIDES": {"StageEnum": "structures.life.stages.STAGES"},
    "POSTPROCESSING_HOOKS": [
        "drf_spectacular.hooks.postprocess_schema_enums",
        "structures.api.schema.tell_media_types",
    ],
}

# --- Files ------------------------------------------------------------------------------------
MEDIA_ROOT = ENVIRONMENT.media_root or DATA / "files"
STATIC_URL = "/static/"
STATIC_ROOT = DATA / "static"
STORAGES = {
    "default": {"BACKEND": "django.core.files.storage.FileSystemStorage"},
    "staticfiles": {"BACKEND": "config.static_storage.StaticStorage"},
}
# Pages name a file by its digest only. Maps of sources must be there, not be small.
WHITENOISE_KEEP_ONLY_HASHED_FILES = True
WHITENOISE_SKIP_COMPRESS_EXTENSIONS = (*Compressor.SKIP_COMPRESS_EXTENSIONS, "map")
FILE_UPLOAD_PERMISSIONS = 0o640

# --- Language and time ------------------------------------------------------------------------
LANGUAGE_CODE = "en"
LANGUAGES = [("en", "English")]
LOCALE_PATHS = [ROOT / "config" / "locale"]
USE_TZ = True
TIME_ZONE = ENVIRONMENT.time_zone

# --- Safety -----------------------------------------------------------------------------------
CONTENT_SECURITY_POLICY = {
    "DIRECTIVES": {
        "default-src": [SELF],
        "img-src": [SELF, "data:"],
        "base-uri": [NONE],
        "form-action": [SELF],
        "frame-ancestors": [NONE],
        "object-src": [NONE],
    }
}
X_FRAME_OPTIONS = "DENY"
SECURE_REFERRER_POLICY = "same-origin"
SESSION_COOKIE_HTTPONLY = True
SESSION_COOKIE_SAMESITE = "Lax"
# A site with a name of its own stands behind a proxy that speaks TLS; this machine alone does not.
SECURE_SSL_REDIRECT = ENVIRONMENT.public
SECURE_REDIRECT_EXEMPT = [r"^healthz$", r"^readyz$"]
SESSION_COOKIE_SECURE = ENVIRONMENT.public
CSRF_COOKIE_SECURE = ENVIRONMENT.public
if ENVIRONMENT.public:
    SECURE_PROXY_SSL_HEADER = ("HTTP_X_FORWARDED_PROTO", "https")
    SECURE_HSTS_SECONDS = 31_536_000  # one year of 365 days
    SECURE_HSTS_INCLUDE_SUBDOMAINS = True
# To be on the list built into browsers is the wish of a domain's owner, not of this program.
SILENCED_SYSTEM_CHECKS = ["security.W021"]

# --- What is written down ---------------------------------------------------------------------
LOGGING = {
    "version": 1,
    "disable_existing_loggers": False,
    "formatters": {"line": {"format": "%(asctime)s %(levelname)s %(name)s: %(message)s"}},
    "handlers": {"stderr": {"class": "logging.StreamHandler", "formatter": "line"}},
    "root": {"handlers": ["stderr"], "level": "WARNING"},
    "loggers": {
        "django": {"handlers": ["stderr"], "level": "WARNING", "propagate": False},
        "structures": {"level": "INFO"},
        "costing": {"level": "INFO"},
    },
}
