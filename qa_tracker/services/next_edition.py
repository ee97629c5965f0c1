"""Publishing the next edition of a set of criteria over the one before it."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from typing import Any

from qa_tracker.core import next_edition
from qa_tracker.core.errors import Conflict, DomainError, Invalid, SeveralInvalid
from qa_tracker.core.library import criteria_set
from qa_tracker.core.library_specs import CriteriaSetSpec
from qa_tracker.records.models import CriteriaSet, Person
from qa_tracker.records.queries.library import set_document
from qa_tracker.services import library
from qa_tracker.services.guards import check_may


def publish_next(
    *, before: CriteriaSet, typed: Mapping[str, str], actor: Person, at: dt.datetime
) -> CriteriaSet:
    """Publish the next edition of a set. Writes CriteriaSet, Criterion; leaf ``criteria.published``.

    It has no force until a named physicist adopts it, and the edition before stays as it is.

    Parameters
    ----------
    before
        The edition that it follows.
    typed
        What was typed over it, as ``core.next_edition.typed_places`` names the places.

    Raises
    ------
    SeveralInvalid
        With one refusal a place: an edition that is there already, a limit that is not whole; or nothing that
        differs from the edition before.
    """
    check_may(actor, "criteria.adopt", None, at)
    return library.publish_criteria(document=_checked(before, typed), actor=actor, at=at)


def read_next(before: CriteriaSet, typed: Mapping[str, str]) -> CriteriaSetSpec:
    """Read the next edition as it would be published, or refuse it as :func:`publish_next` does. Reads only."""
    return criteria_set(_checked(before, typed))


def _checked(before: CriteriaSet, typed: Mapping[str, str]) -> dict[str, Any]:
    """The document of the next edition, whole."""
    known = set_document(before.pk)
    document = next_edition.next_document(known, typed)
    found: list[DomainError] = list(next_edition.refusals(document, known))
    if CriteriaSet.objects.filter(code=before.code, edition=document["edition"]).exists():
        found.insert(0, Conflict("criteria_set.edition_taken", field="edition", number=document["edition"]))
    if not found and document == known | {"edition": document["edition"]}:
        found.append(Invalid("criteria_set.nothing_changed"))
    if found:
        raise SeveralInvalid(tuple(found))
    return document
