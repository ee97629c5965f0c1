"""What a command leaves behind: gapless leaves, their exact bytes, and the root over all of them."""

from __future__ import annotations

import datetime as dt
import hashlib
import hmac
import json
import uuid

import pytest
from django.apps import apps
from row_maker import AT, Maker, make

from qa_tracker.core import merkle
from qa_tracker.core.canonical import canonical
from qa_tracker.records import guards, ledger
from qa_tracker.records.models import Holiday, Person, Site, Submission
from qa_tracker.records.models.base import Fact
from qa_tracker.records.rows import digest_of, newest_form

Leaf = apps.get_model("leadline", "Leaf")
KEYS_OF_A_LEAF = {
    "schema", "seq", "uid", "kind", "subject", "device", "site", "actor", "at", "measured_at", "as_if",
    "origin", "reason", "old", "new", "files", "rows",
}  # fmt: skip


def content_of(leaf):
    return json.loads(leaf.content)


def test_leaves_are_numbered_without_gaps_when_commands_follow_each_other(db):
    for _ in range(5):
        make(Site)
    assert list(Leaf.objects.order_by("seq").values_list("seq", flat=True)) == [0, 1, 2, 3, 4]


@pytest.mark.parametrize("size", [0, 1, 2, 3, 7])
def test_root_is_the_merkle_root_over_all_leaf_hashes(db, size):
    for _ in range(size):
        make(Site)
    hashes = [bytes(leaf.leaf_hash) for leaf in Leaf.objects.order_by("seq")]
    assert ledger.state() == (size, merkle.root(hashes))


def test_leaf_hash_is_over_its_content_and_content_is_its_own_canonical_form(db):
    make(Submission)
    leaf = Leaf.objects.get()
    written = leaf.content.encode()
    assert bytes(leaf.leaf_hash) == hashlib.sha256(b"\x00" + written).digest()
    assert canonical(json.loads(written)) == written


def test_leaf_has_every_key_even_when_the_command_says_little(db):
    with ledger.command("nothing.said", actor=None, at=AT):
        pass
    content = content_of(Leaf.objects.get())
    assert set(content) == KEYS_OF_A_LEAF
    assert [key for key, value in content.items() if value is None] == [
        "actor", "as_if", "device", "measured_at", "site", "subject",
    ]  # fmt: skip


def test_leaf_says_what_the_command_said(db):
    site, person = make(Site), make(Person)
    moment = dt.datetime(2026, 3, 1, 10, 0, 0, 5, tzinfo=dt.timezone(dt.timedelta(hours=1)))
    with ledger.command("site.renamed", actor=person, at=moment, reason="merged", measured_at=AT) as act:
        act.about(site, device=None, site=site)
        act.tell({"name": "b"}, {"name": "a"}, ["0" * 64])
        act.change(site, name="b")
    leaf = Leaf.objects.get(kind="site.renamed")
    content = content_of(leaf)
    assert content["subject"] == {"type": "site", "uid": str(site.uid), "version": 2}
    assert (content["at"], content["measured_at"]) == (
        "2026-03-01T09:00:00.000005Z",
        "2026-03-02T09:30:00.000000Z",
    )
    assert (content["old"], content["new"], content["files"]) == ({"name": "a"}, {"name": "b"}, ["0" * 64])
    assert (content["site"], content["reason"], content["seq"]) == (str(site.uid), "merged", leaf.seq)
    assert (leaf.actor_uid, leaf.subject_uid, leaf.uid) == (person.uid, site.uid, uuid.UUID(content["uid"]))


def test_name_in_a_leaf_is_a_commitment_that_needs_the_salt(db):
    person = make(Person)
    with ledger.command("hello", actor=person, at=AT):
        pass
    actor = content_of(Leaf.objects.get(kind="hello"))["actor"]
    expected = hmac.new(person.name_salt.encode(), person.name.encode(), "sha256").hexdigest()
    assert actor == {"uid": str(person.uid), "name": expected}
    assert person.name not in Leaf.objects.get(kind="hello").content


def test_row_digests_are_those_of_the_rows_now_in_the_tables(db):
    with ledger.command("rows.made", actor=None, at=AT) as act:
        for model in guards.audited_models():
            Maker(act).row(model)
    told = content_of(Leaf.objects.get())["rows"]
    facts = {model._meta.model_name: model for model in guards.audited_models() if issubclass(model, Fact)}
    assert {name.partition("/")[0] for name in told} == set(facts)
    for name, digest in told.items():
        table, _, form = name.partition("/")
        assert digest == digest_of(facts[table].objects.filter(leaf_id=act.uid), int(form)), name


def test_row_digests_tell_when_a_cell_was_altered(db):
    make(Holiday)
    form = newest_form(Holiday)
    told = content_of(Leaf.objects.get())["rows"][f"holiday/{form}"]
    row = Holiday.objects.get()
    row.name += " "
    assert digest_of([row], form) != told
