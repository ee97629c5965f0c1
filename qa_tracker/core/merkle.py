"""Merkle trees over leaf hashes: roots, appending, and the two proofs of a transparency log.

Source: RFC 9162, section 2.1 (the hashing of RFC 6962, section 2.1): SHA-256, leaves prefixed with 0x00 and
nodes with 0x01, so that no node can be passed off as a leaf.
"""

from __future__ import annotations

import hashlib
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from qa_tracker.core.errors import Invalid

HASH_BYTES = 32
EMPTY_ROOT = hashlib.sha256(b"").digest()
_SIZE_BYTES = 8

Range = tuple[int, int]


def leaf_hash(data: bytes) -> bytes:
    """Hash a leaf's bytes: SHA-256(0x00 || data)."""
    return hashlib.sha256(b"\x00" + data).digest()


def node_hash(left: bytes, right: bytes) -> bytes:
    """Hash two subtrees into one: SHA-256(0x01 || left || right)."""
    return hashlib.sha256(b"\x01" + left + right).digest()


def root(leaf_hashes: Sequence[bytes]) -> bytes:
    """Merkle tree hash of a list of leaf hashes.

    Pairs are hashed level by level and an odd last node is carried up unchanged, which gives the same tree as
    the recursive definition that splits at the largest power of two below n.

    Source: RFC 9162, 2.1.1.

    Returns
    -------
    bytes
        No leaf gives SHA-256 of nothing; one leaf gives its own hash.

    Examples
    --------
    >>> root([]) == EMPTY_ROOT, root([leaf_hash(b"a")]) == leaf_hash(b"a")
    (True, True)
    """
    level = list(leaf_hashes)
    if not level:
        return EMPTY_ROOT
    sha256 = hashlib.sha256
    while len(level) > 1:
        carried = level[-1:] if len(level) % 2 else []
        pairs = zip(level[::2], level[1::2], strict=False)
        level = [sha256(b"\x01" + left + right).digest() for left, right in pairs] + carried
    return level[0]


@dataclass(frozen=True)
class Frontier:
    """The right edge of a tree: all that is needed to append to it and to know its root.

    Parameters
    ----------
    size
        Number of leaves.
    subtrees
        Roots of the complete subtrees the size is made of, largest first: one for each 1 in its binary form.

    Examples
    --------
    >>> two = Frontier().append(leaf_hash(b"a")).append(leaf_hash(b"b"))
    >>> two.root() == root([leaf_hash(b"a"), leaf_hash(b"b")])
    True
    """

    size: int = 0
    subtrees: tuple[bytes, ...] = ()

    def __post_init__(self) -> None:
        fits = self.size >= 0 and self.size.bit_count() == len(self.subtrees)
        if not fits or any(len(each) != HASH_BYTES for each in self.subtrees):
            raise Invalid("merkle.frontier_malformed", size=self.size, subtrees=len(self.subtrees))

    def append(self, leaf: bytes) -> Frontier:
        """Return the frontier with one more leaf hash; this one is left as it is."""
        return self.extend((leaf,))

    def extend(self, leaves: Iterable[bytes]) -> Frontier:
        """Return the frontier with more leaf hashes, in their order."""
        size, subtrees = self.size, list(self.subtrees)
        for leaf in leaves:
            merged, complete = leaf, size
            while complete & 1:
                merged = node_hash(subtrees.pop(), merged)
                complete >>= 1
            subtrees.append(merged)
            size += 1
        return Frontier(size, tuple(subtrees))

    def root(self) -> bytes:
        """Root of the whole tree; that of no leaf where the size is 0."""
        if not self.subtrees:
            return EMPTY_ROOT
        folded = self.subtrees[-1]
        for subtree in reversed(self.subtrees[:-1]):
            folded = node_hash(subtree, folded)
        return folded

    def to_bytes(self) -> bytes:
        """Size as 8 bytes, most significant first, then the subtree roots."""
        return self.size.to_bytes(_SIZE_BYTES, "big") + b"".join(self.subtrees)

    @classmethod
    def from_bytes(cls, data: bytes) -> Frontier:
        """Read what ``to_bytes`` wrote; anything else is refused."""
        size, rest = int.from_bytes(data[:_SIZE_BYTES], "big"), data[_SIZE_BYTES:]
        if len(data) < _SIZE_BYTES:
            raise Invalid("merkle.frontier_malformed", size=size, subtrees=0)
        return cls(size, tuple(rest[at : at + HASH_BYTES] for at in range(0, len(rest), HASH_BYTES)))


def _split(first: int, end: int) -> int:
    """Where a tree over the leaves [first, end) divides: after the largest power of two below its size."""
    return first + (1 << (end - first - 1).bit_length() - 1)


def inclusion_ranges(index: int, size: int) -> tuple[Range, ...]:
    """Ranges of leaves whose subtree roots make up an inclusion proof, the leaf's own sibling first.

    Source: RFC 9162, 2.1.3.1 (PATH). A store that keeps subtree roots needs to hash only these ranges.

    Examples
    --------
    >>> inclusion_ranges(2, 7)
    ((3, 4), (0, 2), (4, 7))
    """
    if not 0 <= index < size:
        raise Invalid("merkle.no_such_leaf", index=index, size=size)
    first, end = 0, size
    ranges: list[Range] = []
    while end - first > 1:
        middle = _split(first, end)
        if index < middle:
            ranges.append((middle, end))
            end = middle
        else:
            ranges.append((first, middle))
            first = middle
    return tuple(reversed(ranges))


