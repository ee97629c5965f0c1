"""A measurand is never below zero where it counts, or where its plausible band starts at zero or above."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from qa_tracker.core.library import procedure

FOLDER = Path(__file__).parents[2] / "fixtures" / "procedures"
MEASURANDS = {
    one.code: one
    for path in FOLDER.glob("*.json")
    for one in procedure(json.loads(path.read_text("utf-8"))).measurands
}


@pytest.mark.parametrize(
    ("code", "never"),
    [
        ("toe_probe_leakage", True),
        ("penetration", True),
        ("dark_elements", True),
        ("volume_error", False),
        ("vertical_distance_difference", False),
        ("test_object_temperature", False),
    ],
)
def test_quantity_is_never_below_zero_when_its_band_says_so(code, never):
    assert MEASURANDS[code].never_below_zero is never
