"""The published limits give the published verdicts, at the limit and one resolution step beyond it."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.library import criteria_set

FOLDER = Path(__file__).parents[2] / "fixtures" / "criteria"
LIBRARY = {
    criterion.id: criterion
    for path in sorted(FOLDER.glob("*.json"))
    if path.stem != "cautions"
    for criterion in criteria_set(json.loads(path.read_text())).criteria
}

# criterion, reading, what it is judged against, verdict
CASES = [
    ("TG1-VERT", "101.5", {"nominal": "100"}, "conforming"),
    ("TG1-VERT", "101.6", {"nominal": "100"}, "remedial"),
    ("TG1-VERT", "97.9", {"nominal": "100"}, "suspension"),
    ("TG1-VERT", "41.5", {"nominal": "40"}, "conforming"),
    ("TG1-HORZ", "204.1", {"nominal": "200"}, "remedial"),
    ("TG1-HORZ", "206.0", {"nominal": "200"}, "remedial"),
    ("TG1-HORZ", "206.1", {"nominal": "200"}, "suspension"),
    ("TG1-PEN", "146.0", {"baseline": "152.0"}, "conforming"),
    ("TG1-PEN", "145.4", {"baseline": "152.0"}, "remedial"),
    ("TG1-PEN", "141.8", {"baseline": "152.0"}, "suspension"),
    ("TG1-PEN", "165", {"baseline": "152"}, "conforming"),
    ("TG1-PEN", "145.4", {}, "not_assessable"),
    ("TG1-UNIF", "3.9", {}, "conforming"),
    ("TG1-UNIF", "4.0", {}, "remedial"),
    ("TG1-UNIF", "6.0", {}, "suspension"),
    ("TG1-RING", "7.0", {"quantity": "2.5"}, "conforming"),
    ("TG1-RING", "5.5", {"quantity": "3"}, "remedial"),
    ("TG1-RING", "5.0", {"quantity": "6.9"}, "conforming"),
    ("TG1-RING", "3.5", {"quantity": "7"}, "remedial"),
    ("TG1-RING", "3.5", {}, "not_assessable"),
    ("TG128-AX", "97.9", {"nominal": "100"}, "remedial"),
    ("TG128-LAT", "103.0", {"nominal": "100"}, "conforming"),
    ("TG128-PEN", "141", {"baseline": "152"}, "remedial"),
    ("TG128-RES", "2.1", {"baseline": "1.1"}, "conforming"),
    ("TG128-RES", "2.2", {"baseline": "1.1"}, "remedial"),
    ("TG128-GREY", "10", {"baseline": "12"}, "remedial"),
    ("TG128-GREY", "28", {"baseline": "30"}, "conforming"),
    ("TG128-AREA", "-5.0", {"nominal": "0"}, "conforming"),
    ("TG128-VOL", "5.1", {"nominal": "0"}, "remedial"),
    ("TG128-GRID", "3.1", {}, "remedial"),
    ("DROP", "1", {}, "conforming"),
    ("DROP", "2", {}, "remedial"),
    ("DROP", "4", {}, "suspension"),
    ("62353-PE-EQUIPMENT", "200", {}, "conforming"),
    ("62353-PE-TOGETHER", "301", {}, "suspension"),
    ("62353-EL-I-DIRECT", "501", {}, "suspension"),
    ("62353-EL-II-DIRECT", "101", {}, "suspension"),
    ("62353-AP-CF", "50", {}, "conforming"),
    ("TOE-80", "62", {"reference": "210"}, "conforming"),
    ("TOE-80", "168", {"reference": "210"}, "conforming"),
    ("TOE-80", "176", {"reference": "210"}, "suspension"),
    ("TEMP-CONTACT", "43.0", {}, "conforming"),
    ("TEMP-AIR", "27.1", {}, "suspension"),
    ("OUT-MI", "1.9", {}, "conforming"),
    ("OUT-EYE-MI", "0.24", {}, "suspension"),
]


@pytest.mark.parametrize(
    ("name", "value", "against", "verdict"), CASES, ids=[f"{row[0]} {row[1]} {row[3]}" for row in CASES]
)
def test_published_limit_gives_its_verdict(name, value, against, verdict):
    assert judge(LIBRARY[name].criterion, value=value, kind="number", **against).verdict == verdict


@pytest.mark.parametrize(
    ("grade", "verdict"), [("green", "conforming"), ("amber", "remedial"), ("red", "suspension")]
)
def test_probe_grade_gives_its_verdict(grade, verdict):
    assert judge(LIBRARY["PROBE-GRADE"].criterion, value=grade, kind="grade").verdict == verdict
