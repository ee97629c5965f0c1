"""What stands around every page: the pages a person may open, their notices, and how the program is."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from django.conf import settings
from django.http import HttpRequest
from django.urls import reverse
from django.utils.functional import SimpleLazyObject
from django.utils.timezone import now
from django.utils.translation import gettext_lazy as _

from qa_tracker.core.roles import Grant, may_somewhere
from qa_tracker.records.queries import notices
from qa_tracker.records.queries.ledger import holds_demonstration
from qa_tracker.records.queries.scope import grants_of
from qa_tracker.services import wording
from qa_tracker.services.health import health

PAGES = (
    ("due", _("Due"), "see"),
    ("register", _("Register"), "see"),
    ("checks", _("Checks"), "see"),
    ("faults", _("Faults"), "see"),
    ("dossiers", _("Dossiers"), "dossier.read"),
    ("ledger", _("Ledger"), "ledger.read"),
    ("criteria", _("Criteria"), "see"),
    ("people", _("People"), "person.manage"),
    ("sites", _("Sites"), "site.manage"),
    ("mailbox", _("Mailbox"), "mail.see"),
)


@dataclass(frozen=True)
class PageName:
    """One page in the header."""

    address: str
    title: str
    here: bool


@dataclass(frozen=True)
class Frame:
    """The header and footer of a page; ``name`` is empty for who is not signed in."""

    pages: tuple[PageName, ...] = ()
    name: str = ""
    notices: int = 0
    unhealthy: str = ""
    swept: str = ""
    to_mail: bool = False
    demonstration: bool = False


def page_frame(request: HttpRequest) -> dict[str, Any]:
    """The frame, made when a template first asks for it."""
    return {"frame": SimpleLazyObject(lambda: _frame(request))}


def _frame(request: HttpRequest) -> Frame:
    person = getattr(request, "user", None)
    if person is None or not person.is_authenticated:
        return Frame(demonstration=holds_demonstration())
    at = now()
    known, grants = health(at=at), grants_of(person.pk)
    return Frame(
        _pages(request.path, grants, at.date()),
        person.name,
        notices.unseen_count(person.pk),
        wording.health_sentence(known) if known.status == "unhealthy" else "",
        f"{known.last_sweep:%H:%M}" if known.last_sweep else "",
        may_somewhere(grants, "mail.see", at.date()),
        holds_demonstration(),
    )


def _pages(path: str, grants: Sequence[Grant], day: dt.date) -> tuple[PageName, ...]:
    return tuple(
        PageName(reverse(name), str(title), _is_here(path, reverse(name)))
        for name, title, verb in PAGES
        if may_somewhere(grants, verb, day) and (name != "mailbox" or settings.DEMO_MAILBOX)
    )


def _is_here(path: str, address: str) -> bool:
    return path == address or (address != "/" and path.startswith(address))
