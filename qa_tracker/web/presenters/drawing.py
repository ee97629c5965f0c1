"""Ink on a line of time: moments as positions, marks of verdicts, and words beside them, as SVG."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from django.utils.formats import date_format
from django.utils.html import format_html, format_html_join
from django.utils.safestring import SafeString

from qa_tracker.core.figures import BORDER, INK, RULE
from qa_tracker.core.shapes import Shape, verdict_mark
from qa_tracker.web.marks import svg_shapes


@dataclass(frozen=True)
class TimeLine:
    """A stretch of time laid along a width."""

    start: dt.datetime
    end: dt.datetime
    left: float
    right: float

    def x(self, moment: dt.datetime) -> float:
        """Where a moment lies; what lies outside comes to the nearer end."""
        whole = (self.end - self.start).total_seconds() or 1.0
        share = (moment - self.start).total_seconds() / whole
        return round(self.left + min(max(share, 0.0), 1.0) * (self.right - self.left), 2)

    def years(self) -> Iterable[tuple[float, int]]:
        """Each New Year inside, with its year."""
        for year in range(self.start.year + 1, self.end.year + 1):
            yield self.x(dt.datetime(year, 1, 1, tzinfo=dt.UTC)), year


@dataclass(frozen=True)
class Label:
    """Words at a place; ``anchor`` as SVG has it."""

    x: float
    y: float
    words: str
    anchor: str = "start"
    colour: str = BORDER


def line(x1: float, y1: float, x2: float, y2: float, colour: str = INK, width: float = 1.0) -> Shape:
    """One straight stroke."""
    return Shape((("M", (x1, y1)), ("L", (x2, y2))), "scale", stroke=colour, stroke_width=width)


def mark_at(verdict: str, x: float, y: float, size: float) -> SafeString:
    """The mark of a verdict around a point; without a verdict a small dot of ink."""
    if not verdict:
        return format_html('<circle cx="{}" cy="{}" r="{}" fill="{}"/>', x, y, size * 0.22, BORDER)
    return format_html(
        '<g transform="translate({} {})">{}</g>',
        round(x - size / 2, 2),
        round(y - size / 2, 2),
        svg_shapes(verdict_mark(verdict), size),
    )


def labels(words: Iterable[Label]) -> SafeString:
    """Words as SVG text."""
    return format_html_join(
        "",
        '<text x="{}" y="{}" text-anchor="{}" fill="{}" font-size="10">{}</text>',
        ((each.x, each.y, each.anchor, each.colour, each.words) for each in words),
    )


def svg(width: float, height: float, label: str, parts: Sequence[SafeString]) -> SafeString:
    """A figure with a label for those who can't see it."""
    return format_html(
        '<svg class="figure" viewBox="0 0 {0} {1}" role="img" aria-label="{2}">{3}</svg>',
        f"{width:g}",
        f"{height:g}",
        label,
        format_html_join("", "{}", ((part,) for part in parts)),
    )


def year_ticks(time: TimeLine, top: float, bottom: float) -> tuple[tuple[Shape, ...], tuple[Label, ...]]:
    """A faint stroke and the year at each New Year."""
    found = tuple(time.years())
    strokes = tuple(line(x, top, x, bottom, RULE) for x, _year in found)
    return strokes, tuple(Label(x + 3, bottom, str(year)) for x, year in found)


def month_words(moment: dt.datetime) -> str:
    """A month as a label."""
    return date_format(moment, "M Y")
