"""Signed notes: a published example, round trips, and every way a note can be wrong."""

from __future__ import annotations

import base64
import hashlib

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.seals.notes import (
    Checkpoint,
    NoteKey,
    load_note_key,
    load_verifier,
    make_note_key,
    open_checkpoint,
    open_note,
    sign_checkpoint,
    sign_note,
)

# The worked example in the documentation of golang.org/x/mod/sumdb/note.
SECRET = "PRIVATE+KEY+PeterNeumann+c74f20a3+AYEKFALVFGyNhPJEMzD1QIDr+Y7hfZx09iUvxdXHKDFz"
PUBLIC = "PeterNeumann+c74f20a3+ARpc2QcUPDhMQegwxbzhKqiBfsVkmqq/LDE4izWy10TW"
TEXT = "If you think cryptography is the answer to your problem,\nthen you don't know what your problem is.\n"
NOTE = (
    TEXT
    + "\n— PeterNeumann x08go/ZJkuBS9UG/SffcvIAQxVBtiFupLLr8pAcElZInNIuGUgYN1FFYC2pZSNXgKvqfqdngotpRZb6KE6RyyBwJnAM=\n"
)
ROOT = hashlib.sha256(b"").digest()
KEY = NoteKey("tarnwater.example/leadline", bytes(range(32)))
CHECKPOINT = Checkpoint("tarnwater.example/leadline", 4816, ROOT)


def test_note_when_signed_with_the_published_key_is_the_published_note():
    assert sign_note(TEXT, load_note_key(SECRET)) == NOTE


def test_note_when_opened_with_the_published_key_gives_its_text():
    assert open_note(NOTE, load_verifier(PUBLIC)) == TEXT


def test_keys_when_written_are_the_published_text():
    key = load_note_key(SECRET)
    assert (key.encoded(), key.verifier.encoded()) == (SECRET, PUBLIC)


def test_checkpoint_when_signed_has_three_lines_a_gap_and_a_signature():
    lines = sign_checkpoint(CHECKPOINT, KEY).split("\n")
    assert lines[:4] == ["tarnwater.example/leadline", "4816", base64.b64encode(ROOT).decode(), ""]
    assert lines[4].startswith("— tarnwater.example/leadline ")
    assert lines[5:] == [""]


def test_checkpoint_when_opened_is_the_one_signed():
    assert open_checkpoint(sign_checkpoint(CHECKPOINT, KEY), KEY.verifier) == CHECKPOINT


def test_checkpoint_when_somebody_else_signed_too_still_opens():
    other = make_note_key("witness.example")
    extra = sign_checkpoint(CHECKPOINT, other).split("\n\n")[1]
    assert open_checkpoint(sign_checkpoint(CHECKPOINT, KEY) + extra, KEY.verifier) == CHECKPOINT


def test_keys_when_made_twice_differ():
    assert make_note_key("a.example") != make_note_key("a.example")


def changed(old: str, new: str) -> str:
    note = sign_checkpoint(CHECKPOINT, KEY)
    assert old in note
    return note.replace(old, new)


REFUSED = [
    ("another size", changed("4816", "4817"), "note.signature_invalid"),
    ("another origin", changed("example/leadline\n4816", "example/other\n4816"), "note.signature_invalid"),
    ("another root", changed("47DEQ", "47DEA"), "note.signature_invalid"),
    ("text put before", "x\n" + sign_checkpoint(CHECKPOINT, KEY), "note.signature_invalid"),
    ("another key", sign_checkpoint(CHECKPOINT, make_note_key(KEY.name)), "note.not_signed_by_key"),
    ("no signature", "tarnwater.example/leadline\n4816\n", "note.malformed"),
    ("no newline at the end", sign_checkpoint(CHECKPOINT, KEY)[:-1], "note.malformed"),
    ("a hyphen for the dash", changed("— ", "- "), "note.malformed"),
    (
        "not base64",
        changed("— tarnwater.example/leadline ", "— tarnwater.example/leadline !"),
        "note.malformed",
    ),
    ("nothing", "", "note.malformed"),
    (
        "a size with a leading zero",
        sign_note(f"o\n04\n{base64.b64encode(ROOT).decode()}\n", KEY),
        "note.malformed",
    ),
    ("a short root", sign_note("o\n4\nAAAA\n", KEY), "note.malformed"),
    ("text only", sign_note("o\n", KEY), "note.malformed"),
]


@pytest.mark.parametrize(("note", "code"), [row[1:] for row in REFUSED], ids=[row[0] for row in REFUSED])
def test_checkpoint_when_it_is_off_is_refused(note, code):
    with pytest.raises(Invalid) as refusal:
        open_checkpoint(note, KEY.verifier)
    assert refusal.value.code == code


@pytest.mark.parametrize("name", ["", "two words", "a+b", "tab\there"])
def test_key_name_when_it_would_break_a_line_is_refused(name):
    with pytest.raises(Invalid) as refusal:
        make_note_key(name)
    assert refusal.value.code == "note.name_unusable"


@pytest.mark.parametrize(
    "encoded",
    ["", "x", PUBLIC, SECRET.replace("c74f", "c74e"), SECRET[:-4], "PRIVATE+KEY+x"],
    ids=["empty", "word", "public", "hash", "short", "cut"],
)
def test_private_key_when_it_is_off_is_refused(encoded):
    with pytest.raises(Invalid):
        load_note_key(encoded)


@pytest.mark.parametrize("encoded", ["", "name", "a+b", PUBLIC.replace("a3+", "a4+"), PUBLIC[:-4]])
def test_verifier_when_it_is_off_is_refused(encoded):
    with pytest.raises(Invalid):
        load_verifier(encoded)


@pytest.mark.parametrize("text", ["no newline", "tab\t\n", "return\r\n"])
def test_note_when_its_text_is_not_plain_is_never_signed(text):
    with pytest.raises(Invalid):
        sign_note(text, KEY)
