"""Mail in words: the one daily letter a person gets, and the letters that do not wait for it."""

from __future__ import annotations

import textwrap
from collections.abc import Sequence
from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_
from django.utils.translation import ngettext

from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.queries.mail import GapRow
from qa_tracker.records.queries.notices import NoticeRow
from qa_tracker.services.wording_words import (
    day_words,
    level_of_notice_word,
    listed_all,
    moment_words,
    recipient_word,
)

WIDTH: Final = 78
STANDING: Final = ("overdue", "late", "due", "upcoming")
NEVER_MAILED: Final = ("upcoming",)
OWN: Final = ("", "responsible")
TO_DO: Final = {
    "suspension": N_("%(site)s, suspension verdict"),
    "overdue": N_("%(site)s, overdue: grace is over, so do these first"),
    "late": N_("%(site)s, late: the due day has passed, the days of grace are running"),
    "due": N_("%(site)s, due: the due day has come"),
    "upcoming": N_("%(site)s, open: these may be done already"),
}


def letter(
    name: str, notices: Sequence[NoticeRow], base_url: str, gaps: Sequence[GapRow] = ()
) -> tuple[str, str]:
    """Subject and plain text of one mail; what was done since its notices were owed is told apart.

    ``gaps``: times without a sweep that ended lately, which explain why levels were passed.
    """
    waiting = [each for each in notices if _still_waits(each)]
    done = [each for each in notices if not _still_waits(each)]
    kind = _kind(notices)
    base_url = base_url.rstrip("/")
    parts = [
        _("Dear %(name)s,") % {"name": name},
        _wrapped(_opening(_said_as(kind, waiting), len(waiting))),
        *(_wrapped(_gap(each)) for each in gaps if any(notice.skipped for notice in waiting)),
        *_own(waiting, base_url),
        *_of_others(waiting, base_url),
        *_done(done, base_url),
        _wrapped(_closing(kind)),
    ]
    return " ".join(_subject(kind, waiting).split()), "\n\n".join(parts) + "\n"


def _said_as(kind: str, notices: Sequence[NoticeRow]) -> str:
    """How a letter opens: the day's letter otherwise where it tells of nothing but what others were to do."""
    return "of_others" if kind == "digest" and not any(_is_own(each) for each in notices) else kind


def _is_own(notice: NoticeRow) -> bool:
    """Whether it is for the person to do; a suspension is for whoever reads of it."""
    return notice.recipient in OWN or notice.level == "suspension"


def _still_waits(notice: NoticeRow) -> bool:
    """Whether there is still something to do: a suspension is no matter of what the check awaits."""
    return notice.level == "suspension" or notice.check_state in ("", *CHECK_AWAITED)


def _kind(notices: Sequence[NoticeRow]) -> str:
    """Why it is sent at once; ``digest`` where it is the day's letter. An empty key is one of a suspension."""
    if notices and all(each.level == "suspension" for each in notices):
        return "suspension"
    kinds = {each.mail_kind for each in notices}
    return kinds.pop() if len(kinds) == 1 and kinds <= {"electrical", "ladder"} else "digest"


def _subject(kind: str, notices: Sequence[NoticeRow]) -> str:
    if not notices:
        return _("Leadline: nothing left to do")
    told = {"count": len(notices), "device": notices[0].device_label}
    if kind == "suspension":
        words = ngettext(
            "Leadline: suspension verdict on %(device)s",
            "Leadline: %(count)d suspension verdicts",
            len(notices),
        )
    elif kind == "electrical":
        words = ngettext(
            "Leadline: electrical safety overdue on %(device)s",
            "Leadline: %(count)d electrical safety checks overdue",
            len(notices),
        )
    elif kind == "ladder":
        words = ngettext(
            "Leadline: still not done on %(device)s",
            "Leadline: %(count)d checks still not done",
            len(notices),
        )
    else:
        return _("Leadline: %(counts)s") % {"counts": ", ".join(_counts(notices))}
    return words % told


def _counts(notices: Sequence[NoticeRow]) -> list[str]:
    """How many stand how: the steps after overdue are overdue too."""
    standings = [_standing(each.level) for each in notices]
    order = ("suspension", *STANDING)
    return [f"{standings.count(each)} {level_of_notice_word(each)}" for each in order if each in standings]


def _standing(level: str) -> str:
    return level if level in TO_DO else "overdue"


def _opening(kind: str, count: int) -> str:
    if count == 0:
        return _("What this letter was to tell you of has been done meanwhile.")
    words = {
        "suspension": ngettext(
            "A check gave the verdict suspension. Take the device out of clinical use; a physicist or clinical "
            "engineer decides when it returns.",
            "Checks gave the verdict suspension. Take the devices out of clinical use; a physicist or clinical "
            "engineer decides when they return.",
            count,
        ),
        "electrical": ngettext(
            "A check of electrical safety is overdue. Have it done now. Until then a physicist or clinical "
            "engineer decides, under your local rules, whether the device stays in use.",
            "Checks of electrical safety are overdue. Have them done now. Until then a physicist or clinical "
            "engineer decides, under your local rules, whether the devices stay in use.",
            count,
        ),
        "ladder": ngettext(
            "This check has reached the last step: it has stood undone for longest, and those who were told "
            "before have not done it. See that it is done today, or excuse it with the reason.",
            "These checks have reached the last step: they have stood undone for longest, and those who were "
            "told before have not done them. See that they are done today, or excuse them with the reason.",
            count,
        ),
        "of_others": ngettext(
            "A check that others were to do has not been done. The address below opens it.",
            "%(count)d checks that others were to do have not been done, the most pressing of each site first. The "
            "address below each opens it.",
            count,
        ),
        "digest": ngettext(
            "A check waits. The address below opens it: there you enter it, say why it could not be done, or "
            "say until when you know of it.",
            "%(count)d checks wait, the most pressing of each site first. The address below each opens it: there "
            "you enter it, say why it could not be done, or say until when you know of it.",
            count,
        ),
    }
    return words[kind] % {"count": count} if kind in ("digest", "of_others") else words[kind]


