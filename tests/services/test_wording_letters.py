"""The one mail of the day, the immediate one, and how the program is."""

from __future__ import annotations

import datetime as dt
import uuid

import pytest

from qa_tracker.records.queries.notices import NoticeRow
from qa_tracker.services.health import Health
from qa_tracker.services.wording import digest_letter, health_sentence

AT = dt.datetime(2025, 3, 9, 7, tzinfo=dt.UTC)
BASE = "https://leadline.example/"


def _notice(number, level, device="Pellantis PX Tern 7741", site="AG", due_on=dt.date(2025, 3, 5)):
    return NoticeRow(
        uid=uuid.UUID(int=number + 100),
        check_uid=uuid.UUID(int=number),
        device_label=device,
        procedure="Monthly in-air and visual",
        site_code=site,
        due_on=due_on,
        person="Hywel Dragić",
        level=level,
        channel="mail",
        at=AT,
        skipped="",
        digest_state="claimed",
        sent_at=None,
        reply="",
    )


LETTER = """\
Dear Hywel Dragić,

These 4 checks are yours to look after:

AG, overdue
- Ostrigard OG-70 1180: Monthly in-air and visual, due 5 March 2025
  https://leadline.example/checks/00000000-0000-0000-0000-000000000002/

AG, due
- Pellantis PX Tern 7741: Monthly in-air and visual, due 5 March 2025
  https://leadline.example/checks/00000000-0000-0000-0000-000000000001/

KB, late
- Pellantis PX Tern 7741: Monthly in-air and visual, due 5 March 2025
  https://leadline.example/checks/00000000-0000-0000-0000-000000000003/

Pool, due
- Pellantis PX Tern 7741: Monthly in-air and visual, unplanned
  https://leadline.example/checks/00000000-0000-0000-0000-000000000004/

You get this at most once a day, because plans name you for these checks. To
hand them on, or to get no such mail, speak to your administrator.
"""


def test_digest_lists_what_is_owed_by_site_the_worst_first():
    notices = [
        _notice(1, "due"),
        _notice(2, "overdue", "Ostrigard OG-70 1180"),
        _notice(3, "late", site="KB"),
        _notice(4, "due", site="", due_on=None),
    ]
    subject, body = digest_letter("Hywel Dragić", notices, BASE)
    assert (subject, body) == ("Leadline: 1 overdue, 1 late, 2 due", LETTER)


def test_digest_keeps_every_line_short_but_for_addresses():
    long = _notice(
        1, "due", "Lunnby & Vale Fjellet 9 with a rather long model name and the serial 0000-1111-2222"
    )
    _subject, body = digest_letter("Hywel Dragić", [long], BASE)
    assert max(len(line) for line in body.splitlines() if "://" not in line) <= 78
    assert "\n  https://leadline.example/checks/" in body


def test_suspension_is_told_at_once_with_the_device_in_the_subject():
    subject, body = digest_letter("Dr Maren Oduya", [_notice(1, "suspension")], BASE)
    assert subject == "Leadline: suspension verdict on Pellantis PX Tern 7741"
    assert "Take the device out of clinical use" in body
    assert "speak to your administrator" in body.replace("\n", " ")


def test_suspensions_are_counted_in_the_subject_when_there_are_several():
    subject, _body = digest_letter(
        "Dr Maren Oduya", [_notice(1, "suspension"), _notice(2, "suspension")], BASE
    )
    assert subject == "Leadline: 2 suspension verdicts"


def test_subject_stays_one_line_whatever_a_device_is_called():
    subject, _body = digest_letter("X", [_notice(1, "suspension", "A\r\nBcc: x@example.org")], BASE)
    assert subject == "Leadline: suspension verdict on A Bcc: x@example.org"


def test_letter_about_nothing_says_so():
    assert digest_letter("X", [], BASE)[0] == "Leadline: nothing due"


HEALTH = [
    (
        "starting",
        Health("starting", (), None, None),
        "The program has started; the first sweep is still to come.",
    ),
    (
        "well",
        Health("healthy", (), AT, None),
        "All is well; the sweep last ran on 9 March 2025 at 07:00 UTC.",
    ),
    (
        "a late sweep",
        Health("unhealthy", ("sweep_late",), AT, None),
        "The sweep last ran on 9 March 2025 at 07:00 UTC, so no check moves and no notice is owed. Start the worker "
        "and the beat again, or run the sweep by hand: manage.py sweep.",
    ),
    (
        "mail late and given up",
        Health("unhealthy", ("mail_late", "mail_failed"), AT, AT),
        "Mail has been waiting since 9 March 2025 at 07:00 UTC. Check that the worker runs and that the mail server "
        "answers. Some mail was given up after several attempts. Read the server's reply beside it, mend the cause "
        "and send it again.",
    ),
]


@pytest.mark.parametrize(("health", "sentence"), [row[1:] for row in HEALTH], ids=[row[0] for row in HEALTH])
def test_health_reads(health, sentence):
    assert health_sentence(health) == sentence
