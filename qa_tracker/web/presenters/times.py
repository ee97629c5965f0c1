"""Lines of time of a device: where it was, and which checks it had."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass

from django.utils.safestring import SafeString
from django.utils.translation import gettext as _

from qa_tracker.core.figures import BORDER, INK
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.devices import PlacementRow
from qa_tracker.web.marks import svg_shapes
from qa_tracker.web.presenters.drawing import (
    Label,
    TimeLine,
    labels,
    line,
    mark_at,
    month_words,
    svg,
    year_ticks,
)

WIDTH = 480.0
MONTHS_SHOWN = 24
UNDONE = ("missed", "excused", "void")


def months_before(moment: dt.datetime) -> dt.datetime:
    """The moment the shown stretch begins."""
    return moment - dt.timedelta(days=round(MONTHS_SHOWN * 30.44))


def placements_line(placements: Sequence[PlacementRow], until: dt.datetime) -> SafeString:
    """Where a device was: a stroke for each placement, numbered as in the table."""
    if not placements or until - placements[0].started_at < dt.timedelta(days=1):
        return SafeString("")
    time = TimeLine(placements[0].started_at, until, 6.0, WIDTH - 6)
    strokes, years = year_ticks(time, 6.0, 38.0)
    shapes, words = list(strokes), list(years)
    for number, each in enumerate(placements, start=1):
        left, right = time.x(each.started_at), time.x(each.ended_at or until)
        shapes += [line(left, 16, left, 26, INK, 1.4), line(left, 21, max(right - 2, left + 1), 21, INK, 2.4)]
        words.append(Label(left + 4, 14, str(number), colour=INK))
    label = _("Where the device was, over time; the table has every place")
    return svg(WIDTH, 42, label, (svg_shapes(shapes), labels(words)))


@dataclass(frozen=True)
class Strip:
    """The checks of one procedure as ink marks over the months shown."""

    procedure: str
    figure: SafeString


def strips(checks: Sequence[CheckRow], until: dt.datetime) -> tuple[Strip, ...]:
    """One strip a procedure, marks at the day of each check; a stroke where one was not done."""
    since = months_before(until)
    by_procedure: dict[str, list[tuple[dt.datetime, CheckRow]]] = {}
    for each in checks:
        moment = each.submitted_at or (each.due_at if each.state in UNDONE else None)
        if moment is not None and since <= moment <= until:
            by_procedure.setdefault(each.procedure, []).append((moment, each))
    time = TimeLine(since, until, 8.0, WIDTH - 8)
    ordered = sorted(by_procedure.items())
    return tuple(
        Strip(procedure, _strip(procedure, found, time, dated=number == len(ordered)))
        for number, (procedure, found) in enumerate(ordered, start=1)
    )


def _strip(
    procedure: str, found: Sequence[tuple[dt.datetime, CheckRow]], time: TimeLine, *, dated: bool
) -> SafeString:
    """Marks along a line; only the last of several strips bears the dates they all share."""
    strokes, years = year_ticks(time, 4.0, 36.0 if dated else 26.0)
    shapes = [*strokes, line(4, 15, WIDTH - 4, 15, BORDER, 0.6)]
    marks = []
    for moment, each in found:
        x = time.x(moment)
        if each.submitted_at is None:
            shapes.append(line(x, 8, x, 22, INK, 1.6))
        else:
            marks.append(mark_at(each.verdict, x, 15.0, 11.0))
    first = Label(4, 36, month_words(time.start))
    last = Label(WIDTH - 4, 36, month_words(time.end), "end")
    words = (first, *(each for each in years if 60 < each.x < WIDTH - 90), last)
    label = _("%(procedure)s: %(count)d checks in 24 months; the list has every one") % {
        "procedure": procedure,
        "count": len(found),
    }
    figure = (svg_shapes(shapes), *marks, labels(words if dated else ()))
    return svg(WIDTH, 40 if dated else 28, label, figure)
