"""The one door to the ledger: a command's rows and its leaf, in one transaction.

Leaf schema 1 (frozen: leaves are never migrated). Every key is always present::

    schema seq uid kind subject{type uid version} device site actor{uid name} at measured_at as_if
    origin reason old new files rows{"table/form": {n sha256}}

``actor.name`` is a commitment, HMAC-SHA-256 of the name under the person's salt: whoever holds both can
confirm the name, and erasing the salt forgets it. ``seq`` counts from 0 without gaps. Hashing is RFC 9162.
"""

from __future__ import annotations

import datetime as dt
import hmac
import uuid
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import TypeVar

from django.db import connection, transaction

from qa_tracker.core.canonical import canonical
from qa_tracker.core.merkle import Frontier, leaf_hash
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models.base import Audited, Fact, Noun
from qa_tracker.records.models.ledger import Checkpoint, Leaf, LedgerHead
from qa_tracker.records.models.people import Person
from qa_tracker.records.models.versions import Version
from qa_tracker.records.rows import columns_of, digest_of, moment_text, newest_form
from qa_tracker.records.writers import BatchWriter, HistoryWriter, LiveWriter, Writer, insert_rows, new_row

Row = TypeVar("Row", bound=Audited)
SCHEMA = 1


def name_commitment(person: Person) -> str:
    """What stands for a person's name in a leaf."""
    return hmac.new(person.name_salt.encode(), person.name.encode(), "sha256").hexdigest()


@dataclass
class Act:
    """One command under way: the rows it writes and what its leaf will say."""

    kind: str
    actor: Person | None
    at: dt.datetime
    writer: Writer
    reason: str = ""
    origin: str = "live"
    measured_at: dt.datetime | None = None
    as_if: dt.datetime | None = None
    uid: uuid.UUID = field(default_factory=uuid7)
    facts: list[Fact] = field(default_factory=list)
    subject: Noun | None = None
    subject_version: int = 0
    device_uid: uuid.UUID | None = None
    site_uid: uuid.UUID | None = None
    old: Mapping[str, object] = field(default_factory=dict)
    new: Mapping[str, object] = field(default_factory=dict)
    files: Sequence[str] = ()

    def insert(self, row: Row) -> Row:
        """Write a new fact, or a noun's first version."""
        row.leaf_id = self.uid
        self.writer.insert(row)
        if isinstance(row, Fact):
            self.facts.append(row)
        elif isinstance(row, Noun):
            self._remember(row)
        return row

    def change(self, noun: Noun, **columns: object) -> None:
        """Change a noun's columns and keep the version it had.

        Raises
        ------
        Conflict
            ``record.changed_meanwhile`` when someone else changed it first.
        """
        noun.leaf_id = self.uid
        self.writer.update(noun, columns)
        self._remember(noun)

    def about(self, subject: Noun | None, *, device: Noun | None = None, site: Noun | None = None) -> None:
        """Say what the command was about, and which device and site it belongs to."""
        self.subject = subject
        self.subject_version = subject.version if subject else 0
        self.device_uid = device.uid if device else None
        self.site_uid = site.uid if site else None

    def tell(
        self,
        new: Mapping[str, object],
        old: Mapping[str, object] | None = None,
        files: Sequence[str] = (),
    ) -> None:
        """Say in the leaf what changed, values as text exactly as entered."""
        self.new, self.old, self.files = new, old or {}, files

    def _remember(self, noun: Noun) -> None:
        if noun is self.subject:
            # Kept now: in a history the noun goes on changing before this leaf is written.
            self.subject_version = noun.version
        version = new_row(
            Version,
            noun=noun._meta.model_name,
            subject_id=noun.pk,
            number=noun.version,
            recorded_at=self.at,
            columns=canonical(columns_of(noun)).decode(),
        )
        self.insert(version)


@contextmanager
def command(
    kind: str,
    *,
    actor: Person | None,
    at: dt.datetime,
    reason: str = "",
    measured_at: dt.datetime | None = None,
    as_if: dt.datetime | None = None,
    origin: str = "live",
) -> Iterator[Act]:
    """One command: one transaction, its rows, and one leaf, inserted last under the head's lock."""
    with transaction.atomic():
        act = Act(kind, actor, at, LiveWriter(), reason, origin, measured_at, as_if)
        yield act
        append([act])


@contextmanager
def sweeping(kind: str, *, at: dt.datetime, as_if: dt.datetime | None) -> Iterator[Act]:
    """A command of the program itself that first takes the ledger's lock, so that two never do the same work.

    Its rows are gathered and written together at the end. No leaf is written where there are none.
    """
    with transaction.atomic():
        _locked_head()
        writer = BatchWriter()
        act = Act(kind, None, at, writer, as_if=as_if)
        yield act
        writer.flush()
        if act.facts:
            append([act])


