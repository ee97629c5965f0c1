"""Baselines about to be signed: the step each would take, how far that is from acceptance, and what it rests on."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass
from decimal import Decimal

from django.utils.formats import date_format
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from qa_tracker.core.decimals import from_scaled, places_of, plain, round_half_even
from qa_tracker.services import wording
from qa_tracker.services.baseline_proposals import Proposal
from qa_tracker.services.baseline_rows import named
from qa_tracker.services.baseline_setups import Figures, figures_of
from qa_tracker.web.presenters.baselines import (
    object_words,
    place_of,
    share_words,
    signed_words,
    value_words,
)
from qa_tracker.web.presenters.charts import amount_words
from qa_tracker.web.presenters.device import Fact

WHOLE = Decimal(100)


@dataclass(frozen=True)
class ShownSetUp:
    """One set-up; ``suspect`` where the outlier test finds it odd."""

    day: dt.date
    value: str
    suspect: bool


@dataclass(frozen=True)
class ShownFigures:
    """What the set-ups give."""

    facts: tuple[Fact, ...]
    setups: tuple[ShownSetUp, ...]
    notes: tuple[str, ...]


@dataclass(frozen=True)
class ShownProposal:
    """One baseline about to be signed."""

    name: str
    where: str
    value: str
    facts: tuple[Fact, ...]
    beyond: str
    figures: ShownFigures | None


def about_to_be_signed(proposal: Proposal) -> ShownProposal:
    """A proposed baseline with its step, its change from acceptance and what it rests on."""
    setting, spec = proposal.setting, proposal.asked.spec
    aperture = setting.aperture.name if setting.aperture else ""
    condition = setting.condition.name if setting.condition else ""
    return ShownProposal(
        spec.name,
        place_of(aperture, condition),
        value_words(setting.qualifier, setting.exact.entered, spec.unit),
        tuple(_facts(proposal)),
        _beyond(proposal),
        shown_figures(proposal) if setting.setups else None,
    )


def _beyond(proposal: Proposal) -> str:
    """A warning where the change from acceptance is more than the first level allows."""
    if not proposal.moved.used or Decimal(proposal.moved.used) <= WHOLE:
        return ""
    return _(
        "Since acceptance the device has changed by more than the %(level)s allows. Against the new baseline this "
        "will not show any more: sign only if it is known why."
    ) % {"level": wording.level_word(proposal.moved.level)}


def _facts(proposal: Proposal) -> list[Fact]:
    setting, unit = proposal.setting, proposal.asked.spec.unit
    source = setting.source
    with_it = (source.console_model, source.console_software, named(source.test_object))
    found = [(_("Epoch"), str(proposal.epoch)), *_steps(proposal)]
    if setting.tie:
        tie = setting.tie
        overlap = tie.exact.entered if tie.exact else ""
        found.append(
            (_("Test objects"), object_words(proposal.moved, named(tie.to.test_object), overlap, unit))
        )
        if tie.why_none:
            found.append((_("Why there is no overlap"), tie.why_none))
    found.append((_("Measured with"), ", ".join(part for part in with_it if part)))
    if setting.expires_on:
        found.append((_("Runs out on"), date_format(setting.expires_on, "j F Y")))
    return [Fact(str(label), says) for label, says in found if says]


def _steps(proposal: Proposal) -> list[tuple[str, str]]:
    change, unit = proposal.moved.change, proposal.asked.spec.unit
    before = next((row for row in proposal.earlier if row.id == change.before), None)
    if before is None:
        return [(_("Change"), _("none: it is the first of its series"))]
    parts = (value_words(before.qualifier, before.entered, before.unit), before.test_object)
    now = ", ".join(part for part in parts if part)
    total = ", ".join((signed_words(change.cumulative, unit), *share_words(proposal.moved)))
    if change.untold:
        total += ", " + _("as far as it can be told")
    return [
        (_("Before"), now),
        (_("Step of the device"), signed_words(change.step, unit)),
        (_("From acceptance"), total),
    ]


def shown_figures(proposal: Proposal) -> ShownFigures:
    """Mean, spread and interval of the set-ups, each set-up, and what is missing or suspect."""
    found, unit = figures_of(proposal), proposal.asked.spec.unit
    setups = tuple(
        ShownSetUp(one.measured_on, amount_words(one.exact.entered, unit), position in found.suspects)
        for position, one in enumerate(proposal.setting.setups)
    )
    return ShownFigures(tuple(_figure_facts(found, unit)), setups, tuple(_figure_notes(found)))


def _figure_facts(found: Figures, unit: str) -> list[Fact]:
    places = places_of(found.mean) + 1

    def short(value: Decimal) -> str:
        return amount_words(plain(round_half_even(value, from_scaled(1, places))), unit)

    facts = [Fact(_("Set-ups"), str(found.count)), Fact(_("Mean"), amount_words(plain(found.mean), unit))]
    if found.standard_deviation is not None:
        facts.append(Fact(_("Standard deviation"), short(found.standard_deviation)))
    facts.append(Fact(_("Least spread: resolution / √12"), short(found.floor)))
    if found.allowance is not None and found.factor is not None:
        half = short(found.allowance)
        told = {"low": short(found.mean - found.allowance), "high": short(found.mean + found.allowance)}
        facts.append(Fact(_("Factor, exact"), f"{found.factor:.3f}"))
        facts.append(Fact(_("Tolerance interval"), _("%(low)s to %(high)s") % told + f" (± {half})"))
    return facts


def _figure_notes(found: Figures) -> list[str]:
    shares = {"coverage": plain(found.coverage), "confidence": plain(found.confidence)}
    notes = []
    if found.missing:
        notes.append(
            ngettext(
                "%(missing)d more set-up is needed before a limit of the device's own spread can judge by it.",
                "%(missing)d more set-ups are needed before a limit of the device's own spread can judge by it.",
                found.missing,
            )
            % {"missing": found.missing}
        )
    else:
        notes.append(
            _("The interval holds %(coverage)s %% of such readings with a confidence of %(confidence)s %%.")
            % shares
        )
    if found.floored:
        notes.append(_("The set-ups scatter less than the resolution can show, so its own spread counts."))
    if found.tested:
        notes.append(
            _("Suspects of the outlier test (generalised ESD, 5 %) are marked. Shown, not applied.")
            if found.suspects
            else _("The outlier test (generalised ESD, 5 %) suspects none. Shown, not applied.")
        )
    else:
        notes.append(_("The outlier test needs fifteen set-ups."))
    return notes
