"""Reading a criterion from JSON: what is taken, what is refused and under which key."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from qa_tracker.core.criteria import Criterion, Limit, from_json, to_json
from qa_tracker.core.errors import Invalid

R6 = {"absolute": "6"}
R10 = {"absolute": "10"}
BANDED = {
    "basis": "none",
    "direction": "above",
    "strict": True,
    "bands": [
        {"from": None, "below": "3", "remedial": {"absolute": "7"}},
        {"from": "3", "below": "7", "remedial": {"absolute": "5"}},
        {"from": "7", "below": None, "remedial": {"absolute": "3"}},
    ],
    "banded_by": "test_frequency_mhz",
}

ROUND_TRIPS = {
    "A_larger": {
        "basis": "nominal",
        "direction": "either",
        "strict": True,
        "remedial": {"absolute": "1.5", "percent": "1.5", "governs": "larger"},
        "suspension": {"absolute": "2", "percent": "2", "governs": "larger"},
    },
    "B_absolute": {
        "basis": "baseline",
        "direction": "either",
        "strict": True,
        "remedial": {"absolute": "1.0"},
    },
    "C_either": {
        "basis": "baseline",
        "direction": "either",
        "strict": True,
        "remedial": {"absolute": "2", "percent": "10", "governs": "either"},
    },
    "D_loss": {"basis": "baseline", "direction": "below", "strict": True, "remedial": R6, "suspension": R10},
    "E_negative": {
        "basis": "none",
        "direction": "above",
        "strict": False,
        "suspension": {"absolute": "-3.0"},
    },
    "F_bands": BANDED,
    "G_ratio": {"basis": "ratio", "direction": "above", "strict": True, "suspension": {"percent": "80"}},
    "H_grades": {"grades": {"green": "conforming", "amber": "remedial", "red": "suspension"}},
}


@pytest.mark.parametrize("given", ROUND_TRIPS.values(), ids=ROUND_TRIPS)
def test_to_json_gives_back_what_from_json_took(given):
    assert to_json(from_json(given)) == given


def _base(**changes):
    return {"basis": "baseline", "direction": "below", "remedial": R6} | changes


def _bands(*bands, by="test_frequency_mhz", **changes):
    return {"basis": "none", "direction": "above", "bands": list(bands), "banded_by": by} | changes


REFUSALS = {
    "not_an_object": ([], "criterion.not_object", "criterion"),
    "unknown_key": (_base(limit="6"), "criterion.unknown_key", "criterion.limit"),
    "unknown_limit_key": (_base(remedial={"abs": "6"}), "criterion.unknown_key", "criterion.remedial.abs"),
    "no_basis": ({"direction": "below", "remedial": R6}, "criterion.missing_key", "criterion.basis"),
    "no_direction": ({"basis": "none", "remedial": R6}, "criterion.missing_key", "criterion.direction"),
    "unknown_basis": (_base(basis="mean"), "criterion.unknown_word", "criterion.basis"),
    "unknown_direction": (_base(direction=["below"]), "criterion.unknown_word", "criterion.direction"),
    "strict_as_text": (_base(strict="yes"), "criterion.unknown_word", "criterion.strict"),
    "unknown_governs": (
        _base(remedial={"absolute": "1", "percent": "1", "governs": "both"}),
        "criterion.unknown_word",
        "criterion.remedial.governs",
    ),
    "json_number": (
        _base(remedial={"absolute": 1.5}),
        "criterion.not_decimal",
        "criterion.remedial.absolute",
    ),
    "comma": (_base(remedial={"absolute": "1,5"}), "criterion.not_decimal", "criterion.remedial.absolute"),
    "word": (_base(remedial={"percent": "five"}), "criterion.not_decimal", "criterion.remedial.percent"),
    "nan": (_base(remedial={"absolute": "NaN"}), "criterion.not_decimal", "criterion.remedial.absolute"),
    "limit_no_object": (_base(remedial="6"), "criterion.not_object", "criterion.remedial"),
    "negative": (_base(remedial={"absolute": "-6"}), "criterion.negative", "criterion.remedial.absolute"),
    "negative_either_way": (
        {"basis": "none", "direction": "either", "remedial": {"absolute": "-2"}},
        "criterion.negative_either_way",
        "criterion.remedial.absolute",
    ),
    "negative_share": (_base(remedial={"percent": "-6"}), "criterion.negative", "criterion.remedial.percent"),
    "empty_limit": (_base(remedial={"governs": "larger"}), "criterion.empty_limit", "criterion.remedial"),
    "neither_level": (_base(remedial=None), "criterion.no_level", "criterion"),
    "suspension_inside": (_base(suspension={"absolute": "5"}), "criterion.not_beyond", "criterion"),
    "suspension_equal": (_base(suspension={"absolute": "6.0"}), "criterion.not_beyond", "criterion"),
    "percent_of_nothing": (
        {"basis": "none", "direction": "above", "remedial": {"percent": "5"}},
        "criterion.percent_without_reference",
        "criterion.remedial.percent",
    ),
    "absolute_ratio": (_base(basis="ratio"), "criterion.absolute_with_ratio", "criterion.remedial.absolute"),
    "lower_limit_upside_down": (
        {"basis": "none", "direction": "below", "remedial": R6, "suspension": R10},
        "criterion.not_beyond",
        "criterion",
    ),
    "lower_limits_equal": (
        {"basis": "none", "direction": "below", "remedial": R6, "suspension": R6},
        "criterion.not_beyond",
        "criterion",
    ),
    "bands_unnamed": (
        _bands({"below": "3", "remedial": R6}, by=None),
        "criterion.bands_and_quantity",
        "criterion.banded_by",
    ),
    "name_without_bands": (
        _base(banded_by="depth_mm"),
        "criterion.bands_and_quantity",
        "criterion.banded_by",
    ),
    "band_name": (
        _bands({"below": "3", "remedial": R6}, by="a b"),
        "criterion.banding_name",
        "criterion.banded_by",
    ),
    "bands_no_list": (_bands() | {"bands": {"a": 1}}, "criterion.not_list", "criterion.bands"),
    "levels_and_bands": (
        _bands({"remedial": R6}, remedial=R6),
        "criterion.levels_beside_bands",
        "criterion.bands",
    ),
    "band_reversed": (
        _bands({"from": "7", "below": "3", "remedial": R6}),
        "criterion.band_reversed",
        "criterion.bands[0]",
    ),
    "band_empty": (
        _bands({"from": "3", "below": "3", "remedial": R6}),
        "criterion.band_reversed",
        "criterion.bands[0]",
    ),
    "bands_overlap": (
        _bands({"from": "3", "remedial": R6}, {"below": "3.1", "remedial": R6}),
        "criterion.bands_overlap",
        "criterion.bands",
    ),
    "two_open_bands": (
        _bands({"remedial": R6}, {"remedial": R10}),
        "criterion.bands_overlap",
        "criterion.bands",
    ),
    "band_without_level": (_bands({"below": "3"}), "criterion.no_level", "criterion.bands[0]"),
    "grades_and_limits": (
        _base(grades={"red": "suspension"}),
        "criterion.grades_beside_limits",
        "criterion.grades",
    ),
    "grades_no_object": ({"grades": "red"}, "criterion.not_object", "criterion.grades"),
    "grade_verdict": ({"grades": {"red": "fail"}}, "criterion.unknown_word", "criterion.grades.red"),
    "grades_never_fail": ({"grades": {"green": "conforming"}}, "criterion.no_level", "criterion.grades"),
}


@pytest.mark.parametrize(("given", "code", "field"), REFUSALS.values(), ids=REFUSALS)
def test_from_json_refuses_naming_the_key_when_wrong(given, code, field):
    with pytest.raises(Invalid) as refusal:
        from_json(given)
    assert (refusal.value.code, refusal.value.field) == (code, field)


def test_from_json_defaults_when_left_out():
    criterion = from_json(_base(remedial={"absolute": "1.5", "percent": "1.5"}))
    assert criterion.strict is True
    assert criterion.remedial == Limit(D("1.5"), D("1.5"), "larger")


def test_from_json_lets_a_lower_limit_fall_when_suspension_is_below():
    criterion = from_json({"basis": "none", "direction": "below", "remedial": R10, "suspension": R6})
    assert [level for level, _ in criterion.levels()] == ["remedial", "suspension"]


def test_bands_are_sorted_when_given_in_any_order():
    shuffled = BANDED | {"bands": list(reversed(BANDED["bands"]))}
    assert from_json(shuffled) == from_json(BANDED)


@pytest.mark.parametrize(
    ("quantity", "remedial"),
    [("2.999", "7"), ("3", "5"), ("6.9", "5"), ("7.0", "3"), ("18", "3"), ("-1", "7")],
)
def test_at_takes_the_band_whose_start_belongs_to_it(quantity, remedial):
    flat = from_json(BANDED).at(D(quantity))
    assert flat == Criterion("none", "above", True, Limit(D(remedial)))


def test_at_gives_nothing_when_in_a_gap():
    gapped = from_json(_bands({"below": "3", "remedial": R6}, {"from": "5", "below": "7", "remedial": R6}))
    assert [gapped.at(D(q)) is None for q in ("2", "3", "4.9", "5", "7")] == [False, True, True, False, True]
