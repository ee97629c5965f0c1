"""Invented readings: what a device would read when nothing is wrong, drawn from a seeded generator.

Scatter is kept inside every adopted limit, so that only the stories, which put their own values in place, raise
anything.
"""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import dataclass, field

from qa_tracker.services.demo_fleet import ProbeClass
from qa_tracker.services.entries import Entry
from qa_tracker.services.items import Item

NOTHING = Entry()
GRADES_OF_REPAIR = {"cause": "repair", "baseline_decision": "keep", "acceptance_decision": "accept"}
TESTER = "ES-40213"
OBJECT_DEPTH_MM = 160

Draw = Callable[["Nature", Item], str]


@dataclass
class Nature:
    """How one device reads. ``fixed`` puts a story's value in place, by measurand or (measurand, aperture)."""

    rng: random.Random
    probe: ProbeClass | None = None
    protection_class: str = "I"
    fixed: dict[str | tuple[str, str], Entry] = field(default_factory=dict)
    base: dict[tuple[str, str], float] = field(default_factory=dict)

    def answer(self, item: Item) -> Entry:
        """An entry for one item of a check."""
        aperture = item.aperture.name if item.aperture else ""
        told = self.fixed.get((item.spec.code, aperture)) or self.fixed.get(item.spec.code)
        if told is not None:
            return told
        if item.spec.kind == "grade":
            return self._grade(item)
        if item.spec.kind == "yes_no":
            return Entry("yes")
        return self._drawn(item)

    def _grade(self, item: Item) -> Entry:
        code = item.spec.code
        if code in GRADES_OF_REPAIR:
            return Entry(GRADES_OF_REPAIR[code])
        if code in ("uniformity_grade", "dark_elements_counted_as"):
            return NOTHING
        return Entry(item.spec.grades[0].value)

    def _drawn(self, item: Item) -> Entry:
        code = item.spec.code
        if code == "penetration":
            return self.penetration(item)
        if code == "insulation_resistance":
            return Entry("200.0", qualifier=">")
        draw = DRAWS.get(code)
        return Entry(draw(self, item)) if draw else NOTHING

    def level(self, item: Item, typical: float, spread: float) -> float:
        """The device's own level of a quantity: drawn once, then kept."""
        key = (item.spec.code, item.aperture.name if item.aperture else "")
        if key not in self.base:
            self.base[key] = typical + self.near(spread)
        return self.base[key]

    def near(self, spread: float) -> float:
        """A deviation with this standard deviation, never beyond twice of it."""
        return max(-2 * spread, min(2 * spread, self.rng.gauss(0, spread)))

    def penetration(self, item: Item) -> Entry:
        """Depth of penetration; what reaches the bottom of the object is "more than" its depth."""
        typical = self.probe.penetration if self.probe else 0
        if typical >= OBJECT_DEPTH_MM:
            return Entry(str(OBJECT_DEPTH_MM), qualifier=">")
        scatter = max(0.3, typical / 150)
        return Entry(stepped(self.level(item, typical, 2.0) + self.near(scatter), item.spec.resolution))


def stepped(value: float, resolution: str) -> str:
    """A drawn number as typed: on the measurand's step, with its places."""
    step = float(resolution)
    places = len(resolution.partition(".")[2])
    return f"{round(value / step) * step:.{places}f}"


def _about(typical: Callable[[ProbeClass], str], scatter: float) -> Draw:
    """Around what the probe's class reads."""

    def draw(nature: Nature, item: Item) -> str:
        middle = float(typical(nature.probe)) if nature.probe else 0.0
        return stepped(max(0.0, middle + nature.near(scatter)), item.spec.resolution)

    return draw


def _around(middle: float, scatter: float) -> Draw:
    """Around a fixed value."""

    def draw(nature: Nature, item: Item) -> str:
        return stepped(middle + nature.near(scatter), item.spec.resolution)

    return draw


def _own(middle: float, between: float, scatter: float) -> Draw:
    """Around the device's own level, which differs between devices."""

    def draw(nature: Nature, item: Item) -> str:
        return stepped(nature.level(item, middle, between) + nature.near(scatter), item.spec.resolution)

    return draw


def _only(part: str, draw: Draw) -> Draw:
    """Only for devices of this protection class or applied part."""

    def found(nature: Nature, item: Item) -> str:
        mine = nature.probe.applied_part if nature.probe else nature.protection_class
        return draw(nature, item) if mine == part else ""

    return found


DRAWS: dict[str, Draw] = {
    "reverberation_depth": _about(lambda probe: probe.reverberation, 0.45),
    "reverberation_bands": _about(lambda probe: str(probe.bands), 0.3),
    "dark_elements": _around(0, 0),
    "uniformity": _own(1.6, 0.2, 0.15),
    "vertical_distance": _own(100.0, 0.2, 0.25),
    "horizontal_distance": _own(80.0, 0.3, 0.35),
    "fwhm_axial": _about(lambda probe: probe.axial, 0.05),
    "fwhm_lateral": _about(lambda probe: probe.lateral, 0.1),
    "ring_down": _about(lambda probe: probe.ring_down, 0.2),
    "grey_visibility": _around(12, 0.3),
    "smallest_low_echo_target": _about(lambda probe: probe.low_echo, 0.2),
    "area_error": _own(0.4, 0.4, 0.6),
    "doppler_velocity": _own(60, 2.0, 1.5),
    "earth_resistance": _own(95, 12, 4),
    "earth_resistance_cord": _own(55, 6, 3),
    "earth_resistance_together": _own(150, 14, 5),
    "equipment_leakage_class_i": _only("I", _own(210, 20, 6)),
    "equipment_leakage_class_ii": _only("II", _own(45, 5, 2)),
    "applied_part_leakage_bf": _only("BF", _own(36, 4, 2)),
    "applied_part_leakage_cf": _only("CF", _own(14, 2, 1)),
    "applied_part_leakage_b": _only("B", _own(60, 5, 2)),
    "toe_chassis_leakage": _around(210, 2),
    "toe_probe_leakage": _own(62, 0.5, 1.2),
    "soak_minutes": _around(10, 1),
    "tester_serial": lambda nature, item: TESTER,
    "cycle_number": lambda nature, item: f"W{nature.rng.randint(10000, 99999)}",
    "electrical_check_reference": lambda nature, item: f"Electrical safety, tester {TESTER}",
}
