"""Each test of the commands writes its files and keys to a folder of its own; some share one ward."""

from __future__ import annotations

import copy

import pytest
from django.db import transaction

from tests import builders


@pytest.fixture(autouse=True)
def own_folder(settings, tmp_path):
    """Keys, files and checkpoints outside the database belong to one database, and so to one test."""
    settings.DATA_DIR = tmp_path
    settings.MEDIA_ROOT = tmp_path / "files"


@pytest.fixture(scope="module")
def ward_of_the_module(request, engine, django_db_setup, django_db_blocker):
    """A ward built once for a file whose tests all take ``shared_ward``; gone after the last of them.

    A file may name in ``WARD`` the procedures it is built with.
    """
    with django_db_blocker.unblock(), transaction.atomic():
        yield builders.ward(*getattr(request.module, "WARD", ()))
        transaction.set_rollback(True)


@pytest.fixture
def shared_ward(ward_of_the_module, own_folder):
    """The file's ward as it was built; what the test does to it is undone.

    Not to be mixed with ``db`` in one file: that closes the connection the ward lives on.
    """
    with transaction.atomic():
        yield copy.deepcopy(ward_of_the_module)
        transaction.set_rollback(True)
