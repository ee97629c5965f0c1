"""Sentences of what is refused when an acoustic figure is worked out."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

ACOUSTICS: Final = {
    "acoustics.not_positive": N_(
        "%(value)s is not above zero, which this figure needs. Enter a positive number."
    ),
    "acoustics.negative": N_("%(value)s is below zero. Enter zero or more."),
    "acoustics.not_finite": N_("%(value)s is not a finite number. Enter the value that was measured."),
    "acoustics.angle": N_("An angle of %(value)s° is outside 0° to %(most)s°, for which the formula stands."),
    "acoustics.temperature": N_(
        "%(value)s °C is outside %(low)s °C to %(high)s °C, for which the formula was fitted. Nothing is extrapolated."
    ),
    "acoustics.lateral": N_(
        "Across the beam a distance is placed by the scan's geometry, not by the time of flight, so the speed of sound "
        "does not correct it. Compare the reading itself with the nominal distance."
    ),
    "acoustics.compensated": N_(
        "The object's layout already makes up for its speed of sound, so a corrected distance would be wrong. "
        "Compare the reading itself with the nominal distance."
    ),
}
