"""The demo's stories A and B: a probe that slowly loses depth, and a cable that breaks two elements, then five."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from qa_tracker.records.models import Check
from qa_tracker.services import history_baselines, history_devices
from qa_tracker.services.demo_devices import BASELINE_CODES, accept, enter_probe
from qa_tracker.services.demo_fleet import Transducer
from qa_tracker.services.demo_follow_up import CODE as FOLLOW_UP
from qa_tracker.services.demo_routine import (
    ELECTRICAL,
    FOLLOW_UP_RHYTHM,
    PROBE_RHYTHMS,
    QUARTERLY,
    Routine,
)
from qa_tracker.services.demo_timeline import Event
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from qa_tracker.services.history import Done

DAY, HOUR = dt.timedelta(days=1), dt.timedelta(hours=1)
REPAIRED = "after-repair-or-change"
SLOW_SET_UPS = ("151.1", "154.1", "152.3", "149.9", "152.9", "154.6", "151.7", "153.5", "149.4", "150.5")
"""Ten independent set-ups: mean 152.0, standard deviation 1.8."""
SLOW_DEPTHS = (
    "152.0", "151.6", "150.7", "150.3", "149.4", "149.1", "148.3", "147.8", "147.3", "146.5",
    "146.0", "145.4", "144.9", "144.1", "143.7", "142.9", "142.5", "141.8",
)  # fmt: skip
"""By month: 0.6 mm lost each, little scatter; 146.0 is the limit itself."""


@dataclass
class SlowLoss:
    """A: the convex probe of AG US2 loses 0.6 mm a month, is suspended in month 17 and replaced."""

    routine: Routine

    def tell(self) -> None:
        """Put what happens on the timeline."""
        world = self.routine.world
        self.kept = world.probes["C-4102"]
        for number in range(len(SLOW_SET_UPS)):
            world.timeline.put(world.begun_at + (number + 1) * 2 * DAY + 3 * HOUR, self.set_up(number))
        self.routine.before[self.kept.device.pk] = self.lose
        self.routine.after[self.kept.device.pk] = self.suspended

    def set_up(self, number: int) -> Event:
        """One of ten independent set-ups; after the last their mean becomes the baseline."""

        def happen(at: dt.datetime) -> None:
            world = self.routine.world
            self.depth = SLOW_SET_UPS[number]
            done = self.routine.unplanned(
                self.kept, FOLLOW_UP, "rao-lindqvist", at, remark=f"Baseline set-up {number + 1} of 10"
            )
            if number + 1 == len(SLOW_SET_UPS):
                oduya, _ = world.person("oduya")
                reason = "Mean of ten independent set-ups, standard deviation 1.8 mm"
                history_baselines.set_from_check(
                    world.past, self.kept, done, ("penetration",), by=oduya, reason=reason,
                    at=at + HOUR, texts={"penetration": "152.0"},
                )  # fmt: skip

        return happen

    def lose(self, check: Check) -> None:
        """What the probe reads in the month of a check."""
        depth = self.depth if check.plan is None else SLOW_DEPTHS[min(self.routine.month_of(check), 17)]
        finer = check.procedure.code == FOLLOW_UP
        self.routine.world.nature(self.kept).fixed["penetration"] = Entry(
            depth if finer else str(round(float(depth)))
        )

    def suspended(self, done: Done, at: dt.datetime) -> None:
        """The suspension verdict sets its replacement going."""
        if done.judged.verdict != "suspension" or self.kept.device.state != "quarantined":
            return
        world = self.routine.world
        oduya, _ = world.person("oduya")
        fault = world.past.open_faults(self.kept.device)[-1]
        told = "Told the head of department; the probe of US6 is shared until the new one comes"
        history_devices.act_on_fault(world.past, fault, "told", told, by=oduya, at=at + HOUR)
        statement = (
            "Depth within 10 mm of acceptance until this month; images remain diagnostic. No review needed."
        )
        history_devices.look_back(world.past, fault, statement, by=oduya, at=at + 2 * HOUR)
        world.timeline.put(at + 9 * DAY, self.replace)

    def replace(self, at: dt.datetime) -> None:
        """The old probe leaves; a new one reads 153."""
        world, old = self.routine.world, self.kept
        oduya, _ = world.person("oduya")
        self.routine.end_plans(old, "Replaced", at)
        reason = "Replaced by C-4109; scrapped with decontamination certificate DC-1187"
        scanner = old.device.scanner
        history_devices.move_state(world.past, old, "dispose", reason, by=oduya, at=at + HOUR)
        place = Place(old.device.site, old.device.location, scanner)
        new = enter_probe(
            world, Transducer("convex", "C-4109", "AG US2"), place, old.device.maker, at + 2 * HOUR
        )
        accept(world, new, at + 3 * HOUR)
        world.nature(new).fixed.pop("penetration")
        world.nature(new).base["penetration", "face"] = 153.0
        for rhythm in (*PROBE_RHYTHMS, FOLLOW_UP_RHYTHM):
            self.routine.plan(new, rhythm, -5, at + 8 * HOUR)


@dataclass
class Cable:
    """B: the intensive care linear loses elements in month 14, more in month 15; repaired while a loan covers."""

    routine: Routine

    def tell(self) -> None:
        """Put what happens on the timeline."""
        world = self.routine.world
        self.kept, self.loan = world.probes["L-5204"], world.probes["L-5208"]
        world.timeline.put(world.month(13.45), lambda at: self.broken("2", "elements 61-62", "amber", "4.4"))
        world.timeline.put(world.month(14.45), lambda at: self.broken("5", "elements 59-63", "amber", "9.8"))
        self.routine.after[self.kept.device.pk] = self.found
        self.seen: list[str] = []

    def broken(self, elements: str, place: str, grade: str, dip_db: str) -> None:
        """From now on it reads so."""
        self.routine.world.nature(self.kept).fixed.update(
            {
                "dark_elements": Entry(elements),
                "dark_elements_counted_as": Entry("elements"),
                "dark_elements_place": Entry(place),
                "in_air_zone_2": Entry(grade),
                "uniformity": Entry(dip_db),
            }
        )

    def found(self, done: Done, at: dt.datetime) -> None:
        """The first finding is confirmed on another port; the second takes the probe out of use."""
        if done.check.plan is None:
            return
        if done.judged.verdict == "remedial" and not self.seen:
            self.seen.append("remedial")
            self.routine.world.timeline.put(at + HOUR, self.confirm)
        elif done.judged.verdict == "suspension" and "suspension" not in self.seen:
            self.seen.append("suspension")
            self.routine.world.timeline.put(at + HOUR, self.suspend)

    def confirm(self, at: dt.datetime) -> None:
        """Clean, reseat, other port: the gap stays with the probe."""
        routine, past = self.routine, self.routine.world.past
        hywel, _ = routine.world.person("dragic")
        for port, hours, remark in (
            ("A", 0, "Lens cleaned, fresh coupling, reseated: unchanged"),
            ("B", 1, "The same on port B: it follows the probe"),
        ):
            routine.unplanned(self.kept, QUARTERLY, "dragic", at + hours * HOUR, port=port, remark=remark)
        seen = "Elements 61-62 dead, dip of 4.4 dB in the phantom image, same on port B"
        fault = history_devices.open_fault(
            past, self.kept, grade="remedial", seen=seen, place="cable", by=hywel, at=at + 3 * HOUR
        )
        note = "Cable moved at the strain relief: the gap flickers"
        history_devices.act_on_fault(past, fault, "note", note, by=hywel, at=at + 4 * HOUR)

    def suspend(self, at: dt.datetime) -> None:
        """Uniformity beside the dead elements, then repair, with the pool's linear in its place for 23 days."""
        routine, world = self.routine, self.routine.world
        routine.unplanned(self.kept, QUARTERLY, "dragic", at, port="A", remark="Five elements: 59 to 63")
        engineer, _ = world.person("okonjo")
        fault = world.past.open_faults(self.kept.device)[-1]
        history_devices.act_on_fault(
            world.past, fault, "loan", "Pool linear L-5208 placed at US6", by=engineer, at=at + 18 * HOUR
        )
        scanner = self.kept.device.scanner
        where = Place(self.kept.device.site, self.kept.device.location, scanner)
        reason = "Loan for L-5204"
        history_devices.place(world.past, self.loan, where, reason, by=engineer, at=at + 18 * HOUR)
        sent = "To the maker, decontamination certificate DC-1042"
        history_devices.act_on_fault(
            world.past, fault, "sent out", sent, by=engineer, at=at + 20 * HOUR, job_number="PX-77310"
        )
        history_devices.move_state(
            world.past, self.kept, "send_to_repair", sent, by=engineer, at=at + 21 * HOUR
        )
        world.timeline.put(at + 23 * DAY + 10 * HOUR, self.back)
        self.lent_at = at + 18 * HOUR

    def back(self, at: dt.datetime) -> None:
        """Back with a new cable: electrical safety, the proving check, a new epoch, and the loan returns."""
        routine, world, kept = self.routine, self.routine.world, self.kept
        engineer, _ = world.person("okonjo")
        oduya, _ = world.person("oduya")
        fixed = world.nature(kept).fixed
        note = "Cable and strain relief renewed by the maker"
        history_devices.move_state(world.past, kept, "return_from_repair", note, by=engineer, at=at)
        for code in ("dark_elements", "dark_elements_counted_as", "dark_elements_place", "in_air_zone_2"):
            fixed.pop(code)
        fixed |= {"uniformity": Entry("1.4"), "applied_part_leakage_bf": Entry("38")}
        routine.unplanned(kept, ELECTRICAL, "okonjo", at + HOUR, remark="Case opened by the maker")
        fixed["baseline_decision"] = Entry("replace")
        done = routine.unplanned(kept, REPAIRED, "rao-lindqvist", at + 2 * HOUR, port="A", remark=note)
        remark = "Nothing dead, 1.4 dB, leakage 38 uA"
        history_devices.restore(
            world.past, kept, proof=done.check, remark=remark, by=oduya, role="physicist", at=at + 4 * HOUR
        )
        history_baselines.set_from_check(
            world.past, kept, done, BASELINE_CODES, by=oduya, reason="New epoch after the cable was renewed",
            at=at + 5 * HOUR,
        )  # fmt: skip
        fixed.pop("baseline_decision")
        home = Place(pool=world.pools[0])
        returned_at = self.lent_at + 23 * DAY
        history_devices.place(world.past, self.loan, home, "L-5204 is back", by=engineer, at=returned_at)
