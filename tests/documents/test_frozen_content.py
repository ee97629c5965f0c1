"""Frozen content: the same bytes every time, read back whole, and refused when anything is off."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest
from dossier_content import CHECKS, dossier

from qa_tracker.core.errors import Invalid
from qa_tracker.documents.content import DeviceDossier
from qa_tracker.documents.frozen import content_bytes, from_bytes
from qa_tracker.documents.labels import ENGLISH


def test_content_when_written_and_read_is_the_same():
    content = dossier()
    assert from_bytes(content_bytes(content)) == content


def test_bytes_when_labels_come_in_another_order_are_the_same():
    turned = dict(reversed(ENGLISH.items()))
    assert content_bytes(dossier(labels=turned)) == content_bytes(dossier())


def test_bytes_when_one_reading_differs_differ():
    changed = replace(CHECKS[0], readings=(replace(CHECKS[0].readings[0], value="151.60"),))
    assert content_bytes(dossier(checks=(changed,))) != content_bytes(dossier(checks=CHECKS[:1]))


def test_bytes_hold_names_as_written_and_no_floats():
    plain = json.loads(content_bytes(dossier()), parse_float=pytest.fail)
    assert plain["people"][3]["name"] == "נועה ברק"


def spoilt(change) -> bytes:
    plain = json.loads(content_bytes(dossier()))
    change(plain)
    return json.dumps(plain).encode()


def line_of(plain):
    return plain["checks"][0]["readings"][0]["line"]


REFUSED = [
    ("another schema", lambda p: p.update(schema="leadline/device-dossier/9"), "dossier.schema_unknown"),
    ("an unknown field", lambda p: p.update(colour="red"), "dossier.content_unreadable"),
    ("an unknown field inside", lambda p: p["ledger"].update(x="1"), "dossier.content_unreadable"),
    ("a missing field", lambda p: p.pop("title"), "dossier.content_unreadable"),
    ("a number for text", lambda p: p.update(title=4), "dossier.content_unreadable"),
    ("a missing label", lambda p: p["labels"].pop("checks"), "dossier.label_missing"),
    ("a day that is none", lambda p: p["checks"][0].update(due_on="soon"), "dossier.day_unreadable"),
    ("an amount that is none", lambda p: line_of(p).update(value="wide"), "dossier.amount_unreadable"),
    ("an amount without end", lambda p: line_of(p).update(value="NaN"), "dossier.amount_unreadable"),
    (
        "a verdict without a mark",
        lambda p: p["checks"][0].update(verdict="passed"),
        "dossier.verdict_unknown",
    ),
]


@pytest.mark.parametrize(("change", "code"), [row[1:] for row in REFUSED], ids=[row[0] for row in REFUSED])
def test_from_bytes_when_the_content_is_off_refuses_it(change, code):
    with pytest.raises(Invalid) as refusal:
        from_bytes(spoilt(change))
    assert refusal.value.code == code


@pytest.mark.parametrize("data", [b"", b"{", b"[]", b"\xff\xfe", b"null"])
def test_from_bytes_when_it_is_no_content_refuses_it(data):
    with pytest.raises(Invalid) as refusal:
        from_bytes(data)
    assert refusal.value.code == "dossier.content_unreadable"


def test_content_when_made_with_labels_missing_is_never_written():
    with pytest.raises(Invalid):
        content_bytes(dossier(labels={}))


def test_dossier_when_it_has_no_records_still_reads_back():
    empty = DeviceDossier(**{**vars(dossier()), "checks": (), "faults": (), "plans": ()})
    assert from_bytes(content_bytes(empty)) == empty
