"""The ladder: its instants in the site's zone, what is reached, who is told once and what is named as passed."""

from __future__ import annotations

import datetime as dt
import doctest
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core import ladder as module
from qa_tracker.core.errors import Invalid
from qa_tracker.core.ladder import (
    MISSED,
    RECIPIENTS,
    Held,
    Instants,
    Ladder,
    Rung,
    following,
    moments,
    owed,
    reached,
    step_at,
)

STANDING = [Rung(level, "responsible") for level in ("upcoming", "due", "late", "overdue")]
LADDER = Ladder((*STANDING, Rung("overdue", "lead"), Rung("t1", "physicist", 7), Rung("t2", "lead", 14)))
PEOPLE = {"responsible": [1], "lead": [2], "physicist": [3]}
DAYS = Instants(*(dt.datetime(2025, 6, day, tzinfo=dt.UTC) for day in (1, 8, 9, 16)))
AT = moments(LADDER, DAYS, "UTC")


def told(levels, people=PEOPLE, already=None, held=module.NOTHING_HELD):
    found, kept_back = owed(LADDER, levels, people, already or {}, held)
    return [(each.person, each.level, each.skipped) for each in found], kept_back


def test_examples_give_what_they_say():
    found = doctest.testmod(module)
    assert (found.failed, found.attempted > 0) == (0, True)


@pytest.mark.parametrize(
    ("rungs", "code"),
    [
        ([], "ladder.empty"),
        ([Rung("due", "lead"), Rung("due", "lead")], "ladder.told_twice"),
        ([Rung("due", "auditor")], "ladder.unknown_recipient"),
        ([Rung("tomorrow", "lead")], "ladder.unknown_level"),
        ([Rung("t10", "lead", 9)], "ladder.unknown_level"),
        ([Rung("due", "lead", 3)], "ladder.days_out_of_range"),
        ([Rung("t1", "lead", 0)], "ladder.days_out_of_range"),
        ([Rung("t1", "lead", 367)], "ladder.days_out_of_range"),
        ([Rung("t2", "lead", 7)], "ladder.steps_with_gap"),
        ([Rung("t1", "lead", 7), Rung("t1", "physicist", 8)], "ladder.step_on_two_days"),
        ([Rung("t1", "lead", 7), Rung("t2", "lead", 7)], "ladder.steps_not_climbing"),
    ],
)
def test_rungs_are_refused_when_they_make_no_ladder(rungs, code):
    with pytest.raises(Invalid) as refused:
        Ladder(tuple(rungs))
    assert refused.value.code == code


@pytest.mark.parametrize(
    ("zone", "overdue", "days"),
    [
        ("Europe/London", dt.date(2025, 3, 28), 3),
        ("Europe/London", dt.date(2025, 10, 24), 3),
        ("Africa/Cairo", dt.date(2025, 4, 20), 5),
        ("America/Sao_Paulo", dt.date(2018, 11, 1), 3),
        ("Australia/Lord_Howe", dt.date(2025, 4, 4), 2),
    ],
)
def test_step_begins_with_the_local_day_when_clocks_change_before_it(zone, overdue, days):
    begun = dt.datetime.combine(overdue, dt.time(), ZoneInfo(zone)).astimezone(dt.UTC)
    at = step_at(begun, days, zone)
    day = overdue + dt.timedelta(days=days)
    assert at.astimezone(ZoneInfo(zone)).date() == day
    assert (at - dt.timedelta(microseconds=1)).astimezone(ZoneInfo(zone)).date() < day


def test_levels_are_reached_at_their_instant_and_not_before():
    tick = dt.timedelta(microseconds=1)
    for count, (level, at) in enumerate(zip(LADDER.levels, AT, strict=True)):
        assert level not in reached(LADDER, AT, "upcoming", at - tick)
        assert reached(LADDER, AT, "upcoming", at) == LADDER.levels[: count + 1]
        assert following(LADDER, AT, at - tick) == (level, at)


def test_nothing_is_reached_after_the_highest_level():
    assert reached(LADDER, AT, MISSED, AT[-1]) == ()
    assert following(LADDER, AT, AT[-1]) is None


@pytest.mark.parametrize(("level", "rank"), [("t3", 6), ("t9", 6), (MISSED, 6), ("t1", 4), ("due", 1)])
def test_level_of_another_ladder_takes_its_place(level, rank):
    assert LADDER.rank(level) == rank


def test_each_is_told_once_at_their_highest_level_when_many_were_passed():
    assert told(LADDER.levels)[0] == [
        (1, "overdue", ("upcoming", "due", "late")),
        (2, "t2", ("overdue",)),
        (3, "t1", ()),
    ]


def test_someone_on_two_rungs_is_told_once():
    both = {"responsible": [2], "lead": [2], "physicist": []}
    assert told(("overdue",), both)[0] == [(2, "overdue", ())]


def test_nobody_is_told_again_of_what_they_were_told():
    assert told(("late", "overdue"), already={1: LADDER.rank("overdue")})[0] == [(2, "overdue", ())]


def test_acknowledged_check_tells_the_responsible_alone():
    assert told(("late", "overdue"), held=Held(acknowledged=True)) == ([(1, "overdue", ("late",))], "overdue")


def test_snoozing_person_waits_and_others_are_told():
    held = Held(snoozed=frozenset({1}))
    assert told(("late", "overdue"), held=held) == ([(2, "overdue", ())], "late")


levels = st.lists(st.sampled_from(LADDER.levels), unique=True).map(
    lambda found: sorted(found, key=LADDER.rank)
)
people = st.dictionaries(st.sampled_from(RECIPIENTS), st.lists(st.integers(1, 4), max_size=3))
ranks = st.dictionaries(st.integers(1, 4), st.integers(0, 6))
holds = st.builds(Held, st.booleans(), st.frozensets(st.integers(1, 4)))


@given(levels, people, ranks, holds)
def test_nobody_is_told_twice_nor_of_less_than_before(levels, people, ranks, holds):
    found, kept_back = owed(LADDER, levels, people, ranks, holds)
    assert len({each.person for each in found}) == len(found)
    assert all(LADDER.rank(each.level) > ranks.get(each.person, -1) for each in found)
    assert all(each.level in levels and each.person not in holds.snoozed for each in found)
    assert kept_back is None or kept_back in levels


@given(levels, people, holds)
def test_what_was_held_is_owed_once_the_hold_ends(levels, people, holds):
    first, kept_back = owed(LADDER, levels, people, {}, holds)
    after = {each.person: LADDER.rank(each.level) for each in first}
    rest = levels[levels.index(kept_back) :] if kept_back else []
    second, nothing = owed(LADDER, rest, people, after)
    highest = after | {each.person: LADDER.rank(each.level) for each in second}
    free, _ = owed(LADDER, levels, people, {})
    assert highest == {each.person: LADDER.rank(each.level) for each in free}
    assert nothing is None


@given(st.integers(0, 6), st.integers(0, 6), st.integers(0, 6))
def test_sweeping_in_two_steps_reaches_what_one_would(first, second, pending):
    early, late = sorted((first, second))
    ats = [DAYS.opens_at - dt.timedelta(1), *AT]
    start = (*LADDER.levels, MISSED)[pending]
    one = reached(LADDER, AT, start, ats[early])
    next_pending = start if not one else (*LADDER.levels, MISSED)[LADDER.rank(one[-1]) + 1]
    assert one + reached(LADDER, AT, next_pending, ats[late]) == reached(LADDER, AT, start, ats[late])
