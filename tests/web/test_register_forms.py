"""The forms of the register: what they record, and that what was typed is kept when they are refused."""

from __future__ import annotations

import uuid

import pytest
from django.urls import reverse

from qa_tracker.records.models import (
    CheckPlan,
    Condition,
    Device,
    Fault,
    Instrument,
    TestObject,
)
from tests import builders

pytestmark = pytest.mark.django_db
PROBE = {
    "maker": "Lunnby & Vale",
    "model": "Fjellet L",
    "serial": "FL-9",
    "array_kind": "linear",
    "contact_class": "skin",
    "applied_part": "BF",
    "apertures": "main, 128\nside, 64",
    "replacement_year": "2031",
}


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def physicist(ward):
    return builders.signed_in(ward.physicist)


def test_probe_when_registered_has_its_apertures_and_awaits_acceptance(ward, physicist):
    answer = physicist.post(reverse("probe-new"), PROBE | {"place": f"scanner {ward.scanner.uid}"})
    probe = Device.objects.get(serial="FL-9")
    assert answer.headers["Location"] == reverse("device", args=[probe.uid])
    assert (probe.state, probe.scanner, probe.replacement_year) == ("awaiting_acceptance", ward.scanner, 2031)
    assert list(probe.apertures.values_list("name", "elements")) == [("main", 128), ("side", 64)]


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        pytest.param({"serial": ""}, "The serial number is missing", id="no serial"),
        pytest.param(
            {"serial": "C5-2207", "model": "C5", "maker": "Ostrigard"}, "is already in the", id="known"
        ),
        pytest.param({"apertures": "main, many"}, "The line “main, many” can’t be read", id="elements"),
        pytest.param({"replacement_year": "soon"}, "“soon” is no whole number", id="year"),
        pytest.param({"purchased_on": "31 June"}, "“31 June” is no day", id="day"),
        pytest.param({"place": "scanner 7"}, "Nothing was chosen", id="place"),
        pytest.param({"array_kind": "round"}, "“round” can", id="array"),
        pytest.param({"model": "x" * 81}, "at most 80 can be kept", id="too long"),
    ],
)
def test_probe_when_refused_keeps_what_was_typed(ward, physicist, change, sentence):
    typed = PROBE | {"place": f"scanner {ward.scanner.uid}", "keeper": "Ward 7 <desk>"} | change
    answer = physicist.post(reverse("probe-new"), typed)
    page = answer.content.decode().replace("&#x27;", "’")
    assert answer.status_code == 422
    assert sentence in page
    assert 'value="Ward 7 &lt;desk&gt;"' in page
    assert 'value="linear" checked' in page or "array_kind" in change
    assert not Device.objects.filter(serial="FL-9").exists()


def test_probe_with_several_things_missing_says_all_of_them_at_once(ward, physicist):
    answer = physicist.post(reverse("probe-new"), {"maker": "", "model": "", "serial": " "})
    refused = answer.context["asked"].refused
    assert all(refused.at(name) for name in ("maker", "model", "serial", "place", "apertures"))


def test_scanner_when_registered_leads_to_its_page(ward, physicist):
    typed = {"maker": "Pellantis", "model": "PX", "serial": "PX-1", "software_version": "1.0",
             "protection_class": "I", "place": f"room {ward.room.uid}"}  # fmt: skip
    physicist.post(reverse("scanner-new"), typed)
    assert Device.objects.get(serial="PX-1").location == ward.room


def test_register_when_edited_keeps_what_was_not_asked(ward, physicist):
    physicist.post(reverse("device-edit", args=[ward.probe.uid]), {"owner": "Trust", "spare": "yes"})
    ward.probe.refresh_from_db()
    assert (ward.probe.owner, ward.probe.spare, ward.probe.serial) == ("Trust", True, "C5-2207")


def test_quarantine_by_a_user_takes_two_taps(ward):
    client = builders.signed_in(ward.user)
    address = reverse("device-quarantine", args=[ward.probe.uid])
    assert address in client.get(reverse("device", args=[ward.probe.uid])).content.decode()
    answer = client.post(address, {"seen": "Cracked lens", "place": "lens"})
    ward.probe.refresh_from_db()
    assert ward.probe.state == "quarantined"
    assert answer.headers["Location"] == reverse("fault", args=[Fault.objects.get().uid])


def test_quarantine_without_what_was_seen_is_refused_beside_the_field(ward):
    answer = builders.signed_in(ward.user).post(
        reverse("device-quarantine", args=[ward.probe.uid]), {"seen": " ", "place": "cable <1>"}
    )
    assert answer.status_code == 422
    assert 'id="refusal_seen"' in answer.content.decode()
    assert "cable &lt;1&gt;" in answer.content.decode()


