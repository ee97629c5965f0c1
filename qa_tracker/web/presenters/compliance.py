"""Compliance as a table, a list and a file: counts with their percentages beside them, and when they were true."""

from __future__ import annotations

import csv
import datetime as dt
import io
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.compliance import FIGURES, Tally
from qa_tracker.records.queries.compliance import Group
from qa_tracker.services import wording

FIGURE_WORDS = {
    "on_time": N_("on time"),
    "late": N_("late"),
    "overdue": N_("of these after grace"),
    "missed": N_("missed"),
    "excused": N_("excused"),
    "awaited": N_("awaited"),
    "awaited_late": N_("of these past due"),
    "void": N_("void"),
}
GROUP_WORDS = {"site": N_("by site"), "procedure": N_("by procedure"), "device": N_("by device")}
BEGINS_A_FORMULA = ("=", "+", "-", "@", "\t", "\r")


@dataclass(frozen=True)
class Cell:
    """A count, its figure, and its percentage of what was owed where that means something."""

    figure: str
    count: int
    percent: int | None = None


@dataclass(frozen=True)
class Line:
    """One row of the table."""

    key: int | None
    label: str
    owed: int
    cells: tuple[Cell, ...]


def line(key: int | None, label: str, tally: Tally) -> Line:
    """The figures of one group; only those that are shares of what was owed have a percentage."""
    shares = ("on_time", "late", "missed")
    cells = tuple(
        Cell(name, getattr(tally, name), tally.percent(getattr(tally, name)) if name in shares else None)
        for name in FIGURES
    )
    return Line(key, label or _("shared between sites"), tally.owed, cells)


def lines(groups: Sequence[Group]) -> tuple[Line, ...]:
    """The rows of the table."""
    return tuple(line(each.key, each.label, each.tally) for each in groups)


def total(groups: Sequence[Group]) -> Tally:
    """All together."""
    summed = Tally()
    for each in groups:
        summed = summed.and_also(each.tally)
    return summed


def figure_word(figure: str) -> str:
    """What a figure is called."""
    return _(FIGURE_WORDS[figure])


def reasons(counts: Mapping[str, int]) -> list[tuple[str, int]]:
    """Why checks were excused, the most frequent first."""
    ordered = sorted(counts.items(), key=lambda pair: (-pair[1], pair[0]))
    return [
        (_("excused by hand, with a reason") if name == "by_hand" else _("the device was %(state)s")
         % {"state": wording.device_state_word(name)}, count)
        for name, count in ordered
    ]  # fmt: skip


def as_csv(groups: Sequence[Group], by: str, period: tuple[dt.date, dt.date], moment: dt.datetime) -> str:
    """The table as comma-separated text (RFC 4180): counts, the share on time, and when it was true."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow([by, "due_from", "due_until", "owed", *FIGURES, "percent_on_time", "as_known_at"])
    days = [each.isoformat() for each in period]
    known_at = moment.astimezone(dt.UTC).isoformat(timespec="seconds")
    for each in groups:
        counts = [getattr(each.tally, name) for name in FIGURES]
        percent = each.tally.percent(each.tally.on_time)
        shown = "" if percent is None else percent
        writer.writerow([harmless(each.label), *days, each.tally.owed, *counts, shown, known_at])
    return out.getvalue()


def harmless(text: str) -> str:
    """The text such that no spreadsheet takes it for a formula."""
    return f"'{text}" if text.startswith(BEGINS_A_FORMULA) else text
