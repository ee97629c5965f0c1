"""Limits and their sources in words."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.criteria import Band, Criterion, Limit
from qa_tracker.core.decimals import plain
from qa_tracker.core.library_specs import CriterionSpec
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.services.wording_words import (
    REFERENCES,
    VERDICTS,
    amount,
    banding_unit,
    banding_word,
    level_word,
    verdict_word,
    word,
)

STANDINGS: Final = {
    "confirmed": N_("confirmed"),
    "memory": N_("from memory: compare with your own copy"),
    "practice": N_("common practice, no source"),
    "local": N_("a local decision"),
}
CHANGES: Final = {
    ("baseline", "below"): N_("loss of %(limits)s"),
    ("baseline", "above"): N_("rise of %(limits)s"),
    ("baseline", "either"): N_("change of %(limits)s"),
    ("nominal", "below"): N_("shortfall of %(limits)s"),
    ("nominal", "above"): N_("excess of %(limits)s"),
    ("nominal", "either"): N_("deviation of %(limits)s"),
}
BEYOND: Final = {
    (False, True): N_("more than %(amount)s"),
    (False, False): N_("at least %(amount)s"),
    (True, True): N_("less than %(amount)s"),
    (True, False): N_("at most %(amount)s"),
}
BOTH_PARTS: Final = {
    "larger": N_("the larger of %(absolute)s and %(percent)s"),
    "smaller": N_("the smaller of %(absolute)s and %(percent)s"),
    "either": N_("%(absolute)s or %(percent)s (whichever is passed first)"),
}


def standing_word(standing: str | None) -> str:
    """How well a number is known."""
    return word(STANDINGS, standing) if standing else _("standing not given")


def source_line(criterion: CriterionRow, level: str) -> str:
    """Where a limit comes from and how well its number is known; without a level, of each level there is."""
    spec = criterion.spec
    standings = (spec.standing.remedial, spec.standing.suspension)
    known = dict(zip(("remedial", "suspension"), standings, strict=True))
    named = [each for each, standing in known.items() if level == each or (not level and standing)]
    told = {
        "code": criterion.code,
        "set": criterion.set_code,
        "edition": criterion.set_edition,
        "source": spec.source or criterion.set_source,
        "standing": "; ".join(_standing(spec, each, known[each], alone=bool(level)) for each in named),
    }
    if not named:
        return _("%(code)s, %(set)s %(edition)s: %(source)s") % told
    return _("%(code)s, %(set)s %(edition)s: %(source)s; %(standing)s") % told


def _standing(spec: CriterionSpec, level: str, standing: str | None, *, alone: bool) -> str:
    own = spec.own_words.remedial if level == "remedial" else spec.own_words.suspension
    told = {"level": level_word(level), "standing": standing_word(standing), "own": own or ""}
    words = told["standing"] if alone else _("%(level)s %(standing)s") % told
    return words + (_(" (the source calls this level “%(own)s”)") % told if own else "")


def criterion_words(spec: CriterionSpec) -> str:
    """A limit in words: "loss of more than 6 mm remedial, more than 10 mm suspension, against the baseline"."""
    criterion = spec.criterion
    if criterion.grades:
        pairs = ((grade, verdict_word(verdict)) for grade, verdict in criterion.grades)
        return ", ".join(_("%(grade)s: %(verdict)s") % {"grade": g, "verdict": v} for g, v in pairs)
    if criterion.bands:
        bands = "; ".join(_band(spec, band) for band in criterion.bands)
        return _("by %(quantity)s: %(bands)s") % {
            "quantity": banding_word(criterion.banded_by),
            "bands": bands,
        }
    return _flat(spec, criterion)


def _band(spec: CriterionSpec, band: Band) -> str:
    of = spec.criterion
    flat = Criterion(of.basis, of.direction, of.strict, band.remedial, band.suspension)
    unit = banding_unit(of.banded_by)
    ends = {
        "start": "" if band.start is None else amount(plain(band.start), unit),
        "below": "" if band.below is None else amount(plain(band.below), unit),
        "limits": _flat(spec, flat),
    }
    if ends["start"] and ends["below"]:
        return _("from %(start)s to below %(below)s %(limits)s") % ends
    if ends["start"]:
        return _("from %(start)s %(limits)s") % ends
    return _("below %(below)s %(limits)s") % ends


def _flat(spec: CriterionSpec, criterion: Criterion) -> str:
    limits = ", ".join(
        _("%(beyond)s %(level)s")
        % {"beyond": _beyond(spec, criterion, limit), "level": word(VERDICTS, level)}
        for level, limit in criterion.levels()
    )
    if criterion.basis == "ratio":
        return _("%(limits)s, as a share of the other reading") % {"limits": limits}
    if criterion.basis == "none":
        return limits if criterion.direction != "either" else _("%(limits)s, either way") % {"limits": limits}
    change = _(CHANGES[criterion.basis, criterion.direction]) % {"limits": limits}
    return _("%(change)s, against %(reference)s") % {
        "change": change,
        "reference": _(REFERENCES[criterion.basis]),
    }


def _beyond(spec: CriterionSpec, criterion: Criterion, limit: Limit) -> str:
    if limit.coverage is not None and limit.confidence is not None:
        shares = {
            "coverage": amount(plain(limit.coverage), "%"),
            "confidence": amount(plain(limit.confidence), "%"),
        }
        return _("more than its own spread (%(coverage)s of readings, %(confidence)s confidence)") % shares
    downwards = criterion.direction == "below" and criterion.basis in ("none", "ratio")
    return _(BEYOND[downwards, criterion.strict]) % {"amount": _amount(limit, spec.unit)}


def _amount(limit: Limit, unit: str) -> str:
    absolute = "" if limit.absolute is None else amount(plain(limit.absolute), unit)
    share = "" if limit.percent is None else amount(plain(limit.percent), "%")
    if absolute and share:
        return _(BOTH_PARTS[limit.governs]) % {"absolute": absolute, "percent": share}
    return absolute or share
