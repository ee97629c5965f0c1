"""Hashes, roots and the frontier of the tree."""

from __future__ import annotations

import hashlib
import json
import time
from pathlib import Path

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.merkle import EMPTY_ROOT, Frontier, leaf_hash, node_hash, root

REFERENCE = Path(__file__).parents[2] / "fixtures" / "reference"
TREES = json.loads((REFERENCE / "rfc6962_roots_0_to_4.json").read_text(encoding="utf-8"))
DIGESTS = json.loads((REFERENCE / "fips180_4_sha256.json").read_text(encoding="utf-8"))
HASHES = tuple(leaf_hash(str(number).encode()) for number in range(65))
SIZES = range(65)


def recursive_root(hashes):
    """RFC 9162, 2.1.1, word for word: the oracle."""
    if len(hashes) < 2:
        return hashes[0] if hashes else hashlib.sha256().digest()
    k = 1
    while k * 2 < len(hashes):
        k *= 2
    return node_hash(recursive_root(hashes[:k]), recursive_root(hashes[k:]))


@pytest.mark.parametrize("message", ["", "abc", "abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq"])
def test_sha256_equals_the_published_digest_when_given_the_message(message):
    assert hashlib.sha256(message.encode()).hexdigest() == DIGESTS[message]


def test_sha256_equals_the_published_digest_when_given_a_million_letters():
    assert hashlib.sha256(b"a" * 1_000_000).hexdigest() == DIGESTS["a x 1000000"]


def test_leaf_hash_equals_the_published_one_when_the_leaf_is_empty():
    assert leaf_hash(b"").hex() == TREES["empty_leaf_hash"]


@pytest.mark.parametrize("size", range(5))
def test_root_equals_the_published_one_for_each_size(size):
    hashes = [leaf_hash(bytes.fromhex(text)) for text in TREES["leaf_inputs_hex"][:size]]
    assert root(hashes).hex() == TREES["root_by_size_hex"][str(size)]
    assert Frontier().extend(hashes).root() == root(hashes)


@pytest.mark.parametrize("size", SIZES)
def test_root_equals_the_recursive_definition_for_each_size(size):
    assert root(HASHES[:size]) == recursive_root(HASHES[:size])


def test_frontier_gives_the_root_of_each_size_when_leaves_are_appended_singly():
    frontier = Frontier()
    for size in SIZES:
        assert (frontier.size, frontier.root()) == (size, root(HASHES[:size]))
        frontier = frontier.append(HASHES[size])


@pytest.mark.parametrize("size", SIZES)
def test_frontier_is_the_same_when_extended_in_two_goes_or_stored_between(size):
    stored = Frontier.from_bytes(Frontier().extend(HASHES[:size]).to_bytes())
    assert stored.extend(HASHES[size:]) == Frontier().extend(HASHES)


def test_frontier_is_not_changed_when_appended_to():
    one = Frontier().append(HASHES[0])
    one.append(HASHES[1])
    assert one == Frontier(1, (HASHES[0],))


@pytest.mark.parametrize(
    "data",
    [
        pytest.param(b"", id="nothing"),
        pytest.param(b"\x00" * 7, id="size cut short"),
        pytest.param(Frontier().extend(HASHES[:3]).to_bytes()[:-1], id="hash cut short"),
        pytest.param(Frontier().extend(HASHES[:3]).to_bytes() + b"\x00", id="a byte too many"),
        pytest.param((4).to_bytes(8, "big") + HASHES[0] + HASHES[1], id="more subtrees than the size has"),
        pytest.param((3).to_bytes(8, "big") + HASHES[0], id="fewer subtrees than the size has"),
    ],
)
def test_frontier_refuses_when_its_bytes_are_malformed(data):
    with pytest.raises(Invalid) as refusal:
        Frontier.from_bytes(data)
    assert refusal.value.code == "merkle.frontier_malformed"


def test_frontier_refuses_when_a_leaf_is_not_a_hash():
    with pytest.raises(Invalid):
        Frontier().append(b"short")


def test_empty_frontier_has_the_empty_root_and_eight_zero_bytes():
    assert (Frontier().root(), Frontier().to_bytes()) == (EMPTY_ROOT, bytes(8))


def test_root_of_a_million_hashes_takes_seconds_when_computed_at_once():
    hashes = [number.to_bytes(32, "big") for number in range(1_000_000)]
    started = time.process_time()
    whole = root(hashes)
    assert time.process_time() - started < 10
    assert whole == Frontier().extend(hashes).root()
