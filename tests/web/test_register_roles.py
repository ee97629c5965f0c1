"""Every page of the register's half: open to the role it is for, closed to another, and another site's is not there."""

from __future__ import annotations

import re
import uuid

import pytest
from django.urls import reverse

from qa_tracker.services import dossiers, faults, states
from tests import builders

pytestmark = pytest.mark.django_db

PLAIN = {
    "register": ("technician", None),
    "scanner-new": ("physicist", "technician"),
    "probe-new": ("physicist", "technician"),
    "test-objects": ("technician", None),
    "test-object-new": ("physicist", "technician"),
    "instruments": ("technician", None),
    "instrument-new": ("physicist", "technician"),
    "faults": ("user", None),
    "dossiers": ("technician", "user"),
    "dossier-verify": ("technician", "user"),
    "ledger": ("technician", "user"),
    "criteria": ("user", None),
    "procedures": ("user", None),
    "people": ("admin", "physicist"),
    "person-new": ("admin", "physicist"),
    "sites": ("admin", "physicist"),
    "site-new": ("admin", "physicist"),
    "pool-new": ("admin", "physicist"),
    "mailbox": ("admin", "physicist"),
    "password": ("user", None),
    "tokens": ("technician", "user"),
}
OF_A_DEVICE = {
    "device": ("user", None),
    "device-edit": ("physicist", "technician"),
    "device-software": ("physicist", "technician"),
    "device-move": ("technician", "user"),
    "device-accept": ("physicist", "technician"),
    "device-quarantine": ("user", "admin"),
    "device-restore": ("physicist", "technician"),
    "condition-set": ("physicist", "technician"),
    "plan-make": ("physicist", "technician"),
    "baseline-set": ("physicist", "technician"),
    "baseline-from-check": ("physicist", "technician"),
    "fault-open": ("user", "admin"),
}
MOVES = {"send_to_repair": ("physicist", "technician"), "lend_out": ("technician", "user")}


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def stranger(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    return builders.person(ward.admin, "hywel", "lead", other)


def status(ward, role, address):
    return builders.signed_in(getattr(ward, role)).get(address).status_code


@pytest.mark.parametrize(("name", "allowed", "barred"), [(k, *v) for k, v in PLAIN.items()], ids=list(PLAIN))
def test_page_when_opened_goes_by_the_role(ward, name, allowed, barred):
    assert status(ward, allowed, reverse(name)) == 200
    assert barred is None or status(ward, barred, reverse(name)) == 403


@pytest.mark.parametrize(
    ("name", "allowed", "barred"), [(k, *v) for k, v in OF_A_DEVICE.items()], ids=list(OF_A_DEVICE)
)
def test_page_of_a_device_when_opened_goes_by_the_role(ward, name, allowed, barred):
    address = reverse(name, args=[ward.scanner.uid])
    assert status(ward, allowed, address) == 200
    assert barred is None or status(ward, barred, address) == 403


@pytest.mark.parametrize(("verb", "allowed", "barred"), [(k, *v) for k, v in MOVES.items()], ids=list(MOVES))
def test_move_of_a_device_when_opened_goes_by_the_role(ward, verb, allowed, barred):
    address = reverse("device-state", args=[ward.probe.uid, verb])
    assert status(ward, allowed, address) == 200
    assert status(ward, barred, address) == 403


def test_move_when_there_is_no_such_verb_is_not_there(ward):
    assert status(ward, "physicist", reverse("device-state", args=[ward.probe.uid, "sell"])) == 404


@pytest.mark.parametrize("name", [*OF_A_DEVICE, "dossier-ask"])
def test_page_of_another_sites_device_is_as_one_that_is_not_there(ward, stranger, name):
    client = builders.signed_in(stranger)
    send = client.post if name == "dossier-ask" else client.get
    found, random = (send(reverse(name, args=[uid])) for uid in (ward.probe.uid, uuid.uuid4()))
    assert (found.status_code, random.status_code) == (404, 404)
    assert without_token(found) == without_token(random)


def without_token(answer):
    return re.sub(r'name="csrfmiddlewaretoken" value="\w+"', "", answer.content.decode())


def made(ward):
    """A fault, a dossier, and their addresses."""
    fault = faults.open_fault(
        device=ward.probe.uid, grade="remedial", seen="worn", place="", actor=ward.user, at=builders.now()
    )
    dossier = dossiers.request(device=ward.probe.uid, actor=ward.physicist, at=builders.now())
    return {
        "fault": reverse("fault", args=[fault.uid]),
        "dossier": reverse("dossier", args=[dossier.uid]),
        "dossier-file": reverse("dossier-file", args=[dossier.uid]),
        "site": reverse("site", args=[ward.site.uid]),
        "person": reverse("person", args=[ward.technician.uid]),
    }


@pytest.mark.parametrize("name", ["fault", "dossier", "dossier-file"])
def test_what_belongs_to_another_site_is_not_there(ward, stranger, name):
    addresses = made(ward)
    client = builders.signed_in(stranger)
    random = client.get(reverse(name, args=[uuid.uuid4()]))
    found = client.get(addresses[name])
    assert (found.status_code, random.status_code) == (404, 404)
    assert without_token(found) == without_token(random)


@pytest.mark.parametrize("name", ["site", "person"])
def test_site_administrator_when_asking_beyond_the_site_finds_nothing(ward, name):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    local = builders.person(ward.admin, "sunniva", "administrator", other)
    client = builders.signed_in(local)
    assert client.get(made(ward)[name]).status_code == 404
    assert client.get(reverse("site", args=[other.uid])).status_code == 200


def test_leaf_of_another_site_is_as_one_that_is_not_there(ward, stranger):
    states.quarantine(device=ward.probe.uid, seen="cracked", actor=ward.user, at=builders.now())
    client = builders.signed_in(ward.technician)
    seq = int(re.search(r'href="/ledger/(\d+)/"', client.get("/ledger/").content.decode())[1])
    assert client.get(reverse("leaf", args=[seq])).status_code == 200
    assert builders.signed_in(stranger).get(reverse("leaf", args=[seq])).status_code == 404


@pytest.mark.parametrize("name", ["criteria-set", "edition"])
def test_published_things_when_opened_are_for_everyone(ward, name):
    listed = builders.signed_in(ward.user).get(reverse("procedures" if name == "edition" else "criteria"))
    base = "/criteria/procedures/" if name == "edition" else "/criteria/"
    uid = re.search(rf'href="{base}([0-9a-f-]{{36}})/"', listed.content.decode())[1]
    assert status(ward, "user", reverse(name, args=[uid])) == 200
    assert status(ward, "physicist", reverse(name, args=[uid])) == 200


def test_pages_when_not_signed_in_lead_to_signing_in(client, ward):
    for address in (reverse("register"), reverse("device", args=[ward.probe.uid]), reverse("ledger")):
        assert client.get(address).headers["Location"].startswith("/sign-in/")


def test_welcome_when_somebody_exists_is_not_there(client, ward):
    assert client.get("/welcome/").status_code == 404
