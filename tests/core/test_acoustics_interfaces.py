"""Impedance, reflection and transmission against the published table, its worked example, and facts of the trade."""

from __future__ import annotations

import numpy as np
import pytest
from reference_rows import rows

from qa_tracker.core.acoustics import impedance_mrayl, reflected_intensity, transmitted_intensity

# OpenStax College Physics 2e, Table 17.5.
TABLE = {row["medium"]: row for row in rows("openstax_table_17_5.csv")}
# What is printed to the places given; muscle's 1075 x 1590 is 1.709, and printed as 1.70.
PRINTED = {"Air": 0.5e-6, "Water": 0.05, "Blood": 0.005, "Fat": 0.005, "Muscle (average)": 0.01}
TISSUE = impedance_mrayl(1043, 1540)


def product(medium):
    return impedance_mrayl(float(TABLE[medium]["density_kg_m3"]), float(TABLE[medium]["speed_m_s"]))


@pytest.mark.parametrize("medium", [*PRINTED, "Barium titanate (transducer)"])
def test_impedance_is_that_of_the_table(medium):
    printed = float(TABLE[medium]["Z_kg_m2_s"]) / 1e6
    assert product(medium) == pytest.approx(printed, abs=PRINTED.get(medium, 0.05))


def test_impedance_of_bone_spans_the_range_of_the_table():
    assert TABLE["Bone (varies)"]["Z_kg_m2_s"] == "5.7e6-7.8e6"
    low, high = impedance_mrayl(np.array([1400, 1900]), 4080)
    assert (low, high) == pytest.approx((5.7, 7.8), abs=0.05)


def test_fat_against_muscle_reflects_as_in_the_worked_example():
    # OpenStax College Physics 2e, 17.7, Example 17.7: Z 1.34e6, a = 0.014
    assert product("Fat") == pytest.approx(1.34125)
    assert reflected_intensity(1.34, 1.70) == pytest.approx(0.0140235, abs=5e-8)


def test_skin_to_air_reflects_nearly_everything_and_gel_lets_it_in():
    # Common practice, no source: 99.9 % is reflected, about 99 % enters through gel (taken as water).
    assert reflected_intensity(TISSUE, product("Air")) == pytest.approx(0.999, abs=5e-4)
    assert transmitted_intensity(TISSUE, product("Water")) > 0.99


def test_bone_against_soft_tissue_reflects_less_than_half():
    # Common practice, no source: about 41 to 44 %, not nearly everything. Bone at the upper end of the table.
    assert 0.41 <= reflected_intensity(TISSUE, 7.8) <= 0.44
    assert reflected_intensity(TISSUE, 5.7) < 0.44


def test_air_bone_and_liquids_are_as_fast_as_the_trade_says():
    # Common practice, no source: 330 in air, about 1500 in liquids and soft tissue, a few thousand in bone.
    speeds = {name: float(row["speed_m_s"]) for name, row in TABLE.items()}
    assert speeds["Air"] == 330
    assert all(1400 < speeds[name] < 1600 for name in ("Water", "Blood", "Fat", "Muscle (average)"))
    assert 2000 < speeds["Bone (varies)"] < 5000


@pytest.mark.parametrize("pair", [(1.34, 1.7), (1.63, 0.000429), (1.5, 1.5), (1e-12, 1e12)])
def test_nothing_is_lost_and_either_side_may_come_first(pair):
    assert reflected_intensity(*pair) + transmitted_intensity(*pair) == pytest.approx(1)
    assert reflected_intensity(*pair) == reflected_intensity(*pair[::-1])


def test_equal_impedances_reflect_nothing():
    assert reflected_intensity(1.5, 1.5) == 0
    assert transmitted_intensity(1.5, 1.5) == 1
