"""Larger invented fleets, in proportion to the demo's: the same classes and makers, no stories."""

from __future__ import annotations

import datetime as dt
import random
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field, replace

from qa_tracker.core.errors import Invalid
from qa_tracker.services.demo_devices import accept, enter_probe, enter_scanner
from qa_tracker.services.demo_fleet import PROBES, SCANNERS, Console, Transducer
from qa_tracker.services.demo_routine import PROBE_RHYTHMS, SCANNER_RHYTHMS, Rhythm, Routine
from qa_tracker.services.demo_timeline import Timeline
from qa_tracker.services.demo_world import World
from qa_tracker.services.devices import Place
from qa_tracker.services.history import Kept

PART = 40
"""Devices written in one transaction: some tens of thousands of readings, held in memory until it ends."""
MOST_SCANNERS, MOST_PROBES, MOST_YEARS = 20_000, 100_000, 20
HANDHELD = "wireless"


@dataclass(frozen=True)
class Size:
    """How large a fleet; what is left out keeps the proportions of the demo."""

    scanners: int | None = None
    probes: int | None = None
    years: int = 2
    larger: bool = field(init=False, default=False)

    def __post_init__(self) -> None:
        _within("scanners", self.scanners, MOST_SCANNERS)
        _within("probes", self.probes, MOST_PROBES)
        _within("years", self.years, MOST_YEARS)
        asked = self.scanners is not None or self.probes is not None or self.years != Size.years
        object.__setattr__(self, "larger", asked)

    def counts(self) -> tuple[int, int]:
        """Scanners and probes."""
        share = len(PROBES) / len(SCANNERS)
        scanners = self.scanners or (round(self.probes / share) if self.probes else len(SCANNERS))
        return max(1, scanners), self.probes or round(scanners * share)


def _within(name: str, number: int | None, most: int) -> None:
    if number is not None and not 1 <= number <= most:
        raise Invalid("demo.size", field=name, number=number, most=most)


Part = list[tuple[Console, list[Transducer]]]


def parts(size: Size, seed: int) -> Iterator[Part]:
    """The fleet a part at a time: some scanners with their probes, for one transaction each."""
    part: Part = []
    for each in consoles(*size.counts(), seed):
        part.append(each)
        if sum(1 + len(probes) for _, probes in part) >= PART:
            yield part
            part = []
    if part:
        yield part


def consoles(scanners: int, probes: int, seed: int) -> Iterator[tuple[Console, list[Transducer]]]:
    """Invented scanners, each with its share of the probes."""
    rng = random.Random(f"{seed}/fleet")
    weights = Counter(probe.kind for probe in PROBES if probe.kind != HANDHELD)
    kinds = sorted(weights)
    for number in range(scanners):
        like = SCANNERS[number % len(SCANNERS)]
        name = f"{like.site} {number + 1:05d}"
        console = replace(
            like, name=name, serial=f"{like.serial[:3]}-{700000 + number}", day=rng.randint(-26, 3)
        )
        share = range(number * probes // scanners, (number + 1) * probes // scanners)
        drawn = rng.choices(kinds, [weights[kind] for kind in kinds], k=len(share))
        yield (
            console,
            [
                Transducer(kind, f"{kind[0].upper()}-{100000 + n}", name)
                for kind, n in zip(drawn, share, strict=True)
            ],
        )


def live_in_part(world: World, part: Part) -> None:
    """Enter the devices of a part and let the years pass for them; what went before is forgotten."""
    world.scanners, world.probes, world.natures = {}, {}, {}
    world.timeline = Timeline(world.at)
    routine = Routine(world)
    for console, probes in part:
        scanner = enter_scanner(world, console, world.begun_at)
        begin_with(routine, scanner, console.day, SCANNER_RHYTHMS)
        for probe in probes:
            held = scanner.device
            place = Place(held.site, held.location, held)
            kept = enter_probe(world, probe, place, console.maker, world.begun_at)
            begin_with(routine, kept, console.day, PROBE_RHYTHMS)
    world.timeline.play()


def begin_with(routine: Routine, kept: Kept, day: int, rhythms: tuple[Rhythm, ...]) -> None:
    """Accept a device and plan its checks."""
    world = routine.world
    accept(world, kept, world.begun_at + dt.timedelta(hours=2))
    for rhythm in rhythms:
        routine.plan(kept, rhythm, day, world.begun_at + dt.timedelta(hours=7))
