"""The numbers of media that have a source, in words."""

from __future__ import annotations

from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from qa_tracker.core.constants import KNOWN_NUMBERS, KnownNumber
from qa_tracker.services import wording
from qa_tracker.web.presenters.figures import Words, between, significant, with_unit

NAMES: dict[str, Words] = {
    "soft_tissue_speed": gettext_lazy("Soft tissue, the consoles' convention: speed of sound"),
    "soft_tissue_loss": gettext_lazy("Soft tissue: attenuation, one way"),
    "blood_speed": gettext_lazy("Blood: speed of sound"),
    "blood_density": gettext_lazy("Blood: density"),
    "fat_speed": gettext_lazy("Fat: speed of sound"),
    "fat_density": gettext_lazy("Fat: density"),
    "muscle_speed": gettext_lazy("Muscle: speed of sound"),
    "muscle_density": gettext_lazy("Muscle: density"),
    "liver_speed": gettext_lazy("Liver: speed of sound"),
    "liver_density": gettext_lazy("Liver: density"),
    "bone_speed": gettext_lazy("Bone, which varies: speed of sound"),
    "bone_density": gettext_lazy("Bone, which varies: density"),
    "crystal_speed": gettext_lazy("Barium titanate crystal: speed of sound"),
    "crystal_density": gettext_lazy("Barium titanate crystal: density"),
    "water_speed": gettext_lazy("Water at 20 °C: speed of sound"),
    "water_density": gettext_lazy("Water: density"),
    "air_speed": gettext_lazy("Air: speed of sound"),
    "air_density": gettext_lazy("Air: density"),
    "hydrogel_speed": gettext_lazy("Hydrogel object at room temperature: speed of sound"),
    "urethane_speed": gettext_lazy("Urethane object, varying by ±1.2 % over 10 to 35 °C: speed of sound"),
}
SYMBOLS = {"kg/m3": "kg/m³", "dB/cm/MHz": "dB/(cm MHz)"}
DIGITS = 7


@dataclass(frozen=True)
class ShownNumber:
    """One line of the table."""

    name: Words
    value: str
    between: str
    source: str
    standing: str


def known_numbers() -> tuple[ShownNumber, ...]:
    """Every number, in the order it is kept."""
    return tuple(_shown(each) for each in KNOWN_NUMBERS)


def _shown(known: KnownNumber) -> ShownNumber:
    unit = SYMBOLS.get(known.unit, known.unit)
    ends = [significant(end, DIGITS) for end in (known.low, known.high) if end is not None]
    return ShownNumber(
        NAMES[known.code],
        with_unit(significant(known.value, DIGITS), unit) if known.value is not None else "",
        with_unit(between(*ends), unit) if len(ends) == 2 else _("no range stated"),
        known.source,
        wording.standing_word(known.standing),
    )
