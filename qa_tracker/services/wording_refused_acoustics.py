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
    "acoustics.magnitude": N_(
        "%(value)s is too large or too small for any figure of acoustics. Check it against its unit."
    ),
    "acoustics.power": N_(
        "A loss goes with a power of the frequency between 0 and 2, not %(value)s: 1 in soft tissue, 2 in water."
    ),
    "acoustics.angle": N_(
        "%(value)s° is outside 0° to %(most)s°, the angles the formula holds for. Enter one between them."
    ),
    "acoustics.temperature": N_(
        "%(value)s °C is outside %(low)s °C to %(high)s °C, where the formula holds. Nothing is extrapolated: "
        "measure within that range."
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
