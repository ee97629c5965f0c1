"""The sentence of a verdict, made from what the judging hands over."""

from __future__ import annotations

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json
from qa_tracker.core.sentence_codes import SentenceCode as Say
from qa_tracker.services.wording import verdict_sentence


def _limit(basis, direction, remedial=None, suspension=None, **more):
    levels = {"remedial": remedial, "suspension": suspension}
    return from_json({"basis": basis, "direction": direction} | levels | more)


LOSS = _limit("baseline", "below", {"absolute": "6"}, {"absolute": "10"})
DISTANCE = _limit("nominal", "either", {"absolute": "1.5", "percent": "1.5"})
RISE = _limit("baseline", "above", {"absolute": "2"})
GREY = _limit("baseline", "either", {"absolute": "2", "percent": "10", "governs": "either"})
TARGET = _limit("nominal", "either", {"percent": "5"})
DIP = _limit("none", "above", {"absolute": "4"}, {"absolute": "6"}, strict=False)
LUX = _limit("none", "below", None, {"absolute": "200"})
SHARE = _limit("ratio", "above", None, {"percent": "80"})
BANDS = [
    {"below": "3", "remedial": {"absolute": "7"}},
    {"from": "3", "below": "7", "remedial": {"absolute": "5"}},
    {"from": "7", "remedial": {"absolute": "3"}},
]
RING = _limit("none", "above", bands=BANDS, banded_by="test_frequency_mhz")
HOLE = _limit("none", "above", bands=BANDS[1:2], banded_by="test_frequency_mhz")
GRADES = from_json({"grades": {"green": "conforming", "amber": "remedial", "no": "suspension"}})

