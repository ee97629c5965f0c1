"""The demo's baselines beside the stories: one made of twelve set-ups, and some that wait for a physicist."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from qa_tracker.services import history_baselines, history_devices
from qa_tracker.services.demo_routine import MONTHLY, Routine
from qa_tracker.services.history import Done

SPREAD_OF, SPREAD_CODE, SET_UPS = "L-5207", "reverberation_depth", 12
"""A linear probe of St Orlaith, and what its own spread is made of."""
UPDATED, UPDATE, UPDATED_DAYS_AGO = "AG US3", "3.9", 4
HOUR = dt.timedelta(hours=1)


@dataclass
class OwnSpread:
    """The reverberation of one probe, for which no limit is published, gets one of its own after twelve checks."""

    routine: Routine
    done: list[Done] = field(default_factory=list)

    def tell(self) -> None:
        """Watch the probe's monthly checks."""
        self.kept = self.routine.world.probes[SPREAD_OF]
        self.routine.after[self.kept.device.pk] = self.count

    def count(self, done: Done, at: dt.datetime) -> None:
        """After the twelfth check their mean becomes the baseline."""
        if done.check.procedure.code != MONTHLY or len(self.done) == SET_UPS:
            return
        self.done.append(done)
        if len(self.done) < SET_UPS:
            return
        world = self.routine.world
        oduya, _ = world.person("oduya")
        reason = "Mean of twelve monthly checks, so that the probe's own spread can judge it"
        history_baselines.set_from_setups(
            world.past, self.kept, self.done, SPREAD_CODE, by=oduya, reason=reason, at=at + 2 * HOUR
        )


@dataclass
class Update:
    """A software version of this week: what was measured before it waits to be kept or replaced."""

    routine: Routine

    def tell(self) -> None:
        """Put the update on the timeline."""
        world = self.routine.world
        world.timeline.put(world.at - dt.timedelta(days=UPDATED_DAYS_AGO), self.update)

    def update(self, at: dt.datetime) -> None:
        """The engineer records it."""
        world = self.routine.world
        engineer, _ = world.person("okonjo")
        history_devices.record_software(
            world.past, world.scanners[UPDATED], UPDATE, by=engineer, at=at, fleet=list(world.probes.values())
        )
