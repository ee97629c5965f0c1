"""Each limit shape at its limit and one resolution step either side."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json

A = {
    "basis": "nominal",
    "direction": "either",
    "remedial": {"absolute": "1.5", "percent": "1.5"},
    "suspension": {"absolute": "2", "percent": "2"},
}
A_SHARE = {"basis": "nominal", "direction": "either", "remedial": {"percent": "5"}}
B = {"basis": "baseline", "direction": "either", "remedial": {"absolute": "1"}}
C = {
    "basis": "baseline",
    "direction": "either",
    "remedial": {"absolute": "2", "percent": "10", "governs": "either"},
}
DLOSS = {
    "basis": "baseline",
    "direction": "below",
    "remedial": {"absolute": "6"},
    "suspension": {"absolute": "10"},
}
DRISE = {"basis": "baseline", "direction": "above", "remedial": {"percent": "10"}}
E = {
    "basis": "none",
    "direction": "above",
    "strict": False,
    "remedial": {"absolute": "4"},
    "suspension": {"absolute": "6"},
}
E_LOWER = {
    "basis": "none",
    "direction": "below",
    "remedial": {"absolute": "10"},
    "suspension": {"absolute": "2"},
}
E_AROUND = {"basis": "none", "direction": "either", "remedial": {"absolute": "0.5"}}
F = {
    "basis": "none",
    "direction": "above",
    "bands": [
        {"below": "3", "remedial": {"absolute": "7"}},
        {"from": "3", "below": "7", "remedial": {"absolute": "5"}},
        {"from": "7", "remedial": {"absolute": "3"}},
    ],
    "banded_by": "test_frequency_mhz",
}
G = {"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}}
G_LOWER = {
    "basis": "ratio",
    "direction": "below",
    "remedial": {"percent": "80"},
    "suspension": {"percent": "50"},
}
DROP = {
    "basis": "none",
    "direction": "above",
    "strict": False,
    "remedial": {"absolute": "2"},
    "suspension": {"absolute": "4"},
}
C_, R_, S_ = "conforming", "remedial", "suspension"

ROWS = [
    # criterion, strict, reference, value, verdict
    *[
        (A, True, "100", v, k)
        for v, k in {"101.5": C_, "101.6": R_, "98.5": C_, "98.4": R_, "102": R_, "102.1": S_}.items()
    ],
    *[
        (A, False, "100", v, k)
        for v, k in {"101.4": C_, "101.5": R_, "98.6": C_, "98.5": R_, "102.0": S_}.items()
    ],
    *[
        (A, True, "200", v, k)
        for v, k in {"203": C_, "203.1": R_, "204.0": R_, "204.1": S_, "195.9": S_}.items()
    ],
    *[(A, True, "40", v, k) for v, k in {"41.5": C_, "41.6": R_, "42.1": S_}.items()],
    *[
        (A_SHARE, True, "12.34", v, k)
        for v, k in {"12.957": C_, "12.958": R_, "11.723": C_, "11.722": R_}.items()
    ],
    *[(B, True, "3.2", v, k) for v, k in {"4.2": C_, "4.3": R_, "2.2": C_, "2.1": R_}.items()],
    *[(B, False, "3.2", v, k) for v, k in {"4.1": C_, "4.2": R_, "2.3": C_, "2.2": R_}.items()],
    *[(C, True, "12", v, k) for v, k in {"13.2": C_, "13.3": R_, "10.8": C_, "10.7": R_}.items()],
    *[(C, True, "30", v, k) for v, k in {"32": C_, "32.1": R_, "27.9": R_}.items()],
    *[
        (DLOSS, True, "152.0", v, k)
        for v, k in {"146.0": C_, "145.9": R_, "142.0": R_, "141.9": S_, "170": C_}.items()
    ],
    *[(DLOSS, False, "152.0", v, k) for v, k in {"146.1": C_, "146.0": R_, "142.1": R_, "142.0": S_}.items()],
    *[(DRISE, True, "-60", v, k) for v, k in {"-54": C_, "-53.9": R_, "-70": C_}.items()],
    *[(E, False, None, v, k) for v, k in {"3.9": C_, "4.0": R_, "5.9": R_, "6": S_, "-8": C_}.items()],
    *[(E, True, None, v, k) for v, k in {"4.0": C_, "4.1": R_, "6.0": R_, "6.1": S_}.items()],
    *[
        (E_LOWER, True, None, v, k)
        for v, k in {"10.0": C_, "9.9": R_, "2.0": R_, "1.9": S_, "500": C_}.items()
    ],
    *[(E_LOWER, False, None, v, k) for v, k in {"10.1": C_, "10.0": R_, "2.1": R_, "2": S_}.items()],
    *[(E_AROUND, True, None, v, k) for v, k in {"0.5": C_, "-0.5": C_, "0.6": R_, "-0.6": R_}.items()],
    *[(G, True, "210", v, k) for v, k in {"168": C_, "169": S_, "62": C_}.items()],
    *[(G, False, "210", v, k) for v, k in {"167": C_, "168": S_}.items()],
    *[(G_LOWER, True, "210", v, k) for v, k in {"168": C_, "167": R_, "105": R_, "104": S_}.items()],
    *[(DROP, False, None, v, k) for v, k in {"0": C_, "1": C_, "2": R_, "3": R_, "4": S_, "5": S_}.items()],
]


def _judge(given, reference, value, **more):
    word = {"nominal": "nominal", "baseline": "baseline", "ratio": "reference"}.get(given["basis"])
    references = {word: reference} if word else {}
    return judge(from_json(given), value=value, kind="number", **references, **more)


@pytest.mark.parametrize(("given", "strict", "reference", "value", "verdict"), ROWS)
def test_judge_stands_exactly_on_the_limit(given, strict, reference, value, verdict):
    judgement = _judge(given | {"strict": strict}, reference, value)
    assert (judgement.verdict, judgement.level) == (verdict, None if verdict == C_ else verdict)


@pytest.mark.parametrize(
    ("frequency", "value", "verdict"),
    [
        ("2.99", "7", C_),
        ("2.99", "7.1", R_),
        ("3", "5.1", R_),
        ("3", "5", C_),
        ("6.999", "5", C_),
        ("7", "3.1", R_),
        ("18", "3", C_),
    ],
)
def test_judge_uses_the_band_of_the_quantity_when_banded(frequency, value, verdict):
    judgement = _judge(F, None, value, quantity=frequency)
    assert judgement.verdict == verdict
    assert judgement.parameters["quantity"] == frequency


TRAPS = {
    "a_third_of_a_unit": ("20.3", "20.0", {"absolute": "0.3"}, C_),
    "one_more_digit": ("20.3000001", "20.0", {"absolute": "0.3"}, R_),
    "share_of_forty": ("40.6", "40", {"percent": "1.5"}, C_),
    "just_over_a_share": ("40.601", "40", {"percent": "1.5"}, R_),
    "tenths": ("0.3", "0.1", {"absolute": "0.2"}, C_),
    "seven_percent": ("107", "100", {"percent": "7"}, C_),
    "cents": ("1.15", "1.1", {"absolute": "0.05"}, C_),
    "twelve_places": ("0.000000000003", "0.000000000001", {"absolute": "0.000000000002"}, C_),
}


@pytest.mark.parametrize(("value", "nominal", "limit", "verdict"), TRAPS.values(), ids=TRAPS)
def test_judge_is_decimal_where_binary_floats_go_astray(value, nominal, limit, verdict):
    criterion = {"basis": "nominal", "direction": "either", "remedial": limit}
    assert _judge(criterion, nominal, value).verdict == verdict


GRADED = {"grades": {"green": "conforming", "amber": "remedial", "red": "suspension"}}


@pytest.mark.parametrize(("grade", "verdict"), [("green", C_), ("amber", R_), ("red", S_)])
def test_judge_looks_a_grade_up(grade, verdict):
    judgement = judge(from_json(GRADED), value=grade, kind="grade")
    assert (judgement.verdict, judgement.code, judgement.parameters["grade"]) == (verdict, "graded", grade)


@pytest.mark.parametrize(("answer", "verdict"), [("yes", C_), ("no", S_)])
def test_judge_looks_a_yes_or_no_up(answer, verdict):
    criterion = from_json({"grades": {"yes": "conforming", "no": "suspension"}})
    assert judge(criterion, value=answer, kind="yes_no").verdict == verdict


USED = [
    (DLOSS, "152.0", "145.4", "110.0", "6.6", "6"),
    (DLOSS, "152.0", "141.8", "170.0", "10.2", "10"),
    (DLOSS, "152.0", "146.0", "100.0", "6.0", "6"),
    (DLOSS, "152.0", "155", "0.0", "-3.0", "6"),
    (A, "100", "101.7", "113.3", "1.7", "1.5"),
    (A, "200", "196.9", "103.3", "3.1", "3"),
    (E, None, "3.9", "97.5", "3.9", "4"),
    (E_LOWER, None, "20", "50.0", "20", "10"),
    (E_LOWER, None, "8", "125.0", "8", "10"),
    (E_LOWER, None, "1", "1000.0", "1", "2"),
    (E_LOWER, None, "0", None, "0", "2"),
    (G, "210", "176", "104.8", "176", "168"),
    (DROP, None, "1", "50.0", "1", "2"),
    (B | {"remedial": {"absolute": "0"}}, "3", "3.0", None, "0.0", "0"),
]


@pytest.mark.parametrize(("given", "reference", "value", "used", "departure", "allowance"), USED)
def test_judge_gives_the_share_of_the_first_level(given, reference, value, used, departure, allowance):
    judgement = _judge(given, reference, value)
    assert judgement.used == (None if used is None else D(used))
    assert (judgement.departure, judgement.allowance) == (D(departure), D(allowance))
    assert judgement.lower_name == ("suspension" if given is G else "remedial")


def test_judge_rounds_the_share_half_even():
    criterion = {"basis": "none", "direction": "above", "remedial": {"absolute": "2000"}}
    assert [str(_judge(criterion, None, value).used) for value in ("1", "3")] == ["0.0", "0.2"]