# name, code, criterion, what is judged, sentence
TABLE = [
    (
        "month 11 of a slow loss", Say.BEYOND, LOSS, {"value": "145.4", "baseline": "152.0"},
        "145.4 mm is 6.6 mm less than the baseline of 152.0 mm; the remedial level allows a loss of 6 mm: "
        "remedial. It uses 110 % of the allowance.",
    ),
    (
        "month 17, beyond both levels", Say.BEYOND, LOSS, {"value": "141.8", "baseline": "152.0"},
        "141.8 mm is 10.2 mm less than the baseline of 152.0 mm; the suspension level allows a loss of 10 mm: "
        "suspension. It uses 170 % of what the remedial level allows.",
    ),
    (
        "exactly at the limit", Say.WITHIN, LOSS, {"value": "146.0", "baseline": "152.0"},
        "146.0 mm is 6.0 mm less than the baseline of 152.0 mm; the remedial level allows a loss of 6 mm: "
        "conforming. It uses 100 % of the allowance. Exactly the limit conforms.",
    ),
    (
        "no change", Say.WITHIN, LOSS, {"value": "152", "baseline": "152"},
        "152 mm is the same as the baseline of 152 mm; the remedial level allows a loss of 6 mm: conforming.",
    ),
    (
        "the larger part governs", Say.BEYOND, DISTANCE, {"value": "153", "nominal": "150"},
        "153 mm is 3 mm more than the nominal value of 150 mm; the remedial level allows a deviation of 2.25 mm "
        "(the larger of 1.5 mm and 1.5 % of 150 mm, which is 2.25 mm): remedial. It uses 133.3 % of the allowance.",
    ),
    (
        "either part may be passed", Say.BEYOND, GREY, {"value": "12", "baseline": "10", "unit": "1"},
        "12 is 2 more than the baseline of 10; the remedial level allows a change of 1 (2 or 10 % of 10, which "
        "is 1: whichever is passed first): remedial. It uses 200 % of the allowance.",
    ),
    (
        "a percentage alone", Say.WITHIN, TARGET, {"value": "10.4", "nominal": "10", "unit": "cm2"},
        "10.4 cm² is 0.4 cm² more than the nominal value of 10 cm²; the remedial level allows a deviation of "
        "0.5 cm² (5 % of 10 cm²): conforming. It uses 80 % of the allowance.",
    ),
    (
        "an upper limit that itself fails", Say.BEYOND, DIP, {"value": "4.0", "unit": "dB"},
        "The reading is 4.0 dB; the remedial level begins at 4 dB: remedial. It uses 100 % of the allowance.",
    ),
    (
        "a lower limit", Say.BEYOND, LUX, {"value": "160", "unit": "lux"},
        "The reading is 160 lx; the suspension level begins below 200 lx: suspension. It uses 125 % of the allowance.",
    ),
    (
        "a share of another reading", Say.BEYOND, SHARE, {"value": "176", "reference": "210", "unit": "uA"},
        "176 µA against 210 µA is 83.8 %; the suspension level begins above 80 % (here 168 µA): suspension. It "
        "uses 104.8 % of the allowance.",
    ),
    (
        "a band", Say.BEYOND, RING, {"value": "5.5", "quantity": "3"},
        "The reading is 5.5 mm; the remedial level begins above 5 mm: remedial. The limit holds from 3 MHz to "
        "below 7 MHz; the test frequency is 3 MHz. It uses 110 % of the allowance.",
    ),
    (
        "the lowest band", Say.WITHIN, RING, {"value": "0", "quantity": "2.5"},
        "The reading is 0 mm; the remedial level begins above 7 mm: conforming. The limit holds below 3 MHz; the "
        "test frequency is 2.5 MHz.",
    ),
    (
        "the highest band", Say.WITHIN, RING, {"value": "0", "quantity": "7"},
        "The reading is 0 mm; the remedial level begins above 3 mm: conforming. The limit holds from 7 MHz; the "
        "test frequency is 7 MHz.",
    ),
    (
        "a bound that conforms", Say.WITHIN_OPEN, LOSS, {"value": "150", "qualifier": ">", "baseline": "152"},
        "More than 150 mm is less than 2 mm below the baseline of 152 mm; the remedial level allows a loss of "
        "6 mm: conforming. Every value that the reading can stand for conforms. Behind it, a loss of less than "
        "2 mm could hide.",
    ),
    (
        "a bound on the good side", Say.WITHIN_OPEN, LOSS, {"value": "153", "qualifier": ">", "baseline": "152"},
        "More than 153 mm is more than 1 mm above the baseline of 152 mm; the remedial level allows a loss of "
        "6 mm: conforming. Every value that the reading can stand for conforms.",
    ),
    (
        "a gain", Say.BETTER_THAN_EXPECTED, LOSS, {"value": "158.1", "baseline": "152"},
        "158.1 mm is 6.1 mm more than the baseline of 152 mm, better than expected: conforming. Check the "
        "settings: they often explain a change for the better this large.",
    ),
    (
        "a baseline that is a bound", Say.HIDDEN_LOSS, LOSS,
        {"value": "158", "baseline": "160", "baseline_qualifier": ">"},
        "158 mm is 2 mm less than the baseline (read as more than 160 mm, taken at 160 mm); the suspension level "
        "allows a loss of 10 mm, and the baseline's bound leaves open whether that is passed: indeterminate at the "
        "suspension level. The baseline is only a bound, more than 160 mm: the true loss is larger by as much as the "
        "device then reached beyond that.",
    ),
    (
        "two bounds", Say.HIDDEN_LOSS, LOSS,
        {"value": "160", "qualifier": ">", "baseline": "160", "baseline_qualifier": ">"},
        "More than 160 mm is above the baseline (read as more than 160 mm, taken at 160 mm); the suspension level "
        "allows a loss of 10 mm, and the baseline's bound leaves open whether that is passed: indeterminate at the "
        "suspension level. Reading and baseline are both bounds: a loss that leaves more than "
        "160 mm doesn't show.",
    ),
    (
        "an open baseline", Say.OPEN_BASELINE, RISE, {"value": "4", "baseline": "3", "baseline_qualifier": "<"},
        "4 mm is 1 mm more than the baseline (read as less than 3 mm, taken at 3 mm); the remedial level allows "
        "a rise of 2 mm, and the baseline's bound leaves open whether that is passed: indeterminate at the remedial "
        "level. The baseline is only a bound: the true change may be larger than it looks.",
    ),
    (
        "a guard band", Say.GUARD_BAND, LOSS,
        {"value": "147", "baseline": "152.0", "rule": "guarded", "uncertainty": "2"},
        "147 mm is 5.0 mm less than the baseline of 152.0 mm; the remedial level allows a loss of 6 mm, and with "
        "the expanded uncertainty of 2 mm (k = 2) kept free the limit of acceptance is 4 mm: remedial. It uses "
        "83.3 % of the allowance. The probability of conformity with the remedial level is 0.8413.",
    ),
    (
        "a guard band wider than the allowance", Say.GUARD_BAND, DISTANCE,
        {"value": "100.0", "nominal": "100.0", "rule": "guarded", "uncertainty": "2"},
        "100.0 mm is the same as the nominal value of 100.0 mm; the remedial level allows a deviation of 1.5 mm "
        "(the larger of 1.5 mm and 1.5 % of 100.0 mm, which is 1.5 mm), but the expanded uncertainty of 2 mm "
        "(k = 2) is larger than that, so this is not measured well enough to be accepted: remedial. The probability "
        "of conformity with the remedial level is 0.8664.",
    ),
    (
        "in doubt at the upper level", Say.STRADDLES, LOSS,
        {"value": "145", "qualifier": "<", "baseline": "152"},
        "Less than 145 mm is more than 7 mm below the baseline of 152 mm; the suspension level allows a loss of "
        "10 mm, and the reading can lie on either side of that: indeterminate at the suspension level. It is "
        "beyond the remedial level in any case.",
    ),
    (
        "too close to tell", Say.TOO_CLOSE, LOSS,
        {"value": "147", "baseline": "152.0", "rule": "zones", "uncertainty": "2"},
        "147 mm is 5.0 mm less than the baseline of 152.0 mm; the remedial level allows a loss of 6 mm, which is "
        "nearer than the expanded uncertainty of 2 mm (k = 2): indeterminate at the remedial level. It uses "
        "83.3 % of the allowance. The probability of conformity with the remedial level is 0.8413.",
    ),
    (
        "an uncertainty that is missing", Say.NO_UNCERTAINTY, LOSS,
        {"value": "147", "baseline": "152", "rule": "guarded"},
        "147 mm is 5 mm less than the baseline of 152 mm; the remedial level allows a loss of 6 mm, but the rule "
        "(guarded acceptance) needs an uncertainty: not assessable. Give the uncertainty of this measurand, or "
        "choose simple acceptance.",
    ),
    (
        "not seen", Say.NOT_SEEN, LOSS, {"value": None, "qualifier": "not_seen"},
        "Nothing was seen, which is worse than any value the limit could allow: suspension.",
    ),
    (
        "not seen on neither side", Say.NOT_SEEN_UNDECIDED, DISTANCE,
        {"value": None, "qualifier": "not_seen", "nominal": "100"},
        "Nothing was seen, and the limit has two sides, so it can't be told which: not assessable.",
    ),
    (
        "a grade", Say.GRADED, GRADES, {"value": "amber", "kind": "grade"}, "The grade is “amber”: remedial.",
    ),
    (
        "a no", Say.GRADED, GRADES, {"value": "no", "kind": "yes_no"}, "The answer is “no”: suspension.",
    ),
    (
        "a grade nobody knows", Say.UNKNOWN_GRADE, GRADES, {"value": "blue", "kind": "grade"},
        "The limit does not know the grade “blue”, only green, amber, no: not assessable.",
    ),
    (
        "a text", Say.KIND_NOT_JUDGED, LOSS, {"value": "as usual", "kind": "text"},
        "A reading of this kind (text) is not judged by this limit: not assessable.",
    ),
    (
        "nothing read", Say.NO_READING, LOSS, {"value": None, "baseline": "152"},
        "There is no reading: not assessable.",
    ),
    (
        "not finite", Say.NOT_FINITE, LOSS, {"value": "inf", "kind": "derived", "baseline": "152"},
        "The reading is not a finite number: not assessable. Look at the readings it is computed from.",
    ),
    (
        "another unit", Say.WRONG_UNIT, LOSS, {"value": "15.2", "unit": "cm", "baseline": "152"},
        "The reading is in cm and the limit in mm; nothing is converted: not assessable. Read it in mm.",
    ),
    (
        "no unit", Say.WRONG_UNIT, LOSS, {"value": "15.2", "unit": None, "baseline": "152"},
        "The reading is in no unit and the limit in mm; nothing is converted: not assessable. Read it in mm.",
    ),
    (
        "no nominal", Say.NO_NOMINAL, DISTANCE, {"value": "100"},
        "There is no nominal value to compare with: not assessable. Name the test object whose true values are "
        "on record.",
    ),
    (
        "no baseline", Say.NO_BASELINE, LOSS, {"value": "100"},
        "There is no baseline yet to compare with: not assessable. A physicist can set one.",
    ),
    (
        "a baseline that was not seen", Say.BASELINE_NOT_SEEN, LOSS,
        {"value": "100", "baseline_qualifier": "not_seen"},
        "The baseline was “not seen”, so no change from it can be told: not assessable. A physicist can set "
        "another.",
    ),
    (
        "no other reading", Say.NO_REFERENCE, SHARE, {"value": "62"},
        "The other reading that this one is judged against is missing: not assessable. Read both in one check.",
    ),
    (
        "nothing to take a share of", Say.ZERO_REFERENCE, SHARE, {"value": "62", "reference": "0", "unit": "uA"},
        "The other reading is 0 µA, of which no share can be taken: not assessable.",
    ),
    (
        "a stray sign", Say.BELOW_ZERO, LOSS, {"value": "-3", "baseline": "152", "never_below_zero": True},
        "The reading is -3 mm, and this quantity is never below zero: not assessable. Look for a stray sign, and put "
        "it right.",
    ),
    (
        "a stray sign before", Say.BELOW_ZERO, LOSS, {"value": "3", "baseline": "-152", "never_below_zero": True},
        "The baseline is -152 mm, and this quantity is never below zero: not assessable. Look for a stray sign, and "
        "put it right.",
    ),
    (
        "a bound below that says enough", Say.WITHIN_OPEN, LOSS,
        {"value": "158", "baseline": "160", "baseline_qualifier": "<"},
        "158 mm is 2 mm less than the baseline (read as less than 160 mm, taken at 160 mm); the remedial level "
        "allows a loss of 6 mm: conforming. Every value that the baseline can stand for gives the same. Behind it, "
        "a loss of less than 2 mm could hide.",
    ),
    (
        "no frequency", Say.NO_BAND_QUANTITY, RING, {"value": "4"},
        "The limit depends on the test frequency, which is not on record: not assessable. Add it to the condition.",
    ),
    (
        "outside every band", Say.OUTSIDE_BANDS, HOLE, {"value": "4", "quantity": "7"},
        "There is no limit for a test frequency of 7 MHz: not assessable.",
    ),
]  # fmt: skip
NAMES = [row[0] for row in TABLE]


