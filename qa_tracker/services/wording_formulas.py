"""Words of formulas: the titles of those that are ready, and what each function gives."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

READY_TITLES: Final = {
    "distance_error": N_("Distance error: reading less nominal"),
    "percent_error": N_("Percent error: reading less nominal, as a share of the nominal"),
    "ellipsoid_volume": N_("Volume of an ellipsoid from three diameters"),
    "range_of_repeats": N_("Range of the repeats: largest less smallest"),
    "mean_of_repeats": N_("Mean of the repeats"),
    "difference": N_("Difference: after less before"),
    "ratio": N_("Ratio of two readings"),
    "sound_speed_correction": N_(
        "Distance along the beam, corrected for the object's speed of sound by the console's setting"
    ),
}
FUNCTION_WORDS: Final = {
    "mean": N_("the mean of a list; its unit is the list's"),
    "range": N_("the largest of a list less its smallest"),
    "standard_deviation": N_("the standard deviation of a list as of a sample (n - 1)"),
    "least": N_("the smallest of a list, or of two and more numbers"),
    "greatest": N_("the largest of a list, or of two and more numbers"),
    "abs": N_("a number without its sign"),
    "sqrt": N_("the square root of a number; its unit is the root of the number's"),
}
