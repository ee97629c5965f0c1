"""What the tests of the editor's pages share: a ground built once a file, as the tests of the commands share a ward."""

from __future__ import annotations

import pytest
from django.db import transaction
from editor_ground import ground


@pytest.fixture(scope="module")
def editor_of_the_module(django_db_setup, django_db_blocker):
    """A draft built once for a file whose tests all take ``editor``; gone after the last of them."""
    with django_db_blocker.unblock(), transaction.atomic():
        yield ground()
        transaction.set_rollback(True)


@pytest.fixture
def editor(editor_of_the_module):
    """The file's draft as it was begun; what the test does to it is undone.

    Not to be mixed with ``db`` in one file: that closes the connection the draft lives on.
    """
    with transaction.atomic():
        yield editor_of_the_module
        transaction.set_rollback(True)