def _say(criterion, given, **flags):
    arguments = {"kind": "number", "unit": "mm"} | given
    wanted = "mm" if arguments["unit"] in ("cm", None) else None
    found = judge(criterion, criterion_unit=wanted, **arguments)
    told = verdict_sentence(found.code, found.parameters | flags, found.verdict, found.level or "")
    return found.code, told.replace("\N{NO-BREAK SPACE}", " ")


@pytest.mark.parametrize(("code", "criterion", "given", "sentence"), [row[1:] for row in TABLE], ids=NAMES)
def test_verdict_reads(code, criterion, given, sentence):
    assert _say(criterion, given) == (code, sentence)


UNFIT = {
    Say.SMALL_REFERENCE: (
        {"reference": "9", "least_reference": "10", "unit": "uA"},
        "The other reading is 9 µA, below 10 µA, which is ten steps of its resolution; a share of so little says "
        "nothing (common practice, no source): not assessable. Look at how the other reading was taken and read both "
        "again, and go by the limits that stand on no ratio.",
    ),
    Say.TOO_FEW_SETUPS: (
        {"setups": "3", "least": "10"},
        "The limit is built from the device's own baseline, which rests on 3 independent set-ups where 10 are "
        "needed: not assessable. Measure more on other days, and set the baseline from them all.",
    ),
    Say.EXPIRED_BASELINE: (
        {"expired_on": "2026-03-02"},
        "The baseline ran out on 2026-03-02: not assessable. A physicist can set another.",
    ),
    Say.OTHER_OBJECT: (
        {"was": "KB hydrogel GB-3002", "now": "AG hydrogel GB-3001"},
        "The baseline was taken on KB hydrogel GB-3002 and this reading on AG hydrogel GB-3001, and a depth does "
        "not pass from one test object to another: not assessable. Read both objects once, and set a baseline on "
        "this one too.",
    ),
    Say.OBJECT_NOT_NAMED: (
        {"was": "", "now": "AG hydrogel GB-3001"},
        "This reading was taken on AG hydrogel GB-3001 and its baseline names no test object, and a depth does not "
        "pass from one test object to another: not assessable. A physicist can set a baseline on this object.",
    ),
    Say.ARRAY_KIND: (
        {"array_kind": "phased"},
        "On this kind of array (phased) a dark line does not stand for an element, so the limit says nothing: "
        "not assessable.",
    ),
    Say.OTHER_MEDIUM: (
        {"medium": "air", "wanted": "phantom"},
        "The limit is for a reading in a test object, and this one is in air: not assessable.",
    ),
    Say.OTHER_METHOD: (
        {"method": "direct", "wanted": "alternative"},
        "The limit is for the method alternative, and this reading's is direct: not assessable.",
    ),
    Say.OTHER_CLASS: (
        {"what": "protection_class", "has": "I", "wanted": "II"},
        "The limit is for protection class II, and this device is I: not assessable.",
    ),
    Say.NO_INPUT: (
        {"names": "penetration"},
        "It is worked out from readings that are missing (penetration): not assessable.",
    ),
    Say.OPEN_INPUT: (
        {"names": "penetration"},
        "It is worked out from a reading that is only a bound (penetration): not assessable.",
    ),
    Say.LAYOUT_COMPENSATED: (
        {},
        "The test object's layout already makes up for its sound speed, so a corrected distance would be wrong: "
        "not assessable. Compare the reading itself with the nominal distance.",
    ),
}


