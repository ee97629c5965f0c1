"""What is said where a baseline is refused."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

BASELINES: Final = {
    "baseline.last_fails": N_(
        "The last reading of %(measurand)s, %(value)s of %(moment)s, is beyond the %(level)s of %(criterion)s. No "
        "baseline may hide that. Mend the fault and measure again, then set the baseline."
    ),
    "baseline.no_overlap": N_(
        "The baseline of %(measurand)s stands on %(was)s, and depths don't pass to %(now)s by themselves. Read both "
        "objects within %(days)s days, or say why the one before could not be read."
    ),
    "baseline.object_not_named": N_(
        "The baseline of %(measurand)s stands on %(was)s, and one on no test object would be compared with readings "
        "on any. Name the test object this value was measured on."
    ),
    "baseline.series_twice": N_(
        "“%(measurand)s” is given twice for the same part of the device. Give one value for each series."
    ),
    "baseline.expires_early": N_(
        "%(day)s has come already. Choose a later day for the baseline to run out, or leave it empty."
    ),
    "baseline.setup_twice": N_(
        "The same check is chosen twice. A set-up counts once: choose another, or leave one out."
    ),
    "baseline.setup_unknown": N_(
        "One of the checks chosen has no such reading, or was amended or voided since. Look at the list again."
    ),
    "baseline.setup_day": N_(
        "The value “%(value)s” has no day, or one to come. Write each value after the day on which it was measured."
    ),
    "baseline.setup_bound": N_(
        "“%(value)s” is only a bound, and a mean of bounds tells nothing. Leave that check out."
    ),
    "baseline.setups_few": N_(
        "A mean needs at least two set-ups, and a limit of the device's own spread ten. Choose or type more."
    ),
    "baseline.setups_one_day": N_(
        "All set-ups are of %(day)s. They share whatever that day was, so they are not independent: add some of "
        "another day."
    ),
    "baseline.setups_mixed": N_(
        "The set-ups were measured with different consoles, software or test objects. A baseline has one of each: "
        "choose set-ups that agree."
    ),
    "baseline.setups_line": N_(
        "“%(line)s” can't be read. Write a day and a value on each line, such as 2030-01-31 8.5."
    ),
    "baseline.none_chosen": N_("No baseline is chosen. Choose those that are to be kept."),
    "baseline.unknown": N_(
        "One of the baselines chosen is no longer in force. Look at the device again: it may have been replaced."
    ),
    "baseline.not_under_review": N_(
        "One of the baselines chosen is not under review, so there is nothing to keep. Look at the device again."
    ),
}
