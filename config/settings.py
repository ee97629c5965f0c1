"""Settings of Leadline. What differs between places comes from the environment (see ``.env.example``)."""

from __future__ import annotations

import sys
from pathlib import Path

import dj_database_url
from csp.constants import NONE, SELF

from config import env
from config.logging import logging_for

BASE_DIR = env.BASE_DIR
# Judging lines for a script keeps nothing: no folder is made and no key.
JUDGING = sys.argv[1:2] == ["judge"]
DATA_DIR: Path = env.data_dir(made=not JUDGING)
SECRET_KEY = env.text("SECRET_KEY") or (
    env.passing_secret() if JUDGING else env.kept_secret(DATA_DIR / "keys" / "secret_key")
)
DEBUG = False
ALLOWED_HOSTS = env.text("ALLOWED_HOSTS", "127.0.0.1,localhost,[::1]").split(",")
CSRF_TRUSTED_ORIGINS = [origin for origin in env.text("CSRF_TRUSTED_ORIGINS").split(",") if origin]
BASE_URL = env.text("BASE_URL", "http://127.0.0.1:8000")

INSTALLED_APPS = [
    "qa_tracker.records",
    "qa_tracker.web",
    "qa_tracker.ops",
    "django.contrib.contenttypes",
    "django.contrib.auth",
    "django.contrib.sessions",
    "django.contrib.messages",
    "django.contrib.staticfiles",
    "csp",
    "axes",
]
MIDDLEWARE = [
    "django.middleware.security.SecurityMiddleware",
    "whitenoise.middleware.WhiteNoiseMiddleware",
    "django.contrib.sessions.middleware.SessionMiddleware",
    "django.middleware.locale.LocaleMiddleware",
    "django.middleware.common.CommonMiddleware",
    "django.middleware.csrf.CsrfViewMiddleware",
    "django.contrib.auth.middleware.AuthenticationMiddleware",
    "django.contrib.auth.middleware.LoginRequiredMiddleware",
    "django.contrib.messages.middleware.MessageMiddleware",
    "django.middleware.clickjacking.XFrameOptionsMiddleware",
    "csp.middleware.CSPMiddleware",
    "qa_tracker.web.middleware.RefusalMiddleware",
    "axes.middleware.AxesMiddleware",
]
ROOT_URLCONF = "config.urls"
WSGI_APPLICATION = "config.wsgi.application"
TEMPLATES = [
    {
        "BACKEND": "django.template.backends.django.DjangoTemplates",
        "DIRS": [BASE_DIR / "qa_tracker" / "web" / "templates"],
        "APP_DIRS": False,
        "OPTIONS": {
            "context_processors": [
                "django.template.context_processors.request",
                "django.contrib.auth.context_processors.auth",
                "django.contrib.messages.context_processors.messages",
                "qa_tracker.web.context.page_frame",
            ],
            "loaders": [
                (
                    "django.template.loaders.cached.Loader",
                    ["django.template.loaders.filesystem.Loader"],
                )
            ],
            "builtins": ["qa_tracker.web.marks"],
        },
    }
]


def database(url: str) -> dict[str, object]:
    """Django's settings for one database address, with what each engine needs to keep what it was told."""
    chosen: dict[str, object] = dict(dj_database_url.parse(url, conn_max_age=60, conn_health_checks=True))
    if chosen["ENGINE"] == "django.db.backends.sqlite3":
        # IMMEDIATE: a deferred transaction that turns writer fails at once under WAL, whatever the timeout.
        chosen["OPTIONS"] = {
            "transaction_mode": "IMMEDIATE",
            "timeout": 20,
            "init_command": (
                "PRAGMA journal_mode=WAL; PRAGMA synchronous=FULL; "
                "PRAGMA recursive_triggers=ON; PRAGMA foreign_keys=ON; PRAGMA cache_size=-65536;"
            ),
        }
    return chosen


DATABASE_URL = env.text("DATABASE_URL", f"sqlite:///{DATA_DIR / 'leadline.sqlite3'}")
# Only migrate may use the owner's role; whatever serves pages has no right to alter tables.
MIGRATING = sys.argv[1:2] == ["migrate"]
DATABASES = {"default": database((MIGRATING and env.text("MIGRATE_DATABASE_URL")) or DATABASE_URL)}
DEFAULT_AUTO_FIELD = "django.db.models.BigAutoField"