@pytest.mark.parametrize("code", UNFIT)
def test_reading_that_can_not_be_judged_says_why(code):
    given, sentence = UNFIT[code]
    told = verdict_sentence(code, given, "not_assessable").replace("\N{NO-BREAK SPACE}", " ")
    assert told == sentence


def test_every_sentence_code_is_in_a_table():
    assert {row[1] for row in TABLE} | UNFIT.keys() == set(Say)


FLAGS = [
    (
        {"mismatch_console": "OG-70 / OG-45"},
        "Mind: the baseline was taken on console model OG-70, this check on OG-45.",
    ),
    (
        {"mismatch_software": "4.2 / 4.3"},
        "Mind: the baseline was taken with console software 4.2, this check with 4.3.",
    ),
    (
        {"mismatch_object": "Hydrogel A / Hydrogel B"},
        "Mind: the baseline was taken on the test object Hydrogel A, this check on Hydrogel B.",
    ),
    (
        {"mismatch_object": "Hydrogel A"},
        "Mind: the baseline was taken on another test object, Hydrogel A.",
    ),
    (
        {"no_guard": "yes"},
        "No uncertainty is stated for this measurand, so the limit stands without a guard band.",
    ),
    ({"arithmetic": "152.0 - 152.0"}, "The reading is worked out: 152.0 - 152.0."),
    (
        {"baseline_under_review": "yes"},
        "The baseline is under review: still compared, until a physicist keeps or replaces it.",
    ),
]


