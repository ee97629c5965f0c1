"""Stated uncertainties: refused beside their fields, in force for the group or a site, and used in verdicts."""

from __future__ import annotations

from dataclasses import replace

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Forbidden, Invalid, NotFound, SeveralInvalid
from qa_tracker.records.models import StatedUncertainty
from qa_tracker.records.queries import uncertainties as rows
from qa_tracker.services import checks, uncertainties
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from qa_tracker.services.uncertainties import Statement
from tests import builders

ELECTRICAL = "electrical-safety"
WARD = ((builders.MONTHLY, ELECTRICAL),)
STATEMENT = Statement("equipment_leakage_class_i", "expanded", "20", "2", source="Tester certificate 7")


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def state(ward, statement=STATEMENT, site=None):
    return uncertainties.state(statement=statement, site=site, actor=ward.physicist, at=now())


def leakage(ward, text):
    """The verdict on a scanner's equipment leakage."""
    engineer = builders.person(ward.admin, "okonjo", "engineer", ward.site)
    check = checks.open_unplanned(device=ward.scanner.uid, procedure=ELECTRICAL, actor=engineer, at=now())
    typed = Typed({"equipment_leakage_class_i.0.0.1": Entry(text)})
    seen = checks.preview(check=check.uid, typed=typed, whole=False, actor=engineer, at=now())
    return seen.judged.items[0]


def test_electrical_limit_is_guarded_when_an_uncertainty_is_stated(ward):
    state(ward)
    found = leakage(ward, "490")
    assert (found.weighed.rule, found.weighed.uncertainty) == ("guarded", "20")
    assert (found.judgement.verdict, found.judgement.code) == ("suspension", "guard_band")
    assert found.judgement.probability == pytest.approx(0.8413, abs=1e-4)


def test_electrical_limit_says_that_it_stands_without_a_guard_band_when_none_is_stated(ward):
    found = leakage(ward, "490")
    assert (found.weighed.rule, found.judgement.verdict) == ("simple", "conforming")
    assert found.judgement.parameters["no_guard"] == "yes"


def test_site_goes_before_the_group_and_a_chosen_rule_before_the_default(ward):
    state(ward)
    state(ward, replace(STATEMENT, entered="4", rule="zones"), ward.site)
    found = leakage(ward, "498")
    assert (found.weighed.uncertainty, found.judgement.verdict) == ("4", "indeterminate")


def test_statement_ends_the_one_before_at_the_same_place(ward):
    first, second = state(ward), state(ward, replace(STATEMENT, kind="standard", entered="8"))
    first.refresh_from_db()
    assert first.ended_at is not None
    assert rows.in_force(ward.site.id)["equipment_leakage_class_i"].uid == second.uid


def test_statement_from_repeats_keeps_them_and_student_t(ward):
    given = Statement(
        "reverberation_depth", "repeats", repeats=["146.0", "146.5", "145.5", "146.0"], source="One day"
    )
    row = state(ward, given)
    assert (row.entered, row.repeats) == ("1.3", '["146.0","146.5","145.5","146.0"]')


def test_ended_statement_is_used_no_more(ward):
    row = state(ward)
    uncertainties.end(statement=row.uid, reason="Tester replaced", actor=ward.physicist, at=now())
    assert rows.in_force(ward.site.id) == {}
    with pytest.raises(NotFound):
        uncertainties.end(statement=row.uid, reason="Again", actor=ward.physicist, at=now())


REFUSED = {
    "no number": (replace(STATEMENT, entered="about 20"), "number.not_a_number", "entered"),
    "zero": (replace(STATEMENT, entered="0"), "uncertainty.not_positive", "entered"),
    "no coverage factor": (
        replace(STATEMENT, coverage_factor="-2"),
        "uncertainty.not_positive",
        "coverage_factor",
    ),
    "unknown kind": (replace(STATEMENT, kind="guess"), "uncertainty.kind", "kind"),
    "unknown rule": (replace(STATEMENT, rule="strict"), "uncertainty.rule", "rule"),
    "no source": (replace(STATEMENT, source=" "), "uncertainty.source_missing", "source"),
    "one repeat": (
        replace(STATEMENT, kind="repeats", repeats=["1"]),
        "uncertainty.too_few_repeats",
        "repeats",
    ),
}


@pytest.mark.parametrize("name", REFUSED)
def test_statement_is_refused_beside_its_field(ward, name):
    given, code, field = REFUSED[name]
    with pytest.raises(SeveralInvalid) as refused:
        state(ward, given)
    assert (refused.value.errors[0].code, refused.value.errors[0].field) == (code, field)
    assert not StatedUncertainty.objects.exists()


def test_statement_is_refused_of_what_is_no_number_and_by_role(ward):
    with pytest.raises(Invalid):
        state(ward, replace(STATEMENT, measurand="case_grade"))
    with pytest.raises(Forbidden):
        uncertainties.state(statement=STATEMENT, site=None, actor=ward.technician, at=now())
