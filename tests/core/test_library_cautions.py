"""The cautions that must be shown are there, and no text of the library uses a word that is not ours."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest

from qa_tracker.core.library import cautions

FOLDER = Path(__file__).parents[2] / "fixtures"
CAUTIONS = {
    one.code: one for one in cautions(json.loads((FOLDER / "criteria" / "cautions.json").read_text()))
}
# A source may be quoted in its own words there.
QUOTED = ("own_words", "source")
AVOIDED = re.compile(
    r"\b(instances?|sessions?|runs?|running|jobs?|entry|entries|booleans?|multiple choice|composites?|constants?"
    r"|uploads?|macros?|ok|pass(es|ed)?|fail(s|ed|ures?)?|tolerances?|actions?|warnings?|alerts?|thresholds?"
    r"|reviewed|unreviewed|approved|rejected|units?|machines?|assets?|modalit(y|ies)|service (events?|logs?)"
    r"|work orders?|tickets?|dashboards?|overviews?|trackers?|schedulers?|reports?|inbox|qa\w*|analys[ie]s"
    r"|analysers?|modules?|subscriptions?|(test|task|unit|qa)[ -](lists?|sets?|templates?|forms?|protocols?|groups?))\b",
    re.IGNORECASE,
)

SAID = [
    ("withdraw-at-once", "cracked lens"),
    ("withdraw-at-once", "pierced sheath"),
    ("conforming-not-safe", "no statement that a scan is safe"),
    ("alara", "as low as reasonably achievable"),
    ("electrical-trained-staff", "only by trained staff"),
    ("memory-limits", "compare with your own copy"),
    ("return-to-use", "physicist or clinical engineer"),
    ("obstetric-dwell", "never as permission"),
]


def _texts(value, place):
    if isinstance(value, dict):
        for key, inner in value.items():
            if key not in QUOTED:
                yield from _texts(inner, f"{place}.{key}")
    elif isinstance(value, list):
        for index, inner in enumerate(value):
            yield from _texts(inner, f"{place}[{index}]")
    elif isinstance(value, str):
        yield place, value


@pytest.mark.parametrize(("code", "words"), SAID)
def test_caution_says_what_must_be_shown(code, words):
    assert words in CAUTIONS[code].text


def test_obstetric_dwell_times_join_without_a_gap():
    table = CAUTIONS["obstetric-dwell"].table
    assert [row.minutes for row in table] == [None, "60", "30", "15", "4", "1", None]
    assert [row.from_value for row in table] == ["0", "0.7", "1.0", "1.5", "2.0", "2.5", "3.0"]
    assert [row.to_value for row in table] == [*(row.from_value for row in table[1:]), None]
    assert table[-1].says == "not recommended"


def test_obstetric_dwell_times_carry_source_and_standing():
    caution = CAUTIONS["obstetric-dwell"]
    assert (caution.source, caution.standing) == ("BMUS 2009", "memory")


def test_only_the_caution_with_numbers_has_a_standing():
    assert [code for code, one in CAUTIONS.items() if one.standing] == ["obstetric-dwell"]


@pytest.mark.parametrize("path", sorted(FOLDER.glob("[cp]r*/*.json")), ids=lambda path: path.stem)
def test_no_text_uses_a_word_to_avoid(path):
    # The title of a published work keeps its words.
    content = path.read_text().replace("Tables for Normal Tolerance Limits", "Odeh and Owen's tables")
    texts = list(_texts(json.loads(content), path.stem))
    assert texts
    assert [(place, text) for place, text in texts if AVOIDED.search(text)] == []


def test_a_word_to_avoid_is_found_when_it_is_there():
    assert AVOIDED.search("Fill in the test list")
    assert not AVOIDED.search("Test object, unitless")
