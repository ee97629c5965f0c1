"""Entering the demo's devices: registered, accepted with baselines, given a preset and their plans."""

from __future__ import annotations

import datetime as dt

from qa_tracker.records.models import Aperture, Condition, Placement, ProbeFacts, ScannerFacts
from qa_tracker.services import devices, history, history_baselines, states
from qa_tracker.services.demo_fleet import CLASSES, PROBE_MODELS, Console, Transducer
from qa_tracker.services.demo_world import World
from qa_tracker.services.devices import Identity, Place
from qa_tracker.services.entries import Entry
from qa_tracker.services.history import Done, Kept

DAY = dt.timedelta(days=1)
BASELINE_CODES = (
    "penetration", "reverberation_depth", "reverberation_bands", "fwhm_axial", "fwhm_lateral", "grey_visibility",
    "smallest_low_echo_target", "doppler_velocity", "applied_part_leakage_bf", "applied_part_leakage_cf",
    "toe_chassis_leakage", "toe_probe_leakage",
)  # fmt: skip


def enter_scanner(world: World, each: Console, at: dt.datetime) -> Kept:
    """Register a scanner."""
    oduya, _ = world.person("oduya")
    place = Place(site=world.sites[each.site], location=world.rooms[each.site, each.room])
    register = {
        "owner": "Tarnwater Hospitals Group",
        "purchased_on": (at - 200 * DAY).date(),
        "keeper": each.name,
    }
    act = world.past.act("device.registered", oduya, at)
    identity = Identity(each.maker, each.model, each.serial, each.name, register=register)
    protection = "II" if each.maker == "Pellantis" else "I"
    device = devices.add_scanner(act, identity, place, each.software, protection)
    kept = Kept(device, world.past.newest(Placement), world.past.newest(ScannerFacts))
    world.scanners[each.name] = kept
    world.add_nature(kept, protection_class=protection)
    return kept


def enter_probe(world: World, each: Transducer, place: Place, maker: str, at: dt.datetime) -> Kept:
    """Register a probe with its apertures and the preset it is tested with."""
    oduya, _ = world.person("oduya")
    kind = CLASSES[each.kind]
    act = world.past.act("device.registered", oduya, at)
    number = f"{place.site.code if place.site else 'POOL'}-{each.serial}"
    use = each.use or kind.preset
    identity = Identity(
        maker, PROBE_MODELS[each.kind], each.serial, number, handheld=each.kind == "wireless",
        register={"owner": "Tarnwater Hospitals Group", "clinical_use": use, "spare": place.pool is not None},
    )  # fmt: skip
    facts = ProbeFacts(
        array_kind=kind.array_kind,
        contact_class=kind.contact_class,
        applied_part=kind.applied_part,
        wireless=each.kind == "wireless",
    )
    device = devices.add_probe(act, identity, place, facts, list(kind.apertures))
    apertures = world.past.rows_of(Aperture, act)
    kept = Kept(device, world.past.newest(Placement), apertures={row.pk: row for row in apertures})
    kept.array_kind, kept.applied_part = kind.array_kind, kind.applied_part
    world.probes[each.serial] = kept
    world.add_nature(kept, each.kind)
    set_preset(world, kept, kind.preset, kind.frequency_mhz, "1540", at)
    return kept


def set_preset(
    world: World, kept: Kept, name: str, frequency: str, sound_speed: str, at: dt.datetime
) -> Condition:
    """Set a device's preset, new or changed."""
    oduya, _ = world.person("oduya")
    act = world.past.act("condition.set", oduya, at)
    settings = {"depth_mm": "170", "focus_mm": "80", "gain": "60", "power": "100 %", "compounding": "off"}
    known = next((row for row in kept.conditions.values() if row.name == name), None)
    condition = devices.put_condition(act, kept.device, name, frequency, sound_speed, settings, known)
    kept.conditions[condition.pk] = condition
    kept.items.clear()
    return condition


def accept(world: World, kept: Kept, at: dt.datetime, decision: str = "accept") -> Done:
    """The acceptance check of a device by physicist, countersigned; with "accept" its baselines and first use."""
    tester, role = world.person("rao-lindqvist")
    oduya, _ = world.person("oduya")
    check = history.open_unplanned(world.past, kept, "acceptance", actor=tester, at=at)
    nature = world.nature(kept)
    nature.fixed["acceptance_decision"] = Entry(decision)
    facts = world.facts(kept, instrument=world.testers[world.site_code(kept)])
    done_at = at + dt.timedelta(minutes=40)
    done = history.perform(
        world.past, kept, check, nature.answer, by=tester, role=role, at=done_at, facts=facts
    )
    if decision == "accept":
        if kept.device.kind == "probe":
            history_baselines.set_from_check(
                world.past, kept, done, BASELINE_CODES, by=oduya, at=done_at + dt.timedelta(hours=1),
                reason="Acceptance",
            )  # fmt: skip
        history.countersign(world.past, done, by=oduya, at=done_at + dt.timedelta(hours=2))
        act = world.past.act("device.accepted", oduya, done_at + dt.timedelta(hours=3), "Accepted into use")
        states.accept_device(act, kept.device, oduya, "physicist", "Accepted into use")
    return done
