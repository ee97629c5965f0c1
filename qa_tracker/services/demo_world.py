"""What the demo's writers share while its past is written."""

from __future__ import annotations

import datetime as dt
import random
from dataclasses import dataclass, field
from typing import Any

from qa_tracker.core.schedule import add_months
from qa_tracker.records.models import Instrument, Location, Person, Pool, Site, TestObject
from qa_tracker.services.demo_fleet import CLASSES
from qa_tracker.services.demo_people import CAST
from qa_tracker.services.demo_timeline import Timeline
from qa_tracker.services.demo_values import Nature
from qa_tracker.services.entries import Entry
from qa_tracker.services.history import Kept, Past
from qa_tracker.services.recording import Facts

MONTHS = 24
ACCEPTED_MM = {
    "C-4101": 150, "C-4102": 152, "C-4103": 149, "C-4105": 151, "C-4106": 148, "C-4107": 151, "C-4109": 153,
    "L-5205": 63, "L-5206": 61, "P-2505": 152, "V-6502": 88, "M-6002": 92,
}  # fmt: skip
"""Depth at acceptance of the probes the stories are about, by serial."""
STEADY = {
    "C-4102": {"uniformity": "1.6"},
    "C-4105": {"reverberation_depth": "12.0"}, "C-4106": {"reverberation_depth": "12.0"},
    "L-5205": {"reverberation_depth": "8.5"}, "L-5206": {"reverberation_depth": "8.5"},
    "P-2505": {"reverberation_depth": "15.0"}, "V-6502": {"reverberation_depth": "9.0"},
    "M-6002": {"reverberation_depth": "9.5"},
}  # fmt: skip
"""What never moves on a story's probe, whatever else does."""
ROLES = {each.username: each.role for each in CAST}


@dataclass
class World:
    """The group as it is at the moment reached, by the names the demo's tables use."""

    at: dt.datetime
    begun_at: dt.datetime
    seed: int
    timeline: Timeline
    months: int = MONTHS
    past: Past = field(init=False)
    people: dict[str, Person] = field(default_factory=dict)
    sites: dict[str, Site] = field(default_factory=dict)
    rooms: dict[tuple[str, str], Location] = field(default_factory=dict)
    objects: dict[str, TestObject] = field(default_factory=dict)
    weights_g: dict[str, int] = field(default_factory=lambda: {"AG": 3398, "KB": 3412, "SO": 3405})
    testers: dict[str, Instrument] = field(default_factory=dict)
    pools: list[Pool] = field(default_factory=list)
    scanners: dict[str, Kept] = field(default_factory=dict)
    probes: dict[str, Kept] = field(default_factory=dict)
    natures: dict[int, Nature] = field(default_factory=dict)

    def month(self, number: float, hour: int = 10) -> dt.datetime:
        """The moment ``number`` months after the beginning, at an hour (UTC)."""
        whole = int(number)
        day = add_months(self.begun_at.date(), whole) + dt.timedelta(days=round((number - whole) * 30))
        return dt.datetime.combine(day, dt.time(hour), dt.UTC)

    def person(self, username: str) -> tuple[Person, str]:
        """Someone with the role they sign in."""
        return self.people[username], ROLES[username]

    def nature(self, kept: Kept) -> Nature:
        """How a device reads."""
        return self.natures[kept.device.pk]

    def accepted(self, kept: Kept) -> int:
        """The depth a probe was accepted with, in mm."""
        return ACCEPTED_MM[kept.device.serial]

    def add_nature(self, kept: Kept, kind: str = "", protection_class: str = "I") -> Nature:
        """Draw how a new device reads: by its serial, so that no device hangs on another."""
        rng = random.Random(f"{self.seed}/{kept.device.serial}")
        nature = Nature(rng, CLASSES.get(kind), protection_class)
        self.natures[kept.device.pk] = nature
        serial = kept.device.serial
        if serial in ACCEPTED_MM:
            nature.fixed["penetration"] = Entry(str(ACCEPTED_MM[serial]))
        nature.fixed |= {code: Entry(text) for code, text in STEADY.get(serial, {}).items()}
        return nature

    def site_code(self, kept: Kept) -> str:
        """Where the people are who test a device; the pool is kept by the first site."""
        return kept.device.site.code if kept.device.site else next(iter(self.sites))

    def facts(self, kept: Kept, **more: Any) -> Facts:
        """What a check is measured with: its console, and the object and tester of the site."""
        device, code = kept.device, self.site_code(kept)
        own = device.kind == "scanner" or device.handheld
        console = device if own else device.scanner
        facts = self.scanners_by_id().get(console.pk) if console else None
        software = facts.scanner_facts.software_version if facts and facts.scanner_facts else ""
        told: dict[str, Any] = {
            "test_object": self.objects.get(code),
            "instrument": None,
            "console": console,
            "console_software": software,
            "cleaned_before": "Wiped with the ward's wipe, by the tester"
            if device.kind == "probe"
            else "Dusted",
            "cleaned_after": "Gel and fluid removed; awaiting decontamination"
            if device.kind == "probe"
            else "",
        }
        return Facts(**(told | more))

    def scanners_by_id(self) -> dict[int, Kept]:
        """Scanners by key."""
        return {kept.device.pk: kept for kept in self.scanners.values()}
