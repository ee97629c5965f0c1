"""What the API's tests stand on."""

from __future__ import annotations

import pytest

from tests.api import world as made


@pytest.fixture
def world(db):
    return made.build()
