"""The uncertainty of a departure, worked out by hand: JCGM 100:2008 (GUM), 5.1.2, equation 10, uncorrelated."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.combined_uncertainty import Departing, combined_at_levels
from qa_tracker.core.criteria import from_json

STEP = {"basis": "baseline", "direction": "above", "suspension": {"absolute": "60"}}
RATIO = {"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}}
PENETRATION = {
    "basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}, "suspension": {"absolute": "10"},
}  # fmt: skip
TWO_RATIOS = {
    "basis": "ratio",
    "direction": "above",
    "remedial": {"percent": "60"},
    "suspension": {"percent": "80"},
}
TENTH = {"basis": "baseline", "remedial": {"percent": "10"}}

BY_HAND = {
    # 62 uA against 210 uA, both U = 3: y - 0.8 r, 9 + 0.64 * 9 = 14.76, root 3.84187...
    "ratio": (RATIO, "above", ("62", "210", "3", "3"), [("suspension", "0.8", "3.842")]),
    # A step of the same quantity: 9 + 9 = 18, root 4.24264...
    "step": (STEP, "above", ("62", "58", "3", "3"), [("suspension", "1", "4.243")]),
    # Penetration, u = 1.8 so U = 3.6: 12.96 + 12.96 = 25.92, root 5.09116...
    "loss": (
        PENETRATION, "below", ("145.4", "152.0", "3.6", "3.6"),
        [("suspension", "1", "5.092"), ("remedial", "1", "5.092")],
    ),
    # 60 % of the other: 9 + 0.36 * 9 = 12.24, root 3.49857...
    "two ratios": (
        TWO_RATIOS, "above", ("62", "210", "3", "3"), [("suspension", "0.8", "3.842"), ("remedial", "0.6", "3.499")],
    ),
    # A chassis with U = 10 of its own: 9 + 0.64 * 100 = 73, root 8.54400...
    "own statement": (RATIO, "above", ("62", "210", "3", "10"), [("suspension", "0.8", "8.545")]),
    # y - b > 0.1 b, so y - 1.1 b: 9 + 1.21 * 16 = 28.36, root 5.32541...
    "rise by a share": (TENTH, "above", ("115", "100", "3", "4"), [("remedial", "1.1", "5.326")]),
    # b - y > 0.1 b, so 0.9 b - y: 9 + 0.81 * 16 = 21.96, root 4.68614...
    "loss by a share": (TENTH, "below", ("85", "100", "3", "4"), [("remedial", "0.9", "4.687")]),
    "either way, up": (TENTH, "either", ("115", "100", "3", "4"), [("remedial", "1.1", "5.326")]),
    "either way, down": (TENTH, "either", ("85", "100", "3", "4"), [("remedial", "0.9", "4.687")]),
    # Below zero the share of the size is taken away: y - b > -0.1 b, so y - 0.9 b.
    "rise from below zero": (TENTH, "above", ("-85", "-100", "3", "4"), [("remedial", "0.9", "4.687")]),
    # 3, 4 and 5 are exact and not rounded up.
    "exact root": (STEP, "above", ("62", "58", "3", "4"), [("suspension", "1", "5")]),
}  # fmt: skip


@pytest.mark.parametrize("name", BY_HAND)
def test_combined_uncertainty_is_what_the_hand_works_out(name):
    shape, direction, numbers, wanted = BY_HAND[name]
    found = combined_at_levels(from_json(shape | {"direction": direction}), Departing(*map(Decimal, numbers)))
    assert found == tuple((level, Decimal(weight), Decimal(size)) for level, weight, size in wanted)


@pytest.mark.parametrize(("reference", "weight"), [("10", "1"), ("100", "1.1"), ("20", "1")])
def test_share_of_the_baseline_counts_only_where_it_governs(reference, weight):
    larger = from_json(
        {"basis": "baseline", "direction": "above", "remedial": {"absolute": "2", "percent": "10"}}
    )
    given = Departing(Decimal(200), Decimal(reference), Decimal(3), Decimal(3))
    assert [each[1] for each in combined_at_levels(larger, given)] == [Decimal(weight)]


ALONE = {
    "a limit on the value itself": {"basis": "none", "direction": "above", "suspension": {"absolute": "150"}},
    "own spread": {
        "basis": "baseline", "direction": "either", "remedial": {"coverage": "95", "confidence": "95"},
    },
}  # fmt: skip


@pytest.mark.parametrize("name", ALONE)
def test_nothing_is_combined_where_the_limit_leaves_nothing_to_combine(name):
    assert combined_at_levels(from_json(ALONE[name]), Departing(*map(Decimal, ("62", "58", "3", "3")))) == ()
