"""The rows of ``test_leaf_or_nothing`` that are about sets of criteria: how each command is called."""

from __future__ import annotations

import itertools
from collections.abc import Callable
from typing import Any

from qa_tracker.core.next_edition import typed_places
from qa_tracker.records.models import Adoption, CriteriaSet
from qa_tracker.records.queries.library import set_document
from tests.builders import Ward

numbers = itertools.count(1)
Given = dict[str, Any]


def ending(ward: Ward) -> Given:
    adoption = Adoption.objects.exclude(criteria_set=None).filter(ended_at=None).first()
    return {"adoption": adoption.uid, "reason": "from memory", "actor": ward.physicist}


def publishing(ward: Ward) -> Given:
    before = CriteriaSet.objects.get(code="dropout", edition="2014")
    typed = {
        "edition": f"next {next(numbers)}",
        "DROP.criterion.remedial.absolute": "1",
        "DROP.source": "Ours",
    }
    return {
        "before": before, "typed": typed_places(set_document(before.pk)) | typed, "actor": ward.physicist,
    }  # fmt: skip


CRITERIA: dict[str, Callable[[Ward], Given]] = {
    "library.end_criteria": ending,
    "next_edition.publish_next": publishing,
}