def consistency_ranges(old_size: int, new_size: int) -> tuple[Range, ...]:
    """Ranges of leaves whose subtree roots show that a tree grew out of a smaller one.

    Source: RFC 9162, 2.1.4.1 (SUBPROOF). Equal sizes and an old size of 0 need no hash at all.

    Examples
    --------
    >>> consistency_ranges(3, 7)
    ((2, 3), (3, 4), (0, 2), (4, 7))
    """
    if not 0 <= old_size <= new_size:
        raise Invalid("merkle.sizes_reversed", old_size=old_size, new_size=new_size)
    first, end = 0, new_size if old_size else 0
    ranges: list[Range] = []
    while end != old_size:
        middle = _split(first, end)
        if old_size <= middle:
            ranges.append((middle, end))
            end = middle
        else:
            ranges.append((first, middle))
            first = middle
    if first:
        ranges.append((first, end))
    return tuple(reversed(ranges))


def inclusion_proof(leaf_hashes: Sequence[bytes], index: int) -> tuple[bytes, ...]:
    """Proof that the leaf at an index, counted from 0, is in the tree over all the given hashes."""
    return _roots(leaf_hashes, inclusion_ranges(index, len(leaf_hashes)))


def consistency_proof(leaf_hashes: Sequence[bytes], old_size: int) -> tuple[bytes, ...]:
    """Proof that the tree over all the given hashes begins with its own first ``old_size`` leaves."""
    return _roots(leaf_hashes, consistency_ranges(old_size, len(leaf_hashes)))


def _roots(leaf_hashes: Sequence[bytes], ranges: tuple[Range, ...]) -> tuple[bytes, ...]:
    return tuple(root(leaf_hashes[first:end]) for first, end in ranges)


def verify_inclusion(leaf: bytes, index: int, size: int, proof: Sequence[bytes], tree_root: bytes) -> bool:
    """Tell whether a proof ties a leaf hash at an index to the root of a tree of a size.

    Source: RFC 9162, 2.1.3.2. An index outside the tree, a proof of the wrong length or with anything but
    32-byte hashes gives False, never an error.
    """
    if not 0 <= index < size or not _are_hashes((leaf, *proof, tree_root)):
        return False
    if len(proof) != len(inclusion_ranges(index, size)):
        return False
    position, last, hashed = index, size - 1, leaf
    for sibling in proof:
        if position & 1 or position == last:
            hashed = node_hash(sibling, hashed)
            position, last = _drop_carried(position, last)
        else:
            hashed = node_hash(hashed, sibling)
        position, last = position >> 1, last >> 1
    return hashed == tree_root


def verify_consistency(
    old_size: int, new_size: int, old_root: bytes, new_root: bytes, proof: Sequence[bytes]
) -> bool:
    """Tell whether a proof shows that the new tree begins with every leaf of the old one.

    Source: RFC 9162, 2.1.4.2. Every tree begins with the empty one, whose root must be the empty root; equal
    sizes must have equal roots; both take an empty proof. Anything malformed gives False, never an error.
    """
    if not 0 <= old_size <= new_size or not _are_hashes((old_root, new_root, *proof)):
        return False
    if len(proof) != len(consistency_ranges(old_size, new_size)):
        return False
    if old_size == 0:
        return old_root == EMPTY_ROOT and (new_size > 0 or new_root == EMPTY_ROOT)
    if old_size == new_size:
        return old_root == new_root
    return _both_roots(old_size, new_size, old_root, proof) == (old_root, new_root)


def _both_roots(old_size: int, new_size: int, old_root: bytes, proof: Sequence[bytes]) -> tuple[bytes, bytes]:
    """Rebuild the old and the new root from a proof of the right length."""
    # An old size that is a power of two is one complete subtree: its root starts the path and isn't sent.
    path = list(proof) if old_size & (old_size - 1) else [old_root, *proof]
    position, last = _halve_while(old_size - 1, new_size - 1, odd=True)
    old = new = path[0]
    for sibling in path[1:]:
        if position & 1 or position == last:
            old, new = node_hash(sibling, old), node_hash(sibling, new)
            position, last = _drop_carried(position, last)
        else:
            new = node_hash(new, sibling)
        position, last = position >> 1, last >> 1
    return old, new


def _drop_carried(position: int, last: int) -> tuple[int, int]:
    """Skip the levels at which an even last node was carried up without a sibling."""
    return (position, last) if position & 1 else _halve_while(position, last, odd=False)


def _halve_while(position: int, last: int, *, odd: bool) -> tuple[int, int]:
    while bool(position & 1) == odd and position:
        position, last = position >> 1, last >> 1
    return position, last


def _are_hashes(values: Sequence[bytes]) -> bool:
    return all(len(value) == HASH_BYTES for value in values)
