"""Reading one object that a script sent: numbers as text, what is left out, and what is refused."""

from __future__ import annotations

import doctest
from decimal import Decimal

import pytest

from qa_tracker.core import judging_lines
from qa_tracker.core.errors import Invalid
from qa_tracker.core.judging_lines import answer, judge_line

UPPER = {"basis": "none", "direction": "above", "remedial": {"absolute": "500"}}
NEAR = {"basis": "nominal", "direction": "either", "remedial": {"absolute": "0.3"}}
BAND = {"from": "3", "below": "7", "remedial": {"absolute": "5"}}


def limited(**limit: object) -> dict:
    return {"basis": "nominal", "direction": "above", "remedial": limit}


def test_examples_give_what_they_say():
    assert doctest.testmod(judging_lines)[:] == (0, 4)


@pytest.mark.parametrize(
    ("text", "departure"),
    [
        ("600", "600"), ("+600.50", "600.5"), (" 600 ", "600"), ("6e2", "600"), ("6E+002", "600"), ("60000e-2", "600"),
        (".5", "0.5"), ("5.", "5"), ("-0.0", "0"), ("0e5", "0"), ("1e40", "1" + "0" * 40), ("1e-40", "0." + "0" * 39 + "1"),
        ("0.10000000000000000000000000000000000001", "0.10000000000000000000000000000000000001"),
    ],
)  # fmt: skip
def test_departure_is_exact_when_a_number_is_written_any_way(text, departure):
    assert answer(judge_line({"value": text, "criterion": UPPER}))["departure"] == departure


@pytest.mark.parametrize("value", [None, "", "  "])
def test_number_counts_as_left_out_when_it_is_null_or_blank(value):
    given = {"value": "1", "nominal": value, "uncertainty": value, "rule": None, "criterion": UPPER}
    assert answer(judge_line(given)) == {
        "verdict": "conforming", "departure": "1", "allowance": "500", "used": "0.2",
    }  # fmt: skip
    assert judge_line(given | {"value": value}).code == "no_reading"


@pytest.mark.parametrize("text", ["NaN", "nan", "Infinity", "-inf", "+INF"])
@pytest.mark.parametrize("name", ["value", "nominal", "uncertainty"])
def test_nothing_is_assessed_when_a_number_is_not_finite(text, name):
    given = {"value": "20.3", "nominal": "20.0", "criterion": NEAR} | {name: text}
    assert answer(judge_line(given)) == {"verdict": "not_assessable"}


@pytest.mark.parametrize(
    "written",
    [
        {"absolute": "5e2"}, {"absolute": " 500 "}, {"absolute": "500.0000000000000000"}, {"absolute": "+500."},
        {"absolute": "500", "percent": None}, {"absolute": "500", "percent": ""}, {"absolute": "500", "governs": ""},
    ],
)  # fmt: skip
def test_limit_is_the_same_when_it_is_written_any_way(written):
    given = {"value": "500.1", "criterion": UPPER | {"remedial": written, "suspension": None, "bands": []}}
    assert answer(judge_line(given)) == {
        "verdict": "remedial", "departure": "500.1", "allowance": "500", "used": "100.0",
    }  # fmt: skip


@pytest.mark.parametrize(
    ("quantity", "verdict"),
    [("3", "remedial"), ("6.999", "remedial"), ("7", "not_assessable"), ("2.9", "not_assessable"),
     (None, "not_assessable"), ("NaN", "not_assessable")],
)  # fmt: skip
@pytest.mark.parametrize("name", [{}, {"banded_by": None}, {"banded_by": "test_frequency_mhz"}])
def test_band_is_found_when_it_has_a_name_or_none(quantity, verdict, name):
    criterion = {"basis": "none", "direction": "above", "bands": [BAND], **name}
    assert judge_line({"value": "6", "quantity": quantity, "criterion": criterion}).verdict == verdict


