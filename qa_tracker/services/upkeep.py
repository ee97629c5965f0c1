"""Verifying what is stored: the ledger against the rows it covers, and against its checkpoints."""

from __future__ import annotations

import json
import uuid
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from django.apps import apps
from django.db.models import Exists, OuterRef, Q, Subquery

from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import DomainError
from qa_tracker.core.merkle import Frontier, leaf_hash
from qa_tracker.records import ledger
from qa_tracker.records.models import Version
from qa_tracker.records.models.base import Audited, Fact, Noun
from qa_tracker.records.queries.ledger import LeafRow, every_leaf, list_checkpoints, rows_without_leaf
from qa_tracker.records.rows import columns_of, digest_of, moment_text
from qa_tracker.seals.notes import open_checkpoint
from qa_tracker.services import checkpoints
from qa_tracker.services.keys import ledger_key

BATCH = 400


@dataclass(frozen=True)
class Problem:
    """Something that is not as it was written: the leaf's place, and the row or part."""

    seq: int | None
    what: str
    where: str


@dataclass(frozen=True)
class LedgerFinding:
    """The answer of a full verification."""

    size: int
    root: str
    checkpoints: int
    problems: tuple[Problem, ...]


def verify_ledger() -> LedgerFinding:
    """Rehash every leaf, compare every row with its leaf, and check every checkpoint. Reads only."""
    size, root = ledger.state()
    problems = [*_verify_leaves(), *_verify_orphans(), *_verify_nouns(), *_verify_checkpoints(size)]
    return LedgerFinding(size, root.hex(), len(list_checkpoints()), tuple(problems))


def _batches(leaves: Iterator[LeafRow]) -> Iterator[list[LeafRow]]:
    batch: list[LeafRow] = []
    for leaf in leaves:
        batch.append(leaf)
        if len(batch) == BATCH:
            yield batch
            batch = []
    yield batch


def _verify_leaves() -> Iterator[Problem]:
    frontier, wanted = Frontier(0, ()), 0
    roots = {row.size: row.root for row in list_checkpoints()}
    for batch in _batches(every_leaf()):
        for leaf in batch:
            if leaf.seq != wanted:
                yield Problem(wanted, "leaf_missing", "")
                wanted = leaf.seq
            wanted += 1
            yield from _verify_bytes(leaf)
            frontier = frontier.extend([leaf_hash(leaf.content.encode())])
            if frontier.size in roots and roots[frontier.size] != frontier.root():
                yield Problem(leaf.seq, "checkpoint_differs", str(frontier.size))
        yield from _verify_rows(batch)
    size, root = ledger.state()
    if (frontier.size, frontier.root()) != (size, root):
        yield Problem(None, "head_differs", f"{frontier.size}/{size}")


def _verify_bytes(leaf: LeafRow) -> Iterator[Problem]:
    content = leaf.content.encode()
    if leaf_hash(content) != leaf.leaf_hash:
        yield Problem(leaf.seq, "leaf_changed", str(leaf.uid))
        return
    said = json.loads(content)
    if canonical(said) != content or _columns_said(said) != _columns(leaf):
        yield Problem(leaf.seq, "leaf_columns_differ", str(leaf.uid))


def _columns_said(said: Mapping[str, Any]) -> list[object]:
    subject, actor = said["subject"] or {}, said["actor"] or {}
    found = [said[name] for name in ("seq", "uid", "kind", "device", "site", "at")]
    return [*found, actor.get("uid"), subject.get("type", ""), subject.get("uid")]


def _columns(leaf: LeafRow) -> list[object]:
    uids = [None if uid is None else str(uid) for uid in (leaf.device_uid, leaf.site_uid)]
    subject = None if leaf.subject_uid is None else str(leaf.subject_uid)
    actor = None if leaf.actor_uid is None else str(leaf.actor_uid)
    own = [leaf.seq, str(leaf.uid), leaf.kind, *uids, moment_text(leaf.at)]
    return [*own, actor, leaf.subject_type, subject]


def fact_models() -> list[type[Fact]]:
    """Every insert-only table."""
    return [model for model in apps.get_app_config("leadline").get_models() if issubclass(model, Fact)]


