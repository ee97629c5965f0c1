"""One check satisfies others: an annual survey closes the monthly check whose items it read."""

from __future__ import annotations

import datetime as dt
import json

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Aperture, Check, TestObject
from qa_tracker.records.queries.checks import due_checks, submitted_checks
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import checkpoints, checks, dossier_content, library, plans, rechecking, upkeep
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.plans import Recurrence
from qa_tracker.services.wording import leaf_sentence
from tests import builders
from tests.builders import LONDON, MONTHLY, PASSWORD

ANNUAL, REPAIR = "annual-survey", "after-repair-or-change"
WARD = ((MONTHLY, ANNUAL, REPAIR),)
TODAY = now().astimezone(LONDON).date()
DAY = dt.timedelta(days=1)
ONE_OF = {"uniformity_grade": "green"}


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def phantom(ward):
    return TestObject.objects.first() or builders.phantom(ward.physicist, ward.site)


def survey(
    ward, check=None, procedure=ANNUAL, measured_at=None, actor=None, device=None, partial="", **given
):
    """A survey of the probe, signed; measurands given with an empty text are left unread."""
    actor, device = actor or ward.physicist, device or ward.probe
    if check is None:
        check = checks.open_unplanned(device=device.uid, procedure=procedure, actor=actor, at=now())
    typed = Typed(
        builders.answers(check, actor, **ONE_OF | given), measured_at=measured_at, cleaned_before="Wipe",
        test_object=phantom(ward).uid, partial_reason=partial,
    )  # fmt: skip
    return builders.submitted(check, actor, typed)


def monthly(ward, due_on=TODAY, basis="calendar", rule="FREQ=MONTHLY", **facts):
    """Another probe with a monthly check of its own."""
    device = builders.probe(ward.physicist, Place(site=ward.site), serial="C5-9001", **facts)
    recurrence = Recurrence(rule, basis, due_on, before_days=7, grace_days=7)
    given = {"device": device.uid, "procedure": MONTHLY, "recurrence": recurrence}
    plan = plans.make(**given, responsible=ward.technician, actor=ward.physicist, at=now())
    return device, plan.checks.get()


def published(ward, document):
    edition = library.publish_procedure(document=document, actor=None, at=now())
    library.adopt_edition(edition=edition, site=None, remark="", actor=ward.physicist, at=now())


def document(code, name):
    path = builders.FIXTURES / "procedures" / f"{name}.json"
    return json.loads(path.read_text(encoding="utf-8")) | {"procedure": code}


def test_monthly_check_is_satisfied_and_opens_the_next_when_a_survey_is_signed(ward):
    submission = survey(ward)
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.submitted_at) == ("submitted", submission.recorded_at)
    assert (ward.check.satisfied_by, hasattr(ward.check, "clock")) == (submission.check_of, False)
    following = ward.check.plan.checks.get(state="scheduled")
    assert following.due_on == plans.due_after(ward.check.plan, ward.check.due_on).due_on
    assert upkeep.verify_ledger().problems == ()
    assert rechecking.recheck_verdicts().problems == ()


def test_leaf_of_the_survey_names_what_it_satisfied(ward):
    submission = survey(ward)
    leaf = list_leaves(EVERYTHING, most=1)[0]
    (told,) = leaf.said["new"]["satisfied"]
    assert (told["check"], told["procedure"], told["verdict"]) == (str(ward.check.uid), MONTHLY, "conforming")
    assert leaf.uid == submission.leaf_id


def test_leaf_says_in_words_that_another_check_is_satisfied(ward):
    survey(ward)

    assert leaf_sentence(list_leaves(EVERYTHING, most=1)[0]).endswith("; 1 other check is satisfied by it.")


@pytest.mark.parametrize(
    ("given", "whole", "own"),
    [
        ({}, "not_assessable", ("conforming", "")),
        ({"uniformity_grade": "red"}, "suspension", ("conforming", "")),
        ({"lens_grade": "amber"}, "remedial", ("remedial", "remedial")),
    ],
)
def test_verdict_is_that_of_the_items_the_check_asks(ward, given, whole, own):
    assert survey(ward, **given).verdict == whole
    ward.check.refresh_from_db()
    assert (ward.check.verdict, ward.check.verdict_level) == own


def test_check_is_not_satisfied_when_one_of_its_items_was_left_unread(ward):
    survey(ward, partial="in_use", symmetry="")
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.satisfied_by_id) == ("scheduled", None)


def test_check_is_satisfied_when_only_items_of_the_survey_itself_were_left_unread(ward):
    survey(ward, partial="in_use", penetration="", uniformity_grade="")
    ward.check.refresh_from_db()
    assert ward.check.state == "submitted"


def test_check_is_not_satisfied_when_one_of_two_apertures_was_left_unread(ward):
    device, check = monthly(ward, apertures=[("long", 128), ("across", 64)])
    unplanned = checks.open_unplanned(device=device.uid, procedure=ANNUAL, actor=ward.physicist, at=now())
    entries = builders.answers(unplanned, ward.physicist, **ONE_OF)
    across = Aperture.objects.get(device=device, name="across").pk
    entries.pop(f"symmetry.{across}.0.1")
    used = phantom(ward).uid
    builders.submitted(
        unplanned, ward.physicist, Typed(entries, None, used, cleaned_before="Wipe", partial_reason="in_use")
    )
    check.refresh_from_db()
    assert check.state == "scheduled"


