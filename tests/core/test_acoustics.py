"""Acoustics against published tables and examples, an independent library, and the facts of the trade."""

from __future__ import annotations

import csv
import doctest
import json
import math
from decimal import Decimal
from pathlib import Path

import CoolProp.CoolProp
import pytest

from qa_tracker.core import acoustics
from qa_tracker.core import constants as known
from qa_tracker.core.acoustics import (
    attenuation_db,
    corrected_distance_mm,
    doppler_shift_khz,
    echo_time_us,
    impedance_mrayl,
    intensity_share,
    reflected_intensity,
    transmitted_intensity,
    velocity_error_percent,
    water_sound_speed_m_s,
    wavelength_mm,
)
from qa_tracker.core.errors import Invalid
from qa_tracker.core.library import cautions

FOLDER = Path(__file__).parents[2] / "fixtures" / "reference"


def rows(name):
    lines = (FOLDER / name).read_text("utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def test_examples_give_what_they_say():
    found = doctest.testmod(acoustics)
    assert (found.attempted > 10, found.failed) == (True, 0)


def test_water_agrees_with_the_published_polynomial_and_with_iapws_95():
    for row in rows("water_sound_speed_5C.csv"):
        temperature = float(row["T_C"])
        if temperature > 95:
            continue
        found = water_sound_speed_m_s(temperature)
        assert found == pytest.approx(float(row["c_Marczak"]), abs=1e-3)
        if 1 <= temperature <= 50:
            assert found == pytest.approx(float(row["c_IAPWS95"]), abs=0.05)


@pytest.mark.parametrize("temperature", [1, 5, 15, 20, 22.5, 30, 37, 50])
def test_water_agrees_with_an_independent_library(temperature):
    # CoolProp 8 (IAPWS-95) at 101.325 kPa
    there = CoolProp.CoolProp.PropsSI("speed_of_sound", "T", temperature + 273.15, "P", 101325, "Water")
    assert water_sound_speed_m_s(temperature) == pytest.approx(there, abs=0.05)


def test_coefficient_that_is_widely_miscopied_is_told_apart():
    # -5.779136e-2 instead of -5.799136e-2 gives 0.08 m/s too much at 20 degC
    wrong = water_sound_speed_m_s(20) + (5.799136e-2 - 5.779136e-2) * 20**2
    assert wrong - 1482.38 == pytest.approx(0.08, abs=0.005)
    assert abs(water_sound_speed_m_s(20) - 1482.38) < 0.005


def test_air_agrees_with_the_simple_law_and_lies_near_cramer():
    for row in rows("air_sound_speed.csv"):
        found = acoustics.air_sound_speed_m_s(float(row["T_C"]))
        assert found == pytest.approx(float(row["c_simple"]), abs=0.01)
        if row["RH_percent"] == "0":
            assert found == pytest.approx(float(row["c_Cramer"]), abs=0.25)


def test_impedance_agrees_with_the_table():
    # OpenStax College Physics 2e, Table 17.5: three significant digits
    for row in rows("openstax_table_17_5.csv"):
        if "-" in row["density_kg_m3"]:
            continue
        found = impedance_mrayl(float(row["density_kg_m3"]), float(row["speed_m_s"])) * 1e6
        # Muscle is printed as 1.70e6 and gives 1.709e6.
        assert found == pytest.approx(float(row["Z_kg_m2_s"]), rel=6e-3)


def test_fat_against_muscle_reflects_as_in_the_worked_example():
    # OpenStax College Physics 2e, Example 17.7: a = 0.014
    assert reflected_intensity(1.34, 1.70) == pytest.approx(0.0140235, abs=5e-8)


def test_echo_agrees_with_the_definitions():
    # IEC 60027-3, ISO 80000-8: 0.5 dB/cm/MHz, 3.5 MHz, 10 cm
    assert attenuation_db(0.5, 3.5, 10, both_ways=False) == 17.5
    assert attenuation_db(0.5, 3.5, 10) == 35.0
    assert intensity_share(35.0) == pytest.approx(0.0003162278, rel=1e-6)
    assert math.sqrt(intensity_share(35.0)) == pytest.approx(0.01778279, rel=1e-6)
    assert (echo_time_us(10), echo_time_us(1)) == pytest.approx((129.8701, 12.987013), rel=1e-6)


def test_wavelength_and_depth_agree_with_the_text():
    # OpenStax College Physics 2e, 17.7: 0.22 mm at 7 MHz, 500 wavelengths 0.11 m
    assert wavelength_mm(7) == pytest.approx(0.22, abs=5e-3)
    assert 500 * wavelength_mm(7) / 1e3 == pytest.approx(0.11, abs=5e-3)


def test_facts_of_the_trade_hold():
    # Common practice, no source: a wavelength of about 1 mm at 2 MHz; air reflects 99.9 %, gel lets 99 % in;
    # bone against soft tissue reflects 41 to 44 %, not nearly everything.
    tissue = impedance_mrayl(1058, known.SOFT_TISSUE_SPEED.value)
    air = impedance_mrayl(known.AIR_DENSITY.value, known.AIR_SPEED.value)
    water = impedance_mrayl(known.WATER_DENSITY.value, known.WATER_SPEED.value)
    assert wavelength_mm(2) == pytest.approx(0.77)
    assert reflected_intensity(tissue, air) == pytest.approx(0.999, abs=5e-4)
    assert transmitted_intensity(tissue, water) > 0.99
    assert 0.41 <= reflected_intensity(1.63, 7.8) <= 0.44
    # Absorption follows I = I0 exp(-mu x): as much of what is left is lost again in each further centimetre.
    assert intensity_share(6.0) == pytest.approx(intensity_share(3.0) ** 2)


def test_nothing_is_lost_at_an_interface():
    for first, second in ((1.34, 1.7), (1.63, 0.000429), (1.5, 1.5)):
        whole = reflected_intensity(first, second) + transmitted_intensity(first, second)
        assert whole == pytest.approx(1)
        assert reflected_intensity(first, second) == reflected_intensity(second, first)


def test_doppler_shift_and_the_error_of_its_angle():
    assert doppler_shift_khz(100, 2, 0) == pytest.approx(2.597403, rel=1e-6)
    assert doppler_shift_khz(100, 2, 90) == pytest.approx(0, abs=1e-9)
    assert doppler_shift_khz(100, 2, 120) == pytest.approx(-doppler_shift_khz(100, 2, 60))
    # At 60 degrees five degrees too many read 18 % too fast, five too few 13 % too slow.
    assert velocity_error_percent(60, 65) == pytest.approx(18.31, abs=0.01)
    assert velocity_error_percent(60, 55) == pytest.approx(-12.83, abs=0.01)


def corrected(text, **more):
    given = {
        "object_m_s": Decimal(1450), "console_m_s": Decimal(1540), "resolution_mm": Decimal("0.01"),
        "along_beam": True, "layout_compensated": False,
    }  # fmt: skip
    return corrected_distance_mm(Decimal(text), **given | more)


def test_distance_is_corrected_along_the_beam_only():
    # Goldstein 2000: 100 mm in 1450 m/s reads 106.21
    assert acoustics.shown_distance_mm(100, 1450, 1540) == pytest.approx(106.21, abs=5e-3)
    assert corrected("106.21") == Decimal("100.00")
    assert corrected("106.21", console_m_s=Decimal(1450)) == Decimal("106.21")


def test_dwell_time_is_that_of_the_row_an_index_lies_in():
    shipped = json.loads((FOLDER.parent / "criteria" / "cautions.json").read_text("utf-8"))
    table = next(each for each in cautions(shipped) if each.code == "obstetric-dwell").table
    found = {text: acoustics.dwell(table, Decimal(text)) for text in ("0.69", "0.7", "2.49", "3.0", "9")}
    assert [row.minutes for row in found.values()] == [None, "60", "4", None, None]
    assert found["9"].says == "not recommended"
    assert acoustics.dwell(table, Decimal("-0.1")) is None
    assert acoustics.dwell(table, Decimal("NaN")) is None


REFUSED = {
    "across the beam": (lambda: corrected("106.2", along_beam=False), "acoustics.lateral"),
    "compensated layout": (lambda: corrected("106.2", layout_compensated=True), "acoustics.compensated"),
    "no speed": (lambda: corrected("106.2", object_m_s=Decimal(0)), "acoustics.not_positive"),
    "too hot": (lambda: water_sound_speed_m_s(95.1), "acoustics.temperature"),
    "no temperature": (lambda: water_sound_speed_m_s(math.nan), "acoustics.temperature"),
    "frozen air": (lambda: acoustics.air_sound_speed_m_s(-40), "acoustics.temperature"),
    "no frequency": (lambda: wavelength_mm(0), "acoustics.not_positive"),
    "endless density": (lambda: impedance_mrayl(math.inf, 1540), "acoustics.not_positive"),
    "depth above the skin": (lambda: echo_time_us(-1), "acoustics.negative"),
    "endless loss": (lambda: intensity_share(math.inf), "acoustics.not_finite"),
    "no velocity": (lambda: doppler_shift_khz(math.nan, 2, 0), "acoustics.not_finite"),
    "backwards": (lambda: doppler_shift_khz(10, 2, 181), "acoustics.angle"),
    "right angle": (lambda: velocity_error_percent(60, 90), "acoustics.angle"),
    "negative pressure": (lambda: acoustics.mechanical_index(-1, 2), "acoustics.negative"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_figure_is_refused_out_of_its_range(name):
    work_out, code = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        work_out()
    assert refused.value.code == code
