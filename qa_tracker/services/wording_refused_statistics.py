"""Sentences of what the statistics of baselines and the risks of deciding refuse."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

STATISTICS: Final = {
    "baseline.no_setups": N_("There is no set-up to make a baseline of. Choose or type at least one."),
    "baseline.too_few_setups": N_(
        "There are %(setups)s set-ups where %(least)s are needed. Measure more, on other days."
    ),
    "baseline.spread": N_("%(entered)s can't be a standard deviation. Give a number of zero or more."),
    "baseline.outlier_terms": N_(
        "The outlier test can't look for %(most)s values at a significance of %(significance)s. Look for one or "
        "more, at more than 0 and less than 1."
    ),
    "uncertainty.confidence": N_(
        "%(entered)s is no level of confidence. Give more than 0 and less than 100 percent."
    ),
    "risk.limits": N_(
        "The limits run from %(low)s to %(high)s, so nothing lies between them. Give the lower one first."
    ),
    "risk.nothing_accepted": N_(
        "A guard band of %(width)s on each side leaves nothing to accept from %(low)s to %(high)s. Take a smaller "
        "multiple, or measure with less uncertainty."
    ),
    "risk.process": N_(
        "%(entered)s can't be the standard deviation of what is measured. Give a number above zero."
    ),
}
