"""The quick way of writing canonical JSON gives the bytes of the reference implementation."""

from __future__ import annotations

import pytest
import rfc8785
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Invalid

TEXT = st.text(st.characters(exclude_categories=["Cs"]), max_size=12)
LEAVES = st.none() | st.booleans() | st.integers(-(2**53) + 1, 2**53 - 1) | TEXT
VALUES = st.recursive(LEAVES, lambda inner: st.lists(inner) | st.dictionaries(TEXT, inner), max_leaves=12)


@given(VALUES)
def test_canonical_when_any_exact_value(value):
    assert canonical(value) == rfc8785.dumps(value)


@pytest.mark.parametrize(
    "text", ['"\\/\b\f\n\r\t', "\x00\x1f\x7f\x80\u2028\ufeff", "é𝄞"], ids=["escapes", "controls", "wide"]
)
def test_canonical_when_text_is_unusual(text):
    assert canonical([text, {"a": text, text: "b"}]) == rfc8785.dumps([text, {"a": text, text: "b"}])


@pytest.mark.parametrize(
    "value",
    ["\ud800", {"a": "\ud800"}, {1: "a"}, {"a": object()}],
    ids=["half a pair", "half a pair inside", "a number as a name", "an object"],
)
def test_canonical_when_json_has_no_form(value):
    with pytest.raises(Invalid, match=r"canonical\.not_json"):
        canonical(value)
