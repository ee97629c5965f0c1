"""The one mail of the day, and the mails that do not wait for it, as a person reads them."""

from __future__ import annotations

import datetime as dt
import uuid

import pytest

from qa_tracker.records.queries.mail import GapRow
from qa_tracker.records.queries.notices import NoticeRow
from qa_tracker.services.wording import letter

AT = dt.datetime(2025, 3, 9, 7, tzinfo=dt.UTC)
BASE = "https://leadline.example/"
TERN, OG = "Pellantis PX Tern 7741", "Ostrigard OG-70 1180"
GAP = GapRow(AT - dt.timedelta(days=3), AT, notices=4, skipped=6)


def _notice(number, level, device=TERN, **given):
    told = {
        "site_code": "AG",
        "due_on": dt.date(2025, 3, 5),
        "skipped": "",
        "check_state": "scheduled",
        "recipient": "responsible",
        "responsible": "Hywel Dragić",
        "mail_kind": "digest",
    }
    return NoticeRow(
        uid=uuid.UUID(int=number + 100),
        check_uid=uuid.UUID(int=number),
        device_label=device,
        procedure="Monthly in-air and visual",
        person="Hywel Dragić",
        level=level,
        channel="mail",
        at=AT,
        digest_state="claimed",
        sent_at=None,
        reply="",
        **told | given,
    )


LETTER = """\
Dear Hywel Dragić,

4 checks wait, the most pressing of each site first. The address below each
opens it: there you enter it, say why it could not be done, or say until when
you know of it.

AG, overdue: grace is over, so do these first
- Ostrigard OG-70 1180, Ultrasound 2: Monthly in-air and visual, due 5 March
  2025
  https://leadline.example/checks/00000000-0000-0000-0000-000000000002/

AG, due: the due day has come
- Pellantis PX Tern 7741: Monthly in-air and visual, due 5 March 2025
  https://leadline.example/checks/00000000-0000-0000-0000-000000000001/

KB, late: the due day has passed, the days of grace are running
- Pellantis PX Tern 7741: Monthly in-air and visual, due 5 March 2025
  https://leadline.example/checks/00000000-0000-0000-0000-000000000003/

Pool, due: the due day has come
- Pellantis PX Tern 7741: Monthly in-air and visual, unplanned
  https://leadline.example/checks/00000000-0000-0000-0000-000000000004/

Such a letter comes at most once on a working day. If a check is not yours to
do, ask whoever makes the plans to hand it on; to get no such mail, speak to
your administrator.
"""
AFTER_A_PAUSE = """\
Dear Dr Maren Oduya,

A check that others were to do has not been done. The address below opens it.

The program did not look at any check from 6 March 2025 at 07:00 UTC to 9
March 2025 at 07:00 UTC, so nobody was told anything in that time. You get
this one letter for all of it; “not told before” says what each check passed
meanwhile.

Told to you as physicist. See that they are done, excuse them with the reason,
or say there until when you know of them.

AG, overdue, step 1:
- Pellantis PX Tern 7741: Monthly in-air and visual, due 5 March 2025; Hywel
  Dragić was to do it
  Not told before: late and overdue.
  https://leadline.example/checks/00000000-0000-0000-0000-000000000001/

Such a letter comes at most once on a working day. If a check is not yours to
do, ask whoever makes the plans to hand it on; to get no such mail, speak to
your administrator.
"""


def test_digest_lists_what_is_owed_by_site_the_worst_first():
    notices = [
        _notice(1, "due"),
        _notice(2, "overdue", OG, location="Ultrasound 2"),
        _notice(3, "late", site_code="KB"),
        _notice(4, "due", site_code="", due_on=None),
    ]
    subject, body = letter("Hywel Dragić", notices, BASE)
    assert (subject, body) == ("Leadline: 1 overdue, 1 late, 2 due", LETTER)


def test_digest_after_a_pause_says_what_was_passed_over_and_whose_check_it_is():
    notice = _notice(1, "t1", recipient="physicist", skipped="upcoming,late,overdue")
    subject, body = letter("Dr Maren Oduya", [notice], BASE, [GAP])
    assert (subject, body) == ("Leadline: 1 overdue", AFTER_A_PAUSE)


def test_letter_that_passed_nothing_says_nothing_of_a_pause():
    assert "did not look" not in letter("X", [_notice(1, "due")], BASE, [GAP])[1]


def test_higher_steps_come_before_lower_ones_and_before_overdue():
    notices = [_notice(number, level) for number, level in enumerate(["overdue", "t1", "t2", "late"])]
    body = letter("X", notices, BASE)[1]
    headings = [line.partition(":")[0] for line in body.splitlines() if line.startswith("AG,")]
    assert headings == ["AG, overdue, step 2", "AG, overdue, step 1", "AG, overdue", "AG, late"]


def test_what_was_done_before_the_letter_went_out_is_told_apart():
    notices = [_notice(1, "late"), _notice(2, "overdue", OG, check_state="submitted")]
    subject, body = letter("X", notices, BASE)
    assert subject == "Leadline: 1 late"
    assert "Done meanwhile, with nothing left for you to do:\n- Ostrigard OG-70 1180" in body


def test_letter_whose_checks_were_all_done_meanwhile_says_so():
    subject, body = letter("X", [_notice(1, "late", check_state="countersigned")], BASE)
    assert subject == "Leadline: nothing left to do"
    assert "has been done meanwhile" in body


def test_letter_keeps_every_line_short_but_for_addresses():
    long = _notice(
        1, "due", "Lunnby & Vale Fjellet 9 with a rather long model name and the serial 0000-1111-2222"
    )
    _subject, body = letter("Hywel Dragić", [long], BASE)
    assert max(len(line) for line in body.splitlines() if "://" not in line) <= 78
    assert "\n  https://leadline.example/checks/" in body


# what kind of mail, level, one, several, what it says to do
AT_ONCE = [
    ("suspension", "suspension", "suspension verdict on", "2 suspension verdicts", "out of clinical use"),
    (
        "electrical", "overdue", "electrical safety overdue on", "2 electrical safety checks overdue",
        "done now",
    ),
    ("ladder", "t2", "still not done on", "2 checks still not done", "done today"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("kind", "level", "one", "several", "to_do"), AT_ONCE, ids=[row[0] for row in AT_ONCE]
)
def test_mail_sent_at_once_says_what_and_what_to_do(kind, level, one, several, to_do):
    first, second = (_notice(number, level, mail_kind=kind) for number in (1, 2))
    subject, body = letter("Dr Maren Oduya", [first], BASE)
    assert subject == f"Leadline: {one} Pellantis PX Tern 7741"
    assert to_do in body.replace("\n", " ")
    assert "You get this at once because" in body
    assert letter("X", [first, second], BASE)[0] == f"Leadline: {several}"


def test_suspension_stays_to_be_seen_to_when_its_check_is_submitted():
    body = letter("X", [_notice(1, "suspension", check_state="submitted", mail_kind="suspension")], BASE)[1]
    assert "Take the device out of clinical use" in body


def test_subject_stays_one_line_whatever_a_device_is_called():
    subject, _body = letter("X", [_notice(1, "suspension", "A\r\nBcc: x@example.org")], BASE)
    assert subject == "Leadline: suspension verdict on A Bcc: x@example.org"