def test_restore_without_a_proving_check_is_refused_and_with_one_closes_the_fault(ward, physicist):
    builders.signed_in(ward.user).post(
        reverse("device-quarantine", args=[ward.probe.uid]), {"seen": "Dark line"}
    )
    address = reverse("device-restore", args=[ward.probe.uid])
    signed = {"remark": "Cleaned and tested", "password": builders.PASSWORD}
    refused = physicist.post(address, signed | {"proving_check": ""})
    assert (refused.status_code, "Cleaned and tested" in refused.content.decode()) == (422, True)
    assert builders.PASSWORD not in refused.content.decode()
    builders.submitted(ward.check, ward.technician)
    ward.check.refresh_from_db()
    assert physicist.post(address, signed | {"proving_check": str(ward.check.uid)}).status_code == 302
    assert Fault.objects.get().state == "closed"


def test_restore_with_a_wrong_password_signs_nothing(ward, physicist):
    builders.signed_in(ward.user).post(
        reverse("device-quarantine", args=[ward.probe.uid]), {"seen": "Dark line"}
    )
    builders.submitted(ward.check, ward.technician)
    given = {"remark": "r", "password": "wrong", "proving_check": str(ward.check.uid)}
    answer = physicist.post(reverse("device-restore", args=[ward.probe.uid]), given)
    ward.probe.refresh_from_db()
    assert (answer.status_code, ward.probe.state) == (422, "quarantined")


def test_repair_when_sent_and_returned_ends_in_quarantine(ward, physicist):
    for verb in ("send_to_repair", "return_from_repair"):
        physicist.post(reverse("device-state", args=[ward.probe.uid, verb]), {"note": "certificate 4711"})
    ward.probe.refresh_from_db()
    assert ward.probe.state == "quarantined"


def test_move_that_the_state_forbids_says_why(ward, physicist):
    answer = physicist.post(reverse("device-state", args=[ward.probe.uid, "find"]), {"note": "in a drawer"})
    assert answer.status_code == 422
    assert "in a drawer" in answer.content.decode()


@pytest.mark.parametrize(
    ("settings", "status", "kept"),
    [
        pytest.param("depth: 16 cm\nfocus: 8 cm", 302, 1, id="lines"),
        pytest.param("depth 16 cm", 422, 0, id="no colon"),
        pytest.param("depth: 16\ndepth: 8", 422, 0, id="twice"),
    ],
)
def test_condition_when_named_keeps_each_setting(ward, physicist, settings, status, kept):
    typed = {"name": "abdomen", "test_frequency_mhz": "3.5", "settings": settings}
    answer = physicist.post(reverse("condition-set", args=[ward.probe.uid]), typed)
    assert (answer.status_code, Condition.objects.count()) == (status, kept)


PLAN = {"every": "1", "period": "MONTHLY", "rule": "", "basis": "calendar", "anchor_on": "2027-01-31",
        "before_days": "7", "grace_days": "3", "roll": "none"}  # fmt: skip


def plan_address(ward):
    return reverse("plan-make", args=[ward.scanner.uid]) + "?procedure=electrical-safety"


@pytest.fixture
def electrical(ward):
    builders.publish(["electrical-safety"])
    builders.library.adopt_edition(
        edition=builders.Edition.objects.get(procedure__code="electrical-safety"),
        site=None,
        remark="",
        actor=ward.physicist,
        at=builders.now(),
    )


def test_plan_when_previewed_shows_six_days_and_records_nothing(ward, physicist, electrical):
    typed = PLAN | {"responsible": str(ward.technician.uid), "preview": "1"}
    page = physicist.post(plan_address(ward), typed).content.decode()
    assert [
        f"{day} 2027" in page for day in ("31 Jan", "28 Feb", "31 Mar", "30 Apr", "31 May", "30 Jun")
    ] == [True] * 6
    assert CheckPlan.objects.count() == 1


def test_plan_when_made_opens_its_first_check(ward, physicist, electrical):
    physicist.post(plan_address(ward), PLAN | {"responsible": str(ward.technician.uid)})
    plan = CheckPlan.objects.get(device=ward.scanner)
    assert plan.checks.get().due_on.isoformat() == "2027-01-31"
    assert plan.responsible == ward.technician


@pytest.mark.parametrize(
    "change",
    [
        pytest.param({"rule": "FREQ=HOURLY"}, id="rule"),
        pytest.param({"every": "0"}, id="every none"),
        pytest.param({"anchor_on": ""}, id="no day"),
        pytest.param({"grace_days": "400"}, id="grace"),
        pytest.param({"responsible": ""}, id="nobody"),
        pytest.param({"basis": "moon"}, id="basis"),
    ],
)
def test_plan_when_refused_keeps_what_was_typed(ward, physicist, electrical, change):
    typed = PLAN | {"responsible": str(ward.technician.uid), "before_days": "11"} | change
    answer = physicist.post(plan_address(ward), typed)
    assert answer.status_code == 422
    assert 'value="11"' in answer.content.decode()
    assert CheckPlan.objects.count() == 1


