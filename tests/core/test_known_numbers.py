"""The numbers of media against the tables they are from: none without a source, none outside its range."""

from __future__ import annotations

import pytest
from reference_rows import rows

from qa_tracker.core.acoustics_media import water_sound_speed_m_s
from qa_tracker.core.constants import KNOWN_NUMBERS, SOFT_TISSUE_SPEED_M_S

KNOWN = {each.code: each for each in KNOWN_NUMBERS}
OPENSTAX = {row["medium"]: row for row in rows("openstax_table_17_5.csv")}
KAYE = {row["medium"]: row for row in rows("kaye_laby_2_4_6.csv")}
# Medium here, in OpenStax Table 17.5, and in Kaye & Laby 2.4.6 (several kinds of bone).
MEDIA = {
    "blood": ("Blood", ("Blood",)),
    "fat": ("Fat", ("Fat",)),
    "muscle": ("Muscle (average)", ("Muscle",)),
    "liver": ("", ("Liver",)),
    "bone": ("Bone (varies)", ("Bone (skull)", "Bone (trabecular)")),
    "air": ("Air", ("Air",)),
}
COLUMNS = {"speed": ("speed_m_s", "c"), "density": ("density_kg_m3", "rho")}


def ends(medium, quantity):
    """The lowest and highest number of both tables, and OpenStax's where it is but one."""
    here, (column, start) = MEDIA[medium], COLUMNS[quantity]
    printed = OPENSTAX[here[0]][column].split("-") if here[0] else []
    found = [float(text) for text in printed]
    found += [float(KAYE[kind][f"{start}_{end}"]) for kind in here[1] for end in ("lo", "hi")]
    return (float(printed[0]) if len(printed) == 1 else None), min(found), max(found)


@pytest.mark.parametrize("quantity", COLUMNS)
@pytest.mark.parametrize("medium", MEDIA)
def test_number_and_range_are_those_of_the_tables(medium, quantity):
    known = KNOWN[f"{medium}_{quantity}"]
    value, low, high = ends(medium, quantity)
    assert known.value == value
    assert (known.low or value, known.high or value) == (low, high)


def test_ranges_are_those_catalogued():
    # Kaye & Laby 2.4.6: fat 1412-1487, liver 1578-1640, blood 1584, kidney 1560-1580 m/s
    found = {name: (KAYE[name]["c_lo"], KAYE[name]["c_hi"]) for name in ("Fat", "Liver", "Blood", "Kidney")}
    assert found == {
        "Fat": ("1412", "1487"), "Liver": ("1578", "1640"), "Blood": ("1584", "1584"), "Kidney": ("1560", "1580"),
    }  # fmt: skip


def test_water_is_that_of_the_polynomial_and_of_iapws_95():
    at_20 = next(row for row in rows("water_sound_speed_5C.csv") if row["T_C"] == "20")
    water = KNOWN["water_speed"]
    assert water.value == water.high == round(water_sound_speed_m_s(20), 2)
    assert water.low == pytest.approx(float(at_20["c_IAPWS95"]), abs=5e-4)


def test_crystal_and_water_are_those_of_the_table():
    crystal, water = OPENSTAX["Barium titanate (transducer)"], OPENSTAX["Water"]
    found = (KNOWN["crystal_speed"].value, KNOWN["crystal_density"].value, KNOWN["water_density"].value)
    printed = (crystal["speed_m_s"], crystal["density_kg_m3"], water["density_kg_m3"])
    assert found == tuple(map(float, printed))


def test_soft_tissue_is_the_convention():
    # From memory, no oracle: only that the convention of 1540 m/s and 0.5 dB/(cm MHz) is the same there.
    table = {row["medium"]: row for row in rows("szabo_duck_tissue_from_memory.csv")}
    convention = table["Soft tissue convention"]
    assert KNOWN["soft_tissue_speed"].value == SOFT_TISSUE_SPEED_M_S == float(convention["c_m_s"])
    assert KNOWN["soft_tissue_loss"].value == float(convention["a_dB_cm_MHz"])
    assert float(table["Water 20C"]["c_m_s"]) == pytest.approx(KNOWN["water_speed"].value, abs=0.1)


def test_test_objects_are_those_of_the_criteria():
    # Browne et al. 2003, Ultrasound Med Biol 29(7):1053-1060
    urethane = KNOWN["urethane_speed"]
    assert (KNOWN["hydrogel_speed"].value, urethane.low, urethane.high) == (1540, 1430, 1450)


@pytest.mark.parametrize("known", KNOWN_NUMBERS, ids=lambda each: each.code)
def test_number_has_a_source_or_says_that_it_has_none(known):
    assert bool(known.source) == (known.standing != "practice")
    assert known.value is not None or known.low is not None
    assert known.low is None or known.low <= (known.value or known.low) <= known.high
