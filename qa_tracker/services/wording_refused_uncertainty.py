"""Sentences of what is refused when an uncertainty is stated."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

UNCERTAINTY: Final = {
    "uncertainty.measurand_unknown": N_(
        "“%(measurand)s” is not a number that any published procedure reads. Choose a measurand of the list."
    ),
    "uncertainty.kind": N_("“%(kind)s” is no way to state an uncertainty. Choose one of: %(known)s."),
    "uncertainty.rule": N_("“%(rule)s” is no decision rule. Choose one of %(known)s, or the default."),
    "uncertainty.source_missing": N_(
        "It is not said where the uncertainty comes from. Name the certificate, the study or the repeats."
    ),
    "uncertainty.not_positive": N_(
        "%(entered)s is not above zero. An uncertainty and its coverage factor are positive numbers."
    ),
    "uncertainty.too_few_repeats": N_(
        "There are %(count)s readings to estimate from. Give two or more repeats, one a line."
    ),
    "uncertainty.reason_missing": N_("It is not said why the statement ends. Give the reason."),
    "uncertainty.unknown": N_(
        "There is no such statement in force: it may have been ended or replaced. Go back to the list."
    ),
}
