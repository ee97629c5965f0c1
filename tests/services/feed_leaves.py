"""The rows of ``test_leaf_or_nothing`` that are about calendar feeds."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from django.utils.timezone import now

from qa_tracker.services import feeds
from tests.builders import Ward


def revoking(ward: Ward) -> dict[str, Any]:
    feeds.issue(actor=ward.physicist, at=now())
    return {"actor": ward.physicist}


FEEDS: dict[str, Callable[[Ward], dict[str, Any]]] = {
    "feeds.issue": lambda w: {"actor": w.technician},
    "feeds.revoke": revoking,
}
