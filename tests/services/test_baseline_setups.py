"""Baselines from independent set-ups: their mean, their spread, and what is too few, too close or mixed."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from decimal import Decimal

import pytest
from baseline_ward import WARD, aperture, phantom, surveyed
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.records.models import BaselineSetup
from qa_tracker.records.queries import baselines as rows
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import baseline_setups, devices
from qa_tracker.services.baseline_setups import Chosen
from qa_tracker.services.baselines import Terms, Value
from qa_tracker.services.entries import Entry
from tests import builders

__all__ = ["WARD"]
TODAY = now().date()
TWELVE = ("8.0", "8.5", "9.0", "8.5", "8.5", "8.0", "9.0", "8.5", "8.5", "9.0", "8.0", "8.5")


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def typed(*texts, days=None):
    return [
        Chosen(text, TODAY - dt.timedelta(days=day))
        for text, day in zip(texts, days or range(len(texts))[::-1], strict=False)
    ]


def picked(*submissions):
    return [Chosen(submission=each.uid) for each in submissions]


def given(ward, setups, **changed):
    plain = {
        "device": ward.probe.uid, "series": Value("reverberation_depth", "", aperture(ward.probe)),
        "setups": setups, "test_object": None, "reason": "twelve set-ups", "actor": ward.physicist, "at": now(),
    }  # fmt: skip
    return plain | changed


def put(ward, setups, **changed):
    return baseline_setups.set_from_setups(**given(ward, setups, password=builders.PASSWORD, **changed))


def refused(ward, setups, **changed):
    with pytest.raises(DomainError) as error:
        put(ward, setups, **changed)
    assert not BaselineSetup.objects.exists()
    return error.value.code


def test_mean_of_typed_set_ups_becomes_the_baseline_with_one_more_place(ward):
    made = put(ward, typed(*TWELVE))
    assert (made.entered, made.scaled, made.places) == ("8.50", 850, 2)
    assert [each.entered for each in made.setups.order_by("position")] == list(TWELVE)
    assert {each.measured_on for each in made.setups.all()} == {
        TODAY - dt.timedelta(days=n) for n in range(12)
    }


def test_mean_is_rounded_half_even_once(ward):
    assert put(ward, typed("8.0", "8.0", "8.0", "8.5")).entered == "8.12"
    assert put(ward, typed("8.0", "8.5", "8.5", "8.5")).entered == "8.38"


def test_row_says_how_many_set_ups_and_their_standard_deviation(ward):
    put(ward, typed("8.0", "9.0", "8.5"))
    (row,) = rows.in_force(ward.probe.id).values()
    assert (row.count, Decimal(row.standard_deviation)) == (3, Decimal("0.5"))


def test_set_ups_are_read_in_one_query_for_all_baselines(ward, django_assert_num_queries):
    put(ward, typed(*TWELVE))
    put(ward, typed("6", "7"), series=Value("reverberation_bands", "", aperture(ward.probe)))
    with django_assert_num_queries(2):
        assert [each[0].count for each in rows.choices_in_force(ward.probe.id).values()] == [12, 2]


def test_leaf_says_every_set_up(ward):
    put(ward, typed("8.0", "9.0"))
    told = json.loads(list_leaves(EVERYTHING, most=1)[0].content)["new"]["baselines"][0]
    yesterday = TODAY - dt.timedelta(days=1)
    assert told["set_ups"] == {
        "count": 2, "standard_deviation": "0.707",
        "readings": [["8.0", yesterday.isoformat(), None], ["9.0", TODAY.isoformat(), None]],
    }  # fmt: skip


def test_readings_of_checks_are_taken_with_what_they_were_measured_with(ward):
    on = phantom(ward, "A-1")
    done = [
        surveyed(ward, on, days, reverberation_depth=text)
        for days, text in ((9, "8.5"), (5, "9.0"), (1, "8.0"))
    ]
    made = put(ward, picked(*done))
    assert made.from_readings == ",".join(str(each.uid) for each in done)
    assert (made.console_model, made.console_software, made.test_object_id) == ("OG-70", "4.2", on.pk)
    assert [each.submission_id for each in made.setups.order_by("position")] == [each.pk for each in done]


REFUSED = {
    "none": (lambda w: [], "baseline.setups_few"),
    "one": (lambda w: typed("8.5"), "baseline.setups_few"),
    "all of one day": (lambda w: typed("8.5", "8.0", "9.0", days=(1, 1, 1)), "baseline.setups_one_day"),
    "without a day": (lambda w: [Chosen("8.5"), *typed("8.0")], "baseline.setup_day"),
    "of a day to come": (lambda w: typed("8.5", "8.0", days=(-3, 1)), "baseline.setup_day"),
    "no number": (lambda w: typed("8.5", "deep"), "number.not_a_number"),
    "off the resolution": (lambda w: typed("8.5", "8.2"), "number.resolution"),
    "submission nobody knows": (lambda w: [Chosen(submission=uuid.uuid4()), *typed("8")], "baseline.setup_unknown"),
}  # fmt: skip


@pytest.mark.parametrize("name", REFUSED)
def test_set_ups_that_are_no_independent_readings_are_refused(ward, name):
    make, code = REFUSED[name]
    assert refused(ward, make(ward)) == code


def test_same_submission_twice_is_refused(ward):
    done = surveyed(ward, reverberation_depth="8.5")
    assert refused(ward, [*picked(done, done), *typed("8.0", days=(3,))]) == "baseline.setup_twice"


def test_submission_without_such_a_reading_is_refused(ward):
    done = surveyed(ward, penetration="150")
    assert refused(ward, [*picked(done), *typed("8.0", days=(3,))]) == "baseline.setup_unknown"


def test_reading_that_is_only_a_bound_is_refused(ward):
    done = surveyed(ward, penetration=Entry("150", qualifier=">"))
    series = Value("penetration", "", aperture(ward.probe))
    assert refused(ward, [*picked(done), *typed("150", days=(3,))], series=series) == "baseline.setup_bound"


def test_set_ups_with_two_softwares_or_objects_are_refused(ward):
    first = surveyed(ward, days_ago=2, reverberation_depth="8.5")
    other = surveyed(ward, phantom(ward, "B-2"), days_ago=1, reverberation_depth="8.5")
    assert refused(ward, picked(first, other)) == "baseline.setups_mixed"
    devices.record_software(
        scanner=ward.scanner.uid, version="4.3", options="", since_on=TODAY, actor=ward.physicist, at=now()
    )
    assert refused(ward, picked(first, surveyed(ward, reverberation_depth="8.5"))) == "baseline.setups_mixed"


def figures(ward, texts):
    proposed = baseline_setups.propose_setups(**given(ward, typed(*texts)))
    return baseline_setups.figures_of(proposed.proposals[0])


def test_figures_of_ten_or_more_set_ups_have_the_exact_interval(ward):
    found = figures(ward, TWELVE[:10])
    assert (found.count, found.missing, found.tested) == (10, 0, False)
    # Odeh and Owen 1980, Table 3.4.1: n = 10, 95 % content, 95 % confidence.
    assert round(found.factor, 3) == 3.393
    assert found.allowance == Decimal("1.252")


def test_figures_of_fewer_say_how_many_are_missing(ward):
    found = figures(ward, TWELVE[:8])
    assert (found.missing, found.factor, found.allowance) == (2, None, None)


def test_spread_is_never_less_than_the_resolution_gives(ward):
    found = figures(ward, ["8.5"] * 10)
    assert (found.standard_deviation, round(found.floor, 4), found.floored) == (0, Decimal("0.1443"), True)
    assert found.allowance > 0


def test_suspect_is_shown_from_fifteen_on_and_stays_in_the_mean(ward):
    odd = ["8.5", "8.0", "9.0"] * 5 + ["30.0"]
    found = figures(ward, odd)
    assert (found.tested, found.suspects) == (True, (15,))
    assert found.mean == Decimal("9.84")
    assert not figures(ward, odd[-14:]).tested


def test_what_was_shown_is_what_is_set(ward):
    setups = typed("8.0", "8.5")
    shown = baseline_setups.propose_setups(**given(ward, setups)).shown_sha256
    assert refused(ward, typed("8.0", "9.0"), shown_sha256=shown) == "signature.shown_differs"
    assert put(ward, setups, shown_sha256=shown)


def test_baseline_runs_out_on_the_day_typed_and_not_in_the_past(ward):
    assert refused(ward, typed("8.0", "8.5"), terms=Terms(expires_on=TODAY)) == "baseline.expires_early"
    later = TODAY + dt.timedelta(days=365)
    assert put(ward, typed("8.0", "8.5"), terms=Terms(expires_on=later)).expires_on == later


def test_past_moment_has_the_baseline_of_then_with_its_set_ups(ward):
    put(ward, typed("8.0", "8.5"))
    before = now()
    put(ward, typed("9.0", "9.5", "9.5"))
    for moment, count, entered in ((before, 2, "8.25"), (now(), 3, "9.33"), (None, 3, "9.33")):
        ((row,),) = rows.choices_in_force(ward.probe.id, moment).values()
        assert (row.count, row.entered, row.aperture, row.set_by) == (count, entered, "main", "Maren Oduya")
