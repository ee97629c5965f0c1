"""What else happens in the demo: a reader who copies, a rejected probe, one that is lost, one always in theatre."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from qa_tracker.records.models import Check
from qa_tracker.services import history_devices
from qa_tracker.services.demo_devices import accept, enter_probe
from qa_tracker.services.demo_fleet import Transducer
from qa_tracker.services.demo_routine import ANNUAL, MONTHLY, QUARTERLY, Routine
from qa_tracker.services.demo_stories import DAY, HOUR
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from qa_tracker.services.history import Done

COPIED = ("12.5",) * 5 + ("11.5",) * 5 + ("12.0",) * 4
"""The last fourteen months of one reader: three new values, eleven repeats of the month before."""
LATE, OVERDUE = "P-2504", "M-6001"


@dataclass
class Background:
    """The small things that make a fleet look like one."""

    routine: Routine

    def tell(self) -> None:
        """Put what happens on the timeline."""
        world, routine = self.routine.world, self.routine
        copied, vague, biplane = (world.probes[serial] for serial in ("C-4108", "D-4502", "B-7501"))
        routine.before[copied.device.pk] = self.copy
        routine.before[vague.device.pk] = self.cut_off
        self.biplane = biplane
        world.timeline.put(world.month(21.5), self.wear)
        routine.after[biplane.device.pk] = self.worn
        for serial, months, reason in (("H-1803", (8, 9), "in_theatre"), ("WH-0042", (23, 24), "not_found")):
            for month in months:
                routine.skipped[world.probes[serial].device.pk, month] = reason
        for serial in (LATE, OVERDUE):
            routine.left_open.add((world.probes[serial].device.pk, MONTHLY))
        world.timeline.put(world.month(20.3, 9), self.reject)

    def copy(self, check: Check) -> None:
        """Jory Penhallow writes last month's depth again."""
        month = self.routine.month_of(check)
        if check.procedure.code in (MONTHLY, QUARTERLY) and month > 10:
            fixed = self.routine.world.nature(self.routine.world.probes["C-4108"]).fixed
            fixed["reverberation_depth"] = Entry(COPIED[min(month - 11, len(COPIED) - 1)])

    def cut_off(self, check: Check) -> None:
        """One survey is done at too shallow a display: "more than 126" says nothing about a loss of 6 mm."""
        fixed = self.routine.world.nature(self.routine.world.probes["D-4502"]).fixed
        fixed.pop("penetration", None)
        if check.procedure.code == ANNUAL and self.routine.month_of(check) > 12:
            fixed["penetration"] = Entry("126", qualifier=">")

    def wear(self, at: dt.datetime) -> None:
        """The biplane's linear face begins to show a faint line."""
        self.routine.world.nature(self.biplane).fixed["in_air_zone_3", "linear"] = Entry("amber")

    def worn(self, done: Done, at: dt.datetime) -> None:
        """The first amber is written down as a fault, which stays open."""
        world = self.routine.world
        if done.judged.verdict != "remedial" or world.past.open_faults(self.biplane.device):
            return
        person, _ = world.person("castellane")
        fault = history_devices.open_fault(
            world.past, self.biplane, grade="remedial", by=person, at=at + HOUR, place="lens",
            seen="Faint dark line in zone 3 of the linear face; the convex face is even",
        )  # fmt: skip
        note = "Urology told; watched monthly until the maker's quotation comes"
        history_devices.act_on_fault(world.past, fault, "told", note, by=person, at=at + 2 * HOUR)

    def reject(self, at: dt.datetime) -> None:
        """A new 18 MHz probe has three contiguous dead elements at acceptance and goes back."""
        world = self.routine.world
        scanner = world.scanners["SO US3"].device
        place = Place(scanner.site, scanner.location, scanner)
        new = enter_probe(world, Transducer("linear 18 MHz", "H-1805", "SO US3"), place, scanner.maker, at)
        fixed = world.nature(new).fixed
        fixed |= {
            "dark_elements": Entry("3"),
            "dark_elements_counted_as": Entry("elements"),
            "dark_elements_place": Entry("elements 141-143"),
            "in_air_zone_3": Entry("amber"),
        }
        accept(world, new, at + HOUR, "reject")
        oduya, _ = world.person("oduya")
        note = "Rejected at acceptance: three contiguous dead elements; returned to the maker"
        history_devices.move_state(world.past, new, "dispose", note, by=oduya, at=at + 2 * DAY)
