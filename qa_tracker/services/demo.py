"""The demonstration: an invented hospital group with two years of checks, exact stories and something due today."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from django.db import transaction

from qa_tracker.core.errors import Conflict
from qa_tracker.core.schedule import add_months
from qa_tracker.records.models import Check, Device, Person, Reading
from qa_tracker.services import history, library
from qa_tracker.services.demo_background import Background
from qa_tracker.services.demo_baselines import OwnSpread, Update
from qa_tracker.services.demo_devices import accept, enter_probe, enter_scanner
from qa_tracker.services.demo_fleet import PROBES, SCANNERS, WIRELESS_SITE, Transducer
from qa_tracker.services.demo_follow_up import follow_up_document
from qa_tracker.services.demo_ground import lay_ground
from qa_tracker.services.demo_large import Size, live_in_part, parts
from qa_tracker.services.demo_limits import local_limits
from qa_tracker.services.demo_people import CAST, people
from qa_tracker.services.demo_routine import FOLLOW_UP_RHYTHM, PROBE_RHYTHMS, SCANNER_RHYTHMS, Routine
from qa_tracker.services.demo_stories import Cable, SlowLoss
from qa_tracker.services.demo_stories_wide import Bite, DryingObject, Software
from qa_tracker.services.demo_timeline import Timeline
from qa_tracker.services.demo_world import MONTHS, World
from qa_tracker.services.devices import Place
from qa_tracker.services.shipped import publish_shipped

__all__ = ["Loaded", "Size", "load", "people"]

SEED = 1985


@dataclass(frozen=True)
class Loaded:
    """What was written."""

    scanners: int
    probes: int
    checks: int
    readings: int


def load(*, at: dt.datetime, seed: int = SEED, size: Size | None = None) -> Loaded:
    """Load the demo up to a moment; with a size a larger fleet instead of the stories' one.

    The demo itself is all or nothing; a larger fleet is written a part at a time, so that memory is bounded.
    Refused: a database that holds the demo already, or people who are not the demo's.
    """
    size = size or Size()
    with transaction.atomic():
        check_may_load()
        months = 12 * size.years
        world = World(at, begin(at, months), seed, Timeline(at), months)
        publish_shipped(at=world.begun_at)
        library.publish_procedure(document=follow_up_document(), actor=None, at=world.begun_at)
        library.publish_criteria(document=local_limits(), actor=None, at=world.begun_at)
        with history.past("demo") as world.past:
            lay_ground(world)
        if not size.larger:
            with history.past("demo") as world.past:
                live_through(world)
    if size.larger:
        for part in parts(size, seed):
            with history.past("demo") as world.past:
                live_in_part(world, part)
    return sizes()


def begin(at: dt.datetime, months: int = MONTHS) -> dt.datetime:
    """The morning so many months before."""
    return dt.datetime.combine(add_months(at.date(), -months), dt.time(7), dt.UTC)


def check_may_load() -> None:
    """Refuse a database that already holds people: the demo's own (loaded already), or others (in use).

    Raises
    ------
    Conflict
        ``demo.loaded``, ``demo.others``
    """
    known = set(Person.objects.values_list("username", flat=True))
    if known - {each.username for each in CAST}:
        raise Conflict("demo.others")
    if known:
        raise Conflict("demo.loaded")


def live_through(world: World) -> None:
    """Enter the devices, plan their checks, and let two years pass."""
    routine = Routine(world)
    for console in SCANNERS:
        kept = enter_scanner(world, console, world.begun_at)
        accept(world, kept, world.begun_at + dt.timedelta(hours=2))
        for rhythm in SCANNER_RHYTHMS:
            routine.plan(kept, rhythm, console.day, world.begun_at + dt.timedelta(hours=7))
    days = {console.name: console.day for console in SCANNERS}
    for number, each in enumerate(PROBES):
        kept = enter_probe(world, each, home(world, each), maker_of(each), world.begun_at)
        accept(world, kept, world.begun_at + dt.timedelta(hours=2, minutes=number))
        day = days.get(each.scanner, -12)
        for rhythm in PROBE_RHYTHMS + ((FOLLOW_UP_RHYTHM,) if each.follow_up else ()):
            routine.plan(kept, rhythm, day, world.begun_at + dt.timedelta(hours=7))
    for story in (SlowLoss, Cable, DryingObject, Software, Bite, Background, OwnSpread, Update):
        story(routine).tell()
    world.timeline.play()


def home(world: World, each: Transducer) -> Place:
    """Where a probe belongs: at its scanner, in the pool, or (the handheld) at a site."""
    if each.scanner:
        scanner = world.scanners[each.scanner].device
        return Place(scanner.site, scanner.location, scanner)
    if each.kind == "wireless":
        return Place(world.sites[WIRELESS_SITE], world.rooms[WIRELESS_SITE, "Emergency"])
    return Place(pool=world.pools[0])


def maker_of(each: Transducer) -> str:
    """Probes are of their scanner's maker."""
    if each.kind == "wireless":
        return "Quorrel"
    return next((one.maker for one in SCANNERS if one.name == each.scanner), "Pellantis")


def sizes() -> Loaded:
    """How much there is."""
    kinds = Device.objects.filter
    return Loaded(
        kinds(kind="scanner").count(),
        kinds(kind="probe").count(),
        Check.objects.count(),
        Reading.objects.count(),
    )
