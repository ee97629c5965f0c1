"""When a check is due, and how often: by word and date, never by colour alone."""

from __future__ import annotations

import datetime as dt
from typing import Final

from django.utils import dates
from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_
from django.utils.translation import ngettext

from qa_tracker.core.schedule import in_words, local_day, parse_rule
from qa_tracker.core.workflow import CHECK_AWAITED, DEVICE
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.services.wording_words import check_state_word, day_words, device_state_word, listed_all

MOMENT: Final = dt.timedelta(microseconds=1)
BASES: Final = {"calendar": N_("by the calendar"), "last_actual": N_("counted from the last check")}
ORDINALS: Final = {
    0: N_("every %(day)s"),
    1: N_("the first %(day)s"),
    2: N_("the second %(day)s"),
    3: N_("the third %(day)s"),
    4: N_("the fourth %(day)s"),
    5: N_("the fifth %(day)s"),
    -1: N_("the last %(day)s"),
    -2: N_("the last %(day)s but one"),
    -3: N_("the last %(day)s but two"),
    -4: N_("the last %(day)s but three"),
    -5: N_("the last %(day)s but four"),
}


def excuse_words(excuse: str) -> str:
    """Why a check was excused: a person's own words, or the state its device was in, with the days where known."""
    state, _comma, days = excuse.partition(", ")
    if state not in DEVICE.states:
        return excuse
    word = device_state_word(state)
    try:
        first, last = (dt.date.fromisoformat(text) for text in days.split(" to "))
    except ValueError:
        return _("the device was %(state)s") % {"state": word}
    told = {"state": word, "first": day_words(first, last), "last": day_words(last)}
    return _("the device was %(state)s, %(first)s to %(last)s") % told


def due_words(check: CheckRow, at: dt.datetime, zone: str) -> str:
    """How a check stands at a moment, in days of the site's zone."""
    if check.state not in CHECK_AWAITED:
        return check_state_word(check.state)
    words = _by_date(check, at, zone)
    if check.state == "sent_back":
        return _("sent back; %(due)s") % {"due": words}
    return words


def _by_date(check: CheckRow, at: dt.datetime, zone: str) -> str:
    moments = (check.opens_at, check.due_at, check.late_at, check.overdue_at)
    opens_at, due_at, late_at, overdue_at = moments
    if check.due_on is None or not (opens_at and due_at and late_at and overdue_at):
        return _("unplanned")
    today, last_on = local_day(at, zone), local_day(overdue_at - MOMENT, zone)
    due = day_words(check.due_on, today)
    if at < opens_at:
        return _opens(local_day(opens_at, zone), check.due_on, today)
    if at < due_at and last_on > check.due_on:
        return _("open until %(last)s, due %(due)s") % {"last": day_words(last_on, today), "due": due}
    if at < due_at:
        return _("open, due %(due)s") % {"due": due}
    if at < late_at:
        return _("due today")
    if at < overdue_at:
        return _late((last_on - today).days)
    return _overdue(local_day(overdue_at, zone), today)


def _opens(opens_on: dt.date, due_on: dt.date, today: dt.date) -> str:
    told = {"opens": day_words(opens_on, today), "due": day_words(due_on, today)}
    if opens_on == due_on:
        return _("opens %(opens)s") % told
    return _("opens %(opens)s, due %(due)s") % told


def _late(days: int) -> str:
    if days == 0:
        return _("late, last day of grace")
    return ngettext("late, %(days)d day of grace left", "late, %(days)d days of grace left", days) % {
        "days": days
    }


def _overdue(since_on: dt.date, today: dt.date) -> str:
    days = (today - since_on).days
    if days == 0:
        return _("overdue since today")
    told = {"day": day_words(since_on, today), "days": days}
    return (
        ngettext("overdue since %(day)s (%(days)d day)", "overdue since %(day)s (%(days)d days)", days) % told
    )


def recurrence_words(rule_text: str, basis: str) -> str:
    """How often, in words: "every 3 months, counted from the last check"."""
    rule = parse_rule(rule_text)
    code, values = in_words(rule, basis)
    days = [_month_day(day) for day in rule.month_days] + [_weekday(*pair, code) for pair in rule.weekdays]
    if code == "every.days" and rule.interval == 1 and days:
        told = [_("every %(days)s") % {"days": listed_all(days)}]
    else:
        told = [_every(code, rule.interval), *_in_months(rule.months)]
        told += [_("on %(days)s") % {"days": listed_all(days)}] if days else []
    return _("%(often)s, %(basis)s") % {"often": " ".join(told), "basis": _(BASES[str(values["basis"])])}


def _in_months(months: tuple[int, ...]) -> list[str]:
    named = listed_all(str(dates.MONTHS[month]) for month in months)
    return [_("in %(months)s") % {"months": named}] if months else []


def _every(code: str, interval: int) -> str:
    words = {
        "every.days": ngettext("every day", "every %(n)d days", interval),
        "every.weeks": ngettext("every week", "every %(n)d weeks", interval),
        "every.months": ngettext("every month", "every %(n)d months", interval),
        "every.years": ngettext("every year", "every %(n)d years", interval),
    }
    return words[code] % {"n": interval} if interval > 1 else words[code]


def _month_day(day: int) -> str:
    if day > 0:
        return _("day %(day)d") % {"day": day}
    if day == -1:
        return _("the last day")
    return _("day %(day)d from the end") % {"day": -day}


def _weekday(ordinal: int, weekday: int, code: str) -> str:
    name = str(dates.WEEKDAYS[weekday])
    if ordinal == 0 and code in ("every.days", "every.weeks"):
        return name
    return _(ORDINALS[ordinal]) % {"day": name}
