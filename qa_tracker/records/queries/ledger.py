"""The ledger as leaves and checkpoints, for reading and verifying."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from django.db.models import Exists, OuterRef, Q

from qa_tracker.records.models import Device, Person, Site
from qa_tracker.records.models.base import Audited
from qa_tracker.records.models.ledger import Checkpoint, Leaf
from qa_tracker.records.queries.scope import Scope


@dataclass(frozen=True)
class LeafRow:
    """One leaf: its place, its bytes and their hash."""

    seq: int
    uid: uuid.UUID
    kind: str
    at: dt.datetime
    actor_uid: uuid.UUID | None
    device_uid: uuid.UUID | None
    content: str
    leaf_hash: bytes
    actor: str = ""
    device: str = ""
    subject_type: str = ""
    subject_uid: uuid.UUID | None = None
    site_uid: uuid.UUID | None = None

    @property
    def said(self) -> dict[str, Any]:
        """The leaf's content, read."""
        read: dict[str, Any] = json.loads(self.content)
        return read


@dataclass(frozen=True)
class CheckpointRow:
    """A signed statement of size and root."""

    size: int
    root: bytes
    at: dt.datetime
    note: str


def _row(leaf: Leaf, people: dict[Any, str], devices: dict[Any, str]) -> LeafRow:
    return LeafRow(
        leaf.seq, leaf.uid, leaf.kind, leaf.at, leaf.actor_uid, leaf.device_uid, leaf.content,
        bytes(leaf.leaf_hash), people.get(leaf.actor_uid, ""), devices.get(leaf.device_uid, ""),
        leaf.subject_type, leaf.subject_uid, leaf.site_uid,
    )  # fmt: skip


def list_leaves(
    scope: Scope, *, before: int | None = None, most: int = 50, device_uid: uuid.UUID | None = None
) -> list[LeafRow]:
    """Leaves in sight, newest first: of a site in sight, and those of the whole group."""
    found = Leaf.objects.order_by("-seq")
    if not scope.whole_group:
        uids = Site.objects.filter(id__in=scope.site_ids()).values("uid")
        held = Device.objects.filter(site_id__in=scope.site_ids()).values("uid")
        found = found.filter(
            Q(site_uid__in=uids) | Q(device_uid__in=held) | Q(site_uid=None, device_uid=None)
        )
    if before is not None:
        found = found.filter(seq__lt=before)
    if device_uid is not None:
        found = found.filter(device_uid=device_uid)
    leaves = list(found[:most])
    people = dict(Person.objects.filter(uid__in={x.actor_uid for x in leaves}).values_list("uid", "name"))
    labels = {
        uid: f"{maker} {model} {serial}"
        for uid, maker, model, serial in Device.objects.filter(
            uid__in={x.device_uid for x in leaves}
        ).values_list("uid", "maker", "model", "serial")
    }
    return [_row(leaf, people, labels) for leaf in leaves]


def leaves_about(subject_uid: uuid.UUID, kind: str) -> list[LeafRow]:
    """The leaves of one kind about one thing, oldest first."""
    leaves = list(Leaf.objects.filter(subject_uid=subject_uid, kind=kind).order_by("seq"))
    people = dict(Person.objects.filter(uid__in={x.actor_uid for x in leaves}).values_list("uid", "name"))
    return [_row(leaf, people, {}) for leaf in leaves]


def every_leaf(first: int = 0) -> Iterator[LeafRow]:
    """Every leaf in order, streamed."""
    for leaf in Leaf.objects.filter(seq__gte=first).order_by("seq").iterator(chunk_size=2000):
        yield _row(leaf, {}, {})


def leaf_hashes(size: int) -> list[bytes]:
    """Hashes of the first leaves, in order."""
    found = Leaf.objects.filter(seq__lt=size).order_by("seq").values_list("leaf_hash", flat=True)
    return [bytes(each) for each in found.iterator(chunk_size=10000)]


def rows_without_leaf(model: type[Audited]) -> list[int]:
    """Keys of the rows of a table that name a leaf which is not there."""
    own = Leaf.objects.filter(uid=OuterRef("leaf_id"))
    return list(model._base_manager.filter(~Exists(own)).order_by("pk").values_list("pk", flat=True))


def leaf_range_of(device_uid: uuid.UUID) -> tuple[int | None, int | None]:
    """First and last leaf about a device."""
    found = Leaf.objects.filter(device_uid=device_uid).order_by("seq").values_list("seq", flat=True)
    return found.first(), found.last()


def list_checkpoints(most: int | None = None) -> list[CheckpointRow]:
    """Checkpoints, newest first."""
    found = Checkpoint.objects.order_by("-size")[:most]
    return [CheckpointRow(each.size, bytes(each.root), each.at, each.note) for each in found]


def holds_demonstration() -> bool:
    """Whether the ledger began with invented data: only its first hundred leaves are looked at."""
    return Leaf.objects.filter(seq__lt=100, content__contains='"origin":"demo"').exists()
