"""Settings of the tests: the real parts, a quick password hash, and a data folder of their own."""

from __future__ import annotations

import atexit
import os
import shutil
import tempfile
from pathlib import Path

# Made before the settings are read: whatever a test writes stays out of the person's own data.
if "LEADLINE_TEST_DIR" not in os.environ:
    os.environ["LEADLINE_TEST_DIR"] = tempfile.mkdtemp(prefix="leadline-tests-")
    atexit.register(shutil.rmtree, os.environ["LEADLINE_TEST_DIR"], ignore_errors=True)
os.environ["DATA_DIR"] = os.environ["LEADLINE_TEST_DIR"]
os.environ.setdefault("SECRET_KEY", "only-for-tests-" + "x" * 40)

from config.settings import *  # noqa: F403  the environment above must be set first
from config.settings import DATABASES, database

TEST_DIR = Path(os.environ["LEADLINE_TEST_DIR"])
DATABASES["default"] = database(f"sqlite:///{TEST_DIR / 'leadline.sqlite3'}")
DATABASES["default"]["CONN_MAX_AGE"] = 0
PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
STORAGES = {
    "default": {"BACKEND": "django.core.files.storage.FileSystemStorage"},
    "staticfiles": {"BACKEND": "django.contrib.staticfiles.storage.StaticFilesStorage"},
}
ALLOWED_HOSTS = ["*"]
(TEST_DIR / "static").mkdir(exist_ok=True)