@pytest.mark.parametrize(("flags", "sentence"), FLAGS, ids=[next(iter(row[0])) for row in FLAGS])
def test_flag_follows_the_verdict(flags, sentence):
    plain = _say(LOSS, {"value": "152", "baseline": "152"})[1]
    assert _say(LOSS, {"value": "152", "baseline": "152"}, **flags)[1] == f"{plain} {sentence}"


def test_code_from_another_time_still_says_the_verdict():
    assert verdict_sentence("elsewhere", {}, "remedial", "remedial") == "The verdict is remedial (elsewhere)."


def test_number_and_unit_are_never_parted_at_a_line_end():
    found = judge(LOSS, value="145.4", kind="number", baseline="152.0", unit="mm")
    told = verdict_sentence(found.code, found.parameters, found.verdict, found.level)
    assert told.startswith("145.4\N{NO-BREAK SPACE}mm is 6.6\N{NO-BREAK SPACE}mm less")


@pytest.mark.parametrize(("value", "words"), [("100", "above 0.9999"), ("900", "below 0.0001")])
def test_probability_is_never_said_to_be_certain(value, words):
    limit = from_json({"basis": "none", "direction": "above", "suspension": {"absolute": "500"}})
    found = judge(limit, value=value, kind="number", uncertainty="10")
    told = verdict_sentence(found.code, found.parameters, found.verdict, found.level or "")
    assert told.endswith(
        f"with the expanded uncertainty of 10 (k = 2) the probability of conformity with the suspension level is {words}."
    )
