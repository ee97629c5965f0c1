"""Readings that a published limit may not judge are not assessable, with the reason."""

from __future__ import annotations

import datetime as dt
import json
from dataclasses import replace
from pathlib import Path

import pytest

from qa_tracker.core.applicability import Circumstances, Standing, unfit
from qa_tracker.core.library import criteria_set
from qa_tracker.core.sentence_codes import REQUIRED, SentenceCode

FOLDER = Path(__file__).parents[2] / "fixtures" / "criteria"
DAY = dt.date(2026, 3, 2)
HERE, THERE = Standing(1, "AG hydrogel"), Standing(2, "KB hydrogel")


def _published(name):
    documents = [json.loads(path.read_text("utf-8")) for path in sorted(FOLDER.glob("*.json"))]
    sets = [criteria_set(each) for each in documents if isinstance(each, dict) and "criteria" in each]
    return next(one for each in sets for one in each.criteria if one.id == name)


CASES = {
    "dead elements on a phased array": ("DROP", Circumstances(array_kind="phased"), None, "array_kind"),
    "uniformity in air": ("TG1-UNIF", Circumstances(medium="air"), None, "other_medium"),
    "leakage by another method": (
        "62353-EL-I-ALTERNATIVE", Circumstances(method="direct"), None, "other_method",
    ),
    "leakage of another class": (
        "62353-EL-II-DIRECT", Circumstances(protection_class="I"), None, "other_class",
    ),
    "leakage of another applied part": ("62353-AP-CF", Circumstances(applied_part="BF"), None, "other_class"),
    "depth on another object": (
        "TG1-PEN", Circumstances(test_object_id=1, test_object="AG hydrogel"), THERE, "other_object",
    ),
    "depth on an object not named": ("TG1-PEN", Circumstances(), HERE, "object_not_named"),
    "depth against a baseline on no object": (
        "TG1-PEN", Circumstances(test_object_id=1, test_object="AG hydrogel"), Standing(), "object_not_named",
    ),
    "baseline that ran out today": (
        "TG1-PEN", Circumstances(measured_on=DAY), Standing(expires_on=DAY), "expired_baseline",
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", CASES)
def test_reading_is_not_assessable_where_the_limit_does_not_fit(name):
    criterion, met, baseline, code = CASES[name]
    found = unfit(_published(criterion), met, baseline)
    assert (found.verdict, found.code) == ("not_assessable", code)
    assert found.parameters.keys() == REQUIRED[SentenceCode(code)]


FIT = {
    "dead elements on a linear array": ("DROP", Circumstances(array_kind="linear"), None),
    "nothing known": ("DROP", Circumstances(), None),
    "uniformity in a phantom": ("TG1-UNIF", Circumstances(medium="phantom"), None),
    "any medium": ("DROP", Circumstances(medium="air"), None),
    "leakage by its method": ("62353-EL-I-DIRECT", Circumstances(method="direct", protection_class="I"), None),
    "depth on the same object": ("TG1-PEN", Circumstances(test_object_id=1), HERE),
    "depth where neither object is named": ("TG1-PEN", Circumstances(), Standing()),
    "resolution on an object not named": ("TG128-RES", Circumstances(), HERE),
    "resolution on another object": ("TG128-RES", Circumstances(test_object_id=1), THERE),
    "baseline on its last day": (
        "TG1-PEN", Circumstances(measured_on=DAY), Standing(expires_on=DAY + dt.timedelta(days=1)),
    ),
    "no baseline": ("TG1-PEN", Circumstances(measured_on=DAY), None),
    "nothing seen on another object": (
        "TG1-PEN", Circumstances(test_object_id=1, qualifier="not_seen"), THERE,
    ),
    "nothing seen after the baseline ran out": (
        "TG1-PEN", Circumstances(measured_on=DAY, qualifier="not_seen"), Standing(expires_on=DAY),
    ),
    "a nominal is no baseline": (
        "TG1-VERT", Circumstances(measured_on=DAY), replace(HERE, expires_on=DAY),
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", FIT)
def test_reading_is_let_through_where_the_limit_fits(name):
    criterion, met, baseline = FIT[name]
    assert unfit(_published(criterion), met, baseline) is None
