"""A check laid out for entering: its items, what is worked out from them, and what it is measured with."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass, field

from qa_tracker.records.models import Check, Device, Instrument, TestObject
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.services import recording
from qa_tracker.services.deriving import attributes_of
from qa_tracker.services.items import Item, items_of, measured, surroundings
from qa_tracker.services.judging import Asked, Instructions
from qa_tracker.services.weighing import measured_with


@dataclass(frozen=True)
class Sheet:
    """A check ready to be entered: its edition, its items, and what it is measured with."""

    check: Check
    edition: EditionRow
    items: tuple[Item, ...]
    derived: tuple[Item, ...]
    test_object: TestObject | None
    instrument: Instrument | None
    console: Device | None
    console_software: str
    instructions: Instructions
    measured_on: dt.date
    attributes: Mapping[str, Mapping[str, object]] = field(default_factory=dict)

    @property
    def asked(self) -> Asked:
        """What is asked, and under what it is judged."""
        with_it = measured_with(self.console, self.console_software, self.test_object, self.measured_on)
        return Asked(self.items, self.derived, self.attributes, self.instructions, with_it)


def lay_out(
    check: Check,
    edition: EditionRow,
    test_object: TestObject | None,
    instrument: Instrument | None,
    measured_at: dt.datetime,
) -> Sheet:
    """The sheet of a check."""
    device = check.device
    console = device if device.kind == "scanner" or device.handheld else device.scanner
    facts = getattr(console, "scanner_facts", None) if console else None
    nominals = nominals_of(test_object)
    object_id = test_object.id if test_object else None
    items = items_of(surroundings(measured(device), edition, check.site_id, nominals, object_id))
    site = check.site
    words = Instructions(site.remedial_instruction, site.suspension_instruction) if site else Instructions()
    return Sheet(
        check,
        edition,
        tuple(item for item in items if item.spec.kind != "derived"),
        tuple(item for item in items if item.spec.kind == "derived"),
        test_object,
        instrument,
        console,
        facts.software_version if facts else "",
        words,
        recording.local_day(check, measured_at),
        attributes_of(device, test_object),
    )


def nominals_of(test_object: TestObject | None) -> dict[str, str]:
    """True values of a test object by measurand code."""
    return recording.read_json(test_object.nominals) if test_object else {}
