"""One chart a series: readings over time with the baseline and the levels they were held to."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from itertools import pairwise

from django.utils.safestring import SafeString
from django.utils.translation import gettext as _

from qa_tracker.core.allowances import allowance
from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled, plain
from qa_tracker.core.figures import BORDER, INK, VERDICT_COLOURS
from qa_tracker.core.shapes import Shape
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.records.queries.series import PointRow
from qa_tracker.services import wording
from qa_tracker.web.marks import svg_shapes
from qa_tracker.web.presenters.drawing import Label, TimeLine, labels, line, mark_at, month_words, svg

WIDTH, HEIGHT = 360.0, 168.0
LEFT, RIGHT, TOP, BOTTOM = 8.0, 262.0, 12.0, 142.0
MARK = 10.0
LABEL_GAP = 12.0
SEVERITY = ("suspension", "remedial", "indeterminate", "conforming", "not_assessable")


@dataclass(frozen=True)
class Line:
    """A level or a baseline: its value between two moments (open ended where None)."""

    role: str
    value: Decimal
    start: dt.datetime | None = None
    end: dt.datetime | None = None


@dataclass(frozen=True)
class Series:
    """What one chart shows."""

    name: str
    where: str
    unit: str
    points: tuple[PointRow, ...]
    lines: tuple[Line, ...]


@dataclass(frozen=True)
class Chart:
    """A series as a figure and as a table, newest reading first."""

    series: Series
    figure: SafeString
    rows: tuple[PointRow, ...]


def lines_of(
    criterion: CriterionRow | None, epochs: Sequence[BaselineRow], newest: PointRow, quantity: str
) -> tuple[Line, ...]:
    """The baseline's epochs and the levels of the limit in force, as far as they have one value."""
    drawn = [Line("baseline", each.value, each.valid_from, each.ended_at) for each in epochs]
    flat = _flat(criterion, quantity)
    if flat is None or flat.basis == "ratio":
        return tuple(drawn)
    if flat.basis == "none":
        return tuple(drawn) + _levels(flat, Decimal(0), None, None)
    if flat.basis == "nominal":
        return tuple(drawn) + (
            _levels(flat, Decimal(newest.reference), None, None) if newest.reference else ()
        )
    for each in epochs:
        drawn += _levels(flat, each.value, each.valid_from, each.ended_at)
    return tuple(drawn)


def _flat(criterion: CriterionRow | None, quantity: str) -> Criterion | None:
    """The criterion without bands, at the condition's frequency; none where there is nothing to draw."""
    if criterion is None or criterion.spec.criterion.grades:
        return None
    of = criterion.spec.criterion
    if not of.bands:
        return of
    return of.at(Decimal(quantity)) if quantity else None


def _levels(
    of: Criterion, origin: Decimal, start: dt.datetime | None, end: dt.datetime | None
) -> tuple[Line, ...]:
    signs = {"above": (1,), "below": (-1,)}.get(of.direction, (-1, 1))
    if of.basis == "none":
        signs = (1,)
    return tuple(
        Line(level, origin + sign * _size(limit, origin), start, end)
        for level, limit in of.levels()
        # What a device's own spread allows is worked out of its set-ups, reading by reading.
        if not limit.of_own_spread
        for sign in signs
    )


def _size(limit: Limit, origin: Decimal) -> Decimal:
    return allowance(limit, origin or None).size


def charts_of(
    points: Mapping[SeriesKey, Sequence[PointRow]],
    names: Mapping[SeriesKey, tuple[str, str]],
    lines: Mapping[SeriesKey, tuple[Line, ...]],
    until: dt.datetime,
) -> tuple[Chart, ...]:
    """A chart for every series, by the names of their measurands."""
    found = [_series(names[key], rows, lines.get(key, ())) for key, rows in points.items() if key in names]
    ordered = sorted(found, key=_worst_first)
    return tuple(Chart(each, drawn(each, until), each.points[::-1]) for each in ordered)


def _series(name: tuple[str, str], rows: Sequence[PointRow], lines: tuple[Line, ...]) -> Series:
    found = Series(*name, rows[-1].unit, tuple(rows), lines)
    return replace(found, lines=_possible(found))


def _worst_first(series: Series) -> tuple[int, bool, str, str]:
    """By the newest verdict, then those that moved, then by name."""
    newest = series.points[-1].verdict
    rank = SEVERITY.index(newest) if newest in SEVERITY else len(SEVERITY)
    moved = len({value_of(each) for each in series.points}) > 1
    return rank, not moved, series.name, series.where


