"""The entry page: what it asks, what it says about what was typed, and that it keeps everything."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

import builders
from qa_tracker.records.models import Draft, Submission
from qa_tracker.services import states

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def address(ward):
    return f"/checks/{ward.check.uid}"


@pytest.fixture
def client(ward):
    return builders.signed_in(ward.technician)


def field(ward, code: str) -> str:
    """The input's name of a measurand of the probe's monthly check."""
    sheet = builders.checks.sheet(check=ward.check.uid, actor=ward.technician, at=now())
    return next(item.key for item in sheet.items if item.spec.code == code)


def test_the_page_asks_every_item_with_its_prompt(ward, client, address):
    page = client.get(f"{address}/enter/").content.decode()
    sheet = builders.checks.sheet(check=ward.check.uid, actor=ward.technician, at=now())
    assert all(f'name="{item.key}"' in page for item in sheet.items)
    assert "Wipe it dry, tilt it in the light" in page


def test_the_page_shows_the_cautions_and_steps_of_the_edition(client, address):
    page = client.get(f"{address}/enter/").content.decode()
    assert "withdraw the probe at once" in page
    assert "Confirm the probe has been cleaned" in page


def test_looking_at_the_page_writes_nothing(client, address):
    client.get(f"{address}/enter/")
    assert not Draft.objects.exists()


def test_save_and_judge_works_with_scripts_off(ward, client, address):
    key = field(ward, "case_grade")
    answer = client.post(f"{address}/draft/", {key: "amber", "revision": "0", "then": "judge"}, follow=True)
    page = answer.content.decode()
    assert 'value="amber" checked' in page
    assert "remedial" in page
    assert "tell the lead sonographer today" in page


@pytest.mark.parametrize(
    ("typed", "says"),
    [
        pytest.param("1e999", "exponent", id="exponent beyond any float"),
        pytest.param("NaN", "finite", id="not a number"),
        pytest.param("１２", "digits 0 to 9", id="full-width digits"),
        pytest.param("12 mm", "unit", id="unit typed along"),
        pytest.param("42.3", "0.5", id="finer than the resolution"),
        pytest.param("<script>", "&lt;script&gt;", id="markup"),
    ],
)
def test_what_is_no_number_is_refused_in_words_and_kept(ward, client, address, typed, says):
    key = field(ward, "reverberation_depth")
    page = client.post(f"{address}/draft/", {key: typed, "revision": "0"}, follow=True).content.decode()
    assert f'id="refusal_{key}"' in page
    assert says in page
    assert "<script>" not in page.replace('<script src="', "")


def test_a_decimal_comma_is_taken(ward, client, address):
    key = field(ward, "reverberation_depth")
    page = client.post(f"{address}/draft/", {key: "42,5", "revision": "0"}, follow=True).content.decode()
    assert 'value="42,5"' in page
    assert f'id="refusal_{key}"' not in page


def test_signing_is_refused_with_every_reason_and_nothing_lost(ward, client, address):
    answer = client.post(f"{address}/draft/", {"remark": "Gel on the lens", "revision": "0", "then": "sign"})
    page = answer.content.decode()
    assert answer.status_code == 422
    assert 'role="alert"' in page
    assert f'href="#id_{field(ward, "lens_grade")}"' in page
    assert "Gel on the lens" in page


def test_the_summary_names_each_item_that_is_still_to_be_answered(ward, client, address):
    page = client.post(f"{address}/draft/", {"revision": "0", "then": "sign"}).content.decode()
    sheet = builders.checks.sheet(check=ward.check.uid, actor=ward.technician, at=now())
    missing = next(item for item in sheet.items if item.spec.code == "lens_grade")
    assert f'<a href="#id_{missing.key}">{missing.spec.name}: This is still to be answered.' in page


def test_the_sentence_about_cleaning_stands_in_the_summary_when_it_is_missing(ward, client, address):
    typed = filled(ward) | {"cleaned_by": "", "then": "sign", "revision": "0"}
    page = client.post(f"{address}/draft/", typed)
    assert page.status_code == 422
    assert 'href="#id_cleaned_before"' in page.content.decode()


def filled(ward, **given: str) -> dict[str, str]:
    """The inputs of a check in order."""
    entries = builders.answers(ward.check, ward.technician, **given)
    inputs = {key: entry.text for key, entry in entries.items()}
    return inputs | {"cleaned_how": "disinfectant wipe", "cleaned_by": "Ifeoma", "revision": "0"}


def test_a_value_near_ten_times_the_last_is_asked_about(ward, client, address):
    builders.submitted(ward.check, ward.technician, reverberation_depth="42.5")
    following = ward.probe.checks.get(state="scheduled")
    key = field(builders.Ward(**(vars(ward) | {"check": following})), "reverberation_depth")
    page = client.post(f"/checks/{following.uid}/draft/", {key: "4.5", "revision": "0"}, follow=True)
    assert f'name="c-{key}"' in page.content.decode()


def test_the_last_value_is_held_back_until_one_is_typed(ward, client):
    builders.submitted(ward.check, ward.technician, reverberation_depth="42.5")
    following = ward.probe.checks.get(state="scheduled")
    key = field(builders.Ward(**(vars(ward) | {"check": following})), "reverberation_depth")
    page = client.get(f"/checks/{following.uid}/enter/").content.decode()
    assert "shown once yours is in" in page
    assert "42.5" not in page
    page = client.post(f"/checks/{following.uid}/draft/", {key: "43", "revision": "0"}, follow=True)
    assert "Last 42.5" in page.content.decode()


def test_a_script_is_answered_with_verdicts_by_field(ward, client, address):
    key = field(ward, "case_grade")
    answer = client.post(
        f"{address}/draft/", {key: "red", "revision": "0"}, headers={"Accept": "application/json"}
    )
    told = answer.json()
    assert told["revision"] == 1
    assert "suspension" in told["items"][key]["html"]
    assert "phone physics on 4410" in told["items"][key]["html"]


def test_a_script_is_told_to_sign_in_when_the_web_session_has_ended(address):
    answer = builders.Client().post(f"{address}/draft/", {}, headers={"Accept": "application/json"})
    assert answer.status_code == 401
    assert answer.json()["sign_in"].startswith("/sign-in/?next=")


def test_another_window_is_not_written_over(ward, client, address):
    key = field(ward, "reverberation_depth")
    headers = {"Accept": "application/json"}
    client.post(f"{address}/draft/", {key: "42", "revision": "0", "page": "a"}, headers=headers)
    late = client.post(f"{address}/draft/", {key: "55", "revision": "0", "page": "b"}, headers=headers)
    assert late.status_code == 409
    assert late.json()["others"] == {key: "42"}
    kept = client.post(f"{address}/draft/", {key: "55", "revision": "1", "page": "b"}, headers=headers)
    assert kept.json()["revision"] == 2


def test_both_windows_are_shown_with_scripts_off(ward, client, address):
    key = field(ward, "reverberation_depth")
    client.post(f"{address}/draft/", {key: "42", "revision": "0"})
    answer = client.post(f"{address}/draft/", {key: "55", "revision": "0"})
    page = answer.content.decode()
    assert answer.status_code == 409
    assert 'value="55"' in page
    assert "<strong>42</strong>" in page


def test_what_one_page_sent_first_does_not_overtake_what_it_sent_last(ward, client, address):
    key = field(ward, "reverberation_depth")
    for turn, value in (("1", "4"), ("3", "42.5"), ("2", "42")):
        client.post(f"{address}/draft/", {key: value, "page": "a", "turn": turn, "revision": "0"})
    assert '"42.5"' in Draft.objects.get().content


def test_what_one_person_typed_is_not_kept_as_anothers(ward, address):
    other = builders.person(ward.admin, "achterberg", "technician", ward.site)
    typed = {"remark": "mine", "typed_by": str(ward.technician.uid)}
    answer = builders.signed_in(other).post(
        f"{address}/draft/", typed, headers={"Accept": "application/json"}
    )
    assert answer.status_code == 409
    assert not Draft.objects.exists()


def test_the_page_says_so_when_the_device_is_quarantined(ward, client, address):
    states.quarantine(device=ward.probe.uid, seen="Cut cable", actor=ward.user, at=now())
    assert "This device is quarantined" in client.get(f"{address}/enter/").content.decode()


def test_a_user_is_refused_a_technicians_check_in_words(ward, address):
    answer = builders.signed_in(ward.user).get(f"{address}/enter/")
    assert answer.status_code == 403
    assert "This can't be done" in answer.content.decode().replace("&#x27;", "'")


def test_a_check_of_another_site_is_not_found(ward, address):
    elsewhere = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "dragic", "technician", elsewhere)
    client = builders.signed_in(stranger)
    addresses = [f"{address}/", f"{address}/enter/", f"{address}/sign/", f"{address}/not-tested/"]
    assert {client.get(each).status_code for each in addresses} == {404}
    assert client.post(f"{address}/draft/", {"remark": "x"}).status_code == 404


@pytest.mark.parametrize("value", ["tomorrow", "2026-13-01T00:00"])
def test_a_moment_that_is_none_is_refused_in_words(ward, client, address, value):
    typed = filled(ward) | {"measured_at": value, "then": "sign"}
    answer = client.post(f"{address}/draft/", typed)
    assert answer.status_code == 422
    assert "#id_measured_at" in answer.content.decode()


def test_a_late_entry_is_read_by_the_sites_clock(ward, client, address):
    local = (now() - dt.timedelta(hours=3)).astimezone(builders.LONDON)
    client.post(f"{address}/draft/", filled(ward) | {"measured_at": local.strftime("%Y-%m-%dT%H:%M")})
    page = client.get(f"{address}/sign/").content.decode()
    assert local.strftime("%H:%M") in page
    assert "entered late" in page
    assert not Submission.objects.exists()


def test_a_form_sent_after_the_web_session_ended_is_carried_through_the_sign_in(ward, address):
    browser = builders.Client()
    typed = {"remark": "Gel & <lens>", "typed_by": str(ward.technician.uid), "revision": "0"}
    answer = browser.post(f"{address}/draft/", typed)
    assert answer.status_code == 401
    assert 'name="carried.remark" value="Gel &amp; &lt;lens&gt;"' in answer.content.decode()
    form = {f"carried.{name}": value for name, value in typed.items()} | {"carried_check": ward.check.uid}
    form |= {"username": "castellane", "password": builders.PASSWORD, "next": f"{address}/enter/"}
    page = browser.post("/sign-in/", form, follow=True).content.decode()
    assert "Gel &amp; &lt;lens&gt;</textarea>" in page


def test_what_is_carried_becomes_nobody_elses_draft(ward, address):
    form = {"carried.remark": "x", "carried.typed_by": str(ward.technician.uid)}
    form |= {"carried_check": ward.check.uid, "username": "oduya", "password": builders.PASSWORD}
    assert builders.Client().post("/sign-in/", form).status_code == 302
    assert not Draft.objects.exists()


def test_a_wrong_password_keeps_what_is_carried(ward):
    form = {
        "carried.remark": "still here",
        "carried_check": ward.check.uid,
        "username": "oduya",
        "password": "no",
    }
    page = builders.Client().post("/sign-in/", form).content.decode()
    assert 'name="carried.remark" value="still here"' in page


def test_what_was_sent_back_is_filled_in_with_what_is_to_be_done(ward, client, address):
    done = builders.submitted(ward.check, ward.technician, reverberation_depth="42,5")
    builders.checks.send_back(
        check=ward.check.uid,
        shown_sha256=done.shown_sha256,
        remark="Zone 3 again, please",
        password=builders.PASSWORD,
        actor=ward.physicist,
        at=now(),
    )
    page = client.get(f"{address}/enter/").content.decode()
    assert "Zone 3 again, please" in page
    assert 'value="42,5"' in page
