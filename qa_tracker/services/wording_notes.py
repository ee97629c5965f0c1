"""What a verdict's sentence adds: how a quantity was worked out, where a limit came from, what to mind."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.services.wording_words import amount, percent

MISMATCHES: Final = {
    "mismatch_console": (
        N_("Mind: the baseline was taken on console model %(was)s, this check on %(now)s."),
        N_("Mind: the baseline was taken on another console model, %(was)s."),
    ),
    "mismatch_software": (
        N_("Mind: the baseline was taken with console software %(was)s, this check with %(now)s."),
        N_("Mind: the baseline was taken with other console software, %(was)s."),
    ),
    "mismatch_object": (
        N_("Mind: the baseline was taken on the test object %(was)s, this check on %(now)s."),
        N_("Mind: the baseline was taken on another test object, %(was)s."),
    ),
}


def notes(given: Mapping[str, str]) -> list[str]:
    """Every addition that a verdict's parameters call for, in the order they are read."""
    return [
        *_arithmetic(given),
        *_own_spread(given),
        *_combined(given),
        *_no_share(given),
        *_guard(given),
        *_mismatches(given),
    ]


def _arithmetic(given: Mapping[str, str]) -> list[str]:
    if "arithmetic" not in given:
        return []
    return [_("The reading is worked out: %(arithmetic)s.") % {"arithmetic": given["arithmetic"]}]


def _own_spread(given: Mapping[str, str]) -> list[str]:
    """The arithmetic of a limit of the device's own spread."""
    if "factor" not in given:
        return []
    told = {
        "factor": given["factor"],
        "spread": amount(given["spread"], given.get("unit", "")),
        "setups": given["setups"],
        "coverage": percent(given["coverage"]),
        "confidence": percent(given["confidence"]),
    }
    sentence = _(
        "The limit is the device's own: %(factor)s times %(spread)s, from %(setups)s set-ups, so that %(coverage)s of "
        "its readings lie within with %(confidence)s confidence."
    )
    if given["spread_floored"] != "yes":
        return [sentence % told]
    return [
        sentence % told,
        _("The set-ups scatter less than the resolution; the resolution's share counts."),
    ]


OTHERS: Final = {
    ("baseline", "measurand"): N_("that of the baseline, %(other)s (a reading of the same kind)"),
    ("other", "own"): N_("that of the other reading, %(other)s"),
    ("other", "measurand"): N_(
        "that of the other reading, %(other)s (none is stated for it, so the reading's is taken)"
    ),
}


def _combined(given: Mapping[str, str]) -> list[str]:
    """What the uncertainty is made of, where what the reading is compared with was measured too."""
    if "uncertainty_reading" not in given:
        return []
    unit, weight = given.get("unit", ""), given["uncertainty_weight"]
    basis = "baseline" if given["basis"] == "baseline" else "other"
    other = _(OTHERS[basis, given["uncertainty_whose"]]) % {
        "other": amount(given["uncertainty_reference"], unit)
    }
    if weight != "1":
        other = _("%(weight)s times %(other)s") % {"weight": weight, "other": other}
    told = {"reading": amount(given["uncertainty_reading"], unit), "other": other}
    sentence = _("The uncertainty combines that of the reading, %(reading)s, and %(other)s, as uncorrelated.")
    return [sentence % told]


def _no_share(given: Mapping[str, str]) -> list[str]:
    if given.get("no_share") != "yes":
        return []
    of = amount(given["reference"], given.get("unit", ""))
    return [
        _("No share can be taken of %(reference)s, so only what stands in absolute numbers was compared.")
        % {"reference": of}
    ]


def _guard(given: Mapping[str, str]) -> list[str]:
    if given.get("no_guard") != "yes":
        return []
    return [_("No uncertainty is stated for this measurand, so the limit stands without a guard band.")]


def _mismatches(given: Mapping[str, str]) -> list[str]:
    """What differs between the baseline's key and this check."""
    told = []
    for name, (both, one) in MISMATCHES.items():
        if name in given:
            was, _slash, now = given[name].partition(" / ")
            told.append(_(both if now else one) % {"was": was, "now": now})
    if "baseline_under_review" in given:
        told.append(
            _("The baseline is under review: still compared, until a physicist keeps or replaces it.")
        )
    return told
