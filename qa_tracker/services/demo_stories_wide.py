"""The demo's stories C, D and E: an object that dries, a software change, and a bitten probe."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from qa_tracker.records.models import Check
from qa_tracker.services import history_baselines, history_devices
from qa_tracker.services.demo_devices import set_preset
from qa_tracker.services.demo_follow_up import CODE as FOLLOW_UP
from qa_tracker.services.demo_routine import ANNUAL, TOE_LOG, Before, Routine
from qa_tracker.services.demo_stories import DAY, HOUR, REPAIRED
from qa_tracker.services.demo_timeline import Event
from qa_tracker.services.entries import Entry
from qa_tracker.services.history import Done, Kept

MINUTE = dt.timedelta(minutes=1)

LOSSES_MM = {
    "C-4105": 5.1, "C-4106": 6.0, "L-5205": 4.4, "L-5206": 4.0, "P-2505": 5.8, "V-6502": 4.7, "M-6002": 5.5,
}  # fmt: skip
ON_THE_OTHER_OBJECT_MM = {"C-4105": -0.3, "L-5205": 0.8}
FULL_G, DRY_G = 3412, 3318
DRIES_FROM, DRY_BY = 12, 23


@dataclass
class DryingObject:
    """C: Kestrel Bay's hydrogel dries; seven probes seem to lose depth, two of them read as ever on AG's object."""

    routine: Routine

    def tell(self) -> None:
        """Put what happens on the timeline."""
        world = self.routine.world
        for serial in LOSSES_MM:
            kept = world.probes[serial]
            self.routine.before[kept.device.pk] = self.reads(kept, serial)
        for month in range(DRIES_FROM, DRY_BY + 1):
            world.timeline.put(world.month(month - 0.5, 6), self.weighs(month))
        world.timeline.put(world.month(1.6, 9), self.second_object)
        world.timeline.put(world.month(23.4, 9), self.compare)

    def share(self, month: int) -> float:
        """How far the object has dried."""
        return max(0.0, min(1.0, (month - DRIES_FROM) / (DRY_BY - DRIES_FROM)))

    def weighs(self, month: int) -> Event:
        """The scale's answer of a month."""
        grams = FULL_G - round((FULL_G - DRY_G) * self.share(month))
        return lambda at: self.routine.world.weights_g.__setitem__("KB", grams)

    def reads(self, kept: Kept, serial: str) -> Before:
        """Depth in the month of a check: what was accepted, less what the object hides."""

        def before(check: Check) -> None:
            world = self.routine.world
            if check.plan is None or check.procedure.code not in (FOLLOW_UP, ANNUAL):
                return
            share = self.share(self.routine.month_of(check))
            scatter = world.nature(kept).near(0.1) if share < 1 else 0.0
            depth = world.accepted(kept) - LOSSES_MM[serial] * share + scatter
            places = 1 if check.procedure.code == FOLLOW_UP else 0
            world.nature(kept).fixed["penetration"] = Entry(f"{depth:.{places}f}")

        return before

    def second_object(self, at: dt.datetime) -> None:
        """Two of the probes get a baseline on AG's object too, read the same day as their own object."""
        world = self.routine.world
        oduya, _ = world.person("oduya")
        for number, serial in enumerate(ON_THE_OTHER_OBJECT_MM):
            kept, hour = world.probes[serial], at + number * HOUR
            world.nature(kept).fixed["penetration"] = Entry(str(world.accepted(kept)))
            done = self.routine.unplanned(
                kept, FOLLOW_UP, "rao-lindqvist", hour, test_object=world.objects["AG"],
                remark="Both objects read, for the day one of them is in doubt",
            )  # fmt: skip
            history_baselines.set_from_check(
                world.past, kept, done, ("penetration",), by=oduya, reason="Second object, read the same day",
                at=hour + 2 * HOUR, tied=True,
            )  # fmt: skip

    def compare(self, at: dt.datetime) -> None:
        """Two of the probes on the second object, the same hour: it is the object, not the probes."""
        world = self.routine.world
        for number, (serial, change) in enumerate(ON_THE_OTHER_OBJECT_MM.items()):
            kept = world.probes[serial]
            fixed = world.nature(kept).fixed
            fixed["penetration"] = Entry(f"{world.accepted(kept) + change:.1f}")
            own = world.weights_g["KB"]
            world.weights_g["KB"] = world.weights_g["AG"]
            self.routine.unplanned(
                kept, FOLLOW_UP, "rao-lindqvist", at + number * HOUR, test_object=world.objects["AG"],
                remark="On AG's object: it is the KB object that dries, not the probe",
            )  # fmt: skip
            world.weights_g["KB"] = own