AUTH_USER_MODEL = "leadline.Person"
AUTHENTICATION_BACKENDS = [
    "axes.backends.AxesStandaloneBackend",
    "qa_tracker.web.sign_in.CredentialBackend",
]
PASSWORD_HASHERS = ["django.contrib.auth.hashers.Argon2PasswordHasher"]
AUTH_PASSWORD_VALIDATORS = [
    {
        "NAME": "django.contrib.auth.password_validation.MinimumLengthValidator",
        "OPTIONS": {"min_length": 12},
    },
    {"NAME": "django.contrib.auth.password_validation.CommonPasswordValidator"},
]
LOGIN_URL = "sign-in"
LOGIN_REDIRECT_URL = "due"
AXES_FAILURE_LIMIT = 8
AXES_COOLOFF_TIME = 0.25
AXES_LOCKOUT_PARAMETERS = [["username", "ip_address"]]
AXES_LOCKOUT_TEMPLATE = "locked_out.html"
AXES_VERBOSE = False

SESSION_COOKIE_HTTPONLY = True
SESSION_COOKIE_SAMESITE = "Lax"
SESSION_COOKIE_AGE = 12 * 3600
SESSION_COOKIE_SECURE = BASE_URL.startswith("https://")
CSRF_FAILURE_VIEW = "qa_tracker.web.errors.csrf_failed"
CSRF_COOKIE_SECURE = BASE_URL.startswith("https://")
SECURE_CONTENT_TYPE_NOSNIFF = True
SECURE_REFERRER_POLICY = "same-origin"
X_FRAME_OPTIONS = "DENY"
DATA_UPLOAD_MAX_NUMBER_FIELDS = 4000
CONTENT_SECURITY_POLICY = {
    "DIRECTIVES": {
        "default-src": [NONE],
        "script-src": [SELF],
        "style-src": [SELF],
        "img-src": [SELF],
        "font-src": [SELF],
        "connect-src": [SELF],
        "form-action": [SELF],
        "frame-ancestors": [NONE],
        "base-uri": [NONE],
        "manifest-src": [SELF],
    }
}

LANGUAGE_CODE = "en-gb"
LANGUAGES = [("en-gb", "English")]
LOCALE_PATHS = [BASE_DIR / "qa_tracker" / "web" / "locale"]
USE_I18N = True
USE_TZ = True
TIME_ZONE = "UTC"
STATIC_URL = "static/"
STATIC_ROOT = DATA_DIR / "static"
STATICFILES_DIRS = [BASE_DIR / "qa_tracker" / "web" / "static"]
MEDIA_ROOT = DATA_DIR / "files"
STORAGES = {
    "default": {"BACKEND": "django.core.files.storage.FileSystemStorage"},
    "staticfiles": {"BACKEND": "whitenoise.storage.CompressedManifestStaticFilesStorage"},
}

REDIS_URL = env.text("REDIS_URL")
CELERY_BROKER_URL = REDIS_URL or f"redis+socket://{DATA_DIR / 'broker' / 'broker.sock'}"

EMAIL_HOST = env.text("EMAIL_HOST", "127.0.0.1")
EMAIL_PORT = int(env.text("EMAIL_PORT", "2525"))
EMAIL_HOST_USER = env.text("EMAIL_HOST_USER")
EMAIL_HOST_PASSWORD = env.text("EMAIL_HOST_PASSWORD")
EMAIL_USE_TLS = env.text("EMAIL_USE_TLS", "0") == "1"
EMAIL_TIMEOUT = 20
DEFAULT_FROM_EMAIL = env.text("MAIL_FROM", "leadline@leadline.invalid")
MAIL_DOMAIN = DEFAULT_FROM_EMAIL.rpartition("@")[2]
# How long a claimed mail is left to the worker that claimed it; longer than a task may take (config/celery.py).
MAIL_LEASE_S = int(env.text("LEADLINE_MAIL_LEASE_S", "240"))
DEMO_MAILBOX = not env.text("EMAIL_HOST")

SEAL_KEY_FILE = env.text("SEAL_KEY_FILE")
SEAL_KEY_PASSWORD = env.text("SEAL_KEY_PASSWORD")
LEDGER_ORIGIN = env.text("LEDGER_ORIGIN", "leadline.invalid/ledger")

SILENCED_SYSTEM_CHECKS = ["security.W004", "security.W008"]
LOGGING = logging_for(DATA_DIR)
