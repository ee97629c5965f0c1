"""The sentence of a verdict: the arithmetic, the level and what it allows, and what to mind."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from decimal import Decimal
from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.sentence_codes import SentenceCode as Say
from qa_tracker.services.wording_notes import notes
from qa_tracker.services.wording_unjudged import PLAIN
from qa_tracker.services.wording_words import (
    REFERENCES,
    amount,
    banding_unit,
    banding_word,
    capital,
    level_word,
    percent,
    read_amount,
    verdict_word,
)

Parameters = Mapping[str, str]

CHANGES: Final = {
    ("baseline", "below"): N_("a loss of %(amount)s"),
    ("baseline", "above"): N_("a rise of %(amount)s"),
    ("baseline", "either"): N_("a change of %(amount)s"),
    ("nominal", "below"): N_("a shortfall of %(amount)s"),
    ("nominal", "above"): N_("an excess of %(amount)s"),
    ("nominal", "either"): N_("a deviation of %(amount)s"),
}
STARTS: Final = {
    ("above", "yes"): N_("the %(level)s begins above %(amount)s"),
    ("above", "no"): N_("the %(level)s begins at %(amount)s"),
    ("below", "yes"): N_("the %(level)s begins below %(amount)s"),
    ("below", "no"): N_("the %(level)s begins at %(amount)s and below"),
    ("either", "yes"): N_("the %(level)s begins beyond %(amount)s either way"),
    ("either", "no"): N_("the %(level)s begins at %(amount)s either way"),
}
BOTH_PARTS: Final = {
    "larger": N_("%(allowance)s (the larger of %(absolute)s and %(percent)s of %(of)s, which is %(value)s)"),
    "smaller": N_(
        "%(allowance)s (the smaller of %(absolute)s and %(percent)s of %(of)s, which is %(value)s)"
    ),
    "either": N_(
        "%(allowance)s (%(absolute)s or %(percent)s of %(of)s, which is %(value)s: whichever is passed first)"
    ),
}
QUALIFIED_CHANGE: Final = {
    (">", "more"): N_("%(value)s is more than %(size)s above %(reference)s"),
    (">", "less"): N_("%(value)s is less than %(size)s below %(reference)s"),
    (">", "equal"): N_("%(value)s is above %(reference)s"),
    ("<", "more"): N_("%(value)s is less than %(size)s above %(reference)s"),
    ("<", "less"): N_("%(value)s is more than %(size)s below %(reference)s"),
    ("<", "equal"): N_("%(value)s is below %(reference)s"),
    ("=", "more"): N_("%(value)s is %(size)s more than %(reference)s"),
    ("=", "less"): N_("%(value)s is %(size)s less than %(reference)s"),
    ("=", "equal"): N_("%(value)s is the same as %(reference)s"),
}
RULES: Final = {"guarded": N_("guarded acceptance"), "zones": N_("zones with an indeterminate verdict")}
DECIDED_BY: Final = {
    "simple": N_("simple acceptance"),
    "guarded": N_("guarded acceptance"),
    "zones": N_("three zones"),
}
SHARES: Final = {
    "=": N_("It uses %(used)s of %(whose)s."),
    ">": N_("It uses more than %(used)s of %(whose)s."),
    "<": N_("It uses less than %(used)s of %(whose)s."),
}
BESIDE_ALL: Final = {"over": N_("just over %(used)s"), "under": N_("just under %(used)s")}


def verdict_sentence(code: str, parameters: Parameters, verdict: str, level: str = "") -> str:
    """Say why a reading has its verdict.

    Parameters
    ----------
    code, parameters
        As judged (``core.sentence_codes``), with the flags of the baseline's key where there are any.
    verdict, level
        The verdict, and the level that decided it or is in doubt.
    """
    says = _verdict_words(verdict, level)
    if code in COMPARED:
        told = COMPARED[Say(code)](parameters, says)
    elif code in PLAIN:
        told = [PLAIN[Say(code)](parameters, says)]
    else:
        told = [_("The verdict is %(verdict)s (%(code)s).") % {"verdict": says, "code": code}]
    return " ".join([capital(told[0]), *told[1:], *notes(parameters)])


def _verdict_words(verdict: str, level: str) -> str:
    if verdict == "indeterminate" and level:
        return _("%(verdict)s at the %(level)s") % {
            "verdict": verdict_word(verdict),
            "level": level_word(level),
        }
    return verdict_word(verdict)


def _size(given: Parameters, name: str) -> str:
    return amount(given[name], given.get("unit", ""))


def _value(given: Parameters) -> str:
    return read_amount(given["value"], given["value_qualifier"], given.get("unit", ""))


def _reference(given: Parameters) -> str:
    name, qualifier = _(REFERENCES[given["basis"]]), given["reference_qualifier"]
    if qualifier == "=":
        return _("%(name)s of %(amount)s") % {"name": name, "amount": _size(given, "reference")}
    return _("%(name)s (read as %(read)s, taken at %(amount)s)") % {
        "name": name,
        "read": read_amount(given["reference"], qualifier, given.get("unit", "")),
        "amount": _size(given, "reference"),
    }


def finding(given: Parameters) -> str:
    """What was found: the reading beside what it is compared with."""
    if given["basis"] == "none":
        return _("the reading is %(value)s") % {"value": _value(given)}
    if given["basis"] == "ratio":
        return _ratio(given)
    sentence = QUALIFIED_CHANGE[given["value_qualifier"], given["side"]]
    return _(sentence) % {
        "value": _value(given),
        "size": _size(given, "size"),
        "reference": _reference(given),
    }


def _ratio(given: Parameters) -> str:
    return _("%(value)s against %(reference)s is %(ratio)s") % {
        "value": _value(given),
        "reference": _size(given, "reference"),
        "ratio": read_amount(given["ratio"], given["value_qualifier"], "%"),
    }


def limit(given: Parameters) -> str:
    """What the level allows, with the arithmetic of a percentage."""
    level, allowed = level_word(given["level"]), _allowance(given)
    if given["basis"] in ("none", "ratio"):
        return _(STARTS[given["direction"], given["strict"]]) % {"level": level, "amount": allowed}
    change = _(CHANGES[given["basis"], given["direction"]]) % {"amount": allowed}
    if given["strict"] == "yes":
        return _("the %(level)s allows %(change)s") % {"level": level, "change": change}
    return _("the %(level)s begins at %(change)s") % {"level": level, "change": change}


def _allowance(given: Parameters) -> str:
    allowed = _size(given, "allowance")
    if "percent" not in given:
        return allowed
    parts = {
        "allowance": allowed,
        "percent": percent(given["percent"]),
        "of": _size(given, "percent_of"),
        "value": _size(given, "percent_value"),
    }
    if "governs" in given:
        return _(BOTH_PARTS[given["governs"]]) % (parts | {"absolute": _size(given, "absolute")})
    if given["basis"] == "ratio":
        return _("%(percent)s (here %(allowance)s)") % parts
    return _("%(allowance)s (%(percent)s of %(of)s)") % parts


def _judged(given: Parameters, says: str) -> list[str]:
    told = {"finding": finding(given), "limit": limit(given), "verdict": says}
    return [_("%(finding)s; %(limit)s: %(verdict)s.") % told, *_band(given)]


def _band(given: Parameters) -> list[str]:
    """Which band the limit is of."""
    if "banded_by" not in given:
        return []
    name, unit = given["banded_by"], banding_unit(given["banded_by"])
    told = {"name": banding_word(name), "quantity": amount(given["quantity"], unit)}
    bounds = {"start": given.get("band_start", ""), "below": given.get("band_below", "")}
    words = told | {side: amount(end, unit) for side, end in bounds.items()}
    if bounds["start"] and bounds["below"]:
        return [_("The limit holds from %(start)s to below %(below)s; the %(name)s is %(quantity)s.") % words]
    if bounds["start"]:
        return [_("The limit holds from %(start)s; the %(name)s is %(quantity)s.") % words]
    return [_("The limit holds below %(below)s; the %(name)s is %(quantity)s.") % words]


def _share(given: Parameters) -> list[str]:
    """The share of the first level's allowance; none where nothing of it is used."""
    used, qualifier = given.get("used", ""), given["departure_qualifier"]
    if not used or not Decimal(used):
        return []
    if given["basis"] == "none" and given["direction"] == "below":
        qualifier = {">": "<", "<": ">"}.get(qualifier, qualifier)
    whose = _("the allowance") if _is_of_shown(given) else _("what the remedial level allows")
    share = percent(used)
    if qualifier == "=" and given.get("used_beside"):
        share = _(BESIDE_ALL[given["used_beside"]]) % {"used": share}
    return [_(SHARES[qualifier]) % {"used": share, "whose": whose}]


