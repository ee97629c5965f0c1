"""Writing the next edition of a procedure: each part on a page of its own, kept as typed, with scripts off as well."""

from __future__ import annotations

import uuid
from collections.abc import Callable, Mapping
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import redirect, render
from django.template.loader import render_to_string
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST

from qa_tracker.core.edition_draft import HEAD, STEPS, Part, document_of
from qa_tracker.core.edition_refusals import Found
from qa_tracker.core.errors import Conflict
from qa_tracker.core.typed_text import Typed, neat
from qa_tracker.records.queries import library as published
from qa_tracker.services import edition_drafts as drafts
from qa_tracker.services import formula_trial, wording
from qa_tracker.services.edition_drafts import Kept
from qa_tracker.web.forms.asking import NOTHING
from qa_tracker.web.forms.edition_editor import head_groups, steps_in, typed_in
from qa_tracker.web.forms.measurand_editor import measurand_groups, measurand_in
from qa_tracker.web.presenters import edition_editor as shown
from qa_tracker.web.presenters import formula as formulas
from qa_tracker.web.presenters.library import minutes_words, recurrence_of, who_words
from qa_tracker.web.refused import Refused

Show = Callable[[Kept, Typed, Refused, tuple[shown.OtherValue, ...], int], HttpResponse]


