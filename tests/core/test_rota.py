"""Turns of a rota, and who stands in for someone away."""

from __future__ import annotations

import doctest
from datetime import date, timedelta
from itertools import pairwise

import pytest

from qa_tracker.core import rota
from qa_tracker.core.errors import Invalid
from qa_tracker.core.rota import stand_in, turn_of, turns

MONDAY = date(2026, 3, 2)
EVERYONE = frozenset(range(1, 6))


@pytest.mark.parametrize("weeks", [1, 2, 5])
@pytest.mark.parametrize("members", [(1,), (1, 2), (3, 1, 2)], ids=len)
def test_turns_change_after_so_many_weeks_in_order_before_and_after_the_first_day(members, weeks):
    for number in range(-4, 9):
        first = MONDAY + timedelta(weeks=weeks * number)
        wanted = {members[number % len(members)]}
        days = (first, first + timedelta(weeks=weeks) - timedelta(days=1))
        assert {turn_of(members, weeks, MONDAY, day) for day in days} == wanted


def test_turns_over_clock_changes_and_years_are_counted_in_days():
    assert turn_of((1, 2), 1, MONDAY, MONDAY + timedelta(weeks=521)) == 2


def test_list_of_turns_covers_the_span_without_gap_or_overlap():
    since, until = date(2026, 2, 20), date(2026, 5, 1)
    found = turns((1, 2, 3), 2, MONDAY, since, until)
    assert found[0][0] <= since <= found[0][1]
    assert found[-1][0] <= until <= found[-1][1]
    assert all(after[0] - before[1] == timedelta(days=1) for before, after in pairwise(found))


@pytest.mark.parametrize(
    ("weeks", "members", "code"), [(0, (1,), "rota.weeks"), (27, (1,), "rota.weeks"), (1, (), "rota.nobody")]
)
def test_rota_that_is_none_is_refused(weeks, members, code):
    with pytest.raises(Invalid) as refused:
        turn_of(members, weeks, MONDAY, MONDAY)
    assert refused.value.code == code


STAND_INS = {
    "at work": (1, {}, 1),
    "away": (1, {1: 2}, 2),
    "deputy away too": (1, {1: 2, 2: 3}, 3),
    "two for each other": (1, {1: 2, 2: 1}, 1),
    "circle further on": (1, {1: 2, 2: 3, 3: 2}, 1),
    "own deputy": (1, {1: 1}, 1),
    "deputy has gone": (1, {1: 9}, 1),
    "has gone": (9, {}, None),
    "has gone with a deputy": (9, {9: 1}, 1),
    "all have gone": (9, {9: 8}, None),
}


@pytest.mark.parametrize(("person", "deputies", "found"), STAND_INS.values(), ids=STAND_INS)
def test_duties_fall_to_the_first_who_is_there(person, deputies, found):
    assert stand_in(person, deputies, EVERYONE) == found


def test_examples_are_right():
    assert doctest.testmod(rota).failed == 0
