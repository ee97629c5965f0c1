"""What is taken for a number, and the one reason given for each text that is not."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.decimals import MAX_SCALED, Exact, parse, rescale
from qa_tracker.core.errors import Invalid

ACCEPTED = {
    "point": ("20.3", Exact("20.3", 203, 1)),
    "comma": ("20,3", Exact("20,3", 203, 1)),
    "space_around": ("  20.30\n", Exact("20.30", 2030, 2)),
    "minus": ("-0.5", Exact("-0.5", -5, 1)),
    "plus": ("+7", Exact("+7", 7, 0)),
    "no_whole_part": (".5", Exact(".5", 5, 1)),
    "leading_zeros": ("007", Exact("007", 7, 0)),
    "minus_zero": ("-0", Exact("-0", 0, 0)),
    "largest": (str(MAX_SCALED), Exact(str(MAX_SCALED), MAX_SCALED, 0)),
}

REFUSED = {
    "empty": ("", "number.empty"),
    "blank": (" \t", "number.empty"),
    "nan": ("NaN", "number.not_finite"),
    "signalling_nan": ("sNaN", "number.not_finite"),
    "infinity": ("-Infinity", "number.not_finite"),
    "infinity_sign": ("∞", "number.not_finite"),
    "qualifier_typed": (">160", "number.qualifier"),
    "huge_exponent": ("1e999", "number.exponent"),
    "small_exponent": ("1.5E-3", "number.exponent"),
    "full_width": ("１２", "number.digits"),
    "one_full_width": ("1２", "number.digits"),
    "arabic_indic": ("١٢", "number.digits"),
    "superscript": ("5²", "number.digits"),
    "fraction_sign": ("1½", "number.digits"),
    "typographic_minus": ("−5", "number.digits"),
    "no_break_space": ("1\u00a0000", "number.digits"),
    "thousands_space": ("1 000", "number.separators"),
    "thousands_and_comma": ("1.234,5", "number.separators"),
    "thousands_apostrophe": ("1'000", "number.separators"),
    "underscore": ("1_000", "number.separators"),
    "two_points": ("1.2.3", "number.separators"),
    "two_signs": ("--5", "number.separators"),
    "mixed_signs": ("+-5", "number.separators"),
    "unit": ("12 mm", "number.unit"),
    "unit_close": ("5%", "number.unit"),
    "unit_degrees": ("12°C", "number.unit"),
    "hexadecimal": ("0x10", "number.unit"),
    "word": ("abc", "number.not_a_number"),
    "cut_off": ("5,", "number.not_a_number"),
    "sign_only": ("-", "number.not_a_number"),
    "line_break_inside": ("1\n2", "number.not_a_number"),
    "one_too_many": (str(MAX_SCALED + 1), "number.out_of_range"),
    "too_long": ("0" * 41, "number.out_of_range"),
    "hostile_length": ("9" * 100_000, "number.out_of_range"),
    "too_fine": ("0." + "0" * 12 + "1", "number.too_many_places"),
}


@pytest.mark.parametrize(("text", "expected"), ACCEPTED.values(), ids=ACCEPTED)
def test_parse_keeps_the_number_exactly_when_well_formed(text, expected):
    assert parse(text) == expected


@pytest.mark.parametrize(("text", "code"), REFUSED.values(), ids=REFUSED)
def test_parse_refuses_with_one_code_when_no_number(text, code):
    with pytest.raises(Invalid) as refusal:
        parse(text, field="value")
    assert (refusal.value.code, refusal.value.field) == (code, "value")


def test_parse_refuses_a_long_text_quickly_when_hostile():
    with pytest.raises(Invalid) as refusal:
        parse("1 " * 50_000)
    assert len(str(refusal.value.parameters["entered"])) <= 40


def test_parse_names_the_unit_when_one_was_typed():
    with pytest.raises(Invalid) as refusal:
        parse("15,2 cm")
    assert refusal.value.parameters == {"entered": "15,2 cm", "unit": "cm"}


@pytest.mark.parametrize(
    ("text", "resolution"),
    [
        ("3.5", "0.5"),
        ("3,0", "0.5"),
        ("3.500", "0.5"),
        ("-2", "0.5"),
        ("0.3", "0.1"),
        ("4", "1"),
        ("7.5", "2.5"),
    ],
)
def test_parse_accepts_when_a_multiple_of_the_resolution(text, resolution):
    assert parse(text, resolution).decimal == Decimal(text.replace(",", "."))


@pytest.mark.parametrize(
    ("text", "resolution"), [("3.4", "0.5"), ("0.35", "0.1"), ("4.1", "1"), ("6", "2.5")]
)
def test_parse_refuses_when_between_two_steps(text, resolution):
    with pytest.raises(Invalid) as refusal:
        parse(text, resolution)
    assert refusal.value.code == "number.resolution"
    assert refusal.value.parameters["resolution"] == resolution


def test_rescale_widens_exactly_and_refuses_loss():
    assert rescale(parse("1.50"), 4) == 15000
    assert rescale(parse("-1.50"), 1) == -15
    with pytest.raises(Invalid) as refusal:
        rescale(parse("1.55"), 1)
    assert refusal.value.code == "number.loss"
