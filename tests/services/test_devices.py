"""Registering and moving devices: once by serial, and whose sight a device is in afterwards."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, Forbidden, Invalid, NotFound
from qa_tracker.records.models import Check, Device, Placement
from qa_tracker.records.queries import devices as register
from qa_tracker.services import devices, finding, guards, sites
from qa_tracker.services.devices import Identity, Place
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


@pytest.fixture
def bay(ward):
    return builders.site(ward.admin, "KB", "Kestrel Bay")


def probe(ward, serial="N-1", place=None, **changed):
    given = {
        "array_kind": "linear", "contact_class": "skin", "applied_part": "BF", "apertures": [("main", 128)],
    } | changed  # fmt: skip
    identity = Identity("Ostrigard", "C5", serial)
    place = place or Place(site=ward.site)
    return devices.register_probe(identity=identity, place=place, **given, actor=ward.physicist, at=now())


def move(ward, device, **place):
    devices.move(device=device.uid, place=Place(**place), reason="swap", actor=ward.physicist, at=now())


def seen(actor, device, as_of=None):
    return register.find_device(guards.scope(actor, now()), device.uid, as_of)


def test_registered_probe_awaits_acceptance_at_its_place(ward):
    made = probe(ward, place=Place(site=ward.site, location=ward.room, scanner=ward.scanner))
    row = seen(ward.user, made)
    assert (row.state, row.site_code, row.location) == ("awaiting_acceptance", "AG", "Ultrasound 2")
    assert row.scanner_label == "OG-70 70-1188"
    assert Placement.objects.get(device=made).ended_at is None


@pytest.mark.parametrize("serial", ["C5-2207", "  C5-2207 "])
def test_second_device_of_a_serial_is_refused_when_maker_and_model_agree(ward, serial):
    with pytest.raises(Invalid) as refused:
        probe(ward, serial=serial)
    assert (refused.value.code, refused.value.field) == ("device.serial_taken", "serial")


@pytest.mark.parametrize(
    ("changed", "code"),
    [
        ({"array_kind": "square"}, "device.unknown_word"),
        ({"contact_class": "hair"}, "device.unknown_word"),
        ({"applied_part": "bf"}, "device.unknown_word"),
        ({"apertures": []}, "probe.aperture_missing"),
        ({"apertures": [("", 64)]}, "probe.aperture_missing"),
        ({"apertures": [("main", 64), ("main", 128)]}, "probe.aperture_twice"),
    ],
)
def test_probe_is_refused_when_a_fact_of_it_makes_no_sense(ward, changed, code):
    with pytest.raises(Invalid) as refused:
        probe(ward, **changed)
    assert refused.value.code == code
    assert not Device.objects.filter(serial="N-1").exists()


@pytest.mark.parametrize("name", ["maker", "model", "serial"])
def test_scanner_is_refused_when_part_of_its_identity_is_blank(ward, name):
    identity = Identity(**{"maker": "Ostrigard", "model": "OG-9", "serial": "1"} | {name: "  "})
    with pytest.raises(Invalid) as refused:
        devices.register_scanner(
            identity=identity,
            place=Place(site=ward.site),
            software_version="1",
            actor=ward.physicist,
            at=now(),
        )
    assert refused.value.code == f"device.{name}_missing"


@pytest.mark.parametrize("field", ["location", "scanner"])
def test_device_is_not_placed_in_a_room_or_at_a_scanner_of_another_site(ward, bay, field):
    elsewhere = {"location": ward.room, "scanner": ward.scanner}[field]
    for attempt in (
        lambda: move(ward, ward.probe, site=bay, **{field: elsewhere}),
        lambda: probe(ward, place=Place(site=bay, **{field: elsewhere})),
    ):
        with pytest.raises(Invalid) as refused:
            attempt()
        assert (refused.value.code, refused.value.field) == ("device.place_mixed", field)


def test_probe_is_not_plugged_to_itself(ward):
    with pytest.raises(Invalid) as refused:
        move(ward, ward.probe, site=ward.site, scanner=ward.probe)
    assert refused.value.code == "device.place_mixed"


def test_move_to_the_place_it_has_is_refused(ward):
    with pytest.raises(Conflict) as refused:
        move(ward, ward.probe, site=ward.site, location=ward.room, scanner=ward.scanner)
    assert refused.value.code == "device.already_there"


def test_move_is_refused_when_the_role_holds_at_one_end_only(ward, bay):
    with pytest.raises(Forbidden):
        devices.move(device=ward.probe.uid, place=Place(site=bay), reason="", actor=ward.technician, at=now())


def test_former_site_sees_a_moved_device_as_it_was_up_to_the_move(ward, bay):
    stranger = builders.person(ward.admin, "stranger", "technician", bay)
    assert seen(stranger, ward.probe) is None
    move(ward, ward.probe, site=bay)
    devices.edit(device=ward.probe.uid, changes={"keeper": "Bay desk"}, actor=ward.physicist, at=now())
    before, after = seen(ward.technician, ward.probe), seen(stranger, ward.probe)
    assert (before.site_code, before.register) == ("AG", {})
    assert before.seen_until is not None
    assert (after.site_code, after.register, after.seen_until) == ("KB", {"keeper": "Bay desk"}, None)


def test_former_site_can_no_longer_act_on_a_moved_device(ward, bay):
    move(ward, ward.probe, site=bay)
    with pytest.raises(NotFound):
        finding.device(ward.technician, ward.probe.uid, now())


def test_placements_show_both_ends_when_a_device_moved(ward, bay):
    move(ward, ward.probe, site=bay)
    first, second = register.placements_of(ward.probe.id)
    assert (first.place, second.place) == ("Aldermoor General, Ultrasound 2, OG-70 70-1188", "Kestrel Bay")
    assert first.ended_at == second.started_at
    assert (second.ended_at, second.reason) == (None, "swap")


def test_awaited_check_is_the_new_sites_to_do_when_its_device_moved(ward, bay):
    theirs = builders.person(ward.admin, "stranger", "technician", bay)
    move(ward, ward.probe, site=bay)
    builders.submitted(ward.check, theirs)
    done, following = Check.objects.filter(plan=ward.check.plan).order_by("due_on")
    assert (done.state, done.site, following.site) == ("submitted", bay, bay)


def test_done_check_stays_with_the_site_of_its_time_when_its_device_moves(ward, bay):
    builders.submitted(ward.check, ward.technician)
    move(ward, ward.probe, site=bay)
    assert Check.objects.get(pk=ward.check.pk).site == ward.site
    assert finding.check(ward.technician, ward.check.uid, now()).pk == ward.check.pk


def test_pooled_device_is_in_sight_of_every_member_site_and_no_other(ward, bay):
    far = builders.site(ward.admin, "FL", "Far Loch")
    pool = sites.create_pool(name="Bank", sites=[ward.site, bay], actor=ward.admin, at=now())
    pooled = probe(ward, place=Place(pool=pool))
    theirs = builders.person(ward.admin, "stranger", "technician", bay)
    others = builders.person(ward.admin, "farther", "technician", far)
    assert seen(ward.technician, pooled).pool_name == seen(theirs, pooled).pool_name == "Bank"
    assert seen(others, pooled) is None


def test_register_is_told_as_it_was_known_then(ward, bay):
    before = now()
    late = probe(ward)
    move(ward, ward.probe, site=bay)
    devices.edit(device=ward.scanner.uid, changes={"owner": "Trust"}, actor=ward.physicist, at=now())
    scope = guards.scope(ward.physicist, now())
    then = {row.serial: (row.site_code, row.register) for row in register.list_devices(scope, as_of=before)}
    assert then == {"70-1188": ("AG", {}), "C5-2207": ("AG", {})}
    today = {row.serial: row.site_code for row in register.list_devices(scope)}
    assert today == {"70-1188": "AG", "C5-2207": "KB", late.serial: "AG"}
    assert seen(ward.physicist, late, before) is None
    assert seen(ward.physicist, ward.probe, before).site_code == "AG"


def test_register_of_a_past_moment_can_be_filtered_and_searched(ward, bay):
    before = now()
    move(ward, ward.probe, site=bay)
    scope = guards.scope(ward.physicist, now())
    for wanted, serials in [
        ({"site_id": ward.site.id}, ["70-1188", "C5-2207"]),
        ({"site_id": bay.id}, []),
        ({"kind": "probe"}, ["C5-2207"]),
        ({"text": "ostri c5"}, ["C5-2207"]),
        ({"most": 1}, ["70-1188"]),
    ]:
        assert [row.serial for row in register.list_devices(scope, as_of=before, **wanted)] == serials


def test_software_is_told_version_by_version(ward):
    for version, day in (("4.3", 1), ("5.0", 9)):
        devices.record_software(
            scanner=ward.scanner.uid, version=version, options="", since_on=dt.date(2026, 2, day),
            actor=ward.physicist, at=now(),
        )  # fmt: skip
    told = register.software_of(ward.scanner.id)
    assert [row.version for row in told] == ["4.2", "4.3", "5.0"]
    assert told[-1].since_on == dt.date(2026, 2, 9)


def test_identity_and_state_are_not_register_fields(ward):
    for name in ("serial", "state", "site_id", "kind"):
        with pytest.raises(Invalid) as refused:
            devices.edit(device=ward.probe.uid, changes={name: "x"}, actor=ward.physicist, at=now())
        assert refused.value.code == "device.field_fixed"


def test_condition_is_changed_in_place_and_its_versions_are_kept(ward):
    given = {"device": ward.probe.uid, "name": "In air", "sound_speed_m_s": ""}
    for frequency, gain in (("3.5", "full"), ("5", "half")):
        devices.set_condition(
            **given, test_frequency_mhz=frequency, settings={"gain": gain}, actor=ward.physicist, at=now()
        )
    (row,) = register.conditions_of(ward.probe.id)
    assert (row.test_frequency_mhz, row.settings) == ("5", '{"gain":"half"}')
