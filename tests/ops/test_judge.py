"""Judging JSON lines from a script: the answers, what can't be read, and that no database is asked."""

from __future__ import annotations

import json
import os
import random
import subprocess
import sys
from fractions import Fraction
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
UPPER = {"basis": "none", "direction": "above", "suspension": {"absolute": "500"}}
NEAR = {"basis": "nominal", "direction": "either", "remedial": {"absolute": "0.3"}}


def judged(lines: bytes | str, tmp_path: Path, *names: str) -> tuple[int, list[dict], str]:
    """Exit status, answers, and what went to standard error; the database named does not exist."""
    given = lines.encode() if isinstance(lines, str) else lines
    done = subprocess.run(
        [sys.executable, "manage.py", "judge", *names],
        input=given, capture_output=True, cwd=ROOT, timeout=60, check=False,
        env={**os.environ, "DATABASE_URL": "postgresql://nobody@127.0.0.1:1/none", "DATA_DIR": str(tmp_path),
             "DJANGO_SETTINGS_MODULE": "config.settings", "LC_ALL": "C", "PYTHONDONTWRITEBYTECODE": "1"},
    )  # fmt: skip
    return done.returncode, [json.loads(line) for line in done.stdout.splitlines()], done.stderr.decode()


def lines_of(*objects: dict) -> str:
    return "".join(json.dumps(each) + "\n" for each in objects)


