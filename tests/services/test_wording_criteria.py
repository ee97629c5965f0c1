"""Limits in words, and where they come from."""

from __future__ import annotations

import json
import uuid
from pathlib import Path

import pytest

from qa_tracker.core.library import criterion as read_criterion
from qa_tracker.core.library_shapes import STANDINGS
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.services.wording import criterion_words, source_line, standing_word

FIXTURES = Path(__file__).parents[2] / "fixtures" / "criteria"
SETS = [json.loads(path.read_text()) for path in sorted(FIXTURES.glob("*.json")) if path.stem != "cautions"]
ROWS = {
    each["id"]: CriterionRow(
        1, uuid.UUID(int=1), uuid.UUID(int=2), one["set"], one["edition"], one["source"], each["id"],
        read_criterion(each),
    )
    for one in SETS
    for each in one["criteria"]
}  # fmt: skip

WORDS = {
    "TG1-PEN": "loss of more than 6 mm remedial, more than 10 mm suspension, against the baseline",
    "TG1-VERT": "deviation of more than the larger of 1.5 mm and 1.5 % remedial, more than the larger of 2 mm and "
    "2 % suspension, against the nominal value",
    "TG1-UNIF": "at least 4 dB remedial, at least 6 dB suspension",
    "TG1-RING": "by test frequency: below 3 MHz more than 7 mm remedial; from 3 MHz to below 7 MHz more than 5 mm "
    "remedial; from 7 MHz more than 3 mm remedial",
    "TG128-GREY": "change of more than 2 or 10 % (whichever is passed first) remedial, against the baseline",
    "TOE-80": "more than 80 % suspension, as a share of the other reading",
    "PROBE-GRADE": "green: conforming, amber: remedial, red: suspension",
    "62353-AP-CF": "more than 50 µA suspension",
}


@pytest.mark.parametrize("code", WORDS)
def test_criterion_reads(code):
    assert criterion_words(ROWS[code].spec).replace("\N{NO-BREAK SPACE}", " ") == WORDS[code]


@pytest.mark.parametrize("code", ROWS)
def test_every_published_limit_names_its_level_and_source(code):
    row = ROWS[code]
    assert any(level in criterion_words(row.spec) for level in ("remedial", "suspension"))
    assert row.spec.source in source_line(row, "")


GOODSITT = "Goodsitt et al. 1998, Med Phys 25(8):1385-1406 (AAPM Report 65)"
SOURCES = [
    (
        "from memory, with the source's own word",
        "TG1-PEN",
        "remedial",
        f"TG1-PEN, tg1 1998: {GOODSITT}; from memory: compare with your own copy (the source calls this level "
        "“action”)",
    ),
    (
        "both levels",
        "TG1-PEN",
        "",
        f"TG1-PEN, tg1 1998: {GOODSITT}; remedial level from memory: compare with your own copy (the source calls "
        "this level “action”); suspension level confirmed (the source calls this level “defect”)",
    ),
    (
        "practice",
        "TOE-80",
        "suspension",
        "TOE-80, toe-ratio undated: Makers' common rule; no standard number found; common practice, no source",
    ),
]


@pytest.mark.parametrize(
    ("code", "level", "line"), [row[1:] for row in SOURCES], ids=[row[0] for row in SOURCES]
)
def test_source_reads(code, level, line):
    assert source_line(ROWS[code], level) == line


def test_every_standing_has_its_words_and_a_missing_one_is_named():
    assert len({standing_word(each) for each in STANDINGS}) == len(STANDINGS)
    assert standing_word("practice") == "common practice, no source"
    assert standing_word(None) == "standing not given"
