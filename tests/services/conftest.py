"""Each test of the commands writes its files and keys to a folder of its own."""

from __future__ import annotations

import pytest


@pytest.fixture(autouse=True)
def own_folder(settings, tmp_path):
    """Keys, files and checkpoints outside the database belong to one database, and so to one test."""
    settings.DATA_DIR = tmp_path
    settings.MEDIA_ROOT = tmp_path / "files"
