"""Attenuation in decibels and nepers against definitions, published tables and facts of the trade."""

from __future__ import annotations

import math

import pytest
from reference_rows import rows

from qa_tracker.core.acoustics import (
    attenuation_db,
    db_from_np,
    intensity_coefficient_per_cm,
    intensity_share,
    np_from_db,
    pressure_share,
    remaining_intensity,
)


def test_echo_agrees_with_the_definitions():
    # IEC 60027-3, ISO 80000-8: 0.5 dB/(cm MHz), 3.5 MHz, 10 cm
    assert attenuation_db(0.5, 3.5, 10, both_ways=False) == 17.5
    assert attenuation_db(0.5, 3.5, 10, both_ways=True) == 35.0
    assert intensity_share(35.0) == pytest.approx(0.0003162278, rel=1e-6)
    assert pressure_share(35.0) == pytest.approx(0.01778279, rel=1e-6)


def test_neper_is_8_69_decibels_and_back():
    assert db_from_np(1.0) == pytest.approx(8.685889638, abs=5e-10)
    assert db_from_np(np_from_db(35.0)) == pytest.approx(35.0)
    assert pressure_share(db_from_np(1.0)) == pytest.approx(math.exp(-1))
    assert intensity_share(db_from_np(1.0)) == pytest.approx(math.exp(-2))


def test_absorption_is_exponential():
    # Common practice, no source: I = I0 exp(-mu x); as much of what is left is lost in each further centimetre.
    mu = intensity_coefficient_per_cm(1.75)
    assert remaining_intensity(94.0, mu, 20) == pytest.approx(94.0 * intensity_share(35.0))
    assert remaining_intensity(1.0, mu, 2) == pytest.approx(remaining_intensity(1.0, mu, 1) ** 2)
    assert remaining_intensity(720.0, mu, 0) == 720.0


def test_liver_in_nepers_is_the_published_range_in_decibels():
    # Kaye & Laby 2.4.6 gives Np/cm at 5 MHz; read as dB/cm it would be 8.7 times too little.
    liver = next(row for row in rows("kaye_laby_2_4_6.csv") if row["medium"] == "Liver")
    found = [
        db_from_np(float(liver[f"alpha_{end}_Np_cm"])) / float(liver["f_lo_MHz"]) for end in ("lo", "hi")
    ]
    assert found == pytest.approx([0.2953, 0.9902], abs=5e-5)
    assert found[0] < 0.5 < found[1]


def test_water_loses_with_the_square_of_the_frequency():
    # Szabo 2004: 2.17e-3 dB/(cm MHz2) at 20 degC, within 2 % of the fit to Pinkerton 1949.
    fit = {row["T_C"]: float(row["alpha_dB_cm_MHz2"]) for row in rows("water_attenuation.csv")}
    assert attenuation_db(0.00217, 5, 1, both_ways=False, power=2) == pytest.approx(0.05425)
    assert fit["20"] == pytest.approx(0.002185, abs=5e-7)
    assert fit["20"] == pytest.approx(0.00217, rel=0.02)


def test_loss_of_thousands_of_decibels_leaves_nothing():
    assert intensity_share(1e15) == 0
    assert pressure_share(0.0) == 1