def _verify_rows(batch: list[LeafRow]) -> Iterator[Problem]:
    """Compare the facts of these leaves with the digests the leaves hold, table by table."""
    uids = [leaf.uid for leaf in batch]
    found: dict[Any, dict[str, list[Fact]]] = {uid: {} for uid in uids}
    for model in fact_models():
        for row in model._base_manager.filter(Q(leaf_id__in=uids)):
            found[row.leaf_id].setdefault(str(model._meta.model_name), []).append(row)
    for leaf in batch:
        said: dict[str, dict[str, object]] = leaf.said["rows"]
        tables = {key.partition("/")[0] for key in said}
        for name in sorted(set(found[leaf.uid]) - tables):
            yield Problem(leaf.seq, "row_added", f"{name} {found[leaf.uid][name][0].pk}")
        for key, digest in said.items():
            name, _, form = key.partition("/")
            rows = found[leaf.uid].get(name, [])
            if digest_of(rows, int(form)) != digest:
                yield Problem(leaf.seq, "rows_differ", f"{name} {[row.pk for row in rows][:20]}")


def _verify_orphans() -> Iterator[Problem]:
    """Rows that name a leaf which is not there."""
    for model in apps.get_app_config("leadline").get_models():
        if issubclass(model, Audited):
            for pk in rows_without_leaf(model):
                yield Problem(None, "row_without_leaf", f"{model._meta.model_name} {pk}")


def _verify_nouns() -> Iterator[Problem]:
    """Compare each noun's current row with its newest version, and find the versions that have no row."""
    for model in apps.get_app_config("leadline").get_models():
        if issubclass(model, Noun):
            yield from _verify_noun_table(model)
            yield from _verify_no_noun_is_gone(model)


def _verify_no_noun_is_gone(model: type[Noun]) -> Iterator[Problem]:
    name = str(model._meta.model_name)
    present = model._base_manager.filter(pk=OuterRef("subject_id"))
    first = Version.objects.filter(~Exists(present), noun=name, number=1)
    for pk in first.order_by("subject_id").values_list("subject_id", flat=True):
        yield Problem(None, "current_row_missing", f"{name} {pk}")


def _verify_noun_table(model: type[Noun]) -> Iterator[Problem]:
    name = str(model._meta.model_name)
    newest = Version.objects.filter(noun=name, subject_id=OuterRef("pk")).order_by("-number")
    rows = model._base_manager.annotate(
        kept=Subquery(newest.values("columns")[:1]), under=Subquery(newest.values("leaf_id")[:1])
    )
    for row in rows.iterator(chunk_size=2000):
        kept, under = getattr(row, "kept", None), getattr(row, "under", None)
        # A subquery's column comes back unconverted on SQLite, as 32 hexadecimal digits.
        agrees = under is not None and uuid.UUID(str(under)) == row.leaf_id
        if not agrees or not _is_as_kept(row, kept or ""):
            yield Problem(None, "current_row_differs", f"{name} {row.pk}")


def _is_as_kept(row: Noun, kept: str) -> bool:
    """Whether a row is as its newest version says; a younger column has its default.

    A column that the table no longer has is passed over.
    """
    columns = columns_of(row)
    if kept == canonical(columns).decode():
        return True
    said = {name: text for name, text in json.loads(kept or "{}").items() if name in columns}
    unset = columns_of(type(row)())
    return bool(said) and columns == {name: unset[name] for name in columns} | said


def _verify_checkpoints(size: int) -> list[Problem]:
    problems, verifier = [], ledger_key().verifier
    roots = {}
    for row in list_checkpoints():
        roots[row.size] = row.root
        if row.size > size:
            problems.append(Problem(None, "checkpoint_beyond", str(row.size)))
        try:
            said = open_checkpoint(row.note, verifier)
        except DomainError as error:
            problems.append(Problem(None, "checkpoint_unsigned", f"{row.size} {error.code}"))
            continue
        if (said.size, said.root) != (row.size, row.root):
            problems.append(Problem(None, "checkpoint_differs", str(row.size)))
    for said in checkpoints.outside():
        if roots.get(said.size) != said.root:
            problems.append(Problem(None, "checkpoint_outside_differs", str(said.size)))
    return problems
