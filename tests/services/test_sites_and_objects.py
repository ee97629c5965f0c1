"""Sites, rooms, days off, pools, test objects and instruments: entered once, by those who may."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError, Forbidden
from qa_tracker.records.models import Holiday, Instrument, Pool, Site, TestObject
from qa_tracker.records.models.ledger import Leaf
from qa_tracker.services import objects, sites
from tests import builders

NEW_YEAR = dt.date(2030, 1, 1)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def site(ward, **changed):
    given = {"code": "KB", "name": "Kestrel Bay", "time_zone": "Europe/London", "actor": ward.admin} | changed
    return sites.create(**given, at=now())


def phantom(ward, **changed):
    given = {
        "site": ward.site, "name": "Phantom", "serial": "TM-1", "material": "hydrogel",
        "nominals": {"vertical_distance": "80.0"}, "actor": ward.physicist,
    } | changed  # fmt: skip
    return objects.register_test_object(**given, at=now())


def instrument(ward, **changed):
    given = {
        "site": ward.site, "kind": "leakage_tester", "maker": "Pellantis", "model": "E2", "serial": "7",
        "calibration_due_on": NEW_YEAR, "actor": ward.physicist,
    } | changed  # fmt: skip
    return objects.register_instrument(**given, at=now())


def room(ward, **changed):
    given = {"site": ward.site, "name": "Clinic", "position": 3, "actor": ward.admin} | changed
    return sites.add_location(**given, at=now())


def pool(ward, **changed):
    given = {"name": "Bank", "sites": [ward.site, ward.site], "actor": ward.admin} | changed
    return sites.create_pool(**given, at=now())


REFUSED = {
    "site without a code": (site, {"code": " "}, "site.code_missing"),
    "site with a taken code": (site, {"code": "ag"}, "site.code_taken"),
    "site without a name": (site, {"name": ""}, "site.name_missing"),
    "site in no zone": (site, {"time_zone": "Europe/Atlantis"}, "site.time_zone_unknown"),
    "room without a name": (room, {"name": " "}, "location.name_missing"),
    "room with a taken name": (room, {"name": "Ultrasound 2"}, "location.name_taken"),
    "pool of one site, named twice": (pool, {}, "pool.needs_two_sites"),
    "pool of one site": (pool, {"sites": []}, "pool.needs_two_sites"),
    "test object without a name": (phantom, {"name": " "}, "test_object.name_missing"),
    "test object without a serial": (phantom, {"serial": " "}, "test_object.serial_missing"),
    "test object with a nominal that is none": (phantom, {"nominals": {"x": "80 mm"}}, "number.unit"),
    "instrument of no kind": (instrument, {"kind": "ruler"}, "device.unknown_word"),
    "instrument without a maker": (instrument, {"maker": ""}, "device.maker_missing"),
    "instrument without a serial": (instrument, {"serial": ""}, "instrument.serial_missing"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_entry_is_refused_and_nothing_is_written(ward, name):
    enter, changed, code = REFUSED[name]
    before = Leaf.objects.count(), Site.objects.count(), Pool.objects.count()
    with pytest.raises(DomainError) as refused:
        enter(ward, **changed)
    assert refused.value.code == code
    assert (Leaf.objects.count(), Site.objects.count(), Pool.objects.count()) == before


@pytest.mark.parametrize(
    ("enter", "code"), [(phantom, "test_object.serial_taken"), (instrument, "instrument.serial_taken")]
)
def test_serial_is_taken_once(ward, enter, code):
    enter(ward)
    with pytest.raises(DomainError) as refused:
        enter(ward)
    assert refused.value.code == code
    assert TestObject.objects.count() + Instrument.objects.count() == 1


@pytest.mark.parametrize("enter", [site, room, pool])
def test_only_an_administrator_changes_sites(ward, enter):
    with pytest.raises(Forbidden):
        enter(ward, actor=ward.physicist)


@pytest.mark.parametrize("enter", [phantom, instrument])
@pytest.mark.parametrize("who", ["admin", "technician", "user"])
def test_objects_are_registered_by_those_who_answer_for_them(ward, enter, who):
    with pytest.raises(Forbidden):
        enter(ward, actor=getattr(ward, who))


def test_administrator_of_a_site_makes_no_other_site_and_instructs_their_own(ward):
    local = builders.person(ward.admin, "local", "administrator", ward.site)
    with pytest.raises(Forbidden):
        site(ward, actor=local)
    sites.instruct(
        site=ward.site,
        remedial_instruction=" Label it. ",
        suspension_instruction="Stop.",
        actor=local,
        at=now(),
    )
    assert Site.objects.get(pk=ward.site.pk).remedial_instruction == "Label it."


def test_days_off_are_added_once(ward):
    days = {NEW_YEAR: "New Year"}
    sites.add_holidays(site=ward.site, days=days, actor=ward.admin, at=now())
    boxing = dt.date(2030, 12, 26)
    sites.add_holidays(site=ward.site, days=days | {boxing: "Boxing Day"}, actor=ward.admin, at=now())
    assert list(Holiday.objects.order_by("day_on").values_list("day_on", flat=True)) == [NEW_YEAR, boxing]
    with pytest.raises(DomainError) as refused:
        sites.add_holidays(site=ward.site, days=days, actor=ward.admin, at=now())
    assert refused.value.code == "holiday.all_known"


def test_pool_names_each_site_once(ward):
    bay = site(ward)
    made = pool(ward, sites=[ward.site, bay, ward.site])
    assert sorted(made.members.values_list("site__code", flat=True)) == ["AG", "KB"]
