"""Entering a check: one page, judged by the server, kept as a draft; with scripts off as well."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Mapping
from typing import Any

from django.contrib.auth.decorators import login_not_required
from django.contrib.auth.forms import AuthenticationForm
from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import redirect, render
from django.template.loader import render_to_string
from django.urls import reverse
from django.utils.http import urlencode
from django.utils.timezone import now
from django.views.decorators.http import require_GET, require_POST

from qa_tracker.core.errors import Conflict, DomainError, Invalid, SeveralInvalid
from qa_tracker.core.schedule_days import zone_of
from qa_tracker.core.workflow import DEVICE_USABLE
from qa_tracker.records.queries import checks as check_queries
from qa_tracker.records.queries import objects, submissions
from qa_tracker.records.queries.submissions import SignatureRow
from qa_tracker.services import cautions, checks, drafts, guards, live, outside, wording
from qa_tracker.services.drafts import Kept, KeptMeanwhile
from qa_tracker.services.entries import REASONS
from qa_tracker.services.judging import Judged
from qa_tracker.services.sheets import Sheet
from qa_tracker.web import refused as refusals
from qa_tracker.web.forms import entry as inputs
from qa_tracker.web.presenters.entry import Choice, item_names, outcome, sections, worked_out
from qa_tracker.web.refused import Refused


@require_GET
def enter(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The page with what was kept before, judged as far as it can be."""
    at = now()
    kept = drafts.find(check=uid, actor=request.user, at=at)
    if kept is not None:
        return page(request, uid, kept.typed, kept.revision)
    return page(request, uid, _typed_before(request, uid, at), 0)


