"""Inclusion and consistency proofs: every one for trees of up to 64 leaves, and what tampering does."""

from __future__ import annotations

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.merkle import (
    EMPTY_ROOT,
    consistency_proof,
    consistency_ranges,
    inclusion_proof,
    inclusion_ranges,
    leaf_hash,
    root,
    verify_consistency,
    verify_inclusion,
)

HASHES = tuple(leaf_hash(str(number).encode()) for number in range(65))
ROOTS = tuple(root(HASHES[:size]) for size in range(65))
SIZES = range(65)
OTHER = leaf_hash(b"another")


def flipped(value):
    return bytes([value[0] ^ 1]) + value[1:]


@pytest.mark.parametrize("size", SIZES)
def test_inclusion_is_proved_for_every_leaf_of_each_size(size):
    for index in range(size):
        proof = inclusion_proof(HASHES[:size], index)
        assert verify_inclusion(HASHES[index], index, size, proof, ROOTS[size])


@pytest.mark.parametrize("size", SIZES)
def test_inclusion_fails_at_every_other_index_when_the_leaf_is_real(size):
    for index in range(size):
        proof = inclusion_proof(HASHES[:size], index)
        elsewhere = (other for other in range(-1, size + 1) if other != index)
        assert not any(verify_inclusion(HASHES[index], o, size, proof, ROOTS[size]) for o in elsewhere)


@pytest.mark.parametrize("size", [1, 2, 3, 7, 8, 21, 64])
def test_inclusion_fails_when_leaf_root_or_any_proof_hash_is_altered(size):
    for index in range(size):
        proof = inclusion_proof(HASHES[:size], index)
        assert not verify_inclusion(OTHER, index, size, proof, ROOTS[size])
        assert not verify_inclusion(HASHES[index], index, size, proof, flipped(ROOTS[size]))
        for at in range(len(proof)):
            altered = (*proof[:at], flipped(proof[at]), *proof[at + 1 :])
            assert not verify_inclusion(HASHES[index], index, size, altered, ROOTS[size])


@pytest.mark.parametrize(
    ("leaf", "proof", "tree_root"),
    [
        pytest.param(HASHES[2], inclusion_proof(HASHES[:7], 2)[:-1], ROOTS[7], id="a hash missing"),
        pytest.param(HASHES[2], (*inclusion_proof(HASHES[:7], 2), OTHER), ROOTS[7], id="a hash too many"),
        pytest.param(HASHES[2], inclusion_proof(HASHES[:7], 2)[::-1], ROOTS[7], id="turned round"),
        pytest.param(HASHES[2][:31], inclusion_proof(HASHES[:7], 2), ROOTS[7], id="a short leaf hash"),
        pytest.param(HASHES[2], (b"", b"", b""), ROOTS[7], id="empty hashes"),
        pytest.param(HASHES[2], inclusion_proof(HASHES[:7], 2), ROOTS[6], id="another tree's root"),
    ],
)
def test_inclusion_fails_when_the_proof_is_malformed(leaf, proof, tree_root):
    assert not verify_inclusion(leaf, 2, 7, proof, tree_root)


def test_inclusion_fails_when_the_tree_is_empty():
    assert not verify_inclusion(HASHES[0], 0, 0, (), EMPTY_ROOT)


@pytest.mark.parametrize("new_size", SIZES)
def test_consistency_is_proved_with_every_earlier_size(new_size):
    for old_size in range(new_size + 1):
        proof = consistency_proof(HASHES[:new_size], old_size)
        assert verify_consistency(old_size, new_size, ROOTS[old_size], ROOTS[new_size], proof)


@pytest.mark.parametrize("new_size", SIZES[1:])
def test_consistency_fails_with_every_earlier_size_when_a_root_is_altered(new_size):
    for old_size in range(1, new_size + 1):
        proof = consistency_proof(HASHES[:new_size], old_size)
        old_root, new_root = ROOTS[old_size], ROOTS[new_size]
        assert not verify_consistency(old_size, new_size, flipped(old_root), new_root, proof)
        assert not verify_consistency(old_size, new_size, old_root, flipped(new_root), proof)


