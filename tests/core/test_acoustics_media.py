"""The speed of sound in water and air against published polynomials, IAPWS-95 and an independent library."""

from __future__ import annotations

import json

import CoolProp.CoolProp
import numpy as np
import pytest
from reference_rows import FOLDER, rows

from qa_tracker.core.acoustics_media import MARCZAK, air_sound_speed_m_s, water_sound_speed_m_s

WATER = rows("water_sound_speed_5C.csv")
AIR = rows("air_sound_speed.csv")
# Metres a second from ours, 1 to 50 degC. Lubbers & Graaff give theirs for 15 to 35 and 10 to 40 degC.
PUBLISHED = {
    "c_Marczak": 1e-3, "c_IAPWS95": 0.05, "c_BW112": 0.05, "c_BW36": 0.05, "c_BW148": 0.05,
    "c_DelGrossoMader": 0.05, "c_Lubbers_A_15_35": 0.2, "c_Lubbers_B_10_40": 0.2,
}  # fmt: skip


def independent(temperature):
    """CoolProp 8 (IAPWS-95) at 101.325 kPa."""
    return CoolProp.CoolProp.PropsSI("speed_of_sound", "T", temperature + 273.15, "P", 101325, "Water")


def test_coefficients_are_those_published():
    # As coded by NPL, "Speed of sound in pure water"
    known = json.loads((FOLDER / "water_coefficients.json").read_text("utf-8"))
    assert list(MARCZAK) == known["Marczak_1997_0_95C"]


@pytest.mark.parametrize("column", PUBLISHED)
def test_water_agrees_with_every_published_table(column):
    found = {row["T_C"]: water_sound_speed_m_s(float(row["T_C"])) for row in WATER if row["T_C"] != "0"}
    printed = {row["T_C"]: float(row[column]) for row in WATER if row[column] and row["T_C"] != "0"}
    assert len(printed) >= 5
    assert {at: found[at] for at in printed} == pytest.approx(printed, abs=PUBLISHED[column])


def test_water_agrees_at_freezing_and_at_20_degrees():
    # Marczak 1997: 1402.385 at 0 degC, 1482.38 at 20 degC; NIST Chemistry WebBook 1482.3
    assert water_sound_speed_m_s(0) == pytest.approx(1402.385, abs=1e-3)
    assert water_sound_speed_m_s(20) == pytest.approx(1482.38, abs=1e-3)
    assert water_sound_speed_m_s(20) == pytest.approx(1482.3, abs=0.1)


@pytest.mark.parametrize("temperature", [1, 10, 15, 20, 22.5, 30, 37, 45, 50])
def test_water_agrees_with_an_independent_library(temperature):
    assert water_sound_speed_m_s(temperature) == pytest.approx(independent(temperature), abs=0.05)


def test_coefficient_that_is_widely_miscopied_is_told_apart():
    # -5.779136e-2 instead of -5.799136e-2 for T^2: 0.08 m/s too much at 20 degC, 0.50 at 50 degC
    wrong = np.polynomial.Polynomial((*MARCZAK[:2], -5.779136e-2, *MARCZAK[3:]))
    off = {at: wrong(at) - water_sound_speed_m_s(at) for at in (20, 50)}
    assert off == pytest.approx({20: 0.08, 50: 0.50}, abs=1e-6)
    assert all(abs(wrong(at) - independent(at)) > 0.05 for at in (20, 37, 50))


def test_a_wrong_table_that_was_published_is_told_apart():
    # PMC10346919, Table A2, has 1460 m/s for water at 20 degC: 22 m/s too little
    assert water_sound_speed_m_s(20) - 1460 == pytest.approx(22.4, abs=0.05)


@pytest.mark.parametrize("row", AIR, ids=lambda row: f"{row['T_C']} degC {row['RH_percent']} %")
def test_air_is_the_simple_law_and_lies_near_cramer(row):
    # Cramer 1993, JASA 93:2510, as coded by NPL; the simple law knows no humidity.
    found = air_sound_speed_m_s(float(row["T_C"]))
    humid = float(row["c_Cramer"]) - found
    assert found == pytest.approx(float(row["c_simple"]), abs=1e-3)
    assert (0.12 < humid < 0.15) if row["RH_percent"] == "0" else (0.15 < humid < 2.5)


def test_air_lies_near_the_law_of_a_textbook():
    # OpenStax College Physics 2e, 17.2 (from memory): 331 sqrt(T / 273) m/s
    assert air_sound_speed_m_s(20) == pytest.approx(342.91, abs=0.35)
    assert air_sound_speed_m_s(0) == pytest.approx(331.3)
