"""Publishing an edition that was written here, or one that comes as a document."""

from __future__ import annotations

import uuid

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import Conflict, DomainError, Forbidden, NotFound, SeveralInvalid
from qa_tracker.records.queries import library as published
from qa_tracker.services import edition_drafts as drafts
from qa_tracker.services import guards, wording
from qa_tracker.services.edition_drafts import Kept
from qa_tracker.web.forms.asking import NOTHING
from qa_tracker.web.presenters.edition_editor import to_mend
from qa_tracker.web.presenters.procedure_differences import shown_differences
from qa_tracker.web.refused import Refusal, Refused
from qa_tracker.web.views.edition_editor import seen_revision


def publish(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Look the draft over beside the edition before it, and publish it."""
    at = now()
    kept = drafts.get(procedure=uid, actor=request.user, at=at)
    if request.method != "POST":
        return _look_over(request, kept)
    try:
        edition = drafts.publish(
            procedure=uid, revision=seen_revision(request.POST), actor=request.user, at=at
        )
    except (NotFound, Forbidden):
        raise
    except DomainError as error:
        says = "" if isinstance(error, SeveralInvalid) else wording.refusal(error)
        return _look_over(request, kept, says, 409 if isinstance(error, Conflict) else 422)
    _say_published(request, edition.number)
    return redirect("edition", uid=edition.uid)


def _look_over(request: HttpRequest, kept: Kept, says: str = "", status: int = 200) -> HttpResponse:
    found = drafts.looked_through(kept.writing)
    before = next(iter(drafts.editions(kept.procedure)), None)
    old = published.find_edition(before.uid) if before else None
    context = {
        "kept": kept,
        "says": says,
        "to_mend": to_mend(found.refusals, kept),
        "before": old,
        "laid": shown_differences(old.spec, found.spec) if old and found.spec else None,
    }
    return render(request, "edition_publish.html", context, status=status)


def _say_published(request: HttpRequest, number: int) -> None:
    says = _("Edition %(number)s is published. It has no force until a named physicist adopts it.")
    messages.success(request, says % {"number": number})


def from_document(request: HttpRequest) -> HttpResponse:
    """Publish an edition from a document of JSON, for those who write files."""
    at = now()
    guards.check_may(request.user, "procedure.adopt", None, at)
    text = str(request.POST.get("document", ""))
    if request.method != "POST":
        return render(request, "edition_document.html", {"document": "", "refused": NOTHING})
    try:
        edition = drafts.publish_document(text=text, actor=request.user, at=at)
    except DomainError as error:
        context = {"document": text, "refused": _at_places(error)}
        return render(request, "edition_document.html", context, status=422)
    _say_published(request, edition.number)
    return redirect("edition", uid=edition.uid)


def _at_places(error: DomainError) -> Refused:
    """Every refusal with its place in the document."""
    errors = error.errors if isinstance(error, SeveralInvalid) else (error,)
    return Refused(tuple(_at_place(each) for each in errors))


def _at_place(error: DomainError) -> Refusal:
    said = wording.refusal(error)
    if error.field == "document":
        return Refusal(error.code, "document", said)
    return Refusal(error.code, "", said if error.field in said else f"{error.field}: {said}")
