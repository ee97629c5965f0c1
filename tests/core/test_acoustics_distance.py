"""A distance corrected for the speed of sound: exact, along the beam only, and refused with the reason otherwise."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core.acoustics_media import corrected_distance_mm, shown_distance_mm
from qa_tracker.core.errors import Invalid

GIVEN = {
    "object_m_s": Decimal(1450), "console_m_s": Decimal(1540), "resolution_mm": Decimal("0.01"),
    "along_beam": True, "layout_compensated": False,
}  # fmt: skip


def corrected(text, **more):
    return corrected_distance_mm(Decimal(text), **GIVEN | more)


def test_hundred_millimetres_in_urethane_are_read_and_corrected():
    # Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143: 1450 m/s, console 1540: 100 mm reads 106.21
    assert shown_distance_mm(100, 1450, 1540) == pytest.approx(106.21, abs=5e-3)
    assert corrected("106.21") == Decimal("100.00")
    assert corrected("106.2", resolution_mm=Decimal("0.1")) == Decimal("100.0")


def test_reading_stands_where_both_speeds_agree():
    assert corrected("106.21", console_m_s=Decimal(1450)) == Decimal("106.21")
    assert corrected("0") == Decimal("0.00")


def test_console_set_otherwise_is_what_counts():
    assert corrected("100", console_m_s=Decimal(1566), object_m_s=Decimal(1540)) == Decimal("98.34")


def test_tie_is_rounded_to_the_even_step():
    half = {"object_m_s": Decimal(1), "console_m_s": Decimal(2), "resolution_mm": Decimal("0.1")}
    assert [corrected(text, **half) for text in ("0.5", "0.7")] == [Decimal("0.2"), Decimal("0.4")]


@given(st.decimals("0", "1000", places=3), st.decimals("1300", "1700", places=1))
def test_correction_is_exact_to_half_a_step(reading, speed):
    found = corrected(str(reading), object_m_s=speed)
    assert abs(Fraction(found) - Fraction(reading) * Fraction(speed) / 1540) <= Fraction(1, 200)


REFUSED = {
    "lateral": ({"along_beam": False}, "acoustics.lateral", "along_beam"),
    "compensated": ({"layout_compensated": True}, "acoustics.compensated", "layout_compensated"),
    "no speed": ({"object_m_s": Decimal(0)}, "acoustics.not_positive", "object_m_s"),
    "no setting": ({"console_m_s": Decimal("NaN")}, "acoustics.not_finite", "console_m_s"),
    "no step": ({"resolution_mm": Decimal(0)}, "number.step", ""),
    "a speed to fill the memory": ({"object_m_s": Decimal("1E+999999")}, "acoustics.magnitude", "object_m_s"),
    "a speed of next to nothing": (
        {"console_m_s": Decimal("1E-999999")},
        "acoustics.magnitude",
        "console_m_s",
    ),
}


@pytest.mark.parametrize("name", REFUSED)
def test_correction_is_refused(name):
    more, code, field = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        corrected("106.2", **more)
    assert (refused.value.code, refused.value.field) == (code, field)


@pytest.mark.parametrize(
    ("text", "code"), [("-1", "negative"), ("sNaN", "not_finite"), ("Infinity", "not_finite")]
)
def test_reading_that_is_none_is_refused(text, code):
    with pytest.raises(Invalid) as refused:
        corrected(text)
    assert refused.value.code == f"acoustics.{code}"