def _is_of_shown(given: Parameters) -> bool:
    """Whether the share is of the level that is shown; else it is of the remedial level, the lower one."""
    share, of = Decimal(given["departure"]), Decimal(given["allowance"])
    if given["basis"] == "none" and given["direction"] == "below":
        share, of = of, share
    return of > 0 and abs(100 * share / of - Decimal(given["used"])) <= Decimal("0.1")


def _likelihood(given: Parameters) -> str:
    """The probability of conformity to four decimals; nothing measured is certain, so neither 0 nor 1 is said."""
    told = given["probability"]
    bounds = {"0.0000": _("below 0.0001"), "1.0000": _("above 0.9999")}
    return bounds.get(told, told)


def _probability(given: Parameters) -> list[str]:
    if "probability" not in given:
        return []
    told = {"probability": _likelihood(given), "level": level_word(given["level"])}
    return [_("The probability of conformity with the %(level)s is %(probability)s.") % told]


def _certainty(given: Parameters) -> list[str]:
    """The probability, with the rule and the uncertainty where the sentence has not named them."""
    if "probability" not in given:
        return []
    told = {
        "rule": _(DECIDED_BY[given.get("rule", "simple")]),
        "uncertainty": _size(given, "uncertainty"),
        "probability": _likelihood(given),
        "level": level_word(given["level"]),
    }
    sentence = _(
        "Decided by %(rule)s; with the expanded uncertainty of %(uncertainty)s (k = 2) the probability of "
        "conformity with the %(level)s is %(probability)s."
    )
    return [sentence % told]


