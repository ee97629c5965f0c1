"""The first page: whose record this is, how to read it, and the checks along time in ink marks."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from datetime import date

from qa_tracker.core.figures import (
    BORDER,
    INK,
    TEAL,
    VERDICT_COLOURS,
    Shape,
    allowance_line,
    allowance_shapes,
    polygon,
)
from qa_tracker.documents.canvas import BODY, COLUMN, DISPLAY, LEFT, RIGHT, SMALL, Cell, Flow, Style
from qa_tracker.documents.content import Check, DeviceDossier, Line, Row
from qa_tracker.documents.fonts import BOLD
from qa_tracker.documents.marks import GAP, MARK, draw_mark, verdict_width, word_style
from qa_tracker.documents.text import moment_text, printable

GROUP = Style(10, 14, BOLD, TEAL)
HALF = COLUMN / 2 - 8
LONG_NAME = 90
LANE = 9.0
MOST_LANES = 6


def draw_opening(flow: Flow, content: DeviceDossier) -> None:
    """Set the head of the document down to the facts of the device."""
    _leadline(flow)
    flow.bookmark(printable(content.title), 0)
    flow.write(printable(content.group), GROUP, width=COLUMN - 40)
    flow.space(22)
    flow.write(printable(content.title), Style(11, 15, colour=BORDER))
    flow.space(2)
    name = printable(content.device)
    flow.write(name, DISPLAY if len(name) <= LONG_NAME else Style(12, 16, BOLD))
    flow.space(10)
    labels = content.labels
    about = (
        Row(labels["state"], content.state),
        Row(labels["site"], content.site),
        Row(labels["period"], content.period),
        Row(labels["as_of"], moment_text(content.as_of)),
    )
    draw_facts(flow, (*about, *content.identity))


def _leadline(flow: Flow) -> None:
    """Draw a line across with a bob hanging from it: the document's own sign."""
    flow.rule(TEAL, 0.9)
    x, y = RIGHT - 18, flow.y
    thread = Shape((("M", (0.0, 0.0)), ("L", (0.0, 26.0))), "plumb", stroke=TEAL, stroke_width=0.9)
    bob = polygon(((-3.2, 26.0), (3.2, 26.0), (3.2, 30.5), (0.0, 38.0), (-3.2, 30.5)), "plumb", TEAL)
    flow.draw((thread, bob), x, y)
    flow.y -= 8


def draw_facts(flow: Flow, rows: Sequence[Row]) -> None:
    """Set labelled facts in two columns, the label small above its value."""
    for pair in (rows[index : index + 2] for index in range(0, len(rows), 2)):
        flow.need(SMALL.leading + BODY.leading)
        places = (LEFT, LEFT + HALF + 16)
        flow.row([Cell(printable(row.label), x, HALF, SMALL) for row, x in zip(pair, places, strict=False)])
        flow.row([Cell(printable(row.value), x, HALF, BODY) for row, x in zip(pair, places, strict=False)])
        flow.space(5)


def draw_legend(flow: Flow, content: DeviceDossier) -> None:
    """Explain marks and allowance line by showing them."""
    labels = content.labels
    x = LEFT
    flow.need(60)
    for verdict in VERDICT_COLOURS:
        style = word_style(verdict, 8.6, 12.5)
        width = verdict_width(verdict, labels, style)
        if x + width > RIGHT and x > LEFT:
            flow.y -= style.leading
            x = LEFT
        draw_mark(flow, verdict, x, flow.y - 2)
        flow.page.texts.append((x + MARK + GAP, flow.y - 8.6, style, printable(labels[verdict])))
        x += width + 16
    flow.y -= 20
    sample = allowance_line(Line("100", "102.4", "2", "4").judged())
    flow.draw(allowance_shapes(sample, 120, 14), LEFT, flow.y - 3)
    flow.write(printable(labels["line_explained"]), SMALL, LEFT + 140, COLUMN - 140)


def spans_days(checks: Iterable[Check]) -> bool:
    """Whether there is a line of time to draw: checks on two days at least."""
    return len({day for check in checks for day in _days(check)}) > 1


def draw_timeline(flow: Flow, checks: Iterable[Check], explained: str) -> None:
    """Set every check as its mark along a line of time, left to right; one without a verdict as a stroke."""
    dated = sorted((day, check.verdict) for check in checks for day in _days(check))
    first, last = dated[0][0], dated[-1][0]
    scale = (COLUMN - 2 * MARK) / (last - first)
    lanes = _lanes([LEFT + MARK + (day - first) * scale for day, _ in dated])
    depth = LANE * (max(lane for _, lane in lanes) + 1)
    flow.need(depth + 26)
    axis = flow.y - depth - 5
    for (x, lane), (_, verdict) in zip(lanes, dated, strict=True):
        _event(flow, verdict, x, axis + 3 + lane * LANE)
    flow.y = axis
    flow.rule(BORDER, 0.6)
    _years(flow, first, last, scale)
    flow.y -= 15
    if not all(verdict for _, verdict in dated):
        flow.write(printable(explained), SMALL)


def _days(check: Check) -> tuple[int, ...]:
    """Give the day a check stands on as a number, nothing where it has none."""
    text = check.measured_at[:10] or check.due_on
    return (date.fromisoformat(text).toordinal(),) if text else ()


def _lanes(places: Sequence[float]) -> list[tuple[float, int]]:
    """Lift a mark that would cover its neighbour; where all lanes are full, marks do overlap."""
    free = [float("-inf")] * MOST_LANES
    placed = []
    for x in places:
        lane = next((number for number, until in enumerate(free) if until <= x), MOST_LANES - 1)
        free[lane] = x + LANE
        placed.append((x, lane))
    return placed


def _event(flow: Flow, verdict: str, x: float, foot: float) -> None:
    if verdict:
        draw_mark(flow, verdict, x - MARK / 2, foot + MARK)
        return
    stroke = Shape((("M", (0.0, 0.0)), ("L", (0.0, MARK))), "mark", stroke=BORDER, stroke_width=1.1)
    flow.draw((stroke,), x, foot + MARK)


def _years(flow: Flow, first: int, last: int, scale: float) -> None:
    """Tick the first day of each year, and name the first and the last day."""
    begin, end = date.fromordinal(first), date.fromordinal(last)
    for year in range(begin.year + 1, end.year + 1):
        x = LEFT + MARK + (date(year, 1, 1).toordinal() - first) * scale
        tick = Shape((("M", (0.0, -3.0)), ("L", (0.0, 3.0))), "scale", stroke=INK, stroke_width=0.7)
        flow.draw((tick,), x, flow.y)
        if LEFT + 60 < x < RIGHT - 80:
            flow.page.texts.append((x - 8, flow.y - 11, SMALL, str(year)))
    flow.page.texts.append((LEFT, flow.y - 11, SMALL, begin.isoformat()))
    flow.page.texts.append((RIGHT - 42, flow.y - 11, SMALL, end.isoformat()))
