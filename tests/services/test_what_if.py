"""What an edition would have said of stored readings: counted, listed, in sight only, and nothing written."""

from __future__ import annotations

import datetime as dt
import json

import pytest
from django.apps import apps
from django.utils.timezone import now

from qa_tracker.core.errors import Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import CriteriaSet
from qa_tracker.records.queries import library as rows
from qa_tracker.records.queries.scope import EVERYTHING, Scope
from qa_tracker.records.queries.what_if import Extent
from qa_tracker.services import checks, library, what_if
from qa_tracker.services.devices import Place
from qa_tracker.services.what_if import would_have_said
from tests import builders


def another_check(ward):
    return checks.open_unplanned(
        device=ward.probe.uid, procedure=builders.MONTHLY, actor=ward.technician, at=now()
    )


@pytest.fixture(scope="module")
def two_checks(ward_of_the_module, django_db_blocker):
    """The module's ward with two checks of one probe: one dark element, then none."""
    ward = ward_of_the_module
    with django_db_blocker.unblock():
        for count in ("1", "0"):
            builders.submitted(another_check(ward), ward.technician, dark_elements=count)


@pytest.fixture
def ward(two_checks, shared_ward):
    return shared_ward


def edition(name="2099", remedial="1", **changed):
    """The published set of drop-outs with another remedial level, as a set of its own where its limit has its own id."""
    path = builders.FIXTURES / "criteria" / "dropout-2014.json"
    given = json.loads(path.read_text(encoding="utf-8")) | {"edition": name}
    given["criteria"][0]["criterion"]["remedial"] = {"absolute": remedial}
    given["criteria"][0] |= changed
    given["set"] = changed.get("id", "dropout").lower()
    made = library.publish_criteria(document=given, actor=None, at=now())
    return rows.find_criteria_set(made.uid)


def known(code):
    return next(each for each in rows.list_criteria_sets() if each.code == code)


def counted():
    return {
        model.__name__: model._base_manager.count() for model in apps.get_app_config("leadline").get_models()
    }


def outcomes(answer):
    return {(each.then[0], each.now[0]): each.count for one in answer.criteria for each in one.outcomes}


def test_stricter_edition_tells_how_many_verdicts_would_change(ward):
    answer = would_have_said(edition(), Extent(), EVERYTHING)
    assert (answer.readings, answer.changed) == (2, 1)
    assert outcomes(answer) == {("conforming", "conforming"): 1, ("conforming", "remedial"): 1}


def test_reading_that_would_change_is_listed_with_both_sentences(ward):
    (shown,) = would_have_said(edition(), Extent(), EVERYTHING).shown
    assert (shown.device, shown.measurand.code, shown.entered) == (
        "Ostrigard C5 C5-2207",
        "dark_elements",
        "1",
    )
    assert (shown.then.verdict, shown.then.parameters["allowance"]) == ("conforming", "2")
    assert (shown.now.verdict, shown.now.parameters["allowance"]) == ("remedial", "1")


def test_asking_writes_nothing(ward):
    chosen = edition()
    before = counted(), ledger.state()
    would_have_said(chosen, Extent(), EVERYTHING)
    assert (counted(), ledger.state()) == before


@pytest.mark.parametrize("code", ["dropout", "probe-grade", "tg1"])
def test_edition_that_judged_would_say_the_same(ward, code):
    answer = would_have_said(known(code), Extent(), EVERYTHING)
    assert answer.changed == 0
    assert answer.readings == {"dropout": 2, "tg1": 0}.get(code, answer.readings)


def test_readings_of_another_site_are_never_counted(ward):
    bay = builders.site(ward.admin, "KB", "Kestrel Bay")
    chosen = edition()
    of_bay = would_have_said(chosen, Extent(), Scope(frozenset({bay.pk})))
    assert (of_bay.readings, of_bay.shown) == (0, ())
    assert would_have_said(chosen, Extent(site_id=ward.site.pk), Scope(frozenset({bay.pk}))).readings == 0
    assert would_have_said(chosen, Extent(), Scope(frozenset({ward.site.pk}))).readings == 2


