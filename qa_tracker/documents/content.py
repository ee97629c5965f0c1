"""What a device dossier says, frozen before it is drawn; every field is text as it is to be read.

Moments are ISO 8601 with an offset ("2026-03-14T09:31:00+00:00"), days are ISO dates, amounts are decimal
strings as entered. There are no floats, so the bytes are the same wherever they are written.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from decimal import Decimal

from qa_tracker.core.figures import Judged

SCHEMA = "leadline/device-dossier/1"


@dataclass(frozen=True)
class Row:
    """One labelled fact, in the reader's language."""

    label: str
    value: str


@dataclass(frozen=True)
class Placement:
    """Where the device was, or which scanner held the probe; no end means now."""

    place: str
    from_on: str
    until_on: str = ""
    reason: str = ""


@dataclass(frozen=True)
class Aperture:
    """One radiating face of a probe; ``facts`` says elements, pitch and the like."""

    name: str
    facts: str = ""


@dataclass(frozen=True)
class SoftwareVersion:
    """What ran from a day on, with its options."""

    version: str
    from_on: str
    options: str = ""
    note: str = ""


@dataclass(frozen=True)
class Plan:
    """A procedure owed by the device, and what is due next; ``due`` is the state in words."""

    procedure: str
    recurrence: str
    who: str
    due_on: str = ""
    due: str = ""


@dataclass(frozen=True)
class Line:
    """The numbers behind an allowance line, as in ``core.figures.Judged``; empty text where unknown."""

    origin: str = ""
    value: str = ""
    remedial: str = ""
    suspension: str = ""
    direction: str = "either"
    strict: bool = True
    qualifier: str = "="
    ranks: bool = False

    def judged(self) -> Judged:
        """Give the numbers to draw."""
        return Judged(
            _amount(self.origin),
            _amount(self.value),
            _amount(self.remedial),
            _amount(self.suspension),
            direction=self.direction,
            strict=self.strict,
            qualifier=self.qualifier,
            ranks=self.ranks,
        )


def _amount(text: str) -> Decimal | None:
    return Decimal(text) if text else None


@dataclass(frozen=True)
class Criterion:
    """The limit a reading was judged by, with where it comes from; ``standing`` in the reader's words."""

    identifier: str
    edition: str
    words: str
    source: str
    standing: str


@dataclass(frozen=True)
class Reading:
    """One reading with its verdict (empty: no limit judges it); ``value`` and ``qualifier`` exactly as entered.

    ``further`` holds the other limits that judged it, beside the one that decided.
    """

    label: str
    value: str
    verdict: str
    sentence: str
    unit: str = ""
    qualifier: str = "="
    condition: str = ""
    aperture: str = ""
    origin: str = ""
    line: Line = field(default_factory=Line)
    criterion: Criterion | None = None
    further: tuple[Criterion, ...] = ()


@dataclass(frozen=True)
class Untested:
    """An item that could not be tested, and why."""

    item: str
    reason: str


@dataclass(frozen=True)
class Signature:
    """Who signed, as what, when and with which meaning; ``note`` is a reason or a lapsed competence."""

    name: str
    role: str
    at: str
    meaning: str
    note: str = ""


@dataclass(frozen=True)
class Check:
    """One check as submitted; a check that was missed or excused has a state and no readings."""

    procedure: str
    edition: str
    state: str
    due_on: str = ""
    measured_at: str = ""
    recorded_at: str = ""
    performer: str = ""
    place: str = ""
    verdict: str = ""
    sentence: str = ""
    facts: tuple[Row, ...] = ()
    readings: tuple[Reading, ...] = ()
    untested: tuple[Untested, ...] = ()
    signatures: tuple[Signature, ...] = ()
    leaf: str = ""


@dataclass(frozen=True)
class Action:
    """What was done about a fault."""

    at: str
    what: str
    who: str = ""


@dataclass(frozen=True)
class Fault:
    """A departure with its actions; ``proof`` names the proving check and its verdict."""

    title: str
    grade: str
    opened_at: str
    state: str
    closed_at: str = ""
    seen: str = ""
    downtime: str = ""
    look_back: str = ""
    proof: str = ""
    actions: tuple[Action, ...] = ()
    signatures: tuple[Signature, ...] = ()


@dataclass(frozen=True)
class Baseline:
    """One epoch of a baseline: value, the key it holds for, and why it was set."""

    measurand: str
    value: str
    unit: str
    epoch: str
    from_on: str
    reason: str
    key: str = ""
    until_on: str = ""
    set_by: str = ""


@dataclass(frozen=True)
class Person:
    """Somebody named in the document; ``competence`` says for what and until when."""

    name: str
    role: str
    competence: str = ""


@dataclass(frozen=True)
class LedgerState:
    """The log the records stand in when the content was frozen; the root in hexadecimal."""

    origin: str
    size: str
    root: str
    first_leaf: str = ""
    last_leaf: str = ""


@dataclass(frozen=True)
class DeviceDossier:
    """Everything one dossier says; ``labels`` holds the document's own words (see ``labels.ENGLISH``)."""

    uid: str
    title: str
    group: str
    site: str
    device: str
    state: str
    frozen_at: str
    as_of: str
    period: str
    ledger: LedgerState
    labels: Mapping[str, str]
    language: str = "en"
    demo_key: bool = False
    identity: tuple[Row, ...] = ()
    placements: tuple[Placement, ...] = ()
    apertures: tuple[Aperture, ...] = ()
    software: tuple[SoftwareVersion, ...] = ()
    plans: tuple[Plan, ...] = ()
    checks: tuple[Check, ...] = ()
    faults: tuple[Fault, ...] = ()
    baselines: tuple[Baseline, ...] = ()
    cautions: tuple[str, ...] = ()
    people: tuple[Person, ...] = ()
    schema: str = SCHEMA
