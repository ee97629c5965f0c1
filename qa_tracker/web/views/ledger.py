"""The ledger: leaves as sentences, one leaf's exact bytes, checkpoints, and how to verify all of it."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now

from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import devices, ledger
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import guards, wording

PAGE = 50


def _scope(request: HttpRequest, at: dt.datetime) -> Scope:
    guards.check_may_somewhere(request.user, "ledger.read", at)
    return guards.scope(request.user, at, "ledger.read")


def index(request: HttpRequest) -> HttpResponse:
    """The newest leaves in sight, or those about one device."""
    scope = _scope(request, now())
    device = _device(request, scope)
    leaves = ledger.list_leaves(
        scope,
        before=_before(request),
        most=PAGE + 1,
        device_uid=device.uid if device else None,
    )
    context = {
        "leaves": [(leaf, wording.leaf_sentence(leaf)) for leaf in leaves[:PAGE]],
        "following": leaves[PAGE - 1].seq if len(leaves) > PAGE else None,
        "device": device,
        "checkpoints": ledger.list_checkpoints(most=5),
    }
    return render(request, "ledger.html", context)


def _device(request: HttpRequest, scope: Scope) -> devices.DeviceRow | None:
    """The device asked for; one out of sight is as one that is not there."""
    asked = request.GET.get("device", "")
    if not asked:
        return None
    try:
        found = devices.find_device(scope, uuid.UUID(asked))
    except ValueError:
        found = None
    if found is None:
        raise NotFound("device.unknown")
    return found


def _before(request: HttpRequest) -> int | None:
    text = request.GET.get("before", "")
    return int(text) if text.isascii() and text.isdigit() and len(text) < 19 else None


def show(request: HttpRequest, seq: int) -> HttpResponse:
    """One leaf in sight: its sentence, its bytes, its hash."""
    scope = _scope(request, now())
    found = ledger.list_leaves(scope, before=seq + 1, most=1)
    if not found or found[0].seq != seq:
        raise NotFound("leaf.unknown")
    leaf = found[0]
    return render(request, "leaf.html", {"leaf": leaf, "sentence": wording.leaf_sentence(leaf)})