class History:
    """Many commands of the past in one transaction; made by :func:`history`."""

    def __init__(self, origin: str) -> None:
        self.origin = origin
        self.writer = HistoryWriter()
        self.acts: list[Act] = []

    def act(
        self,
        kind: str,
        *,
        actor: Person | None,
        at: dt.datetime,
        reason: str = "",
        measured_at: dt.datetime | None = None,
    ) -> Act:
        """Begin the next command of the past; its leaf is appended with the others, in order of moments."""
        act = Act(kind, actor, at, self.writer, reason, self.origin, measured_at)
        self.acts.append(act)
        return act


@contextmanager
def history(origin: str) -> Iterator[History]:
    """The bulk door: rows and leaves of many commands, marked ``demo`` or ``imported``."""
    with transaction.atomic():
        _locked_head()
        batch = History(origin)
        yield batch
        batch.writer.flush()
        append(sorted(batch.acts, key=lambda act: act.at))


def append(acts: Sequence[Act]) -> None:
    """Append one leaf for each act and move the head."""
    head = _locked_head()
    leaves = [
        _leaf(act, seq, canonical(leaf_content(act, seq))) for seq, act in enumerate(acts, start=head.size)
    ]
    insert_rows(Leaf, leaves)
    frontier = Frontier.from_bytes(bytes(head.frontier)).extend(leaf.leaf_hash for leaf in leaves)
    LedgerHead.objects.filter(pk=1).update(size=head.size + len(leaves), frontier=frontier.to_bytes())


def leaf_content(act: Act, seq: int) -> dict[str, object]:
    """The object whose RFC 8785 bytes are hashed."""
    subject = act.subject
    return {
        "schema": SCHEMA,
        "seq": seq,
        "uid": str(act.uid),
        "kind": act.kind,
        "subject": None
        if subject is None
        else {"type": subject._meta.model_name, "uid": str(subject.uid), "version": act.subject_version},
        "device": None if act.device_uid is None else str(act.device_uid),
        "site": None if act.site_uid is None else str(act.site_uid),
        "actor": None
        if act.actor is None
        else {"uid": str(act.actor.uid), "name": name_commitment(act.actor)},
        "at": moment_text(act.at),
        "measured_at": None if act.measured_at is None else moment_text(act.measured_at),
        "as_if": None if act.as_if is None else moment_text(act.as_if),
        "origin": act.origin,
        "reason": act.reason,
        "old": act.old,
        "new": act.new,
        "files": list(act.files),
        "rows": row_digests(act.facts),
    }


def row_digests(facts: Sequence[Fact]) -> dict[str, object]:
    """Digest of the facts a command wrote, by table and form."""
    tables: dict[type[Fact], list[Fact]] = {}
    for fact in facts:
        tables.setdefault(type(fact), []).append(fact)
    return {
        f"{model._meta.model_name}/{newest_form(model)}": digest_of(rows, newest_form(model))
        for model, rows in tables.items()
    }


def _leaf(act: Act, seq: int, content: bytes) -> Leaf:
    return Leaf(
        seq=seq,
        uid=act.uid,
        kind=act.kind,
        subject_type="" if act.subject is None else str(act.subject._meta.model_name),
        subject_uid=None if act.subject is None else act.subject.uid,
        device_uid=act.device_uid,
        site_uid=act.site_uid,
        actor_uid=None if act.actor is None else act.actor.uid,
        at=act.at,
        content=content.decode(),
        leaf_hash=leaf_hash(content),
    )


def _locked_head() -> LedgerHead:
    """The head, locked until the transaction ends. On SQLite the IMMEDIATE transaction is the lock."""
    heads = LedgerHead.objects.filter(pk=1)
    if connection.features.has_select_for_update:
        heads = heads.select_for_update()
    return heads.get()


def state() -> tuple[int, bytes]:
    """Size and root of the ledger now."""
    head = LedgerHead.objects.get(pk=1)
    return head.size, Frontier.from_bytes(bytes(head.frontier)).root()


def keep_checkpoint(*, size: int, root: bytes, at: dt.datetime, note: str) -> None:
    """Keep a signed checkpoint; a second one of the same size is left out."""
    Checkpoint.objects.get_or_create(size=size, defaults={"root": root, "at": at, "note": note})


def moment_of(leaf_uid: uuid.UUID) -> dt.datetime | None:
    """When a leaf was written, by the program's clock."""
    return Leaf.objects.filter(uid=leaf_uid).values_list("at", flat=True).first()