@pytest.mark.parametrize("new_size", [2, 3, 7, 8, 21, 64])
def test_consistency_fails_when_any_proof_hash_is_altered(new_size):
    for old_size in range(1, new_size):
        proof = consistency_proof(HASHES[:new_size], old_size)
        for at in range(len(proof)):
            altered = (*proof[:at], flipped(proof[at]), *proof[at + 1 :])
            assert not verify_consistency(old_size, new_size, ROOTS[old_size], ROOTS[new_size], altered)


def test_consistency_fails_with_every_earlier_size_when_history_was_rewritten():
    rewritten = (OTHER, *HASHES[1:64])
    for old_size in range(1, 64):
        proof = consistency_proof(rewritten, old_size)
        assert not verify_consistency(old_size, 64, ROOTS[old_size], root(rewritten), proof)


@pytest.mark.parametrize(
    ("old_size", "new_size", "old_root", "new_root", "proof"),
    [
        pytest.param(3, 7, ROOTS[3], ROOTS[7], (), id="no proof"),
        pytest.param(
            3, 7, ROOTS[3], ROOTS[7], (*consistency_proof(HASHES[:7], 3), OTHER), id="a hash too many"
        ),
        pytest.param(7, 3, ROOTS[7], ROOTS[3], consistency_proof(HASHES[:7], 3), id="sizes reversed"),
        pytest.param(-1, 3, ROOTS[0], ROOTS[3], (), id="a size below nothing"),
        pytest.param(4, 4, ROOTS[4], ROOTS[5], (), id="one size and two roots"),
        pytest.param(4, 4, ROOTS[4], ROOTS[4], (OTHER,), id="one size with a proof"),
        pytest.param(0, 3, OTHER, ROOTS[3], (), id="nothing with a made-up root"),
        pytest.param(0, 3, EMPTY_ROOT, ROOTS[3], (OTHER,), id="nothing with a proof"),
        pytest.param(0, 0, EMPTY_ROOT, OTHER, (), id="nothing grown into nothing with a made-up root"),
        pytest.param(3, 7, b"", ROOTS[7], consistency_proof(HASHES[:7], 3), id="an empty root"),
    ],
)
def test_consistency_fails_when_the_claim_is_malformed(old_size, new_size, old_root, new_root, proof):
    assert not verify_consistency(old_size, new_size, old_root, new_root, proof)


@pytest.mark.parametrize(("index", "size"), [(0, 0), (3, 3), (-1, 3)])
def test_inclusion_proof_is_refused_when_there_is_no_such_leaf(index, size):
    with pytest.raises(Invalid) as refusal:
        inclusion_ranges(index, size)
    assert refusal.value.code == "merkle.no_such_leaf"


@pytest.mark.parametrize(("old_size", "new_size"), [(4, 3), (-1, 3)])
def test_consistency_proof_is_refused_when_the_old_tree_is_larger(old_size, new_size):
    with pytest.raises(Invalid) as refusal:
        consistency_ranges(old_size, new_size)
    assert refusal.value.code == "merkle.sizes_reversed"


def test_proofs_are_those_of_the_worked_example_when_the_tree_has_seven_leaves():
    # RFC 9162, 2.1.5: the audit paths of d0, d3, d4, d6 and the proofs from 3, 4 and 6 to 7.
    a, b, c, d, e, f, j = HASHES[:7]
    g, h, i = root((a, b)), root((c, d)), root((e, f))
    k, l_ = root((a, b, c, d)), root((e, f, j))
    assert [inclusion_proof(HASHES[:7], n) for n in (0, 3, 4, 6)] == [
        (b, h, l_),
        (c, g, l_),
        (f, j, k),
        (i, k),
    ]
    assert [consistency_proof(HASHES[:7], n) for n in (3, 4, 6)] == [(c, d, g, l_), (l_,), (i, j, k)]
