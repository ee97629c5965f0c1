"""Dossiers on the pages: asked for, watched by ETag, handed out as an attachment, verified item by item."""

from __future__ import annotations

import io

import pytest
from django.urls import reverse

from qa_tracker.records.models import Dossier
from qa_tracker.services import dossiers
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def physicist(ward):
    return builders.signed_in(ward.physicist)


@pytest.fixture
def frozen(ward, physicist):
    physicist.post(reverse("dossier-ask", args=[ward.probe.uid]))
    return Dossier.objects.get()


@pytest.fixture
def issued(frozen):
    assert dossiers.render(dossier_id=frozen.id, at=builders.now())
    frozen.refresh_from_db()
    return frozen


def verified(client, data):
    file = io.BytesIO(data)
    file.name = "d.pdf"
    return client.post(reverse("dossier-verify"), {"file": file})


def test_dossier_when_asked_for_is_frozen_and_its_page_waits(physicist, frozen):
    page = physicist.get(reverse("dossier", args=[frozen.uid]))
    assert frozen.state == "frozen"
    assert "waiting.js" in page.content.decode()


def test_dossier_page_while_nothing_changed_answers_with_nothing(physicist, frozen):
    address = reverse("dossier", args=[frozen.uid])
    tag = physicist.get(address).headers["ETag"]
    assert physicist.get(address, headers={"If-None-Match": tag}).status_code == 304
    dossiers.render(dossier_id=frozen.id, at=builders.now())
    after = physicist.get(address, headers={"If-None-Match": tag})
    assert (after.status_code, "Download the sealed file" in after.content.decode()) == (200, True)


def test_dossier_file_is_an_attachment_no_browser_guesses_at(physicist, issued):
    answer = physicist.get(reverse("dossier-file", args=[issued.uid]))
    assert answer.headers["Content-Disposition"].startswith("attachment")
    assert answer.headers["X-Content-Type-Options"] == "nosniff"
    assert answer.content.startswith(b"%PDF-")


def test_dossier_file_before_it_is_issued_is_refused(physicist, frozen):
    assert physicist.get(reverse("dossier-file", args=[frozen.uid])).status_code == 409


def test_dossier_file_for_a_user_is_forbidden(ward, issued):
    assert builders.signed_in(ward.user).get(reverse("dossier-file", args=[issued.uid])).status_code == 403


def test_dossier_by_a_technician_is_not_made(ward):
    client = builders.signed_in(ward.technician)
    assert client.post(reverse("dossier-ask", args=[ward.probe.uid])).status_code == 403
    assert not Dossier.objects.exists()


def test_dossier_when_verified_whole_is_proven(physicist, issued):
    data = physicist.get(reverse("dossier-file", args=[issued.uid])).content
    page = verified(physicist, data).content.decode()
    assert "The file is a dossier as it was issued." in page
    assert issued.file_sha256 in page


def test_dossier_with_a_changed_byte_is_not_proven(physicist, issued):
    data = bytearray(physicist.get(reverse("dossier-file", args=[issued.uid])).content)
    data[len(data) // 3] ^= 1
    page = verified(physicist, bytes(data)).content.decode()
    assert "The file is not proven." in page
    assert "hash is not in this ledger" in page


def test_file_that_is_no_dossier_is_not_proven(physicist, ward):
    page = verified(physicist, b"not a pdf").content.decode()
    assert "The file is not proven." in page


def test_verifying_without_a_file_is_refused(physicist, ward):
    answer = physicist.post(reverse("dossier-verify"))
    assert (answer.status_code, "There is no file" in answer.content.decode()) == (422, True)
