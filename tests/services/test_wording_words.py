"""Every code has a word, every text can be extracted for translation, and no text uses a word we avoid."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from babel.messages.extract import extract_from_dir

from qa_tracker.core.conformity import QUALIFIERS
from qa_tracker.core.judgement import VERDICT_OF_CODE
from qa_tracker.core.ladder import RECIPIENTS
from qa_tracker.core.library_shapes import (
    ARRAY_KINDS,
    CONTACT_CLASSES,
    DEVICE_KINDS,
    INSTRUMENTS,
    KINDS,
    LEVELS,
)
from qa_tracker.core.roles import ROLES
from qa_tracker.core.schedule import LEVELS as STANDINGS
from qa_tracker.core.units import UNITS
from qa_tracker.core.workflow import CHECK, DEVICE, DOSSIER, FAULT
from qa_tracker.services import wording, wording_words
from qa_tracker.services.entries import REASONS

SERVICES = Path(wording.__file__).parent
TABLES = [
    ("VERDICTS", {verdict for verdict, _level in VERDICT_OF_CODE}),
    ("LEVELS", LEVELS),
    ("CHECK_STATES", CHECK.states),
    ("DEVICE_STATES", DEVICE.states),
    ("FAULT_STATES", FAULT.states),
    ("DOSSIER_STATES", DOSSIER.states),
    ("ROLES", ROLES),
    ("KINDS", {*DEVICE_KINDS, *INSTRUMENTS, *KINDS}),
    ("ARRAYS", ARRAY_KINDS),
    ("CONTACTS", CONTACT_CLASSES),
    ("REASONS", REASONS),
    ("NOTICE_LEVELS", {*STANDINGS, "suspension", "mail_failed"}),
    ("RECIPIENTS", RECIPIENTS),
    ("QUALIFIERS", QUALIFIERS),
]
MEANINGS = {
    "performed", "countersigned", "sent back", "amended", "voided", "withdrawn", "restored to use", "accepted",
    "baseline set", "adopted",
}  # fmt: skip


@pytest.mark.parametrize(("table", "codes"), TABLES, ids=[row[0] for row in TABLES])
def test_table_has_a_word_for_each_code_and_no_other(table, codes):
    words = getattr(wording_words, table)
    assert set(words) == set(codes)
    assert len(set(words.values())) == len(words)


def test_every_meaning_of_a_signature_has_a_word():
    assert set(wording_words.MEANINGS) == MEANINGS
    written = [re.findall(r'meaning="([a-z ]+)"', path.read_text()) for path in SERVICES.glob("*.py")]
    assert {meaning for each in written for meaning in each} <= MEANINGS


@pytest.mark.parametrize(
    ("call", "code", "word"),
    [
        ("verdict_word", "not_assessable", "not assessable"),
        ("level_word", "remedial", "remedial level"),
        ("check_state_word", "sent_back", "sent back"),
        ("device_state_word", "on_loan_in", "on loan to us"),
        ("fault_state_word", "awaiting_proof", "awaiting proof"),
        ("dossier_state_word", "rendering", "being drawn"),
        ("role_word", "lead", "lead sonographer"),
        ("kind_word", "yes_no", "yes/no"),
        ("array_word", "mechanical_3d", "mechanical 3D"),
        ("contact_word", "mucous_membrane", "mucous membrane"),
        ("reason_word", "isolation_room", "in an isolation room"),
        ("meaning_word", "accepted", "accepted into use"),
        ("level_of_notice_word", "upcoming", "open"),
        ("level_of_notice_word", "t2", "overdue, step 2"),
        ("recipient_word", "lead", "lead sonographer"),
        ("qualifier_word", ">", "more than"),
        ("unit_symbol", "uA", "µA"),
        ("unit_symbol", "1", ""),
        ("verdict_word", "from_elsewhere", "from elsewhere"),
    ],
)
def test_code_reads_as_its_word(call, code, word):
    assert getattr(wording, call)(code) == word


@pytest.mark.parametrize("code", UNITS)
def test_amount_is_written_as_the_units_write_it(code):
    assert wording_words.amount("3", code).startswith("3")
    assert wording_words.amount("3", code).endswith(UNITS[code].symbol)


def test_amount_without_a_unit_or_in_an_unknown_one_stands_as_it_is():
    assert wording_words.amount("3", "") == "3"
    assert wording_words.amount("3", "furlong") == "3\N{NO-BREAK SPACE}furlong"


@pytest.mark.parametrize(
    ("words", "joined"), [([], ""), (["a"], "a"), (["a", "b"], "a and b"), (["a", "b", "c"], "a, b and c")]
)
def test_words_are_joined_for_reading(words, joined):
    assert wording_words.listed_all(words) == joined
    assert wording_words.listed(words) == joined.replace(" and ", " or ")


def _messages():
    found = extract_from_dir(SERVICES, [("wording*.py", "python")])
    for _file, _line, message, _comments, _context in found:
        yield from message if isinstance(message, tuple) else (message,)


MESSAGES = sorted(set(_messages()))
AVOIDED = re.compile(
    r"\b(instances?|sessions?|runs? of|jobs?|entry|entries|booleans?|macros?|OK|pass(ed)? the|fail(s|ed|ure)?|"
    r"tolerances?|warnings?|alerts?|thresholds?|reviewed|approved|rejected|machines?|assets?|modality|tickets?|"
    r"dashboards?|overview|tracker|scheduler|inbox|QA|analysis|modules?|subscriptions?)\b"
)


def test_texts_are_found_for_translation():
    assert len(MESSAGES) > 350
    assert "There is no baseline yet to compare with: %(verdict)s. A physicist can set one." in MESSAGES


@pytest.mark.parametrize("message", MESSAGES)
def test_text_names_every_placeholder_and_avoids_what_we_avoid(message):
    plain = re.sub(r"%\(\w+\)[sd]", "", message)
    assert "%" not in plain
    assert AVOIDED.search(plain) is None
