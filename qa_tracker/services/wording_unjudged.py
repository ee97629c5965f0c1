"""The sentences of readings that were not compared: grades, what was not seen, and what can't be judged."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Final

from django.utils.translation import gettext as _
from django.utils.translation import gettext_noop as N_

from qa_tracker.core.sentence_codes import SentenceCode as Say
from qa_tracker.services.wording_words import (
    ARRAYS,
    REFERENCES,
    amount,
    banding_unit,
    banding_word,
    capital,
    kind_word,
    unit_words,
    word,
)

Parameters = Mapping[str, str]


def _not_seen(given: Parameters, says: str) -> str:
    return _("Nothing was seen, which is worse than any value the limit could allow: %(verdict)s.") % {
        "verdict": says
    }


def _graded(given: Parameters, says: str) -> str:
    told = {"grade": given["grade"], "verdict": says}
    if given["grade"] in ("yes", "no"):
        return _("The answer is “%(grade)s”: %(verdict)s.") % told
    return _("The grade is “%(grade)s”: %(verdict)s.") % told


NUMBERS: Final = {
    "value": N_("the reading"),
    "nominal": N_("the nominal value"),
    "baseline": N_("the baseline"),
    "reference": N_("what it is compared with"),
    "uncertainty": N_("the uncertainty"),
}


def _not_finite(given: Parameters, says: str) -> str:
    told = {"what": _(NUMBERS.get(given["what"], given["what"])), "verdict": says}
    sentence = _("%(what)s is not a finite number: %(verdict)s. Look at the readings it is computed from.")
    return capital(sentence % told)


def _wrong_unit(given: Parameters, says: str) -> str:
    sentence = _(
        "The reading is in %(unit)s and the limit in %(wanted)s; nothing is converted: %(verdict)s. "
        "Read it in %(wanted)s."
    )
    read_in = unit_words(given["unit"]) if given["unit"] else _("no unit")
    return sentence % {"unit": read_in, "wanted": unit_words(given["criterion_unit"]), "verdict": says}


def _no_nominal(given: Parameters, says: str) -> str:
    return _(
        "There is no nominal value to compare with: %(verdict)s. Name the test object whose true values are "
        "on record."
    ) % {"verdict": says}


def _no_baseline(given: Parameters, says: str) -> str:
    return _("There is no baseline yet to compare with: %(verdict)s. A physicist can set one.") % {
        "verdict": says
    }


def _baseline_not_seen(given: Parameters, says: str) -> str:
    return _(
        "The baseline was “not seen”, so no change from it can be told: %(verdict)s. A physicist can set "
        "another."
    ) % {"verdict": says}


def _no_reference(given: Parameters, says: str) -> str:
    return _(
        "The other reading that this one is judged against is missing: %(verdict)s. Read both in one check."
    ) % {"verdict": says}


def _zero_reference(given: Parameters, says: str) -> str:
    names = REFERENCES | {"ratio": N_("the other reading")}
    told = {
        "name": _(names[given["basis"]]),
        "amount": amount(given["reference"], given["unit"]),
        "verdict": says,
    }
    return capital(_("%(name)s is %(amount)s, of which no share can be taken: %(verdict)s.") % told)


def _small_reference(given: Parameters, says: str) -> str:
    told = {
        "amount": amount(given["reference"], given["unit"]),
        "least": amount(given["least_reference"], given["unit"]),
        "verdict": says,
    }
    sentence = _(
        "The other reading is %(amount)s, below %(least)s, which is ten steps of its resolution; a share of so little "
        "says nothing (common practice, no source): %(verdict)s. Look at how the other reading was taken and read "
        "both again, and go by the limits that stand on no ratio."
    )
    return sentence % told


def _below_zero(given: Parameters, says: str) -> str:
    told = {
        "what": _(NUMBERS.get(given["what"], given["what"])),
        "amount": amount(given["amount"], given.get("unit", "")),
        "verdict": says,
    }
    sentence = _(
        "%(what)s is %(amount)s, and this quantity is never below zero: %(verdict)s. Look for a stray sign, and put "
        "it right."
    )
    return capital(sentence % told)


def _no_band_quantity(given: Parameters, says: str) -> str:
    told = {"name": banding_word(given["banded_by"]), "verdict": says}
    return (
        _("The limit depends on the %(name)s, which is not on record: %(verdict)s. Add it to the condition.")
        % told
    )


def _outside_bands(given: Parameters, says: str) -> str:
    quantity = amount(given["quantity"], banding_unit(given["banded_by"]))
    told = {"name": banding_word(given["banded_by"]), "quantity": quantity, "verdict": says}
    return _("There is no limit for a %(name)s of %(quantity)s: %(verdict)s.") % told


def _not_seen_undecided(given: Parameters, says: str) -> str:
    return _("Nothing was seen, and the limit has two sides, so it can't be told which: %(verdict)s.") % {
        "verdict": says
    }


def _unknown_grade(given: Parameters, says: str) -> str:
    told = {"grade": given["grade"], "known": given["known"], "verdict": says}
    return _("The limit does not know the grade “%(grade)s”, only %(known)s: %(verdict)s.") % told


def _no_reading(given: Parameters, says: str) -> str:
    return _("There is no reading: %(verdict)s.") % {"verdict": says}


def _kind_not_judged(given: Parameters, says: str) -> str:
    told = {"kind": kind_word(given["kind"]), "verdict": says}
    return _("A reading of this kind (%(kind)s) is not judged by this limit: %(verdict)s.") % told


def _too_few_setups(given: Parameters, says: str) -> str:
    told = {"setups": given["setups"], "least": given["least"], "verdict": says}
    sentence = _(
        "The limit is built from the device's own baseline, which rests on %(setups)s independent set-ups where "
        "%(least)s are needed: %(verdict)s. Measure more on other days, and set the baseline from them all."
    )
    return sentence % told


def _expired_baseline(given: Parameters, says: str) -> str:
    told = {"day": given["expired_on"], "verdict": says}
    return _("The baseline ran out on %(day)s: %(verdict)s. A physicist can set another.") % told


def _object_not_named(given: Parameters, says: str) -> str:
    if given["was"]:
        sentence = _(
            "The baseline was taken on %(was)s and this reading names no test object, and a depth does not pass "
            "from one test object to another: %(verdict)s. Measure again, and say on which object."
        )
    else:
        sentence = _(
            "This reading was taken on %(now)s and its baseline names no test object, and a depth does not pass "
            "from one test object to another: %(verdict)s. A physicist can set a baseline on this object."
        )
    return sentence % {"was": given["was"], "now": given["now"], "verdict": says}


def _other_object(given: Parameters, says: str) -> str:
    told = {"was": given["was"], "now": given["now"], "verdict": says}
    sentence = _(
        "The baseline was taken on %(was)s and this reading on %(now)s, and a depth does not pass from one "
        "test object to another: %(verdict)s. Read both objects once, and set a baseline on this one too."
    )
    return sentence % told


def _array_kind(given: Parameters, says: str) -> str:
    told = {"kind": word(ARRAYS, given["array_kind"]), "verdict": says}
    sentence = _(
        "On this kind of array (%(kind)s) a dark line does not stand for an element, so the limit says nothing: "
        "%(verdict)s."
    )
    return sentence % told


MEDIA: Final = {
    "phantom": N_("in a test object"),
    "air": N_("in air"),
    "electrical": N_("electrical"),
}


def _other_medium(given: Parameters, says: str) -> str:
    told = {
        "medium": word(MEDIA, given["medium"]),
        "wanted": word(MEDIA, given["wanted"]),
        "verdict": says,
    }
    return _("The limit is for a reading %(wanted)s, and this one is %(medium)s: %(verdict)s.") % told


def _other_method(given: Parameters, says: str) -> str:
    told = {"method": given["method"], "wanted": given["wanted"], "verdict": says}
    return _("The limit is for the method %(wanted)s, and this reading's is %(method)s: %(verdict)s.") % told


CLASSES: Final = {
    "protection_class": N_("protection class"),
    "applied_part_type": N_("applied-part type"),
}


def _other_class(given: Parameters, says: str) -> str:
    told = {
        "what": word(CLASSES, given["what"]),
        "has": given["has"],
        "wanted": given["wanted"],
        "verdict": says,
    }
    sentence = _("The limit is for %(what)s %(wanted)s, and this device is %(has)s: %(verdict)s.")
    return sentence % told


def _no_input(given: Parameters, says: str) -> str:
    told = {"names": given["names"], "verdict": says}
    return _("It is worked out from readings that are missing (%(names)s): %(verdict)s.") % told


def _open_input(given: Parameters, says: str) -> str:
    told = {"names": given["names"], "verdict": says}
    return _("It is worked out from a reading that is only a bound (%(names)s): %(verdict)s.") % told


def _layout_compensated(given: Parameters, says: str) -> str:
    sentence = _(
        "The test object's layout already makes up for its sound speed, so a corrected distance would be wrong: "
        "%(verdict)s. Compare the reading itself with the nominal distance."
    )
    return sentence % {"verdict": says}


PLAIN: Final[dict[Say, Callable[[Parameters, str], str]]] = {
    Say.NOT_SEEN: _not_seen,
    Say.GRADED: _graded,
    Say.NO_READING: _no_reading,
    Say.NOT_FINITE: _not_finite,
    Say.WRONG_UNIT: _wrong_unit,
    Say.NO_NOMINAL: _no_nominal,
    Say.NO_BASELINE: _no_baseline,
    Say.BASELINE_NOT_SEEN: _baseline_not_seen,
    Say.NO_REFERENCE: _no_reference,
    Say.ZERO_REFERENCE: _zero_reference,
    Say.SMALL_REFERENCE: _small_reference,
    Say.BELOW_ZERO: _below_zero,
    Say.NO_BAND_QUANTITY: _no_band_quantity,
    Say.OUTSIDE_BANDS: _outside_bands,
    Say.NOT_SEEN_UNDECIDED: _not_seen_undecided,
    Say.UNKNOWN_GRADE: _unknown_grade,
    Say.KIND_NOT_JUDGED: _kind_not_judged,
    Say.TOO_FEW_SETUPS: _too_few_setups,
    Say.EXPIRED_BASELINE: _expired_baseline,
    Say.OTHER_OBJECT: _other_object,
    Say.OBJECT_NOT_NAMED: _object_not_named,
    Say.ARRAY_KIND: _array_kind,
    Say.OTHER_MEDIUM: _other_medium,
    Say.OTHER_METHOD: _other_method,
    Say.OTHER_CLASS: _other_class,
    Say.NO_INPUT: _no_input,
    Say.OPEN_INPUT: _open_input,
    Say.LAYOUT_COMPENSATED: _layout_compensated,
}
