"""The library that comes with the program: published once, in force only where a physicist adopts it."""

from __future__ import annotations

import datetime as dt
import json
from pathlib import Path
from typing import Any

from django.conf import settings

from qa_tracker.services import library

CAUTIONS = "cautions.json"


def publish_shipped(*, at: dt.datetime) -> int:
    """Publish every shipped procedure and set of criteria that is not there yet; return how many there are.

    Safe to call again: what was published is left as it is. Leaves ``procedure.published`` and
    ``criteria.published``.
    """
    procedures, sets = documents("procedures"), documents("criteria")
    for document in procedures:
        library.publish_procedure(document=document, actor=None, at=at)
    for document in sets:
        library.publish_criteria(document=document, actor=None, at=at)
    return len(procedures) + len(sets)


def documents(folder: str) -> list[dict[str, Any]]:
    """The documents of one folder of ``fixtures``, by file name; the cautions are no document to publish."""
    found = sorted(Path(settings.BASE_DIR / "fixtures" / folder).glob("*.json"))
    return [json.loads(path.read_text(encoding="utf-8")) for path in found if path.name != CAUTIONS]
