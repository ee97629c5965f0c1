"""The mechanical index by its definition, and the row of the shipped table that a thermal index lies in."""

from __future__ import annotations

import json
from decimal import Decimal

import pytest
from reference_rows import FOLDER

from qa_tracker.core.acoustics_output import dwell, mechanical_index
from qa_tracker.core.errors import Invalid
from qa_tracker.core.library import cautions

SHIPPED = json.loads((FOLDER.parent / "criteria" / "cautions.json").read_text("utf-8"))
TABLE = next(each for each in cautions(SHIPPED) if each.code == "obstetric-dwell").table


def test_mechanical_index_is_one_at_one_megapascal_and_one_megahertz():
    # IEC 62359: pressure over 1 MPa, by the root of the frequency over 1 MHz
    assert mechanical_index(1.0, 1.0) == 1.0
    assert mechanical_index(1.9, 4.0) == pytest.approx(0.95)
    assert mechanical_index(0.0, 3.5) == 0.0


# BMUS 2009 as in the criteria (from memory): the row an index lies in, half-open
ROWS = {
    "0": None, "0.69": None, "0.7": "60", "0.99": "60", "1.0": "30", "1.5": "15", "2.0": "4", "2.49": "4", "2.5": "1",
    "2.99": "1", "3.0": None, "9": None,
}  # fmt: skip


@pytest.mark.parametrize("index", ROWS)
def test_scanning_time_is_that_of_the_row_an_index_lies_in(index):
    assert dwell(TABLE, Decimal(index)).minutes == ROWS[index]


def test_no_minutes_mean_two_things_that_the_words_tell_apart():
    assert dwell(TABLE, Decimal("0.3")).says == "no limit, but as low as reasonably achievable"
    assert dwell(TABLE, Decimal("3.0")).says == "not recommended"


def test_table_without_a_row_says_nothing():
    assert dwell((), Decimal(1)) is None
    assert dwell(TABLE[1:], Decimal("0.1")) is None


@pytest.mark.parametrize(
    ("text", "code"), [("-0.1", "negative"), ("NaN", "not_finite"), ("Infinity", "not_finite")]
)
def test_index_that_is_none_is_refused(text, code):
    with pytest.raises(Invalid) as refused:
        dwell(TABLE, Decimal(text))
    assert (refused.value.code, refused.value.field) == (f"acoustics.{code}", "thermal_index")