def _within(given: Parameters, says: str) -> list[str]:
    told = _judged(given, says) + _share(given)
    if given["strict"] == "yes" and Decimal(given["departure"]) == Decimal(given["allowance"]):
        told.append(_("Exactly the limit conforms."))
    return told + _certainty(given)


def _within_open(given: Parameters, says: str) -> list[str]:
    """A bound that conforms whatever it stands for; a loss that may hide behind it is named."""
    told = _judged(given, says)
    if given.get("reference_qualifier", "=") == "=":
        told.append(_("Every value that the reading can stand for conforms."))
    elif given["value_qualifier"] == "=":
        told.append(_("Every value that the baseline can stand for gives the same."))
    else:
        told.append(_("Every value that reading and baseline can stand for gives the same."))
    if given["departure_qualifier"] == "<" and Decimal(given["departure"]) > 0 and given["basis"] != "none":
        change = _(CHANGES.get((given["basis"], given["direction"]), N_("%(amount)s")))
        hidden = change % {"amount": _("less than %(size)s") % {"size": _size(given, "departure")}}
        told.append(_("Behind it, %(change)s could hide.") % {"change": hidden})
    return told + _probability(given)


def _better(given: Parameters, says: str) -> list[str]:
    told = {"finding": finding(given), "verdict": says}
    return [
        _("%(finding)s, better than expected: %(verdict)s.") % told,
        _("Check the settings: they often explain a change for the better this large."),
    ]


def _open_to(given: Parameters, says: str) -> list[str]:
    """What was found, where the baseline's bound leaves the verdict open."""
    told = {"finding": finding(given), "limit": limit(given), "verdict": says}
    sentence = _(
        "%(finding)s; %(limit)s, and the baseline's bound leaves open whether that is passed: %(verdict)s."
    )
    return [sentence % told, *_band(given), *_proven(given)]


