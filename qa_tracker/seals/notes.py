"""Checkpoints of the log as signed notes: text a person can read and a machine can verify.

Format: the open "signed note" and "tlog-checkpoint" texts of C2SP, with Ed25519 keys of type 1. A note is
text ending in a newline, an empty line, then one line per signature: an em dash, the key's name, and base64
of the four-byte key hash followed by the signature.
"""

from __future__ import annotations

import base64
import binascii
import hashlib
from dataclasses import dataclass

from cryptography.exceptions import InvalidSignature
from cryptography.hazmat.primitives.asymmetric.ed25519 import Ed25519PrivateKey, Ed25519PublicKey

from qa_tracker.core.errors import Invalid

ED25519 = b"\x01"
DASH = "— "
PRIVATE = "PRIVATE+KEY+"
LARGEST_NOTE = 1_000_000


@dataclass(frozen=True)
class Checkpoint:
    """The log at one size: its origin line, the number of leaves, and the root hash."""

    origin: str
    size: int
    root: bytes


@dataclass(frozen=True)
class Verifier:
    """A public key with the name it signs under."""

    name: str
    public: bytes

    @property
    def key_hash(self) -> bytes:
        """Give the four bytes that tell keys of one name apart."""
        return hashlib.sha256(self.name.encode() + b"\n" + ED25519 + self.public).digest()[:4]

    def encoded(self) -> str:
        """Write the key as ``name+hash+base64``."""
        return f"{self.name}+{self.key_hash.hex()}+{base64.b64encode(ED25519 + self.public).decode()}"


@dataclass(frozen=True)
class NoteKey:
    """A private key with the name it signs under; ``seed`` is secret."""

    name: str
    seed: bytes

    @property
    def verifier(self) -> Verifier:
        """Give the public half."""
        private = Ed25519PrivateKey.from_private_bytes(self.seed)
        return Verifier(self.name, private.public_key().public_bytes_raw())

    def encoded(self) -> str:
        """Write the key as ``PRIVATE+KEY+name+hash+base64``; to be kept secret."""
        body = base64.b64encode(ED25519 + self.seed).decode()
        return f"{PRIVATE}{self.name}+{self.verifier.key_hash.hex()}+{body}"


def make_note_key(name: str) -> NoteKey:
    """Make a fresh key; a name holds no space and no plus sign."""
    return NoteKey(_checked_name(name), Ed25519PrivateKey.generate().private_bytes_raw())


def load_note_key(encoded: str) -> NoteKey:
    """Read what :meth:`NoteKey.encoded` wrote."""
    parts = encoded.strip().removeprefix(PRIVATE).split("+", 2)
    if len(parts) != 3 or not encoded.strip().startswith(PRIVATE):
        raise Invalid("note.key_unreadable")
    key = NoteKey(_checked_name(parts[0]), _key_bytes(parts[2]))
    if key.verifier.key_hash.hex() != parts[1]:
        raise Invalid("note.key_unreadable")
    return key


def load_verifier(encoded: str) -> Verifier:
    """Read what :meth:`Verifier.encoded` wrote."""
    parts = encoded.strip().split("+", 2)
    if len(parts) != 3:
        raise Invalid("note.key_unreadable")
    verifier = Verifier(_checked_name(parts[0]), _key_bytes(parts[2]))
    if verifier.key_hash.hex() != parts[1]:
        raise Invalid("note.key_unreadable")
    return verifier


def _checked_name(name: str) -> str:
    if not name or "+" in name or any(character.isspace() for character in name):
        raise Invalid("note.name_unusable", name=name)
    return name


def _key_bytes(text: str) -> bytes:
    raw = _decoded(text)
    if len(raw) != 33 or raw[:1] != ED25519:
        raise Invalid("note.key_unreadable")
    return raw[1:]


def _decoded(text: str) -> bytes:
    try:
        return base64.b64decode(text, validate=True)
    except (binascii.Error, ValueError) as error:
        raise Invalid("note.malformed") from error


def sign_note(text: str, key: NoteKey) -> str:
    """Sign text that ends in a newline; control characters other than that are refused."""
    if not text.endswith("\n") or any(ord(character) < 32 and character != "\n" for character in text):
        raise Invalid("note.malformed")
    signature = Ed25519PrivateKey.from_private_bytes(key.seed).sign(text.encode())
    body = base64.b64encode(key.verifier.key_hash + signature).decode()
    return f"{text}\n{DASH}{key.name} {body}\n"


def open_note(note: str, verifier: Verifier) -> str:
    """Give the text of a note if the key signed it; signatures of other keys are passed over."""
    text, signatures = _parted(note)
    for name, body in signatures:
        if name == verifier.name and body[:4] == verifier.key_hash:
            _require_signature(verifier, body[4:], text)
            return text
    raise Invalid("note.not_signed_by_key", name=verifier.name)


def _parted(note: str) -> tuple[str, tuple[tuple[str, bytes], ...]]:
    text, found, block = note.rpartition("\n\n")
    if not found or not block.endswith("\n") or len(note) > LARGEST_NOTE:
        raise Invalid("note.malformed")
    return text + "\n", tuple(_signature_line(line) for line in block[:-1].split("\n"))


def _signature_line(line: str) -> tuple[str, bytes]:
    name, found, body = line.removeprefix(DASH).partition(" ")
    if not line.startswith(DASH) or not found:
        raise Invalid("note.malformed")
    raw = _decoded(body)
    if len(raw) < 5:
        raise Invalid("note.malformed")
    return name, raw


def _require_signature(verifier: Verifier, signature: bytes, text: str) -> None:
    try:
        Ed25519PublicKey.from_public_bytes(verifier.public).verify(signature, text.encode())
    except InvalidSignature as error:
        raise Invalid("note.signature_invalid", name=verifier.name) from error


def sign_checkpoint(checkpoint: Checkpoint, key: NoteKey) -> str:
    """Write and sign a checkpoint."""
    if not checkpoint.origin or "\n" in checkpoint.origin or checkpoint.size < 0:
        raise Invalid("note.malformed")
    root = base64.b64encode(checkpoint.root).decode()
    return sign_note(f"{checkpoint.origin}\n{checkpoint.size}\n{root}\n", key)


def open_checkpoint(note: str, verifier: Verifier) -> Checkpoint:
    """Verify a note and read the checkpoint in it."""
    lines = open_note(note, verifier).split("\n")
    if len(lines) < 4 or not lines[0] or not _is_size(lines[1]):
        raise Invalid("note.malformed")
    root = _decoded(lines[2])
    if len(root) != 32:
        raise Invalid("note.malformed")
    return Checkpoint(lines[0], int(lines[1]), root)


def _is_size(text: str) -> bool:
    return text.isascii() and text.isdigit() and (text == "0" or not text.startswith("0")) and len(text) < 20
