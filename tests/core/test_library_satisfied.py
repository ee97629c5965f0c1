"""Whether what one check read is all that another requires, by what was read and not by what was asked."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import pytest

from qa_tracker.core.library import procedure, satisfied

FOLDER = Path(__file__).resolve().parents[2] / "fixtures" / "procedures"
MONTHLY, QUARTERLY, USER = (
    procedure(json.loads((FOLDER / f"{name}.json").read_text(encoding="utf-8")))
    for name in ("monthly-in-air", "quarterly-mechanical-uniformity", "user-check")
)
PROBE = {"device_kind": "probe", "array_kind": "convex"}
READ = dict.fromkeys((one.code for one in QUARTERLY.measurands), 1)


def with_symmetry(**changed):
    """The monthly check with its last item changed."""
    return replace(
        MONTHLY,
        measurands=tuple(
            replace(one, **changed) if one.code == "symmetry" else one for one in MONTHLY.measurands
        ),
    )


def test_check_is_satisfied_when_all_it_requires_was_read():
    assert satisfied(MONTHLY, QUARTERLY, READ, **PROBE)


@pytest.mark.parametrize("read", [{**READ, "symmetry": 0}, {"lens_grade": 1}, {}])
def test_check_is_not_satisfied_when_something_was_left_unread(read):
    assert not satisfied(MONTHLY, QUARTERLY, read, **PROBE)


def test_check_that_asks_for_more_repeats_is_not_satisfied_by_fewer():
    assert not satisfied(with_symmetry(repeats=3), QUARTERLY, READ, **PROBE)
    assert satisfied(with_symmetry(repeats=3), QUARTERLY, READ | {"symmetry": 3}, **PROBE)


@pytest.mark.parametrize(
    "changed", [{"per": "device"}, {"by_condition": True}, {"unit": "mm"}, {"kind": "count"}]
)
def test_reading_does_not_count_when_the_other_means_another_quantity_or_part(changed):
    assert not satisfied(with_symmetry(**changed), QUARTERLY, READ, **PROBE)


def test_check_that_requires_nothing_is_not_satisfied_by_nothing():
    optional = tuple(replace(one, required=False, one_of=None) for one in USER.measurands)
    assert not satisfied(replace(USER, measurands=optional), QUARTERLY, {}, **PROBE)


def test_check_is_not_satisfied_when_it_is_not_meant_for_the_kind_of_device():
    assert not satisfied(MONTHLY, QUARTERLY, READ, device_kind="scanner")
