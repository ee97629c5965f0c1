"""The closed set of units."""

from __future__ import annotations

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.units import UNITS, unit, with_symbol

NEEDED = "mm cm dB uA mOhm MOhm % MHz cm/s m/s degC g min cd/m2 lux 1 mW/cm2 K"


def test_unit_is_known_when_a_procedure_needs_it():
    assert [code for code in NEEDED.split() if code not in UNITS] == []


@pytest.mark.parametrize("code", ["", "MM", "mm ", "inch", "µA", "None"])
def test_unit_is_refused_when_outside_the_set(code):
    with pytest.raises(Invalid) as refusal:
        unit(code, field="unit")
    assert (refusal.value.code, refusal.value.field) == ("unit.unknown", "unit")


def test_unit_codes_are_ascii_and_symbols_distinct():
    assert all(code.isascii() and code == entry.code for code, entry in UNITS.items())
    assert len({entry.symbol for entry in UNITS.values()}) == len(UNITS)


@pytest.mark.parametrize(
    ("code", "text"), [("mm", "6\u00a0mm"), ("1", "6"), ("deg", "6°"), ("uA", "6\u00a0µA")]
)
def test_with_symbol_joins_number_and_symbol(code, text):
    assert with_symbol("6", code) == text
