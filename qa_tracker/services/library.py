"""Publishing procedures and criteria, and a named physicist's adoption of them."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from collections.abc import Mapping
from typing import Any

from qa_tracker.core import library
from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Conflict, NotFound
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import (
    Adoption,
    CriteriaSet,
    Criterion,
    Edition,
    Measurand,
    Person,
    Procedure,
    Site,
)
from qa_tracker.services.guards import check_may, required, scope


def publish_procedure(*, document: Mapping[str, Any], actor: Person | None, at: dt.datetime) -> Edition:
    """Publish an edition of a procedure; from then on it is frozen. Writes Procedure, Edition, Measurand.

    Leaf ``procedure.published``. The same content again returns the edition there is. Refused: role (the
    program itself may publish the library it ships), a document that is not whole, an edition number that
    exists with other content.
    """
    if actor is not None:
        check_may(actor, "procedure.adopt", None, at)
    spec = library.procedure(document)
    content = canonical(document)
    digest = hashlib.sha256(content).hexdigest()
    known = Edition.objects.filter(procedure__code=spec.procedure, number=spec.edition).first()
    if known is not None:
        if known.content_sha256 != digest:
            raise Conflict("edition.number_taken", number=spec.edition)
        return known
    with ledger.command("procedure.published", actor=actor, at=at) as act:
        procedure = Procedure.objects.filter(code=spec.procedure).first()
        if procedure is None:
            procedure = act.insert(Procedure(code=spec.procedure, title=spec.title))
        _add_measurands(act, spec.measurands)
        edition = act.insert(
            Edition(
                uid=uuid7(),
                procedure=procedure,
                number=spec.edition,
                published_at=at,
                content=content.decode(),
                content_sha256=digest,
            )
        )
        act.about(procedure)
        act.tell({"procedure": spec.procedure, "edition": spec.edition, "sha256": digest})
    return edition


def _add_measurands(act: ledger.Act, specs: tuple[MeasurandSpec, ...]) -> None:
    known = set(Measurand.objects.values_list("code", flat=True))
    for spec in specs:
        if spec.code not in known:
            act.insert(Measurand(code=spec.code, kind=spec.kind, unit=spec.unit))


def publish_criteria(*, document: Mapping[str, Any], actor: Person | None, at: dt.datetime) -> CriteriaSet:
    """Publish one edition of a set of criteria. Writes CriteriaSet, Criterion; leaf ``criteria.published``.

    Publishing gives it no force: a named physicist adopts it. Refused: as :func:`publish_procedure`.
    """
    if actor is not None:
        check_may(actor, "criteria.adopt", None, at)
    spec = library.criteria_set(document)
    known = CriteriaSet.objects.filter(code=spec.set, edition=spec.edition).first()
    if known is not None:
        if not _is_as_published(known, document):
            raise Conflict("edition.number_taken", number=spec.edition)
        return known
    with ledger.command("criteria.published", actor=actor, at=at) as act:
        row = act.insert(
            CriteriaSet(
                uid=uuid7(),
                code=spec.set,
                edition=spec.edition,
                title=spec.title,
                source=spec.source,
                note=spec.note,
                published_at=at,
            )
        )
        for content in document["criteria"]:
            act.insert(
                Criterion(
                    uid=uuid7(), criteria_set=row, code=content["id"], content=canonical(content).decode()
                )
            )
        act.about(None)
        act.tell({"set": spec.set, "edition": spec.edition, "criteria": [c.id for c in spec.criteria]})
    return row


def _is_as_published(row: CriteriaSet, document: Mapping[str, Any]) -> bool:
    kept = dict(row.criteria.values_list("code", "content"))
    given = {content["id"]: canonical(content).decode() for content in document["criteria"]}
    words = (row.title, row.source, row.note)
    return kept == given and words == tuple(document.get(name, "") for name in ("title", "source", "note"))


def adopt_edition(
    *, edition: Edition, site: Site | None, remark: str, actor: Person, at: dt.datetime
) -> Adoption:
    """Adopt an edition of a procedure for the group or one site. Writes Adoption; leaf ``procedure.adopted``.

    The adoption before it, of the same procedure at the same place, ends. Refused: role, already adopted.
    """
    check_may(actor, "procedure.adopt", site.id if site else None, at)
    before = Adoption.objects.filter(edition__procedure=edition.procedure, site=site, ended_at=None)
    if before.filter(edition=edition).exists():
        raise Conflict("adoption.exists")
    with ledger.command("procedure.adopted", actor=actor, at=at, reason=remark) as act:
        for each in before:
            act.change(each, ended_at=at)
        row = act.insert(Adoption(edition=edition, site=site, adopted_by=actor, adopted_at=at, remark=remark))
        act.about(row, site=site)
        act.tell(
            {
                "procedure": edition.procedure.code,
                "edition": edition.number,
                "sha256": edition.content_sha256,
                "site": site.code if site else None,
            }
        )
    return row


def adopt_criteria(
    *, criteria_set: CriteriaSet, site: Site | None, remark: str, actor: Person, at: dt.datetime
) -> Adoption:
    """Adopt a set of criteria for the group or one site. Writes Adoption; leaf ``criteria.adopted``.

    Another edition of the same set at the same place ends. Refused: role, already adopted.
    """
    check_may(actor, "criteria.adopt", site.id if site else None, at)
    before = Adoption.objects.filter(criteria_set__code=criteria_set.code, site=site, ended_at=None)
    if before.filter(criteria_set=criteria_set).exists():
        raise Conflict("adoption.exists")
    with ledger.command("criteria.adopted", actor=actor, at=at, reason=remark) as act:
        for each in before:
            act.change(each, ended_at=at)
        row = act.insert(
            Adoption(criteria_set=criteria_set, site=site, adopted_by=actor, adopted_at=at, remark=remark)
        )
        act.about(row, site=site)
        act.tell(
            {
                "set": criteria_set.code,
                "edition": criteria_set.edition,
                "site": site.code if site else None,
            }
        )
    return row


def end_criteria(*, adoption: uuid.UUID, reason: str, actor: Person, at: dt.datetime) -> Adoption:
    """End the adoption of a set, so that it judges nothing there any more. Writes Adoption; leaf ``criteria.ended``.

    Where a site's own adoption ends, the group's is in force there again, if there is one. Verdicts that stand are
    not touched. Refused: role, an adoption that is not in force, no reason.
    """
    row = criteria_adoption(adoption, actor, at)
    check_may(actor, "criteria.adopt", row.site_id, at)
    reason = required(reason, "adoption.reason_missing", "reason")
    criteria_set = row.criteria_set
    assert criteria_set is not None  # criteria_adoption finds none without
    with ledger.command("criteria.ended", actor=actor, at=at, reason=reason) as act:
        act.change(row, ended_at=at)
        act.about(row, site=row.site)
        act.tell(
            {
                "set": criteria_set.code,
                "edition": criteria_set.edition,
                "site": row.site.code if row.site else None,
            }
        )
    return row


def criteria_adoption(uid: uuid.UUID, actor: Person, at: dt.datetime) -> Adoption:
    """The adoption of a set that is in force, for the group or for a site in the actor's sight."""
    found = (
        Adoption.objects.filter(uid=uid, ended_at=None)
        .exclude(criteria_set=None)
        .select_related("criteria_set", "site")
        .first()
    )
    if found is None or (found.site_id is not None and not scope(actor, at).holds(found.site_id)):
        raise NotFound("adoption.unknown")
    return found