def test_plan_when_ended_is_no_longer_in_force(ward, physicist):
    plan = CheckPlan.objects.get()
    physicist.post(reverse("plan-end", args=[ward.probe.uid, plan.uid]), {"reason": "Spare now"})
    plan.refresh_from_db()
    assert plan.ended_at is not None


def test_fault_when_acted_on_and_dismissed_is_closed(ward, physicist):
    physicist.post(reverse("fault-open", args=[ward.probe.uid]), {"seen": "Dark line", "grade": "remedial"})
    fault = Fault.objects.get()
    physicist.post(reverse("fault-act", args=[fault.uid]), {"kind": "cleaned", "text": "Lens cleaned"})
    assert "Lens cleaned" in physicist.get(reverse("fault", args=[fault.uid])).content.decode()
    physicist.post(reverse("fault-dismiss", args=[fault.uid]), {"remark": "Gel, not a fault"})
    fault.refresh_from_db()
    assert fault.state == "closed"


def test_fault_action_without_words_keeps_the_job_number(ward, physicist):
    physicist.post(reverse("fault-open", args=[ward.probe.uid]), {"seen": "Dark line", "grade": "remedial"})
    given = {"kind": "repair", "text": "", "job_number": "J-88"}
    answer = physicist.post(reverse("fault-act", args=[Fault.objects.get().uid]), given)
    assert (answer.status_code, 'value="J-88"' in answer.content.decode()) == (422, True)


def test_look_back_when_stated_stands_on_the_fault(ward, physicist):
    builders.signed_in(ward.user).post(
        reverse("device-quarantine", args=[ward.probe.uid]), {"seen": "Pierced"}
    )
    fault = Fault.objects.get()
    assert (
        "so how long it was at fault is not known"
        in physicist.get(reverse("fault", args=[fault.uid])).content.decode()
    )
    physicist.post(reverse("fault-look-back", args=[fault.uid]), {"look_back": "No review needed, INC-7"})
    assert "INC-7" in physicist.get(reverse("fault", args=[fault.uid])).content.decode()


def test_test_object_when_registered_keeps_its_true_values(ward, physicist):
    builders.publish(["annual-survey"])
    code = next(iter(TestObjectCodes.of(physicist)))
    typed = {
        "site": str(ward.site.uid),
        "name": "Phantom",
        "serial": "P1",
        "material": "hydrogel",
        code: "100.0",
    }
    physicist.post(reverse("test-object-new"), typed)
    assert f'"{code}":"100.0"' in TestObject.objects.get().nominals


class TestObjectCodes:
    """The true values the form asks for."""

    __test__ = False

    @staticmethod
    def of(client):
        fields = client.get(reverse("test-object-new")).context["asked"].fields
        return [each.name for each in fields if str(each.label).startswith("True value")]


def test_instrument_when_of_an_unknown_kind_is_refused(ward, physicist):
    typed = {"site": str(ward.site.uid), "kind": "hammer", "maker": "M", "serial": "1"}
    assert physicist.post(reverse("instrument-new"), typed).status_code == 422
    physicist.post(reverse("instrument-new"), typed | {"kind": "scale"})
    assert Instrument.objects.get().kind == "scale"


@pytest.mark.parametrize("name", ["adopt-criteria", "adopt-edition"])
def test_adoption_when_made_a_second_time_is_refused_with_its_remark(ward, physicist, name):
    model = builders.CriteriaSet if name == "adopt-criteria" else builders.Edition
    address = reverse(name, args=[model.objects.first().uid])
    answer = physicist.post(address, {"place": "", "remark": "compared <again>"})
    assert (answer.status_code, "compared &lt;again&gt;" in answer.content.decode()) == (422, True)
    assert physicist.post(address, {"place": str(ward.site.uid), "remark": ""}).status_code == 302


def test_adoption_by_a_technician_is_forbidden(ward):
    client = builders.signed_in(ward.technician)
    address = reverse("adopt-criteria", args=[builders.CriteriaSet.objects.first().uid])
    assert client.post(address, {"place": "", "remark": ""}).status_code == 403


def test_probe_by_a_technician_is_forbidden(ward):
    client = builders.signed_in(ward.technician)
    assert client.post(reverse("probe-new"), PROBE).status_code == 403
    assert client.post(reverse("device-accept", args=[uuid.uuid4()])).status_code == 404
