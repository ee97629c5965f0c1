"""Mail and health in words: the one daily letter a person gets, and how the program itself is."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence
from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_
from django.utils.translation import ngettext

from qa_tracker.records.queries.notices import NoticeRow
from qa_tracker.services.health import Health
from qa_tracker.services.wording_words import capital, day_words, level_of_notice_word, moment_words

WIDTH: Final = 78
ORDER: Final = ("suspension", "overdue", "late", "due", "upcoming")
REASONS: Final = {
    "sweep_late": N_(
        "The sweep last ran on %(swept)s, so no check moves and no notice is owed. Start the worker and the "
        "beat again, or run the sweep by hand: manage.py sweep."
    ),
    "mail_late": N_(
        "Mail has been waiting since %(waiting)s. Check that the worker runs and that the mail server answers."
    ),
    "mail_failed": N_(
        "Some mail was given up after several attempts. Read the server's reply beside it, mend the cause and "
        "send it again."
    ),
}


def digest_letter(name: str, notices: list[NoticeRow], base_url: str) -> tuple[str, str]:
    """Subject and plain text of the one mail of the day, or of an immediate mail on a suspension verdict."""
    at_once = bool(notices) and all(notice.level == "suspension" for notice in notices)
    subject = _suspension_subject(notices) if at_once else _subject(notices)
    parts = [
        _("Dear %(name)s,") % {"name": name},
        _wrapped(_suspension_opening(len(notices)) if at_once else _opening(len(notices))),
        *_sites(notices, base_url.rstrip("/")),
        _wrapped(_closing(at_once=at_once)),
    ]
    return " ".join(subject.split()), "\n\n".join(parts) + "\n"


def _subject(notices: Sequence[NoticeRow]) -> str:
    levels = [notice.level for notice in notices]
    counts = [f"{levels.count(each)} {level_of_notice_word(each)}" for each in ORDER if each in levels]
    return _("Leadline: %(counts)s") % {"counts": ", ".join(counts) or _("nothing due")}


def _suspension_subject(notices: Sequence[NoticeRow]) -> str:
    if len(notices) == 1:
        return _("Leadline: suspension verdict on %(device)s") % {"device": notices[0].device_label}
    return _("Leadline: %(count)d suspension verdicts") % {"count": len(notices)}


def _opening(count: int) -> str:
    if count == 0:
        return _("Nothing is due.")
    return ngettext(
        "This check is yours to look after:", "These %(count)d checks are yours to look after:", count
    ) % {"count": count}


def _suspension_opening(count: int) -> str:
    return ngettext(
        "A check gave the verdict suspension. Take the device out of clinical use; a physicist or clinical "
        "engineer decides when it returns.",
        "Checks gave the verdict suspension. Take the devices out of clinical use; a physicist or clinical "
        "engineer decides when they return.",
        count,
    )


def _closing(*, at_once: bool) -> str:
    if at_once:
        return _(
            "You get this at once because you answer for these devices as a physicist. If that is no longer "
            "so, speak to your administrator."
        )
    return _(
        "You get this at most once a day, because plans name you for these checks. To hand them on, or to get "
        "no such mail, speak to your administrator."
    )


def _sites(notices: Sequence[NoticeRow], base_url: str) -> list[str]:
    """One paragraph a site and level, the worst first."""
    parts = []
    for site in dict.fromkeys(notice.site_code for notice in notices):
        for level in ORDER:
            here = [each for each in notices if (each.site_code, each.level) == (site, level)]
            if here:
                told = {"site": site or _("Pool"), "level": level_of_notice_word(level)}
                lines = [_("%(site)s, %(level)s") % told]
                parts.append("\n".join([*lines, *(_line(each, base_url) for each in here)]))
    return parts


def _line(notice: NoticeRow, base_url: str) -> str:
    told = {"device": notice.device_label, "procedure": notice.procedure}
    if notice.due_on is None:
        words = _("%(device)s: %(procedure)s, unplanned") % told
    else:
        words = _("%(device)s: %(procedure)s, due %(day)s") % (told | {"day": day_words(notice.due_on)})
    return f"{_wrapped(words, '- ', '  ')}\n  {base_url}/checks/{notice.check_uid}/"


def _wrapped(text: str, first: str = "", rest: str = "") -> str:
    return textwrap.fill(
        text,
        WIDTH,
        initial_indent=first,
        subsequent_indent=rest,
        break_long_words=False,
        break_on_hyphens=False,
    )


def health_sentence(health: Health) -> str:
    """How the program is: one sentence for each reason that it is not well."""
    if health.status == "starting":
        return _("The program has started; the first sweep is still to come.")
    told = {
        "swept": moment_words(health.last_sweep) if health.last_sweep else _("no day yet"),
        "waiting": moment_words(health.mail_waiting_since) if health.mail_waiting_since else _("no day yet"),
    }
    if health.reasons:
        return " ".join(_(REASONS[reason]) % told for reason in health.reasons)
    return capital(_("all is well; the sweep last ran on %(swept)s.") % told)
