"""The rows of ``test_leaf_or_nothing`` that are about writing editions of procedures."""

from __future__ import annotations

import itertools
import json
from collections.abc import Callable
from typing import Any

from django.utils.timezone import now

from qa_tracker.records.models import Procedure
from qa_tracker.services import edition_drafts
from tests import builders
from tests.builders import Ward

numbers = itertools.count(1)
Given = dict[str, Any]


def written(ward: Ward) -> Given:
    """A draft of the monthly check with one word changed."""
    who = {"procedure": Procedure.objects.get(code=builders.MONTHLY).uid, "actor": ward.physicist}
    kept = edition_drafts.start(**who, at=now())
    typed = {**kept.writing.head.typed, "title": f"Monthly, wording {next(numbers)}"}
    kept = edition_drafts.keep(**who, part="head", typed=typed, seen=kept.revision, at=now())
    return {**who, "revision": kept.revision}


def pasted(ward: Ward) -> Given:
    path = builders.FIXTURES / "procedures" / "user-check.json"
    document = json.loads(path.read_text(encoding="utf-8")) | {"edition": 100 + next(numbers)}
    return {
        "text": json.dumps(document | {"title": f"User check, wording {next(numbers)}"}),
        "actor": ward.physicist,
    }


EDITOR: dict[str, Callable[[Ward], Given]] = {
    "edition_drafts.publish": written,
    "edition_drafts.publish_document": pasted,
}
DRAFTS = {
    "edition_drafts.find": "reads",
    "edition_drafts.get": "reads",
    "edition_drafts.start": "a draft is no record",
    "edition_drafts.keep": "a draft is no record",
    "edition_drafts.add_measurand": "a draft is no record",
    "edition_drafts.move_measurand": "a draft is no record",
    "edition_drafts.remove_measurand": "a draft is no record",
    "edition_drafts.follow_newest": "a draft is no record",
    "edition_drafts.discard": "a draft is no record",
}
