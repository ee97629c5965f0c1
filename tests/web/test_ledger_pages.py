"""The ledger on the pages: sentences, exact bytes and their hash, and leaves of one device."""

from __future__ import annotations

import hashlib
import html
import re
import uuid

import pytest
from django.urls import reverse

from qa_tracker.records.models.ledger import Leaf
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def auditor(ward):
    return builders.signed_in(builders.person(ward.admin, "laszlo", "auditor", None, "Laszlo Fairweather"))


def test_leaf_when_opened_shows_bytes_that_give_its_hash(auditor):
    page = auditor.get(reverse("leaf", args=[12])).content.decode()
    content = html.unescape(re.search(r'<pre class="bytes">(.*?)</pre>', page, re.DOTALL)[1])
    assert hashlib.sha256(b"\x00" + content.encode()).hexdigest() in page
    assert content == Leaf.objects.get(seq=12).content


def test_ledger_of_a_device_shows_its_leaves_only(ward, auditor):
    page = auditor.get(reverse("ledger") + f"?device={ward.probe.uid}").content.decode()
    shown = {int(seq) for seq in re.findall(r'href="/ledger/(\d+)/"', page)}
    assert shown == set(Leaf.objects.filter(device_uid=ward.probe.uid).values_list("seq", flat=True))


@pytest.mark.parametrize("device", [str(uuid.uuid4()), "C5-2207"], ids=["unknown", "no uid"])
def test_ledger_of_a_device_out_of_sight_is_not_there(auditor, device):
    assert auditor.get(reverse("ledger") + f"?device={device}").status_code == 404


def test_ledger_of_many_leaves_goes_on_by_key(auditor, monkeypatch):
    monkeypatch.setattr("qa_tracker.web.views.ledger.PAGE", 5)
    page = auditor.get(reverse("ledger")).content.decode()
    shown = [int(seq) for seq in re.findall(r'href="/ledger/(\d+)/"', page)]
    before = int(re.search(r"before=(\d+)", page)[1])
    assert len(shown) == 5
    assert shown[-1] == before
    following = auditor.get(reverse("ledger") + f"?before={before}").content.decode()
    assert f'href="/ledger/{before - 1}/"' in following


@pytest.mark.parametrize("seq", [999999, 10**30], ids=["beyond the last", "far beyond"])
def test_leaf_that_is_not_there_is_not_found(auditor, seq):
    assert auditor.get(reverse("leaf", args=[seq])).status_code == 404
