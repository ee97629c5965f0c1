"""The expanded uncertainty (k = 2) that a reading is judged with, from what was stated."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.stated_uncertainty import expanded

STATED = {
    "standard": (("standard", "1.5", "", ()), "3"),
    "standard, of many digits": (("standard", "1.23456", "", ()), "2.46912"),
    "expanded, k = 2": (("expanded", "3.00", "2", ()), "3.00"),
    "expanded, k = 3": (("expanded", "3", "3", ()), "2"),
    "expanded, k = 1.96": (("expanded", "1", "1.96", ()), "1.0206"),
    "expanded, of the least place": (("expanded", "0.000000000001", "3", ()), "0.000000000002"),
    "kept from repeats": (("repeats", "1.3", "", ()), "1.3"),
    "of the check's own repeats": (("repeats_of_check", "", "", (Decimal(1), Decimal(2))), "8.985"),
    "of equal repeats, by the resolution": (("repeats_of_check", "", "", (Decimal(2),) * 3, "0.5"), "0.2887"),
    "of equal repeats, resolution not known": (("repeats_of_check", "", "", (Decimal(2),) * 3), ""),
    "kept from equal repeats": (("repeats", "0", "", (), "1"), "0.5774"),
    "kept from repeats, above the resolution": (("repeats", "1.3", "", (), "1"), "1.3"),
    "of one reading only": (("repeats_of_check", "", "", (Decimal(1),)), ""),
}


@pytest.mark.parametrize("name", STATED)
def test_expanded_uncertainty_is_brought_to_two_standard_ones(name):
    arguments, text = STATED[name]
    assert expanded(*arguments) == text