def drawn(series: Series, until: dt.datetime) -> SafeString:
    """Draw a series: levels and baseline first, a thread through the readings, their marks on top."""
    time = TimeLine(_start(series, until), until, LEFT + MARK, RIGHT - MARK)
    low, high = _range(series)

    def y(value: Decimal) -> float:
        share = (value - low) / (high - low)
        return round(BOTTOM - float(share) * (BOTTOM - TOP), 2)

    spots = [(time.x(each.measured_at), y(value_of(each)), each) for each in series.points]
    shapes = [line(LEFT, BOTTOM + 8, RIGHT, BOTTOM + 8, BORDER, 0.75)]
    shapes += [stroke for each in series.lines for stroke in _strokes(each, time, y(each.value))]
    shapes += [line(ax, ay, bx, by, BORDER, 0.6) for (ax, ay, _a), (bx, by, _b) in pairwise(spots)]
    marks = [mark_at(each.verdict, x, at, MARK) for x, at, each in spots]
    words = (*_ends(time), *_beside(series, y))
    return svg(WIDTH, HEIGHT, label_of(series), (svg_shapes(shapes), *marks, labels(words)))


def _possible(series: Series) -> tuple[Line, ...]:
    """The lines readings can come near: no level below zero for what is never negative."""
    if any(value_of(each) < 0 for each in series.points):
        return series.lines
    return tuple(each for each in series.lines if each.value >= 0)


def value_of(point: PointRow) -> Decimal:
    """The number read."""
    return from_scaled(point.scaled or 0, point.places or 0)


def label_of(series: Series) -> str:
    """What the figure shows, in words; the table below has every value."""
    return _("%(name)s over time: %(count)d readings, the newest %(value)s") % {
        "name": ", ".join(part for part in (series.name, series.where) if part),
        "count": len(series.points),
        "value": amount_words(series.points[-1].entered, series.unit),
    }


def amount_words(entered: str, unit: str) -> str:
    """A number with its unit's symbol."""
    symbol = wording.unit_symbol(unit) if unit not in ("", "1") else ""
    return f"{entered}\N{NO-BREAK SPACE}{symbol}" if symbol else entered


def _start(series: Series, until: dt.datetime) -> dt.datetime:
    """The first reading, but at least two months back, so that a single one is not a whole history."""
    return min(series.points[0].measured_at, until - dt.timedelta(days=61))


def _range(series: Series) -> tuple[Decimal, Decimal]:
    """The values from lowest to highest with some air; one value alone gets room on both sides."""
    values = [value_of(each) for each in series.points] + [each.value for each in series.lines]
    low, high = min(values), max(values)
    air = (high - low) * Decimal("0.06") or abs(high) * Decimal("0.1") or Decimal(1)
    return low - air, high + air


def _strokes(each: Line, time: TimeLine, y: float) -> tuple[Shape, ...]:
    """A baseline as a stroke of ink, a remedial level as one of its colour, a suspension level as two."""
    left = time.x(each.start) if each.start else LEFT
    right = time.x(each.end) if each.end else RIGHT
    if each.role == "baseline":
        return (line(left, y, right, y, INK, 1.0),)
    colour = VERDICT_COLOURS[each.role]
    if each.role == "remedial":
        return (line(left, y, right, y, colour, 1.0),)
    return (
        line(left, y - 1.2, right, y - 1.2, colour, 0.9),
        line(left, y + 1.2, right, y + 1.2, colour, 0.9),
    )


def _ends(time: TimeLine) -> tuple[Label, ...]:
    return (
        Label(LEFT, HEIGHT - 4, month_words(time.start)),
        Label(RIGHT, HEIGHT - 4, month_words(time.end), "end"),
    )


def _beside(series: Series, y: Callable[[Decimal], float]) -> tuple[Label, ...]:
    """The names and values of the lines that are in force now, kept apart where they lie close."""
    present = [each for each in series.lines if each.end is None]
    ordered = sorted(present, key=lambda each: -each.value)
    found: list[Label] = []
    for each in ordered:
        wanted = y(each.value) + 3.5
        at = max(wanted, found[-1].y + LABEL_GAP) if found else wanted
        colour = INK if each.role == "baseline" else VERDICT_COLOURS[each.role]
        found.append(Label(RIGHT + 5, at, _beside_words(each), colour=colour))
    return tuple(found)


def _beside_words(each: Line) -> str:
    name = _("baseline") if each.role == "baseline" else wording.verdict_word(each.role)
    return f"{plain(each.value, strip=True)} {name}"
