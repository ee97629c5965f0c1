"""The chapters of a dossier around its checks: where the device was, what is due, faults, baselines, ledger."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from qa_tracker.core.figures import RULE
from qa_tracker.documents.canvas import BODY, COLUMN, HEADING, LEFT, SECTION, SMALL, Cell, Flow
from qa_tracker.documents.checks import draw_check, draw_signatures
from qa_tracker.documents.content import Baseline, Criterion, DeviceDossier, Fault, LedgerState, Row
from qa_tracker.documents.opening import draw_facts, draw_legend, draw_opening, draw_timeline, spans_days
from qa_tracker.documents.text import joined, moment_text, printable

WIDE = 200.0


def chapter(flow: Flow, title: str) -> None:
    """Begin a chapter: a hairline, its title, a bookmark."""
    flow.space(14)
    flow.need(90)
    if not flow.at_top:
        flow.rule()
    flow.space(4)
    flow.bookmark(printable(title), 0)
    flow.write(printable(title), SECTION)
    flow.space(4)


def draw_front(flow: Flow, content: DeviceDossier) -> None:
    """Set everything that stands before the checks."""
    labels = content.labels
    draw_opening(flow, content)
    chapter(flow, labels["how_to_read"])
    draw_legend(flow, content)
    if content.cautions:
        chapter(flow, labels["cautions"])
        for caution in content.cautions:
            flow.write(printable(caution))
    if spans_days(content.checks):
        chapter(flow, labels["over_time"])
        draw_timeline(flow, content.checks, labels["stroke_explained"])
    _register(flow, content)


def _register(flow: Flow, content: DeviceDossier) -> None:
    labels = content.labels
    now = labels["now"]
    _list(
        flow,
        labels["placements"],
        ((_days(p.from_on, p.until_on, now), p.place, p.reason) for p in content.placements),
    )
    _list(flow, labels["apertures"], ((a.name, a.facts, "") for a in content.apertures))
    _list(
        flow,
        labels["software"],
        ((s.from_on, s.version, joined_plain(s.options, s.note)) for s in content.software),
    )
    due = labels["due"]
    _list(
        flow,
        labels["plans"],
        (
            (p.due or f"{due} {p.due_on}", p.procedure, joined_plain(p.recurrence, p.who))
            for p in content.plans
        ),
    )


def joined_plain(*parts: str) -> str:
    """Join what is there with commas."""
    return ", ".join(part for part in parts if part)


def _days(start: str, end: str, now: str) -> str:
    return f"{start} – {end or now}"


def _list(flow: Flow, title: str, rows: Iterable[tuple[str, str, str]]) -> None:
    """Set rows of three columns under a chapter title; nothing at all where there are none."""
    found = tuple(rows)
    if not found:
        return
    chapter(flow, title)
    for first, second, third in found:
        flow.need(BODY.leading)
        flow.row(
            (
                Cell(printable(first), LEFT, 136, SMALL),
                Cell(printable(second), LEFT + 144, 176, BODY),
                Cell(printable(third), LEFT + 328, COLUMN - 328, SMALL),
            )
        )
        flow.space(3)


def draw_checks(flow: Flow, content: DeviceDossier) -> None:
    """Set the checks in the order given."""
    chapter(flow, content.labels["checks"])
    if not content.checks:
        flow.write(printable(content.labels["no_checks"]))
    for check in content.checks:
        draw_check(flow, check, content.labels)


def draw_back(flow: Flow, content: DeviceDossier) -> None:
    """Set everything that stands after the checks."""
    labels = content.labels
    chapter(flow, labels["faults"])
    if not content.faults:
        flow.write(printable(labels["no_faults"]))
    for fault in content.faults:
        _fault(flow, fault, content)
    if content.baselines:
        chapter(flow, labels["baselines"])
        for baseline in content.baselines:
            _baseline(flow, baseline, content)
    _criteria(flow, content)
    _list(flow, labels["people"], ((p.role, p.name, p.competence) for p in content.people))
    _ledger(flow, content.ledger, content)


def _fault(flow: Flow, fault: Fault, content: DeviceDossier) -> None:
    labels = content.labels
    flow.need(70)
    flow.bookmark(printable(f"{fault.opened_at[:10]} {fault.title}"), 1)
    flow.write(printable(fault.title), HEADING)
    closed = f"{labels['closed']} {moment_text(fault.closed_at)}" if fault.closed_at else ""
    opened = f"{labels['opened']} {moment_text(fault.opened_at)}"
    flow.write(joined((f"{labels['grade']} {fault.grade}", fault.state, opened, closed)), SMALL)
    flow.space(3)
    pairs = (
        ("seen", fault.seen),
        ("downtime", fault.downtime),
        ("look_back", fault.look_back),
        ("proof", fault.proof),
    )
    for label, text in pairs:
        if text:
            _labelled(flow, labels[label], text)
    for number, action in enumerate(fault.actions):
        text = joined((moment_text(action.at), action.what, action.who))
        _labelled(flow, labels["actions"] if not number else "", text, ready=True)
    flow.space(4)
    draw_signatures(flow, fault.signatures)
    flow.space(14)


def _labelled(flow: Flow, label: str, text: str, ready: bool = False) -> None:
    """Set a label in the margin of its text; ``ready`` says the text is printable as it is."""
    flow.need(BODY.leading)
    body = text if ready else printable(text)
    flow.row((Cell(printable(label), LEFT, 96, SMALL), Cell(body, LEFT + 102, COLUMN - 102, BODY)))


def _baseline(flow: Flow, baseline: Baseline, content: DeviceDossier) -> None:
    labels = content.labels
    flow.need(3 * BODY.leading + 8)
    flow.rule(RULE, 0.4)
    flow.space(3)
    title = joined_plain(baseline.measurand, f"{labels['epoch']} {baseline.epoch}")
    value = printable(f"{baseline.value} {baseline.unit}")
    period = printable(_days(baseline.from_on, baseline.until_on, labels["now"]))
    flow.row(
        (
            Cell(printable(title), LEFT, WIDE, BODY),
            Cell(value, LEFT + WIDE + 8, 100, BODY, to_right=True),
            Cell(period, LEFT + WIDE + 124, COLUMN - WIDE - 124, BODY),
        )
    )
    setter = f"{labels['set_by']} {baseline.set_by}" if baseline.set_by else ""
    flow.write(joined((baseline.reason, setter)), SMALL)
    flow.write(printable(baseline.key), SMALL)
    flow.space(4)


def used_criteria(content: DeviceDossier) -> tuple[Criterion, ...]:
    """Give every criterion a reading was judged by, once, by identifier and edition."""
    readings = [reading for check in content.checks for reading in check.readings]
    decided = {reading.criterion for reading in readings if reading.criterion is not None}
    found = decided | {criterion for reading in readings for criterion in reading.further}
    return tuple(sorted(found, key=lambda c: (c.identifier, c.edition, c.words, c.source, c.standing)))


def _criteria(flow: Flow, content: DeviceDossier) -> None:
    labels = content.labels
    criteria = used_criteria(content)
    if not criteria:
        return
    chapter(flow, labels["criteria"])
    for criterion in criteria:
        flow.need(3 * BODY.leading)
        name = f"{criterion.identifier}, {labels['edition']} {criterion.edition}"
        _labelled(flow, name, criterion.words)
        cited = (f"{labels['source']}: {criterion.source}", f"{labels['standing']}: {criterion.standing}")
        flow.write(joined(cited), SMALL, LEFT + 102, COLUMN - 102)
        flow.space(4)


def _ledger(flow: Flow, ledger: LedgerState, content: DeviceDossier) -> None:
    labels = content.labels
    chapter(flow, labels["ledger"])
    cited = f"{ledger.first_leaf} – {ledger.last_leaf}" if ledger.first_leaf else ""
    rows: Sequence[Row] = (
        Row(labels["ledger_origin"], ledger.origin),
        Row(labels["ledger_size"], ledger.size),
        Row(labels["ledger_range"], cited),
        Row(labels["frozen_at"], moment_text(content.frozen_at)),
        Row(labels["document"], content.uid),
    )
    draw_facts(flow, tuple(row for row in rows if row.value))
    flow.write(printable(labels["ledger_root"]), SMALL)
    flow.write(printable(ledger.root))
    flow.space(5)
    flow.write(printable(labels["ledger_explained"]), SMALL)
