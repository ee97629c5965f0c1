"""The ladder of a site: who is told at which level, and setting another."""

from __future__ import annotations

import uuid

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from qa_tracker.core.ladder import LONGEST_AFTER_DAYS, MOST_STEPS, RECIPIENTS, Ladder, Rung
from qa_tracker.core.schedule import LEVELS
from qa_tracker.services import finding, guards, ladders, wording
from qa_tracker.services.wording_words import capital
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import Typed

FEWEST_STEPS = 3


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Who is told at which level at a site."""
    at = now()
    site = finding.site(request.user, uid, at)
    known = ladders.in_force()
    context = {
        "site": site,
        "levels": _levels(known.of(site.pk)),
        "origin": known.origin(site.pk),
        "may_set": ladders.may_set(site.pk, actor=request.user, at=at),
        "may_manage": guards.scope(request.user, at, "site.manage").holds(site.pk),
    }
    return render(request, "ladder.html", context)


def _levels(ladder: Ladder) -> list[tuple[str, str, list[str]]]:
    """Every level with when it is reached and who is told."""
    when = {
        "upcoming": _("when the window opens"),
        "due": _("on the due day"),
        "late": _("the day after"),
        "overdue": _("after the last day of grace"),
    }
    for level, days in ladder.after_days.items():
        said = ngettext("%(days)d day after overdue", "%(days)d days after overdue", days)
        when[level] = said % {"days": days}
    return [
        (wording.level_of_notice_word(level), when[level], [wording.recipient_word(each) for each in named])
        for level, named in ladder.told.items()
    ]


def put(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Give a site a ladder of its own."""
    at = now()
    site = finding.site(request.user, uid, at)
    guards.check_may(request.user, "ladder.set", site.pk, at)
    ladder = ladders.in_force().of(site.pk)
    steps = min(MOST_STEPS, max(FEWEST_STEPS, len(ladder.after_days) + 1))
    asked = Asked(
        _("Who is told"),
        _("Keep the ladder"),
        reverse("ladder", args=[uid]),
        site.name,
        (
            *(_recipients(level, wording.level_of_notice_word(level), ladder) for level in LEVELS),
            *(field for number in range(1, steps + 1) for field in _step(f"t{number}", ladder)),
            Field("reason", _("Reason"), hint=_("Why the ladder changes; it stands in the ledger.")),
        ),
        lead=_(
            "Each person is told once at a level. After a pause only the highest level reached is told. Levels that "
            "have passed are not told again by a new ladder."
        ),
    )

    def act(typed: Typed) -> Done:
        ladders.set_ladder(
            site=site, rungs=_rungs(typed, steps), reason=typed.text("reason", 300), actor=request.user, at=at
        )
        return Done(_("The ladder is kept; it holds from now on."), asked.back)

    return ask(request, asked, act)


def _recipients(level: str, label: str, ladder: Ladder) -> Field:
    options = tuple((each, wording.recipient_word(each)) for each in RECIPIENTS)
    told = ladder.told.get(level, ())
    return Field(level, capital(label), "ticks", options=options, required=False, values=told)


def _step(level: str, ladder: Ladder) -> tuple[Field, Field]:
    label = wording.level_of_notice_word(level)
    days = Field(
        f"{level}_days",
        _("Days after overdue, step %(step)s") % {"step": level[1:]},
        "whole",
        _("Leave it empty where there is no such step."),
        required=False,
    )
    return days.starting(ladder.after_days.get(level)), _recipients(level, label, ladder)


def _rungs(typed: Typed, steps: int) -> list[Rung]:
    rungs = [Rung(level, each) for level in LEVELS for each in typed.several(level)]
    for number in range(1, steps + 1):
        level = f"t{number}"
        days = typed.whole_or_none(f"{level}_days", LONGEST_AFTER_DAYS)
        rungs += [Rung(level, each, days or 0) for each in typed.several(level)]
    return rungs


def drop(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Let a site go back to the common ladder."""
    at = now()
    site = finding.site(request.user, uid, at)
    guards.check_may(request.user, "ladder.set", site.pk, at)
    asked = Asked(
        _("Back to the common ladder"),
        _("Go back to it"),
        reverse("ladder", args=[uid]),
        site.name,
        (Field("reason", _("Reason"), focus=True),),
        lead=_("The site gives up its own ladder and goes by the one that holds where none is set."),
    )

    def act(typed: Typed) -> Done:
        ladders.drop_ladder(site=site, reason=typed.text("reason", 300), actor=request.user, at=at)
        return Done(_("The site goes by the common ladder again."), asked.back)

    return ask(request, asked, act)