GIVEN = {
    "exactly the limit": (
        {"value": "20.3", "nominal": "20.0", "criterion": NEAR},
        {"verdict": "conforming", "departure": "0.3", "allowance": "0.3", "used": "100.0"},
    ),
    "exactly a limit that fails": (
        {"value": "20.3", "nominal": "20.0", "criterion": NEAR | {"strict": False}},
        {"verdict": "remedial", "departure": "0.3", "allowance": "0.3", "used": "100.0"},
    ),
    "a share": (
        {"value": "40.61", "nominal": "40",
         "criterion": {"basis": "nominal", "direction": "above", "remedial": {"percent": "1.5"}}},
        {"verdict": "remedial", "departure": "0.61", "allowance": "0.6", "used": "101.7"},
    ),
    "a ratio": (
        {"value": "176", "reference": "210",
         "criterion": {"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}}},
        {"verdict": "suspension", "departure": "176", "allowance": "168", "used": "104.8"},
    ),
    "a gain": (
        {"value": "160", "baseline": "150",
         "criterion": {"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}}},
        {"verdict": "conforming", "departure": "-10", "allowance": "6", "used": "0.0"},
    ),
    "a lower limit": (
        {"value": "1.9",
         "criterion": {"basis": "none", "direction": "below", "suspension": {"absolute": "2"}}},
        {"verdict": "suspension", "departure": "1.9", "allowance": "2", "used": "105.3"},
    ),
    "a band without a name": (
        {"value": "5.5", "quantity": "7",
         "criterion": {"basis": "none", "direction": "above", "bands": [
             {"below": "7", "remedial": {"absolute": "5"}}, {"from": "7", "remedial": {"absolute": "3"}}]}},
        {"verdict": "remedial", "departure": "5.5", "allowance": "3", "used": "183.3"},
    ),
    "numbers as exponents and whole numbers": (
        {"value": 600, "criterion": UPPER | {"suspension": {"absolute": "5e2"}}},
        {"verdict": "suspension", "departure": "600", "allowance": "500", "used": "120.0"},
    ),
    "nulls": (
        {"value": "1", "nominal": None, "rule": None, "uncertainty": "", "criterion": UPPER},
        {"verdict": "conforming", "departure": "1", "allowance": "500", "used": "0.2"},
    ),
    "no value": ({"criterion": UPPER}, {"verdict": "not_assessable"}),
    "no nominal": ({"value": "1", "criterion": NEAR}, {"verdict": "not_assessable"}),
    "not finite": ({"value": "NaN", "criterion": UPPER}, {"verdict": "not_assessable"}),
}  # fmt: skip


def test_answers_are_those_of_the_kernel_with_a_sentence_each(tmp_path):
    status, found, _ = judged(lines_of(*(given for given, _ in GIVEN.values())), tmp_path)
    assert (status, len(found)) == (0, len(GIVEN))
    for name, answer in zip(GIVEN, found, strict=True):
        assert answer.pop("sentence").endswith((".", "%.")), name
        assert answer == GIVEN[name][1], name


def test_rules_give_the_probability_as_a_number(tmp_path):
    rules = [{"value": "490", "uncertainty": "20", "rule": rule, "criterion": UPPER} for rule in RULES]
    _, found, _ = judged(lines_of(*rules), tmp_path)
    assert [answer["verdict"] for answer in found] == list(RULES.values())
    assert {round(answer["probability"], 9) for answer in found} == {0.841344746}


RULES = {"simple": "conforming", "guarded": "suspension", "zones": "indeterminate"}

REFUSED = {
    b'{"value": 4.9, "criterion": {}}': "4.9 is not written as text",
    b'{"value": NaN}': "NaN is not written as text",
    b"nope": "The line is not JSON",
    b"[1]": "no JSON object",
    b'{"value": "1", "value": "2"}': "stands twice",
    b'{"value": "1", "tolerance": "2"}': "is not known here",
    b'{"value": "1"}': "no criterion",
    b'{"value": "1", "criterion": {"direction": "above", "remedial": {"absolute": "1"}}}': "criterion.basis",
    b'{"value": "> 160", "criterion": {"basis": "none", "direction": "above", "remedial": {"absolute": "1"}}}': (
        "no unit or sign"
    ),
    b'{"value": "1e999", "criterion": {"basis": "none", "direction": "above", "remedial": {"absolute": "1"}}}': (
        "40 digits"
    ),
    b'{"value": "1", "uncertainty": "-1", "criterion": {"basis": "none", "direction": "above", "remedial": '
    b'{"absolute": "1"}}}': "uncertainty",
    b'{"value": "1", "rule": "loose", "criterion": {"basis": "none", "direction": "above", "remedial": '
    b'{"absolute": "1"}}}': "loose",
    b'{"value": "\xff"}': "not UTF-8",
    b'{"value": "\x00"}': "not JSON",
    b"[" * 100_000: "nested too deeply",
    b'{"value": "' + b"9" * 1_000_001 + b'"}': "longer than",
}


def test_line_that_can_not_be_read_says_why_and_the_rest_go_on(tmp_path):
    good = lines_of({"value": "501", "criterion": UPPER}).encode()
    status, found, _ = judged(good.join(line + b"\n" for line in REFUSED) + good, tmp_path)
    assert status == 1
    assert [answer.get("verdict") for answer in found[1::2]] == ["suspension"] * len(REFUSED)
    for words, answer in zip(REFUSED.values(), found[0::2], strict=True):
        assert words in answer["error"]


def test_file_is_read_when_it_has_a_mark_empty_lines_and_no_last_line_end(tmp_path):
    file = tmp_path / "lines.jsonl"
    one = lines_of({"value": "1", "criterion": UPPER}).encode().replace(b"\n", b"\r\n")
    file.write_bytes(b"\xef\xbb\xbf" + one + b"\r\n\n" + one.rstrip())
    status, found, _ = judged("", tmp_path, str(file))
    assert (status, [answer["verdict"] for answer in found]) == (0, ["conforming"] * 2)


def test_file_that_is_not_there_is_named(tmp_path):
    status, found, told = judged("", tmp_path, "missing.jsonl")
    assert (status, found) == (1, [])
    assert "missing.jsonl can't be read" in told


def test_reader_that_has_had_enough_is_no_error(tmp_path):
    many = tmp_path / "many.jsonl"
    many.write_text(lines_of({"value": "1", "criterion": UPPER}) * 3000)
    script = f"{sys.executable} manage.py judge {many} | head -n 1"
    done = subprocess.run(script, shell=True, capture_output=True, cwd=ROOT, timeout=60, check=True)
    assert (json.loads(done.stdout)["verdict"], done.stderr) == ("conforming", b"")


def test_answers_agree_with_fractions_for_random_decimals(tmp_path):
    chance = random.Random(20261201)
    given = [_random_line(chance) for _ in range(3000)]
    _, found, _ = judged(lines_of(*given), tmp_path)
    for line, answer in zip(given, found, strict=True):
        assert answer["verdict"] == _by_fractions(line), line


def _random_line(chance: random.Random) -> dict:
    places = chance.choice((0, 1, 2, 5))
    text = f"{chance.randint(900, 1100) / 10:.1f}"
    limit = f"{chance.randint(0, 40) / 10:.{places}f}" if places else str(chance.randint(0, 9))
    value = f"{Fraction(text) + chance.choice((-1, 1)) * Fraction(limit)}"
    value = str(_decimal(Fraction(value) + Fraction(chance.randint(-2, 2), 10 ** max(places, 1)), 6))
    criterion = {
        "basis": "nominal", "direction": chance.choice(("either", "above", "below")),
        "strict": chance.random() < 0.5, "remedial": {"absolute": limit},
        "suspension": {"absolute": str(_decimal(Fraction(limit) + Fraction(1, 10), 6))},
    }  # fmt: skip
    return {"value": value, "nominal": text, "criterion": criterion}


def _decimal(value: Fraction, places: int) -> str:
    scaled = round(value * 10**places)
    sign, digits = ("-" if scaled < 0 else ""), str(abs(scaled)).rjust(places + 1, "0")
    return f"{sign}{digits[:-places]}.{digits[-places:]}"


def _by_fractions(line: dict) -> str:
    criterion = line["criterion"]
    change = Fraction(line["value"]) - Fraction(line["nominal"])
    worse = {"either": abs(change), "above": change, "below": -change}[criterion["direction"]]
    for level in ("suspension", "remedial"):
        allowed = Fraction(criterion[level]["absolute"])
        if worse > allowed or (worse == allowed and not criterion["strict"]):
            return level
    return "conforming"
