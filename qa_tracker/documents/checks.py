"""The part of a dossier that shows checks: heading, readings with their allowance lines, signatures."""

from __future__ import annotations

from collections.abc import Mapping

from qa_tracker.core.figures import RULE, allowance_line, allowance_shapes, share_text
from qa_tracker.documents.canvas import BODY, COLUMN, HEADING, LEFT, RIGHT, SMALL, Cell, Flow, Style
from qa_tracker.documents.content import Check, Line, Reading, Signature
from qa_tracker.documents.fonts import BOLD
from qa_tracker.documents.marks import verdict_cell
from qa_tracker.documents.text import joined, moment_text, printable, shortened

Labels = Mapping[str, str]
LABEL_WIDTH, VALUE_WIDTH, LINE_WIDTH, SHARE_WIDTH = 158.0, 74.0, 104.0, 40.0
VALUE_X = LEFT + LABEL_WIDTH + 6
LINE_X = VALUE_X + VALUE_WIDTH + 10
SHARE_X = LINE_X + LINE_WIDTH + 4
VERDICT_X = SHARE_X + SHARE_WIDTH + 8
LINE_HEIGHT = 13.0
FIGURE = Style(9, 12.5, BOLD)
NOTE = Style(8.2, 11)
INDENT = 12.0
MOST_VALUE_LINES = 2
READING_HEIGHT = BODY.leading + 11 + SMALL.leading + 8
KEPT_TOGETHER = 86.0


def draw_check(flow: Flow, check: Check, labels: Labels) -> None:
    """Set one check; its heading never stands alone at the foot of a page."""
    flow.need(KEPT_TOGETHER)
    named = f"{check.measured_at[:10] or check.due_on} {check.procedure}"
    flow.bookmark(printable(named), 1)
    _heading(flow, check, labels)
    flow.write(printable(check.sentence))
    flow.write(joined(f"{fact.label}: {fact.value}" for fact in check.facts), SMALL)
    flow.space(3)
    flow.carried = shortened(f"{named}, {labels['continued']}", SMALL.font, SMALL.size, COLUMN)
    for reading in check.readings:
        draw_reading(flow, reading, labels)
    _untested(flow, check, labels)
    _signed(flow, check, labels)
    flow.carried = ""
    flow.space(20)


def _heading(flow: Flow, check: Check, labels: Labels) -> None:
    edition = f"{labels['edition']} {check.edition}" if check.edition else ""
    title = joined((check.procedure, edition), separator=", ")
    width = VERDICT_X - LEFT - 10
    cells = [Cell(title, LEFT, width, HEADING)]
    if check.verdict:
        cells.append(verdict_cell(flow, check.verdict, labels, VERDICT_X, RIGHT - VERDICT_X, HEADING.leading))
    else:
        cells.append(Cell(printable(check.state), VERDICT_X, RIGHT - VERDICT_X, HEADING))
    flow.row(cells)
    flow.write(joined(_circumstances(check, labels)), SMALL)


def _circumstances(check: Check, labels: Labels) -> tuple[str, ...]:
    """Say when, who and where; the moment of recording only where it is another than that of measuring."""
    measured, recorded = moment_text(check.measured_at), moment_text(check.recorded_at)
    pairs = (
        ("due", check.due_on),
        ("measured", measured),
        ("recorded", recorded if recorded != measured else ""),
        ("performed_by", check.performer),
        ("", check.place),
        ("", check.state if check.verdict else ""),
        ("leaf", check.leaf),
    )
    return tuple(f"{labels[label]} {value}" if label else value for label, value in pairs if value)


def draw_reading(flow: Flow, reading: Reading, labels: Labels) -> None:
    """Set one reading: name, value, allowance line, share, verdict; below it what that rests on."""
    name = Cell(printable(reading.label), LEFT, LABEL_WIDTH)
    text = value_text(reading, labels)
    value = Cell(text, VALUE_X, VALUE_WIDTH, FIGURE, to_right=True)
    long = len(value.lines()) > MOST_VALUE_LINES
    flow.need(READING_HEIGHT)
    if not flow.at_top:
        flow.rule(RULE, 0.4)
    flow.space(3)
    share = draw_line(flow, reading.line)
    share_cell = Cell(share, SHARE_X, SHARE_WIDTH, BODY, to_right=True)
    verdict = verdict_cell(flow, reading.verdict, labels, VERDICT_X, RIGHT - VERDICT_X)
    flow.row((name, share_cell, verdict) if long else (name, value, share_cell, verdict))
    if long:
        flow.write(text, BODY)
    flow.write(printable(reading.sentence), NOTE)
    flow.write(_basis(reading, labels), SMALL)
    flow.space(4)


def draw_line(flow: Flow, line: Line) -> str:
    """Draw the allowance line for the row about to be set, and give its share as a figure."""
    if not line.value and not line.remedial and not line.suspension:
        return ""
    placed = allowance_line(line.judged())
    top = flow.y - BODY.leading / 2 + LINE_HEIGHT / 2 + 0.6
    flow.draw(allowance_shapes(placed, LINE_WIDTH, LINE_HEIGHT), LINE_X, top)
    return share_text(placed)


def value_text(reading: Reading, labels: Labels) -> str:
    """Write the value as entered, with its qualifier and unit."""
    if reading.qualifier == "not_seen":
        return printable(labels["not_seen"])
    if not reading.value:
        return printable(labels["no_reading"])
    qualifier = "" if reading.qualifier == "=" else reading.qualifier
    return printable(f"{qualifier} {reading.value} {reading.unit}")


def _basis(reading: Reading, labels: Labels) -> str:
    criterion = reading.criterion
    cited = (
        ""
        if criterion is None
        else f"{criterion.identifier}, {labels['edition']} {criterion.edition}: {criterion.standing}"
    )
    return joined((reading.condition, reading.aperture, reading.origin, cited))


def _untested(flow: Flow, check: Check, labels: Labels) -> None:
    if not check.untested:
        return
    flow.need(2 * BODY.leading)
    flow.rule(RULE, 0.4)
    flow.space(3)
    flow.write(printable(labels["could_not_test"]), Style(9, 12.5, BOLD))
    for item in check.untested:
        flow.write(joined((item.item, item.reason), separator=": "), BODY, LEFT + INDENT, COLUMN - INDENT)
    flow.space(4)


def _signed(flow: Flow, check: Check, labels: Labels) -> None:
    if check.readings and not check.signatures:
        flow.write(printable(labels["unsigned"]), SMALL)
    draw_signatures(flow, check.signatures)


def draw_signatures(flow: Flow, signatures: tuple[Signature, ...]) -> None:
    """Set who signed, as what, when and meaning what, one line each behind a short rule."""
    if not signatures:
        return
    flow.need(min(BODY.leading * len(signatures) + 8, KEPT_TOGETHER))
    flow.rule(RULE, 0.4)
    flow.space(3)
    for signature in signatures:
        who = joined((signature.name, signature.role), separator=", ")
        rest = joined((moment_text(signature.at), signature.note))
        flow.need(BODY.leading)
        flow.row(
            (
                Cell(printable(signature.meaning), LEFT, 96, SMALL),
                Cell(who, LEFT + 102, 176, BODY),
                Cell(rest, LEFT + 284, COLUMN - 284, SMALL),
            )
        )