REFUSED = [
    ([], "line.not_object", ""),
    ("x", "line.not_object", ""),
    ({"Value": "1"}, "line.unknown_key", "Value"),
    ({"value": "1"}, "line.no_criterion", "criterion"),
    ({"value": "1", "criterion": {}}, "line.no_criterion", "criterion"),
    ({"value": "1", "criterion": "x"}, "criterion.not_object", "criterion"),
    ({"value": "1", "criterion": {"direction": "above"}}, "criterion.missing_key", "criterion.basis"),
    ({"value": "1", "criterion": {"basis": "none"}}, "criterion.missing_key", "criterion.direction"),
    ({"value": "1", "criterion": UPPER | {"direction": ""}}, "criterion.missing_key", "criterion.direction"),
    ({"value": "1", "criterion": UPPER | {"strict": "false"}}, "criterion.unknown_word", "criterion.strict"),
    ({"value": "1", "criterion": UPPER | {"remedial": ""}}, "criterion.no_level", "criterion"),
    ({"value": "1", "criterion": limited(absolute="")}, "criterion.no_level", "criterion"),
    ({"value": "1", "criterion": limited(governs="larger")}, "criterion.empty_limit", "criterion.remedial"),
    ({"value": "1", "criterion": limited(absolute="NaN")}, "criterion.not_decimal", "criterion.remedial.absolute"),
    ({"value": "1", "criterion": limited(absolute="1,5")}, "criterion.not_decimal", "criterion.remedial.absolute"),
    ({"value": "1", "criterion": limited(absolute="-1")}, "criterion.negative", "criterion.remedial.absolute"),
    ({"value": "1", "criterion": limited(absolute="1e999")}, "line.too_long", "criterion.remedial.absolute"),
    ({"value": "1", "criterion": limited(percent="1e-13")}, "line.limit_too_long", "criterion.remedial.percent"),
    ({"value": "1", "criterion": limited(coverage="95")}, "line.needs_the_register", "criterion.remedial.coverage"),
    ({"value": "1", "criterion": {"grades": {"red": "suspension"}}}, "line.needs_the_register", "criterion.grades"),
    ({"value": "1", "criterion": UPPER | {"bands": BAND}}, "criterion.not_list", "criterion.bands"),
    ({"value": "1", "criterion": UPPER | {"bands": [BAND]}}, "criterion.levels_beside_bands", "criterion.bands"),
    ({"value": "> 160", "criterion": UPPER}, "line.not_decimal", "value"),
    ({"value": "20.3 mm", "criterion": UPPER}, "line.not_decimal", "value"),
    ({"value": "20,3", "criterion": UPPER}, "line.not_decimal", "value"),
    ({"value": "1_000", "criterion": UPPER}, "line.not_decimal", "value"),
    ({"value": "\u0661", "criterion": UPPER}, "line.not_decimal", "value"),
    ({"value": "1e41", "criterion": UPPER}, "line.too_long", "value"),
    ({"value": "1e-41", "criterion": UPPER}, "line.too_long", "value"),
    ({"value": "1e" + "9" * 30, "criterion": UPPER}, "line.too_long", "value"),
    ({"value": "0e999", "criterion": UPPER}, "line.too_long", "value"),
    ({"value": "9" * 41, "criterion": UPPER}, "line.too_long", "value"),
    ({"value": 20.3, "criterion": UPPER}, "line.not_number", "value"),
    ({"value": True, "criterion": UPPER}, "line.not_number", "value"),
    ({"value": ["1"], "criterion": UPPER}, "line.not_number", "value"),
    ({"value": "1", "quantity": {}, "criterion": UPPER}, "line.not_number", "quantity"),
    ({"uncertainty": "-1", "criterion": NEAR}, "uncertainty.negative", "uncertainty"),
    ({"value": "1", "rule": "Simple", "criterion": UPPER}, "rule.unknown", "rule"),
    ({"value": "1", "rule": [], "criterion": UPPER}, "rule.unknown", "rule"),
    ({"value": "1", "rule": False, "criterion": UPPER}, "rule.unknown", "rule"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("given", "code", "field"), REFUSED, ids=[f"{code}-{n}" for n, (_, code, _) in enumerate(REFUSED)]
)
def test_object_is_refused_naming_the_key_when_it_can_not_be_read(given, code, field):
    with pytest.raises(Invalid) as refusal:
        judge_line(given)
    assert (refusal.value.code, refusal.value.field) == (code, field)


@pytest.mark.parametrize("depth", [10, 300, 480, 900])
@pytest.mark.parametrize("name", ["value", "rule", "criterion"])
def test_nesting_of_any_depth_is_refused(depth, name):
    nested: object = "1"
    for _ in range(depth):
        nested = {"bands": [nested]}
    with pytest.raises(Invalid):
        judge_line({"value": "1", "criterion": UPPER} | {name: nested})


def test_only_short_criteria_are_remembered():
    bands = [
        {"from": str(start), "below": str(start + 1), "remedial": {"absolute": "1"}} for start in range(200)
    ]
    judging_lines._criterion.cache_clear()
    for value in ("1", "2"):
        judge_line(
            {
                "value": value,
                "quantity": "5",
                "criterion": {"basis": "none", "direction": "above", "bands": bands},
            }
        )
        judge_line({"value": value, "criterion": UPPER})
    found = judging_lines._criterion.cache_info()
    assert (found.hits, found.currsize) == (1, 1)


def test_probability_is_unrounded_when_there_is_an_uncertainty():
    told = answer(judge_line({"value": "490", "uncertainty": "20", "criterion": UPPER}))
    assert told["probability"] == pytest.approx(0.841344746068543, abs=1e-15)
    assert Decimal(told["probability"]).as_tuple().exponent < -10
