"""The words of the program: every code as a sentence or word a person reads, in their language.

This is the door; the siblings ``wording_*`` hold the words by what they speak of.
"""

from __future__ import annotations

from qa_tracker.services.wording_criteria import criterion_words, source_line, standing_word
from qa_tracker.services.wording_due import due_words, excuse_words, recurrence_words
from qa_tracker.services.wording_findings import problem_sentence, seal_sentence
from qa_tracker.services.wording_health import health_sentence
from qa_tracker.services.wording_leaves import leaf_sentence
from qa_tracker.services.wording_letters import letter
from qa_tracker.services.wording_mail import hold_word, mail_kind_word, mail_state_word, try_word
from qa_tracker.services.wording_refusals import refusal
from qa_tracker.services.wording_verdicts import verdict_sentence
from qa_tracker.services.wording_words import (
    array_word,
    check_state_word,
    contact_word,
    device_state_word,
    dossier_state_word,
    fault_state_word,
    kind_word,
    level_of_notice_word,
    level_word,
    meaning_word,
    qualifier_word,
    reason_word,
    recipient_word,
    register_word,
    role_word,
    unit_symbol,
    verdict_word,
)

__all__ = [
    "array_word",
    "check_state_word",
    "contact_word",
    "criterion_words",
    "device_state_word",
    "dossier_state_word",
    "due_words",
    "excuse_words",
    "fault_state_word",
    "health_sentence",
    "hold_word",
    "kind_word",
    "leaf_sentence",
    "letter",
    "level_of_notice_word",
    "level_word",
    "mail_kind_word",
    "mail_state_word",
    "meaning_word",
    "problem_sentence",
    "qualifier_word",
    "reason_word",
    "recipient_word",
    "recurrence_words",
    "refusal",
    "register_word",
    "role_word",
    "seal_sentence",
    "source_line",
    "standing_word",
    "try_word",
    "unit_symbol",
    "verdict_sentence",
    "verdict_word",
]
