"""Recurrence rules read from text: what is taken, and what is refused by its name."""

from __future__ import annotations

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import Rule, in_words, parse_rule


@pytest.mark.parametrize(
    ("text", "rule"),
    [
        pytest.param("FREQ=DAILY", Rule("DAILY"), id="daily"),
        pytest.param("FREQ=WEEKLY;INTERVAL=2", Rule("WEEKLY", 2), id="fortnightly"),
        pytest.param("freq=monthly;interval=3", Rule("MONTHLY", 3), id="small letters"),
        pytest.param("INTERVAL=1;FREQ=YEARLY", Rule("YEARLY"), id="parts in another order"),
        pytest.param("FREQ=DAILY;BYDAY=MO,FR", Rule("DAILY", weekdays=((0, 0), (0, 4))), id="some days"),
        pytest.param(
            "FREQ=MONTHLY;BYDAY=+1MO,-1FR", Rule("MONTHLY", weekdays=((-1, 4), (1, 0))), id="ordinals"
        ),
        pytest.param(
            "FREQ=MONTHLY;BYMONTHDAY=15,-1,15", Rule("MONTHLY", month_days=(-1, 15)), id="month days"
        ),
        pytest.param(
            "FREQ=YEARLY;BYMONTH=9,3;BYMONTHDAY=1",
            Rule("YEARLY", months=(3, 9), month_days=(1,)),
            id="months",
        ),
    ],
)
def test_rule_is_read_when_it_is_in_the_subset(text, rule):
    assert parse_rule(text) == rule
    assert parse_rule(rule.text) == rule


@pytest.mark.parametrize(
    ("text", "part"),
    [
        ("FREQ=DAILY;COUNT=10", "COUNT"),
        ("FREQ=DAILY;UNTIL=19971224T000000Z", "UNTIL"),
        ("FREQ=WEEKLY;WKST=SU", "WKST"),
        ("FREQ=YEARLY;BYYEARDAY=1", "BYYEARDAY"),
        ("FREQ=YEARLY;BYWEEKNO=20;BYDAY=MO", "BYWEEKNO"),
        ("FREQ=MONTHLY;BYDAY=MO;BYSETPOS=-2", "BYSETPOS"),
        ("FREQ=DAILY;BYHOUR=9", "BYHOUR"),
        ("FREQ=DAILY;BYMONTHDAY=1", "BYMONTHDAY"),
        ("FREQ=WEEKLY;BYMONTHDAY=1", "BYMONTHDAY"),
        ("FREQ=MONTHLY;BYMONTH=1", "BYMONTH"),
        ("FREQ=DAILY;SKIP=BACKWARD", "SKIP"),
    ],
)
def test_rule_is_refused_by_name_when_a_part_is_outside_the_subset(text, part):
    with pytest.raises(Invalid) as refusal:
        parse_rule(text)
    assert (refusal.value.code, refusal.value.parameters["part"]) == ("schedule.part_not_taken", part)


@pytest.mark.parametrize("text", ["FREQ=YEARLY;BYDAY=MO", "FREQ=YEARLY;BYMONTHDAY=1"])
def test_rule_is_refused_when_a_yearly_day_names_no_month(text):
    with pytest.raises(Invalid) as refusal:
        parse_rule(text)
    assert refusal.value.code == "schedule.part_needs_bymonth"


@pytest.mark.parametrize(
    ("text", "part"),
    [
        ("FREQ=HOURLY", "FREQ"),
        ("FREQ=MINUTELY;INTERVAL=15", "FREQ"),
        ("INTERVAL=2", "FREQ"),
        ("FREQ=DAILY;INTERVAL=0", "INTERVAL"),
        ("FREQ=DAILY;INTERVAL=-1", "INTERVAL"),
        ("FREQ=DAILY;INTERVAL=1000", "INTERVAL"),
        ("FREQ=DAILY;INTERVAL=1,2", "INTERVAL"),
        ("FREQ=DAILY;INTERVAL=1.5", "INTERVAL"),
        ("FREQ=DAILY;INTERVAL=٣", "INTERVAL"),
        ("FREQ=WEEKLY;BYDAY=1MO", "BYDAY"),
        ("FREQ=MONTHLY;BYDAY=6MO", "BYDAY"),
        ("FREQ=MONTHLY;BYDAY=MO,XX", "BYDAY"),
        ("FREQ=MONTHLY;BYMONTHDAY=0", "BYMONTHDAY"),
        ("FREQ=MONTHLY;BYMONTHDAY=32", "BYMONTHDAY"),
        ("FREQ=MONTHLY;BYMONTHDAY=-32", "BYMONTHDAY"),
        ("FREQ=YEARLY;BYMONTH=13", "BYMONTH"),
        ("FREQ=YEARLY;BYMONTH=-1", "BYMONTH"),
    ],
)
def test_rule_is_refused_by_name_when_a_value_can_not_be_used(text, part):
    with pytest.raises(Invalid) as refusal:
        parse_rule(text)
    assert (refusal.value.code, refusal.value.parameters["part"]) == ("schedule.part_value", part)


@pytest.mark.parametrize("text", ["", "DAILY", "FREQ=", "FREQ=DAILY;", "FREQ=DAILY;FREQ=DAILY", "=DAILY"])
def test_rule_is_refused_when_it_is_malformed(text):
    with pytest.raises(Invalid) as refusal:
        parse_rule(text)
    assert refusal.value.code == "schedule.rule_malformed"


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("FREQ=DAILY", "every.days"),
        ("FREQ=WEEKLY", "every.weeks"),
        ("FREQ=MONTHLY", "every.months"),
        ("FREQ=YEARLY", "every.years"),
    ],
)
def test_words_are_a_code_and_values_for_each_frequency(text, code):
    plain = {"weekdays": (), "month_days": (), "months": (), "interval": 1, "basis": "calendar"}
    assert in_words(parse_rule(text), "calendar") == (code, plain)


def test_words_carry_the_named_days_when_a_rule_has_them():
    _, values = in_words(parse_rule("FREQ=YEARLY;INTERVAL=2;BYMONTH=3;BYMONTHDAY=-1;BYDAY=-1FR"), "calendar")
    assert values == {
        **{"interval": 2, "basis": "calendar", "months": (3,)},
        **{"month_days": (-1,), "weekdays": ((-1, 4),)},
    }