def _hidden_loss(given: Parameters, says: str) -> list[str]:
    told, bound = _open_to(given, says), _size(given, "reference")
    if given["hidden"] == "both":
        bound = _size(given, "value")
        sentence = _(
            "Reading and baseline are both bounds: a loss that leaves more than %(bound)s doesn't show."
        )
    else:
        sentence = _(
            "The baseline is only a bound, more than %(bound)s: the true loss is larger by as much as the device "
            "then reached beyond that."
        )
    return [*told, sentence % {"bound": bound}]


def _open_baseline(given: Parameters, says: str) -> list[str]:
    return [
        *_open_to(given, says),
        _("The baseline is only a bound: the true change may be larger than it looks."),
    ]


def _beyond(given: Parameters, says: str) -> list[str]:
    return _judged(given, says) + _share(given) + _certainty(given)


def _guard_band(given: Parameters, says: str) -> list[str]:
    told = {
        "finding": finding(given),
        "limit": limit(given),
        "uncertainty": _size(given, "uncertainty"),
        "acceptance": _size(given, "acceptance"),
        "verdict": says,
    }
    sentence = _(
        "%(finding)s; %(limit)s, and with the expanded uncertainty of %(uncertainty)s (k = 2) kept free "
        "the limit of acceptance is %(acceptance)s: %(verdict)s."
    )
    if given["direction"] == "either" and Decimal(given["acceptance"]) < 0:
        # No change is smaller than none: a limit of acceptance below zero would only puzzle.
        sentence = _(
            "%(finding)s; %(limit)s, but the expanded uncertainty of %(uncertainty)s (k = 2) is larger than that, "
            "so this is not measured well enough to be accepted: %(verdict)s."
        )
    return [sentence % told, *_band(given), *_share(given), *_probability(given)]


def _proven(given: Parameters) -> list[str]:
    if given["proven"] != "remedial":
        return []
    return [_("It is beyond the remedial level in any case.")]


def _straddles(given: Parameters, says: str) -> list[str]:
    told = {"finding": finding(given), "limit": limit(given), "verdict": says}
    sentence = _("%(finding)s; %(limit)s, and the reading can lie on either side of that: %(verdict)s.")
    return [sentence % told, *_band(given), *_proven(given)]


def _too_close(given: Parameters, says: str) -> list[str]:
    told = {
        "finding": finding(given),
        "limit": limit(given),
        "uncertainty": _size(given, "uncertainty"),
        "verdict": says,
    }
    sentence = _(
        "%(finding)s; %(limit)s, which is nearer than the expanded uncertainty of %(uncertainty)s (k = 2): "
        "%(verdict)s."
    )
    return [sentence % told, *_band(given), *_proven(given), *_share(given), *_probability(given)]


def _no_uncertainty(given: Parameters, says: str) -> list[str]:
    told = {
        "finding": finding(given),
        "limit": limit(given),
        "rule": _(RULES.get(given["rule"], given["rule"])),
        "verdict": says,
    }
    sentence = _("%(finding)s; %(limit)s, but the rule (%(rule)s) needs an uncertainty: %(verdict)s.")
    return [sentence % told, _("Give the uncertainty of this measurand, or choose simple acceptance.")]


COMPARED: Final[dict[Say, Callable[[Parameters, str], list[str]]]] = {
    Say.WITHIN: _within,
    Say.WITHIN_OPEN: _within_open,
    Say.BETTER_THAN_EXPECTED: _better,
    Say.HIDDEN_LOSS: _hidden_loss,
    Say.OPEN_BASELINE: _open_baseline,
    Say.BEYOND: _beyond,
    Say.GUARD_BAND: _guard_band,
    Say.STRADDLES: _straddles,
    Say.TOO_CLOSE: _too_close,
    Say.NO_UNCERTAINTY: _no_uncertainty,
}