def _gap(gap: GapRow) -> str:
    return _(
        "The program did not look at any check from %(began)s to %(ended)s, so nobody was told anything in that "
        "time. You get this one letter for all of it; “not told before” says what each check passed meanwhile."
    ) % {"began": moment_words(gap.began_at), "ended": moment_words(gap.ended_at)}


def _closing(kind: str) -> str:
    words = {
        "suspension": _(
            "You get this at once because you answer for these devices as a physicist. If that is no longer "
            "so, speak to your administrator."
        ),
        "electrical": _("You get this at once because electrical safety does not wait for the day's letter."),
        "ladder": _("You get this at once because nobody else is told after you."),
        "digest": _(
            "Such a letter comes at most once on a working day. If a check is not yours to do, ask whoever makes "
            "the plans to hand it on; to get no such mail, speak to your administrator."
        ),
    }
    return words[kind]


def _own(notices: Sequence[NoticeRow], base_url: str) -> list[str]:
    """What the person is to do themself."""
    return _by_site([each for each in notices if _is_own(each)], base_url)


def _of_others(notices: Sequence[NoticeRow], base_url: str) -> list[str]:
    """What others are to do and have not: told by the ladder, rung by rung."""
    parts = []
    others = [each for each in notices if not _is_own(each)]
    for recipient in dict.fromkeys(each.recipient for each in others):
        told = _(
            "Told to you as %(recipient)s. See that they are done, excuse them with the reason, or say there until "
            "when you know of them."
        )
        parts.append(_wrapped(told % {"recipient": recipient_word(recipient)}))
        parts += _by_site([each for each in others if each.recipient == recipient], base_url, named=True)
    return parts


def _done(notices: Sequence[NoticeRow], base_url: str) -> list[str]:
    if not notices:
        return []
    lines = [_wrapped(_("Done meanwhile, with nothing left for you to do:"))]
    return ["\n".join([*lines, *(_line(each, base_url, named=False) for each in notices)])]


def _by_site(notices: Sequence[NoticeRow], base_url: str, *, named: bool = False) -> list[str]:
    """One paragraph a site and level, the worst first; with ``named``, who is responsible."""
    parts = []
    for site in dict.fromkeys(notice.site_code for notice in notices):
        here = [each for each in notices if each.site_code == site]
        for level in sorted({each.level for each in here}, key=_order):
            lines = [_wrapped(_heading(site, level, named=named))]
            lines += [_line(each, base_url, named=named) for each in here if each.level == level]
            parts.append("\n".join(lines))
    return parts


def _order(level: str) -> tuple[int, str]:
    """Suspension, then the steps from the highest down, then how a check stands by date."""
    if level == "suspension":
        return 0, ""
    if level in STANDING:
        return 2 + STANDING.index(level), ""
    return 1, "".join(chr(0x7F - ord(letter)) for letter in level)


def _heading(site: str, level: str, *, named: bool) -> str:
    told = {"site": site or _("Pool"), "level": level_of_notice_word(level)}
    if named:
        return _("%(site)s, %(level)s:") % told
    if level in TO_DO:
        return _(TO_DO[level]) % told
    return _("%(site)s, %(level)s: these have stood undone for longest") % told


def _line(notice: NoticeRow, base_url: str, *, named: bool) -> str:
    told = {
        "device": ", ".join(part for part in (notice.device_label, notice.location) if part),
        "procedure": notice.procedure,
        "who": notice.responsible,
    }
    if notice.due_on is None:
        words = _("%(device)s: %(procedure)s, unplanned") % told
    else:
        words = _("%(device)s: %(procedure)s, due %(day)s") % (told | {"day": day_words(notice.due_on)})
    if named and notice.responsible:
        words = _("%(check)s; %(who)s was to do it") % {"check": words, "who": notice.responsible}
    lines = [_wrapped(words, "- ", "  ")]
    if passed := [level for level in notice.skipped_levels if level not in NEVER_MAILED]:
        lines.append(_wrapped(_passed(passed), "  ", "  "))
    return "\n".join([*lines, f"  {base_url}/checks/{notice.check_uid}/"])


def _passed(levels: Sequence[str]) -> str:
    return _("Not told before: %(levels)s.") % {"levels": listed_all(map(level_of_notice_word, levels))}


def _wrapped(text: str, first: str = "", rest: str = "") -> str:
    return textwrap.fill(
        text,
        WIDTH,
        initial_indent=first,
        subsequent_indent=rest,
        break_long_words=False,
        break_on_hyphens=False,
    )