NEW_SOFTWARE, CHANGED_MONTH, WRONG_SPEED = "4.3", 9.4, "1566"
KEPT_REASON = "The update left it alone: read before and after on one day, the same"
LATER_REASON = "Within its scatter at the checks since the update"
SOFTWARE_REASON = "Software 4.3 reads 2 mm deeper at the same preset; before and after on one day and object"


@dataclass
class Software:
    """D: three OG-70 go from 4.2 to 4.3; depth gains 7 mm, one preset's sound speed is wrong; 2 mm remain.

    Every baseline measured on them is under review until it is replaced with its step, or kept.
    """

    routine: Routine
    gain_mm: dict[int, int] = field(default_factory=dict)
    probes: tuple[str, ...] = ("C-4101", "C-4103", "C-4107")

    def tell(self) -> None:
        """Put what happens on the timeline."""
        world = self.routine.world
        for serial in self.probes:
            kept = world.probes[serial]
            self.routine.before[kept.device.pk] = self.reads(kept)
        world.timeline.put(world.month(CHANGED_MONTH, 7), self.update)
        world.timeline.put(world.month(CHANGED_MONTH, 9), self.first_look)
        world.timeline.put(world.month(CHANGED_MONTH, 9) + 3 * DAY, self.restored)
        world.timeline.put(world.month(CHANGED_MONTH, 15) + 40 * DAY, self.kept_later)

    def reads(self, kept: Kept) -> Before:
        """Depth at a planned check: what was accepted and the software's share."""

        def before(check: Check) -> None:
            world = self.routine.world
            if check.plan is None or check.procedure.code not in (FOLLOW_UP, ANNUAL):
                return
            depth = world.accepted(kept) + self.gain_mm.get(kept.device.pk, 0) + world.nature(kept).near(0.5)
            places = 1 if check.procedure.code == FOLLOW_UP else 0
            world.nature(kept).fixed["penetration"] = Entry(f"{depth:.{places}f}")

        return before

    def update(self, at: dt.datetime) -> None:
        """The maker's engineer installs 4.3 on all three."""
        world = self.routine.world
        engineer, _ = world.person("okonjo")
        for name in ("AG US1", "AG US4", "SO US1"):
            history_devices.record_software(
                world.past, world.scanners[name], NEW_SOFTWARE, by=engineer, at=at,
                fleet=list(world.probes.values()),
            )  # fmt: skip
        set_preset(world, world.probes["C-4101"], "Abdomen", "3.5", WRONG_SPEED, at + HOUR)

    def first_look(self, at: dt.datetime) -> None:
        """Tests after the change, on the same object and preset: 7 mm deeper, and 100 mm reads 101.7 on one."""
        for number, serial in enumerate(self.probes):
            distance = {"vertical_distance": "101.7"} if serial == "C-4101" else {}
            self.look(serial, 7, "keep", at + number * HOUR, distance)

    def restored(self, at: dt.datetime) -> None:
        """The presets are put back: 2 mm remain, and the baselines are replaced with that reason."""
        world = self.routine.world
        oduya, _ = world.person("oduya")
        set_preset(world, world.probes["C-4101"], "Abdomen", "3.5", "1540", at - HOUR)
        for number, serial in enumerate(self.probes):
            kept = world.probes[serial]
            self.gain_mm[kept.device.pk] = 2
            done = self.look(serial, 2, "replace", at + number * HOUR, {})
            history_baselines.set_from_check(
                world.past, kept, done, ("penetration",), by=oduya, reason=SOFTWARE_REASON,
                at=at + number * HOUR + 2 * HOUR,
            )  # fmt: skip
            history_baselines.keep_under_review(
                world.past, kept, NEW_SOFTWARE, by=oduya, reason=KEPT_REASON, at=at + number * HOUR + 3 * HOUR
            )

    def kept_later(self, at: dt.datetime) -> None:
        """The other probes of the three scanners: their baselines are kept after the next monthly checks."""
        world = self.routine.world
        oduya, _ = world.person("oduya")
        for number, kept in enumerate(world.probes.values()):
            moment = at + number * MINUTE
            history_baselines.keep_under_review(
                world.past, kept, NEW_SOFTWARE, by=oduya, reason=LATER_REASON, at=moment
            )

    def look(self, serial: str, gain_mm: int, decision: str, at: dt.datetime, told: dict[str, str]) -> Done:
        """One check after the change."""
        world = self.routine.world
        kept = world.probes[serial]
        fixed = world.nature(kept).fixed
        before = world.accepted(kept)
        values = {
            "cause": "software", "baseline_decision": decision, "penetration_before": str(before),
            "penetration": str(before + gain_mm), "vertical_distance_before": "100.1",
            "vertical_distance": "100.2",
        }  # fmt: skip
        fixed.update({code: Entry(text) for code, text in (values | told).items()})
        remark = "Software 4.3: presets as the update left them" if gain_mm == 7 else "Presets restored"
        done = self.routine.unplanned(kept, REPAIRED, "rao-lindqvist", at, remark=remark)
        for code in values:
            fixed.pop(code)
        return done


