"""Numbers of medical acoustics that have a source: value, range, unit, source and standing, a line each.

``low`` and ``high`` are the ends between which the named sources lie, and None where they state no range: no
uncertainty and no middle of a range is made up. The standings are those of limits (confirmed, memory, practice).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final


@dataclass(frozen=True, slots=True)
class KnownNumber:
    """A quantity of a medium: its value, the range its sources give, at least one of the two, and their names."""

    code: str
    value: float | None
    low: float | None
    high: float | None
    unit: str
    source: str
    standing: str


_OPENSTAX: Final = "OpenStax College Physics 2e, Table 17.5"
_KAYE: Final = "Kaye & Laby 2.4.6"
"""Read in a transcription, which was not compared with the table itself."""
_BOTH: Final = f"{_OPENSTAX}; {_KAYE}"
_TEXT: Final = "OpenStax College Physics 2e, 17.7"
_WATER: Final = "Marczak 1997, JASA 102:2776-2779; IAPWS-95"
_BROWNE: Final = "Browne et al. 2003, Ultrasound Med Biol 29(7):1053-1060"

# fmt: off
KNOWN_NUMBERS: Final = (
    KnownNumber("soft_tissue_speed", 1540.0, None, None, "m/s", _TEXT, "confirmed"),
    KnownNumber("soft_tissue_loss", 0.5, None, None, "dB/cm/MHz", "", "practice"),
    KnownNumber("blood_speed", 1570.0, 1570.0, 1584.0, "m/s", _BOTH, "confirmed"),
    KnownNumber("blood_density", 1060.0, 1055.0, 1060.0, "kg/m3", _BOTH, "confirmed"),
    KnownNumber("fat_speed", 1450.0, 1412.0, 1487.0, "m/s", _BOTH, "confirmed"),
    KnownNumber("fat_density", 925.0, 917.0, 939.0, "kg/m3", _BOTH, "confirmed"),
    KnownNumber("muscle_speed", 1590.0, 1542.0, 1626.0, "m/s", _BOTH, "confirmed"),
    KnownNumber("muscle_density", 1075.0, 1070.0, 1075.0, "kg/m3", _BOTH, "confirmed"),
    KnownNumber("liver_speed", None, 1578.0, 1640.0, "m/s", _KAYE, "confirmed"),
    KnownNumber("liver_density", None, 1050.0, 1070.0, "kg/m3", _KAYE, "confirmed"),
    KnownNumber("bone_speed", 4080.0, 1688.0, 4080.0, "m/s", _BOTH, "confirmed"),
    KnownNumber("bone_density", None, 1400.0, 1920.0, "kg/m3", _BOTH, "confirmed"),
    KnownNumber("crystal_speed", 5500.0, None, None, "m/s", _OPENSTAX, "confirmed"),
    KnownNumber("crystal_density", 5600.0, None, None, "kg/m3", _OPENSTAX, "confirmed"),
    KnownNumber("water_speed", 1482.38, 1482.346, 1482.38, "m/s", _WATER, "confirmed"),
    KnownNumber("water_density", 1000.0, None, None, "kg/m3", _OPENSTAX, "confirmed"),
    KnownNumber("air_speed", 330.0, None, None, "m/s", _BOTH, "confirmed"),
    KnownNumber("air_density", 1.3, 1.2, 1.3, "kg/m3", _BOTH, "confirmed"),
    KnownNumber("hydrogel_speed", 1540.0, None, None, "m/s", _BROWNE, "confirmed"),
    KnownNumber("urethane_speed", None, 1430.0, 1450.0, "m/s", _BROWNE, "confirmed"),
)
# fmt: on

SOFT_TISSUE_SPEED_M_S: Final = 1540.0
"""The first of the table, as what a speed of sound is taken to be when none is given."""
DB_PER_NP: Final = 20 / math.log(10)
"""1 Np = 8.685889638 dB; ISO 80000-8, IEC 60027-3."""