@require_POST
def start(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Begin the next edition of a procedure, or go on with it."""
    drafts.start(procedure=uid, actor=request.user, at=now())
    return redirect("edition-draft", uid=uid)


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The whole draft: what is wrong, what it says, and each measurand in a line."""
    kept = drafts.get(procedure=uid, actor=request.user, at=now())
    found = drafts.looked_through(kept.writing)
    context = {
        "kept": kept,
        "to_mend": shown.to_mend(found.refusals, kept),
        "head": _head_facts(found),
        "steps": [each["text"] for each in document_of(kept.writing)["steps"]],
        "measurands": shown.measurand_lines(kept, found.refusals),
        "newest": next(iter(drafts.editions(uid)), None),
    }
    return render(request, "edition_draft.html", context)


def _head_facts(found: Found) -> dict[str, str]:
    """What the head says, as far as it can be read."""
    spec = found.spec
    wrong = {each.field.partition(".")[0] for each in found.refusals}
    if spec is None:
        return {}
    return {
        "title": spec.title if "title" not in wrong else "",
        "when": spec.when if "when" not in wrong else "",
        "recurrence": recurrence_of(spec) if spec.recurrence and "recurrence" not in wrong else "",
        "who": who_words(spec) if "performed_by" not in wrong else "",
        "minutes": minutes_words(spec) if "minutes" not in wrong else "",
        "note": spec.note,
    }


def head(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """What the edition says before its steps."""
    kept = drafts.get(procedure=uid, actor=request.user, at=now())

    def page(
        at: Kept, typed: Typed, refused: Refused, others: tuple[shown.OtherValue, ...], status: int
    ) -> HttpResponse:
        context = {"kept": at, "groups": head_groups(typed), "refused": refused, "others": others}
        return render(request, "edition_head.html", context, status=status)

    if request.method != "POST":
        return _page_of(kept, kept.writing.head, page)
    return _keep(request, kept, HEAD, typed_in(head_groups(kept.writing.head.typed), request.POST), page)


def steps(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The steps and their order."""
    kept = drafts.get(procedure=uid, actor=request.user, at=now())

    def page(
        at: Kept, typed: Typed, refused: Refused, others: tuple[shown.OtherValue, ...], status: int
    ) -> HttpResponse:
        texts = [typed[f"step-{number}"] for number in range(1, len(typed) + 1)]
        context = {"kept": at, "steps": texts or [""], "refused": refused, "others": others}
        return render(request, "edition_steps.html", context, status=status)

    if request.method != "POST":
        return _page_of(kept, kept.writing.steps, page)
    return _keep(request, kept, STEPS, steps_in(request.POST), page)


@require_POST
def new_measurand(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Add a measurand at the end and go to its page."""
    key = drafts.add_measurand(procedure=uid, actor=request.user, at=now())
    return redirect("edition-draft-measurand", uid=uid, key=key)


def measurand(request: HttpRequest, uid: uuid.UUID, key: str) -> HttpResponse:
    """One measurand, with its formula tried on sample values while it is written."""
    kept = drafts.get(procedure=uid, actor=request.user, at=now())
    part = kept.writing.part(key)
    criteria = [each.spec for one in published.list_criteria_sets() for each in one.criteria]
    others = [
        (neat(each.typed, "code"), shown.measurand_name(each))
        for each in kept.writing.measurands
        if each.key != key and neat(each.typed, "code")
    ]

    def page(
        at: Kept, typed: Typed, refused: Refused, beside: tuple[shown.OtherValue, ...], status: int
    ) -> HttpResponse:
        context = {
            "kept": at,
            "key": key,
            "name": shown.measurand_name(Part(key, typed, 0)),
            "groups": measurand_groups(typed, criteria, others),
            "formula_typed": typed.get("formula", ""),
            "refused": refused,
            "others": beside,
            **formula_context(at, key),
        }
        return render(request, "edition_measurand.html", context, status=status)

    if request.method != "POST":
        return _page_of(kept, part, page)
    typed = measurand_in(request.POST, measurand_groups(part.typed, criteria, others), part.typed)
    chosen = formulas.put_in(request.POST.get("put", ""), request.POST.dict())
    return _keep(request, kept, key, typed | ({"formula": chosen} if chosen else {}), page)


def formula_context(kept: Kept, key: str) -> dict[str, Any]:
    """What stands around a formula: names, functions, ready ones, and what comes of it now."""
    spec = formula_trial.spec_of(kept.writing)
    if spec is None:
        return {}
    derived = formula_trial.measurand_of(kept.writing, key, spec)
    return {
        "formula": formulas.shown_formula(kept.writing, key),
        "names": formulas.name_lines(spec, derived),
        "attributes": formulas.attribute_lines(spec, derived),
        "functions": formulas.function_lines(),
        "values": formulas.value_lines(),
        "ready": formulas.ready_lines(spec, derived),
    }


def _page_of(kept: Kept, part: Part, page: Show) -> HttpResponse:
    """A part's page with what is kept, and what is wrong with it."""
    is_new = part.key not in (HEAD, STEPS) and shown.is_untouched(part)
    found = () if is_new else drafts.looked_through(kept.writing).refusals
    return page(kept, part.typed, shown.refused_in(part.key, found, kept.writing), (), 200)


def _keep(request: HttpRequest, kept: Kept, part: str, typed: dict[str, str], page: Show) -> HttpResponse:
    """Keep what was typed, then answer a script, or go on to the draft, or stay where something is wrong."""
    by_script = request.headers.get("Accept") == "application/json"
    try:
        after = drafts.keep(
            procedure=kept.procedure,
            part=part,
            typed=typed,
            seen=seen_revision(request.POST),
            actor=request.user,
            at=now(),
        )
    except Conflict as error:
        return _kept_meanwhile(request, part, typed, error, page, kept, by_script)
    if by_script:
        return JsonResponse(_told(after, part))
    refused = shown.refused_in(part, drafts.looked_through(after.writing).refusals, after.writing)
    then = request.POST.get("then", "")
    if refused or then.startswith("stay") or {"do", "put"} & set(request.POST):
        return redirect(_same_page(request, then))
    messages.success(request, _("Saved."))
    return redirect(f"{reverse('edition-draft', args=[kept.procedure])}#{part}")


def _same_page(request: HttpRequest, then: str) -> str:
    """The page again, at what was asked for: the formula, a step."""
    if then == "stay-formula" or "put" in request.POST:
        return f"{request.path}#id_formula"
    return f"{request.path}#steps" if "do" in request.POST else request.path


def seen_revision(given: Mapping[str, str]) -> int:
    """The revision that the page was opened with; 0 for none that can be read."""
    text = str(given.get("seen", ""))
    return int(text) if text.isascii() and text.isdecimal() and len(text) < 9 else 0


def _kept_meanwhile(
    request: HttpRequest,
    part: str,
    typed: dict[str, str],
    error: Conflict,
    page: Show,
    kept: Kept,
    by_script: bool,
) -> HttpResponse:
    """Both versions: what is here stays in the fields, what the other window kept is named beside them."""
    others = shown.others_of(kept.writing.part(part), typed)
    says = wording.refusal(error)
    if by_script:
        told = [{"label": each.label, "value": each.value} for each in others]
        return JsonResponse({"says": says, "others": told, "revision": kept.revision}, status=409)
    messages.error(request, says)
    return page(kept, typed, NOTHING, others, 409)


def _told(kept: Kept, part: str) -> dict[str, Any]:
    """What a script is told: the revision, the time, and the pieces of the page that are other now."""
    refused = shown.refused_in(part, drafts.looked_through(kept.writing).refusals, kept.writing)
    told = {
        "revision": kept.revision,
        "saved_at": kept.saved_at.strftime("%H:%M:%S UTC"),
        "refused": [each.field for each in refused.refusals],
        "parts": {},
    }
    if part not in (HEAD, STEPS) and neat(kept.writing.part(part).typed, "kind") == "derived":
        context = formula_context(kept, part)
        told["parts"] = {
            name: render_to_string(f"_{name}.html".replace("-", "_"), context)
            for name in ("formula-samples", "formula-result", "formula-names")
        }
    return told


@require_POST
def move(request: HttpRequest, uid: uuid.UUID, key: str) -> HttpResponse:
    """Move a measurand up or down."""
    by = -1 if request.POST.get("by") == "up" else 1
    drafts.move_measurand(procedure=uid, key=key, by=by, actor=request.user, at=now())
    return redirect(f"{reverse('edition-draft', args=[uid])}#{key}")


def remove(request: HttpRequest, uid: uuid.UUID, key: str) -> HttpResponse:
    """Ask, then take a measurand out."""
    kept = drafts.get(procedure=uid, actor=request.user, at=now())
    name = shown.measurand_name(kept.writing.part(key))
    if request.method == "POST":
        drafts.remove_measurand(
            procedure=uid, key=key, seen=seen_revision(request.POST), actor=request.user, at=now()
        )
        messages.success(request, _("“%(name)s” is not asked in this edition any more.") % {"name": name})
        return redirect("edition-draft", uid=uid)
    context = {
        "kept": kept,
        "title": _("Remove “%(name)s”?") % {"name": name},
        "says": _(
            "What was typed of it is lost. Editions that are published, and all readings, stay as they are."
        ),
        "button": _("Remove it"),
    }
    return render(request, "edition_confirm.html", context)


def discard(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Ask, then throw the draft away."""
    kept = drafts.get(procedure=uid, actor=request.user, at=now())
    if request.method == "POST":
        drafts.discard(procedure=uid, actor=request.user, at=now())
        messages.success(request, _("The edition you were writing is discarded."))
        return redirect("procedures")
    context = {
        "kept": kept,
        "title": _("Discard edition %(number)s?") % {"number": kept.writing.number},
        "says": _("All that you typed for it is lost. What is published stays as it is."),
        "button": _("Discard it"),
    }
    return render(request, "edition_confirm.html", context)


@require_POST
def follow(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Go on as the edition after the one that was published meanwhile."""
    kept = drafts.follow_newest(procedure=uid, actor=request.user, at=now())
    messages.success(request, _("This is edition %(number)s now.") % {"number": kept.writing.number})
    return redirect("edition-draft", uid=uid)
