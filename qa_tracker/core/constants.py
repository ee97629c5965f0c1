"""Constants of medical acoustics: value, unit, source and standing, a line each. Derived ones are computed."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final


@dataclass(frozen=True)
class Constant:
    """A number with where it comes from; ``standing`` as for limits (confirmed, memory, practice)."""

    name: str
    value: float
    unit: str
    source: str
    standing: str


_OPENSTAX: Final = "OpenStax College Physics 2e, Table 17.5"

SOFT_TISSUE_SPEED: Final = Constant(
    "speed of sound, soft tissue", 1540.0, "m/s", "the consoles' convention", "practice"
)
AIR_SPEED: Final = Constant("speed of sound, air", 330.0, "m/s", _OPENSTAX, "confirmed")
AIR_DENSITY: Final = Constant("density, air", 1.3, "kg/m3", _OPENSTAX, "confirmed")
WATER_SPEED: Final = Constant("speed of sound, water", 1500.0, "m/s", _OPENSTAX, "confirmed")
WATER_DENSITY: Final = Constant("density, water", 1000.0, "kg/m3", _OPENSTAX, "confirmed")
FAT_SPEED: Final = Constant("speed of sound, fat", 1450.0, "m/s", _OPENSTAX, "confirmed")
FAT_DENSITY: Final = Constant("density, fat", 925.0, "kg/m3", _OPENSTAX, "confirmed")
MUSCLE_SPEED: Final = Constant("speed of sound, muscle", 1590.0, "m/s", _OPENSTAX, "confirmed")
MUSCLE_DENSITY: Final = Constant("density, muscle", 1075.0, "kg/m3", _OPENSTAX, "confirmed")
BONE_SPEED: Final = Constant("speed of sound, bone", 4080.0, "m/s", _OPENSTAX, "confirmed")
SOFT_TISSUE_LOSS: Final = Constant(
    "attenuation, soft tissue, one way", 0.5, "dB/cm/MHz", "common practice, no source", "practice"
)

DB_PER_NP: Final = 20 / math.log(10)
"""1 Np = 8.685889638 dB; ISO 80000-8, IEC 60027-3."""