@dataclass
class Bite:
    """E: a transoesophageal probe comes back from a case with a hole; 31 days in quarantine."""

    routine: Routine

    def tell(self) -> None:
        """Put what happens on the timeline: a leakage log after use, and one bad one."""
        world = self.routine.world
        self.kept, other = world.probes["T-5501"], world.probes["T-5502"]
        world.nature(self.kept).fixed["toe_chassis_leakage"] = Entry("210")
        first_at = world.begun_at + 7 * DAY
        for number in range(26):
            for kept, hours in ((self.kept, 7), (other, 9)):
                world.timeline.put(first_at + number * 28 * DAY + hours * HOUR, self.log(kept))
        world.timeline.put(world.month(18.2, 15), self.hole)

    def log(self, kept: Kept) -> Event:
        """A leakage log after use, by the nurse who cleaned the probe."""

        def happen(at: dt.datetime) -> None:
            if kept.device.state != "in_use":
                return
            done = self.routine.unplanned(kept, TOE_LOG, "barak-yarden", at)
            if ("toe_probe_leakage", None, None) not in kept.baselines:
                self.first_step(kept, done, at)

        return happen

    def first_step(self, kept: Kept, done: Done, at: dt.datetime) -> None:
        """The first log gives the value that later ones may not step away from."""
        oduya, _ = self.routine.world.person("oduya")
        history_baselines.set_from_check(
            self.routine.world.past, kept, done, ("toe_probe_leakage",), by=oduya, reason="First leakage log",
            at=at + 2 * HOUR,
        )  # fmt: skip

    def hole(self, at: dt.datetime) -> None:
        """176 against 210, 84 %: out of use at once."""
        world = self.routine.world
        engineer, _ = world.person("okonjo")
        oduya, _ = world.person("oduya")
        fixed = world.nature(self.kept).fixed
        fixed |= {"toe_probe_leakage": Entry("176"), "sheath_grade": Entry("red"), "bite_grade": Entry("red")}
        remark = "After the case: a hole of 4 mm at 38 cm"
        self.routine.unplanned(self.kept, TOE_LOG, "barak-yarden", at, remark=remark)
        fault = world.past.open_faults(self.kept.device)[-1]
        self.quarantined_at = self.kept.device.state_since
        for hours, kind, text in (
            (1, "told", "Infection control told by telephone; the patient's team knows"),
            (20, "cleaned", "Decontamination certificate DC-1263, washer cycle W48211"),
            (22, "sent out", "To the maker for a new sheath"),
        ):
            history_devices.act_on_fault(world.past, fault, kind, text, by=engineer, at=at + hours * HOUR)
        statement = "Last conforming two weeks before; one case since. Infection control follows it up, no other review."
        history_devices.look_back(world.past, fault, statement, by=oduya, at=at + 24 * HOUR)
        world.timeline.put(self.quarantined_at + 31 * DAY - 3 * HOUR, self.back)

    def back(self, at: dt.datetime) -> None:
        """Back with a new sheath: 58 against 210, proven by the engineer, restored by the physicist."""
        world = self.routine.world
        fixed = world.nature(self.kept).fixed
        for code in ("sheath_grade", "bite_grade"):
            fixed.pop(code)
        fixed["toe_probe_leakage"] = Entry("58")
        done = self.routine.unplanned(self.kept, TOE_LOG, "okonjo", at, remark="After the new sheath")
        fixed.pop("toe_probe_leakage")
        world.nature(self.kept).base["toe_probe_leakage", ""] = 58.0
        oduya, _ = world.person("oduya")
        history_devices.restore(
            world.past, self.kept, proof=done.check, remark="New sheath, 58 uA against 210 uA", by=oduya,
            role="physicist", at=self.quarantined_at + 31 * DAY,
        )  # fmt: skip
