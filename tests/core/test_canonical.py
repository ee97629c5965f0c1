"""Canonical bytes against the published RFC 8785 vectors, and what they refuse."""

from __future__ import annotations

import csv
import hashlib
import json
import struct
from pathlib import Path

import pytest
import rfc8785
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core.canonical import DEEPEST_NESTING, LARGEST_INTEGER, canonical
from qa_tracker.core.errors import Invalid

REFERENCE = Path(__file__).parents[2] / "fixtures" / "reference"
DOCUMENTS = json.loads((REFERENCE / "rfc8785_open.json").read_text(encoding="utf-8"))
NUMBERS = tuple(
    csv.DictReader(
        line
        for line in (REFERENCE / "rfc8785_numbers.csv").read_text(encoding="utf-8").splitlines()
        if not line.startswith("#")
    )
)
LEAVES = st.none() | st.booleans() | st.integers(-LARGEST_INTEGER, LARGEST_INTEGER) | st.text()
VALUES = st.recursive(
    LEAVES, lambda inner: st.lists(inner) | st.dictionaries(st.text(), inner), max_leaves=20
)


@pytest.mark.parametrize("name", ["arrays", "structures", "values"])
def test_bytes_equal_the_published_ones_for_each_document(name):
    vector = DOCUMENTS[name]
    given_value = json.loads(vector["input_text"])
    written = rfc8785.dumps(given_value)
    assert written.hex() == vector["canonical_utf8_hex"]
    assert hashlib.sha256(written).hexdigest() == vector["sha256"]


def test_bytes_equal_the_published_ones_when_no_number_is_fractional():
    vector = DOCUMENTS["arrays"]
    assert canonical(json.loads(vector["input_text"])).hex() == vector["canonical_utf8_hex"]


def test_bytes_equal_the_published_ones_when_the_only_fraction_is_given_as_a_whole_number():
    vector = DOCUMENTS["structures"]
    whole = json.loads(vector["input_text"], parse_float=lambda text: int(float(text)))
    assert canonical(whole).hex() == vector["canonical_utf8_hex"]


@pytest.mark.parametrize("row", NUMBERS, ids=lambda row: row["ieee754_hex"])
def test_library_writes_the_published_text_for_each_double(row):
    (double,) = struct.unpack(">d", bytes.fromhex(row["ieee754_hex"]))
    assert rfc8785.dumps(double) == row["serialised"].encode()


def test_names_are_sorted_by_utf16_units_when_some_lie_outside_the_basic_plane():
    # RFC 8785, 3.2.3: U+1F600 is written with surrogates (D83D DE00) and so comes before U+FB33.
    assert canonical({"\ufb33": 1, "\U0001f600": 2, "\u20ac": 3, "\r": 4, "1": 5}) == (
        '{"\\r":4,"1":5,"\u20ac":3,"\U0001f600":2,"\ufb33":1}'.encode()
    )


@pytest.mark.parametrize(
    ("value", "code"),
    [
        pytest.param(1.5, "canonical.binary_fraction", id="fraction"),
        pytest.param([{"a": (56.0,)}], "canonical.binary_fraction", id="whole float deep inside"),
        pytest.param(float("nan"), "canonical.binary_fraction", id="not a number"),
        pytest.param({1.5: "a"}, "canonical.binary_fraction", id="float as a name"),
        pytest.param(LARGEST_INTEGER + 1, "canonical.integer_too_large", id="above 2^53 - 1"),
        pytest.param(-LARGEST_INTEGER - 1, "canonical.integer_too_large", id="below -(2^53 - 1)"),
        pytest.param({1: "a"}, "canonical.not_json", id="number as a name"),
        pytest.param({"a": b"bytes"}, "canonical.not_json", id="bytes"),
        pytest.param({"a": {1, 2}}, "canonical.not_json", id="a set"),
        pytest.param("\ud800", "canonical.not_json", id="half a surrogate pair"),
        pytest.param({"\ud800": 1}, "canonical.not_json", id="half a surrogate pair as a name"),
    ],
)
def test_canonical_refuses_when_a_value_has_no_exact_form(value, code):
    with pytest.raises(Invalid) as refusal:
        canonical(value)
    assert refusal.value.code == code


def test_canonical_refuses_when_a_list_holds_itself():
    endless: list[object] = []
    endless.append(endless)
    with pytest.raises(Invalid) as refusal:
        canonical(endless)
    assert refusal.value.parameters == {"most": DEEPEST_NESTING}


def test_canonical_takes_the_largest_integers_when_just_inside():
    assert canonical([LARGEST_INTEGER, -LARGEST_INTEGER]) == b"[9007199254740991,-9007199254740991]"


@given(VALUES)
def test_value_is_read_back_equal_when_written(value):
    assert json.loads(canonical(value)) == value


@given(st.dictionaries(st.text(), LEAVES, min_size=2))
def test_bytes_are_the_same_when_names_come_in_another_order(value):
    assert canonical(dict(reversed(value.items()))) == canonical(value)