def _typed_before(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> dict[str, str]:
    """What a check that was sent back held, so that only what was asked for is put right."""
    row = check_queries.find_check(guards.scope(request.user, at), uid)
    if row is None or row.state != "sent_back":
        return {}
    return inputs.inputs_of(submissions.submissions_of([row.id])[row.id][-1])


@login_not_required
@require_POST
def draft(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Keep what is typed; a script is answered with verdicts, a form with the page or the signing page."""
    by_script = request.headers.get("Accept") == "application/json"
    if not request.user.is_authenticated:
        return _signed_out(request, uid, by_script)
    typed = inputs.typed_inputs(request.POST)
    try:
        _check_same_person(request)
        kept = drafts.keep(check=uid, typed=typed, revision=_revision(request), actor=request.user, at=now())
    except KeptMeanwhile as error:
        return _kept_meanwhile(request, uid, typed, error, by_script)
    except Conflict as error:
        if by_script:
            return JsonResponse({"says": wording.refusal(error)}, status=409)
        raise
    if by_script:
        return JsonResponse(_judged_json(request, uid, kept))
    return _next_page(request, uid, kept)


def _signed_out(request: HttpRequest, uid: uuid.UUID, by_script: bool) -> HttpResponse:
    """Tell a script to keep what is typed and to ask for a sign-in; a form is carried through the sign-in."""
    back = reverse("check-enter", args=[uid])
    if by_script:
        return JsonResponse({"sign_in": f"{reverse('sign-in')}?{urlencode({'next': back})}"}, status=401)
    carried = inputs.typed_inputs(request.POST) | {"typed_by": request.POST.get("typed_by", "")}
    context = {"form": AuthenticationForm(), "next": back, "carried": carried, "carried_check": uid}
    return render(request, "sign_in.html", context, status=401)


def _revision(request: HttpRequest) -> int:
    text = request.POST.get("revision", "0")
    return int(text) if text.isascii() and text.isdigit() and len(text) < 9 else 0


def _check_same_person(request: HttpRequest) -> None:
    """Refuse to keep what one person typed as the draft of another who signed in meanwhile."""
    if request.POST.get("typed_by", str(request.user.uid)) != str(request.user.uid):
        raise Conflict("draft.someone_else")


def _next_page(request: HttpRequest, uid: uuid.UUID, kept: Kept) -> HttpResponse:
    if request.POST.get("then") != "sign":
        return redirect("check-enter", uid=uid)
    try:
        whole(request, uid, kept, now())
    except DomainError as error:
        return page(request, uid, kept.typed, kept.revision, refusals.of(error), 422)
    return redirect("check-sign", uid=uid)


def whole(request: HttpRequest, uid: uuid.UUID, kept: Kept, at: dt.datetime) -> checks.Preview:
    """The check as it would be signed, or every refusal that stands against it."""
    laid = _sheet(request, uid, kept.typed, at)
    missing = inputs.unconfirmed(laid.items, kept.typed)
    typed = inputs.typed_of(laid.items, kept.typed, zone_of_sheet(laid))
    try:
        seen = checks.preview(check=uid, typed=typed, whole=True, actor=request.user, at=at)
    except SeveralInvalid as several:
        raise SeveralInvalid((*several.errors, *missing)) from several
    if missing:
        raise SeveralInvalid(missing)
    return seen


def typed_for(request: HttpRequest, uid: uuid.UUID, kept: Kept, at: dt.datetime) -> checks.Typed:
    """What a draft says, as the service takes it."""
    laid = _sheet(request, uid, kept.typed, at)
    return inputs.typed_of(laid.items, kept.typed, zone_of_sheet(laid))


def zone_of_sheet(laid: Sheet) -> str:
    """The time zone the check is entered in."""
    return laid.check.site.time_zone if laid.check.site else "UTC"


def _sheet(request: HttpRequest, uid: uuid.UUID, typed: Mapping[str, str], at: dt.datetime) -> Sheet:
    return checks.sheet(
        check=uid,
        test_object=inputs.chosen(typed, "test_object"),
        instrument=inputs.chosen(typed, "instrument"),
        actor=request.user,
        at=at,
    )


def _kept_meanwhile(
    request: HttpRequest, uid: uuid.UUID, typed: dict[str, str], error: KeptMeanwhile, by_script: bool
) -> HttpResponse:
    """Both versions: what is here stays in the fields, what the other page kept is named beside them."""
    kept = error.kept
    names = sorted((set(typed) | set(kept.typed)) - {"page", "turn"})
    others = {name: kept.typed.get(name, "") for name in names if typed.get(name) != kept.typed.get(name)}
    refused = refusals.of(error)
    if by_script:
        says = refused.refusals[0].sentence
        return JsonResponse({"says": says, "revision": kept.revision, "others": others}, status=409)
    return page(request, uid, typed, kept.revision, refused, 409, others)


def _judged_json(request: HttpRequest, uid: uuid.UUID, kept: Kept) -> dict[str, Any]:
    """Verdicts and refusals by field, as the pieces of the page they belong to."""
    laid = _sheet(request, uid, kept.typed, now())
    judged, errors = live.judge_what_can_be(laid, inputs.entries_of(laid.items, kept.typed))
    refused = Refused(tuple(each for error in errors for each in refusals.of(error).refusals))
    found = {one.item.key: one for one in judged.items}
    outcomes = [outcome(item, kept.typed, found.get(item.key), refused) for item in laid.items]
    return {
        "revision": kept.revision,
        "saved_at": kept.saved_at.astimezone(zone_of(zone_of_sheet(laid))).strftime("%H:%M:%S"),
        "items": {
            one.key: {
                "html": render_to_string("_outcome.html", {"outcome": one}),
                "refused": bool(one.refusal),
            }
            for one in outcomes
        }
        | {"worked-out": {"html": _worked_html(judged), "refused": False}},
    }


def _worked_html(judged: Judged) -> str:
    return render_to_string("_worked_out.html", {"worked": worked_out(judged)})


def page(
    request: HttpRequest,
    uid: uuid.UUID,
    typed: dict[str, str],
    revision: int,
    refused: Refused | None = None,
    status: int = 200,
    others: Mapping[str, str] | None = None,
) -> HttpResponse:
    """The entry page around what is typed; ``refused`` is why it could not go on."""
    at = now()
    laid = _sheet(request, uid, typed, at)
    judged, errors = live.judge_what_can_be(laid, inputs.entries_of(laid.items, typed))
    beside = Refused(tuple(each for error in errors for each in refusals.of(error).refusals))
    named = refused if status == 422 and refused else beside
    context = {
        "sheet": laid,
        "row": check_queries.find_check(guards.scope(request.user, at), uid),
        "spec": laid.edition.spec,
        "sections": sections(laid.items, typed, judged, named),
        "worked": worked_out(judged),
        "works_out": bool(laid.derived),
        "typed": typed,
        "revision": revision,
        "refused": refused and refused.named(item_names(laid.items)),
        "named": named,
        "others": _other_lines(others or {}, laid),
        "cautions": cautions.texts(laid.edition.spec.cautions),
        "test_objects": _test_objects(request, laid, at),
        "instruments": _instruments(request, laid, at),
        "partial_reasons": [
            Choice(each, wording.reason_word(each), typed.get("partial_reason") == each) for each in REASONS
        ],
        "barred": "" if laid.check.device.state in DEVICE_USABLE else laid.check.device.state,
        "sent_back": _sent_back(laid),
        "asks_outside": _asks_outside(request, laid, typed, at),
        "zone": zone_of_sheet(laid),
        "at": at,
    }
    return render(request, "check_enter.html", context, status=status)


def _asks_outside(request: HttpRequest, laid: Sheet, typed: Mapping[str, str], at: dt.datetime) -> bool:
    """Whether to ask why the check is accepted outside its window: only then, and only who may accept it."""
    try:
        measured_at = inputs.moment(typed.get("measured_at", ""), zone_of_sheet(laid)) or at
    except Invalid:
        return False
    return outside.asks_reason(laid.check, measured_at, actor=request.user, at=at)


def _sent_back(laid: Sheet) -> SignatureRow | None:
    """Who sent the check back, and what is to be done."""
    if laid.check.state != "sent_back":
        return None
    newest = submissions.submissions_of([laid.check.id])[laid.check.id][-1]
    return next((each for each in reversed(newest.signatures) if each.meaning == "sent back"), None)


def _other_lines(others: Mapping[str, str], laid: Sheet) -> list[tuple[str, str]]:
    names = {item.key: item.spec.name for item in laid.items}
    return [(names.get(name.removeprefix("n-"), name), value) for name, value in others.items()]


def _test_objects(request: HttpRequest, laid: Sheet, at: dt.datetime) -> list[Choice]:
    if not laid.edition.spec.needs_test_object:
        return []
    chosen = laid.test_object.uid if laid.test_object else None
    return [
        Choice(str(one.uid), f"{one.name} {one.serial}", one.uid == chosen)
        for one in objects.list_test_objects(guards.scope(request.user, at))
        if one.in_use
    ]


def _instruments(request: HttpRequest, laid: Sheet, at: dt.datetime) -> list[Choice]:
    wanted = laid.edition.spec.needs_instrument
    chosen = laid.instrument.uid if laid.instrument else None
    return [
        Choice(str(one.uid), f"{one.maker} {one.model} {one.serial}", one.uid == chosen)
        for one in objects.list_instruments(guards.scope(request.user, at))
        if one.in_use and one.kind == wanted
    ]