@pytest.mark.parametrize(("days", "state"), [(8, "scheduled"), (7, "submitted"), (-30, "submitted")])
def test_window_has_to_be_open_and_a_check_after_its_grace_is_satisfied_too(ward, days, state):
    device, check = monthly(ward, TODAY + days * DAY)
    survey(ward, device=device)
    check.refresh_from_db()
    assert check.state == state


def test_window_is_asked_on_the_day_of_measuring(ward):
    device, check = monthly(ward, TODAY + 5 * DAY)
    survey(ward, device=device, measured_at=now() - 10 * DAY)
    check.refresh_from_db()
    assert check.state == "scheduled"


def test_next_occurrence_is_counted_from_the_day_of_measuring_when_the_basis_is_last_actual(ward):
    device, check = monthly(ward, basis="last_actual", rule="FREQ=DAILY;INTERVAL=30")
    measured_at = dt.datetime.combine(TODAY - 3 * DAY, dt.time(12), LONDON)
    survey(ward, device=device, measured_at=measured_at)
    assert check.plan.checks.get(state="scheduled").due_on == TODAY + 27 * DAY


def test_unplanned_check_that_someone_began_is_left_to_them(ward):
    begun = checks.open_unplanned(device=ward.probe.uid, procedure=MONTHLY, actor=ward.technician, at=now())
    survey(ward)
    begun.refresh_from_db()
    assert begun.state == "started"


def test_own_next_occurrence_is_not_satisfied_by_the_check_that_opened_it(ward):
    _, check = monthly(ward, rule="FREQ=DAILY;INTERVAL=3")
    builders.submitted(check, ward.technician)
    assert check.plan.checks.get(state="scheduled").due_on == TODAY + 3 * DAY


def test_work_of_someone_who_may_not_enter_the_other_check_does_not_satisfy_it(ward):
    published(ward, document("ward-monthly", MONTHLY) | {"performed_by": ["user"]})
    check = checks.open_unplanned(device=ward.probe.uid, procedure="ward-monthly", actor=ward.user, at=now())
    builders.submitted(check, ward.user)
    ward.check.refresh_from_db()
    assert ward.check.state == "scheduled"


@pytest.mark.parametrize(("after", "state"), [("", "scheduled"), ("151", "submitted")])
def test_derived_quantity_counts_where_it_was_worked_out(ward, after, state):
    change = document("penetration-change", REPAIR)
    parts = {"penetration_before": False, "penetration": False, "penetration_difference": True}
    kept = [one for one in change["measurands"] if one["code"] in parts]
    change["measurands"] = [one | {"required": parts[one["code"]]} for one in kept]
    published(ward, change)
    planned = builders.plan(ward.probe, "penetration-change", ward.technician, ward.physicist)
    survey(
        ward, procedure=REPAIR, actor=ward.technician, partial="in_use", penetration_before="150",
        penetration=after,
    )  # fmt: skip
    planned.refresh_from_db()
    assert planned.state == state


def test_satisfied_check_is_neither_due_nor_waiting_for_a_countersignature(ward):
    submission = survey(ward)
    at = now()
    waiting = [row.uid for row in submitted_checks(EVERYTHING)]
    assert waiting == [submission.check_of.uid]
    assert ward.check.uid not in {row.uid for row in due_checks(EVERYTHING, at)}


def sent_back(ward, submission):
    other = builders.person(ward.admin, "rao", "physicist", None)
    checks.send_back(
        check=submission.check_of.uid, shown_sha256=submission.shown_sha256, remark="Lens again",
        password=PASSWORD, actor=other, at=now(),
    )  # fmt: skip


def test_satisfied_check_stays_satisfied_when_the_submission_is_sent_back(ward):
    submission = survey(ward)
    sent_back(ward, submission)
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.satisfied_by_id) == ("submitted", submission.check_of_id)
    assert ward.check.plan.checks.filter(state="scheduled").count() == 1


def test_verdict_follows_and_no_further_occurrence_is_used_up_when_the_survey_is_done_again(ward):
    device, check = monthly(ward, rule="FREQ=DAILY;INTERVAL=3")
    submission = survey(ward, device=device)
    sent_back(ward, submission)
    again = Check.objects.get(pk=submission.check_of_id)
    survey(ward, check=again, lens_grade="amber")
    check.refresh_from_db()
    assert (check.verdict, check.state) == ("remedial", "submitted")
    assert check.plan.checks.get(state="scheduled").due_on == TODAY + 3 * DAY


def test_dossier_says_which_check_satisfied_it(ward):
    survey(ward)
    told = dossier_content.device_content(
        ward.probe.uid,
        dossier_uid=ward.probe.uid,
        checkpoint=checkpoints.make(at=now()),
        demo_key=True,
        at=now(),
    )
    sentences = [each.sentence for each in told.checks if each.procedure == ward.check.procedure.title]
    assert len(sentences) == 1
    assert "by “Annual survey”, which read all that this check asks for" in sentences[0]
