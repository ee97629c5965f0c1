"""A calendar read back says what was put in, in lines a calendar program takes."""

from __future__ import annotations

import datetime as dt

from icalendar import Calendar

from qa_tracker.exchange.calendar_feed import Occurrence, render

AT = dt.datetime(2030, 1, 2, 9, 30, tzinfo=dt.UTC)
DAY = dt.date(2030, 2, 1)
HARD = "Käfer; a, b \\ c\n" + "超音波" * 40


def occurrence(**changed):
    given = {
        "plan_uid": "0190", "slot_on": DAY, "due_on": DAY, "revised_at": AT, "revision": 0, "summary": HARD,
        "description": HARD, "location": "Room 2, wing B", "url": "https://leadline.invalid/checks/1/",
    }  # fmt: skip
    return Occurrence(**given | changed)


def only_event(content):
    (event,) = Calendar.from_ical(content).walk("VEVENT")
    return event


def test_event_is_all_day_on_the_due_day_when_read_back():
    event = only_event(render("Due", [occurrence()]))
    assert event.decoded("dtstart") == DAY
    assert event.decoded("dtend") == DAY + dt.timedelta(days=1)
    assert b"DTSTART;VALUE=DATE:20300201\r\n" in render("Due", [occurrence()])


def test_text_is_as_it_was_when_it_needs_escaping():
    event = only_event(render("Due", [occurrence()]))
    assert (str(event["summary"]), str(event["description"])) == (HARD, HARD)
    assert str(event["location"]) == "Room 2, wing B"


def test_lines_end_and_fold_as_the_standard_says_when_text_is_long():
    lines = render("Due", [occurrence()]).split(b"\r\n")
    assert lines.pop() == b""
    assert not any(b"\n" in line or b"\r" in line for line in lines)
    assert max(map(len, lines)) <= 75
    assert all(line.decode("utf-8") for line in lines)


def test_uid_stays_when_the_due_day_is_moved():
    moved = occurrence(due_on=DAY + dt.timedelta(days=5), revision=1)
    before, after = (only_event(render("Due", [each])) for each in (occurrence(), moved))
    assert before["uid"] == after["uid"]
    assert (before["sequence"], after["sequence"]) == (0, 1)


def test_bytes_are_the_same_when_rows_come_in_another_order():
    rows = [occurrence(), occurrence(plan_uid="0191"), occurrence(due_on=DAY.replace(day=3))]
    assert render("Due", rows) == render("Due", rows[::-1])


def test_calendar_has_no_event_when_nothing_is_due():
    assert Calendar.from_ical(render("Due", [])).walk("VEVENT") == []