def test_extent_narrows_to_site_device_and_time(ward):
    chosen, tomorrow = edition(), now() + dt.timedelta(days=1)
    other = builders.probe(ward.physicist, Place(site=ward.site, location=ward.room), serial="C5-9")
    extents = {
        Extent(site_id=ward.site.pk): 2,
        Extent(device_ids=frozenset({ward.probe.pk})): 2,
        Extent(device_ids=frozenset({other.pk})): 0,
        Extent(since=tomorrow): 0,
        Extent(until=tomorrow): 2,
    }
    assert {extent: would_have_said(chosen, extent, EVERYTHING).readings for extent in extents} == extents


def test_limit_that_may_not_judge_the_reading_would_leave_it_not_assessable(ward):
    answer = would_have_said(edition(not_for_array_kinds=["convex"]), Extent(), EVERYTHING)
    assert outcomes(answer) == {("conforming", "not_assessable"): 2}
    assert {each.now.code for each in answer.shown} == {"array_kind"}


def test_unit_that_differs_would_leave_every_reading_not_assessable(ward):
    answer = would_have_said(edition(unit="mm"), Extent(), EVERYTHING)
    assert outcomes(answer) == {("conforming", "not_assessable"): 2}


def test_check_that_was_sent_back_and_done_again_counts_once(ward):
    check = another_check(ward)
    first = builders.submitted(check, ward.technician, dark_elements="1")
    seen = {"shown_sha256": first.shown_sha256, "password": builders.PASSWORD, "actor": ward.physicist}
    checks.send_back(check=check.uid, remark="count again", at=now(), **seen)
    builders.submitted(check, ward.technician, dark_elements="0")
    assert outcomes(would_have_said(edition(), Extent(), EVERYTHING)) == {
        ("conforming", "conforming"): 2, ("conforming", "remedial"): 1,
    }  # fmt: skip


def test_more_readings_than_one_answer_takes_are_refused(ward, monkeypatch):
    monkeypatch.setattr(what_if, "MOST", 1)
    with pytest.raises(Invalid) as refused:
        would_have_said(edition(), Extent(), EVERYTHING)
    assert refused.value.code == "what_if.too_many"


def test_changed_readings_are_paged_newest_first(ward, monkeypatch):
    monkeypatch.setattr(what_if, "PAGE", 1)
    chosen = edition(remedial="0")
    pages = [would_have_said(chosen, Extent(), EVERYTHING, page=page) for page in (1, 2, 9)]
    assert [(each.page, each.pages, each.shown[0].entered) for each in pages] == [
        (1, 2, "0"),
        (2, 2, "1"),
        (2, 2, "1"),
    ]


def test_limit_of_another_set_answers_for_the_one_that_procedures_name_beside_it(ward):
    document = json.loads((builders.FIXTURES / "procedures" / "monthly-in-air.json").read_text("utf-8"))
    for measurand in document["measurands"]:
        if measurand["code"] == "dark_elements":
            measurand["criteria"] = ["DROP", "OURS"]
    library.publish_procedure(document=document | {"edition": 9}, actor=None, at=now())
    ours = edition("ours", "1", id="OURS")
    (answer,) = would_have_said(ours, Extent(), EVERYTHING).criteria
    assert (answer.instead_of, answer.readings, answer.changed) == ("DROP", 2, 1)


def test_limit_that_stood_beside_the_one_that_decided_is_asked_too(ward):
    beside = rows.find_criteria_set(edition("1", "3", id="BESIDE", measurands=["dark_elements"]).uid)
    library.adopt_criteria(
        criteria_set=CriteriaSet.objects.get(pk=beside.id),
        site=ward.site,
        remark="",
        actor=ward.physicist,
        at=now(),
    )
    builders.submitted(another_check(ward), ward.technician, dark_elements="2")
    answer = would_have_said(edition("2", "2", id="BESIDE"), Extent(), EVERYTHING)
    assert outcomes(answer) == {("conforming", "remedial"): 1}
    assert answer.shown[0].then.criterion.code == "BESIDE"
