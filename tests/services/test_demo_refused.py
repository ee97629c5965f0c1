"""The demo stays out of a database in use, and a larger fleet has a size that can be."""

from __future__ import annotations

import datetime as dt

import pytest

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.records.models import Device, Reading
from qa_tracker.services import demo
from qa_tracker.services.demo_fleet import PROBES, SCANNERS
from qa_tracker.services.demo_large import consoles
from tests import builders

AT = dt.datetime(2026, 3, 18, 10, 30, tzinfo=dt.UTC)


def test_load_when_there_are_other_people(db):
    builders.person(builders.first_administrator(), "someone", "technician", None, "Someone Else")
    with pytest.raises(Conflict, match=r"demo\.others"):
        demo.load(at=AT)


@pytest.mark.parametrize(
    ("wanted", "field"),
    [((0, None, 2), "scanners"), ((None, 100_001, 2), "probes"), ((None, None, 0), "years")],
    ids=["no scanner", "too many probes", "no year"],
)
def test_size_when_it_cannot_be(wanted, field):
    with pytest.raises(Invalid) as refusal:
        demo.Size(*wanted)
    assert refusal.value.field == field


@pytest.mark.parametrize(
    ("size", "counts"),
    [
        (demo.Size(120), (120, 400)),
        (demo.Size(probes=400), (120, 400)),
        (demo.Size(10, 99), (10, 99)),
        (demo.Size(years=3), (len(SCANNERS), len(PROBES))),
    ],
    ids=["scanners", "probes", "both", "years"],
)
def test_size_when_something_is_left_out_keeps_the_proportions(size, counts):
    assert size.counts() == counts


def test_fleet_when_large_has_its_numbers_and_no_serial_twice():
    fleet = list(consoles(1000, 5000, 7))
    probes = [probe for _, share in fleet for probe in share]
    assert (len(fleet), len(probes)) == (1000, 5000)
    assert len({console.serial for console, _ in fleet}) == 1000
    assert len({(probe.kind, probe.serial) for probe in probes}) == 5000


def _values(size: demo.Size, seed: int) -> list[tuple[str, str, str]]:
    demo.load(at=AT, seed=seed, size=size)
    found = Reading.objects.order_by("id")
    return list(found.values_list("device__serial", "measurand__code", "entered"))


def test_load_when_small_fleet_is_asked_for(db):
    values = _values(demo.Size(2, 5, 1), 3)
    assert Device.objects.filter(kind="probe").count() == 5
    assert len(values) > 1000
