"""Judging JSON lines from a script: the answers, what can't be read, and that nothing is read or kept."""

from __future__ import annotations

import io
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
from django.core.management import call_command
from django.core.management.base import CommandError

from qa_tracker.ops.management.commands import judge

ROOT = Path(__file__).resolve().parents[2]
UPPER = {"basis": "none", "direction": "above", "suspension": {"absolute": "500"}}
NEAR = {"basis": "nominal", "direction": "either", "remedial": {"absolute": "0.3"}}


def judged(lines: bytes | str, file: Path) -> tuple[int, list[dict]]:
    """Exit status and answers; this process may touch no database."""
    file.write_bytes(lines if isinstance(lines, bytes) else lines.encode())
    out, status = io.StringIO(), 0
    try:
        call_command("judge", str(file), stdout=out)
    except SystemExit as end:
        status = int(end.code or 0)
    return status, [json.loads(line) for line in out.getvalue().splitlines()]


@pytest.fixture
def file(tmp_path):
    return tmp_path / "lines.jsonl"


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
    "a whole JSON number": (
        {"value": 600, "criterion": UPPER | {"suspension": {"absolute": 500}}},
        {"verdict": "suspension", "departure": "600", "allowance": "500", "used": "120.0"},
    ),
    "no value": ({"criterion": UPPER}, {"verdict": "not_assessable"}),
    "no nominal": ({"value": "1", "criterion": NEAR}, {"verdict": "not_assessable"}),
    "not finite": ({"value": "NaN", "criterion": UPPER}, {"verdict": "not_assessable"}),
    "outside the bands": (
        {"value": "1", "quantity": "7",
         "criterion": {"basis": "none", "direction": "above", "bands": [{"below": "7", "remedial": {"absolute": "5"}}]}},
        {"verdict": "not_assessable"},
    ),
}  # fmt: skip


def test_answers_are_those_of_the_kernel_with_a_sentence_each(file):
    status, found = judged(lines_of(*(given for given, _ in GIVEN.values())), file)
    assert (status, len(found)) == (0, len(GIVEN))
    for name, answer in zip(GIVEN, found, strict=True):
        assert answer.pop("sentence").endswith((".", "%.")), name
        assert answer == GIVEN[name][1], name


def test_sentence_says_why_in_english(file):
    _, found = judged(lines_of(GIVEN["a ratio"][0]), file)
    assert found[0]["sentence"] == (
        "176 against 210 is 83.8\u00a0%; the suspension level begins above 80\u00a0% (here 168): suspension. "
        "It uses 104.8\u00a0% of the allowance."
    )


RULES = {"simple": "conforming", "guarded": "suspension", "zones": "indeterminate"}


def test_rules_give_the_probability_as_a_number(file):
    rules = [{"value": "490", "uncertainty": "20", "rule": rule, "criterion": UPPER} for rule in RULES]
    _, found = judged(lines_of(*rules), file)
    assert [answer["verdict"] for answer in found] == list(RULES.values())
    assert {round(answer["probability"], 9) for answer in found} == {0.841344746}


C = b'"criterion": {"basis": "none", "direction": "above", "remedial": {"absolute": "1"}}}'
REFUSED = {
    b'{"value": 4.9, "criterion": {}}': "4.9 is not written as text",
    b'{"value": "1", "criterion": {"remedial": {"absolute": 1e3}}}': "1e3 is not written as text",
    b'{"value": NaN}': "NaN is not written as text",
    b"nope": "The line is not JSON",
    b"{} {}": "breaks at character 4",
    b"[1]": "no JSON object",
    b'{"value": "1", "value": "2"}': "“value” stands twice",
    b'{"criterion": {"basis": "none", "basis": "none"}}': "“basis” stands twice",
    b'{"value": "1", "tolerance": "2"}': "“tolerance” is not known here. Use: baseline, criterion",
    b'{"value": "1"}': "no criterion",
    b'{"value": "1", "criterion": {"direction": "above", "remedial": {"absolute": "1"}}}': "criterion.basis",
    b'{"value": true, ' + C: "value is true, which is no number",
    b'{"value": "> 160", '
    + C: "value: “> 160” is not a decimal number. Write digits with a point, and no unit or sign",
    b'{"value": "1e999", ' + C: "40 digits",
    b'{"value": "1", "uncertainty": "-1", ' + C: "uncertainty",
    b'{"value": "1", "rule": "loose", ' + C: "loose",
    b'{"value": "1", "criterion": {"grades": {"red": "suspension"}}}': "criterion.grades can't be judged from a line",
    b'{"value": "1", "criterion": {"basis": "none", "direction": "above", "remedial": {"absolute": "1e-13"}}}': (
        "criterion.remedial.absolute: “1e-13” is longer than a limit can be, which is 15 digits and 12 decimal places"
    ),
    b'{"value": "\xff"}': "not UTF-8: it breaks at byte 12",
    b'{"value": "\x00"}': "not JSON",
    b'\x00{"value": "1"}': "not JSON",
    b"[" * 100_000: "nested too deeply",
    b'{"criterion": ' + b'{"bands":' * 600 + b"1" + b"}" * 601: "nested too deeply",
    b'{"value": "' + b"9" * 1_000_001 + b'"}': "longer than 1000000 bytes",
    '{"\\ud800": 1, "\u2028": 2}'.encode(): "“\ud800” is not known here",
}


def test_line_that_can_not_be_read_says_why_and_the_rest_go_on(file):
    good = lines_of({"value": "501", "criterion": UPPER}).encode()
    status, found = judged(good.join(line + b"\n" for line in REFUSED) + good, file)
    assert status == 1
    assert [answer.get("verdict") for answer in found[1::2]] == ["suspension"] * len(REFUSED)
    for words, answer in zip(REFUSED.values(), found[0::2], strict=True):
        assert list(answer) == ["error"]
        assert words in answer["error"]


def test_lines_are_read_when_there_are_marks_blank_lines_and_no_last_line_end(file):
    one = lines_of({"value": "1", "criterion": UPPER}).encode().replace(b"\n", b"\r\n")
    mark = b"\xef\xbb\xbf"
    status, found = judged(mark + one + b"\r\n\n \t\n" + mark + one.rstrip(), file)
    assert (status, [answer["verdict"] for answer in found]) == (0, ["conforming"] * 2)


@pytest.mark.parametrize("lines", [b"", b"\n\n", b"\xef\xbb\xbf"])
def test_nothing_is_answered_when_there_is_no_line(lines, file):
    assert judged(lines, file) == (0, [])


def test_line_is_read_up_to_the_longest_and_not_beyond(file):
    one = lines_of({"value": "1", "criterion": UPPER}).strip()
    most = one.ljust(judge.LONGEST_LINE)
    status, found = judged(f"{most}\n{most} \n{most} ", file)
    assert (status, [next(iter(answer)) for answer in found]) == (1, ["verdict", "error", "error"])


def test_quoted_signs_that_end_a_line_stay_in_it_when_split(file):
    _, found = judged('{"a\u2028b": 1}\n{"a\x85b": 1}\n'.encode(), file)
    assert [answer["error"][:5] for answer in found] == ["“a\u2028b”", "“a\x85b”"]


@pytest.mark.parametrize("name", ["missing.jsonl", "."])
def test_file_that_can_not_be_read_is_named(name, tmp_path):
    with pytest.raises(CommandError, match=r"can't be read: .* Name a file of JSON lines"):
        call_command("judge", str(tmp_path / name))


def test_standard_input_is_asked_for_when_it_is_closed(monkeypatch):
    monkeypatch.setattr(sys, "stdin", None)
    with pytest.raises(CommandError, match="Standard input is closed"):
        call_command("judge", "-")


def started(*names: str, data_dir: Path) -> subprocess.Popen[bytes]:
    """The command as a script starts it: another locale, a data folder and a database that are not there."""
    kept = {name: each for name, each in os.environ.items() if name != "SECRET_KEY"}
    place = {
        "DATABASE_URL": "postgresql://nobody@127.0.0.1:1/none", "DATA_DIR": str(data_dir), "LC_ALL": "C",
        "DJANGO_SETTINGS_MODULE": "config.settings", "PYTHONIOENCODING": "latin-1", "PYTHONDONTWRITEBYTECODE": "1",
    }  # fmt: skip
    return subprocess.Popen(
        [sys.executable, "manage.py", "judge", *names], cwd=ROOT, env=kept | place,
        stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.PIPE,
    )  # fmt: skip


def test_each_line_is_answered_before_the_next_when_a_script_waits_for_it(tmp_path):
    asking = started(data_dir=tmp_path / "none")
    for line, key in ((lines_of({"value": "1", "criterion": UPPER}), "verdict"), ("nope\n", "error")):
        asking.stdin.write(line.encode())
        asking.stdin.flush()
        assert key in json.loads(asking.stdout.readline().decode())
    rest, told = asking.communicate('{"\\ud800\u201c": 1}\n'.encode(), timeout=60)
    assert rest.decode().startswith('{"error": "“\\ud800“” is not known here.')
    assert (asking.returncode, told, (tmp_path / "none").exists()) == (1, b"", False)


def test_reader_that_has_had_enough_is_no_error(tmp_path):
    many = tmp_path / "many.jsonl"
    many.write_text(lines_of({"value": "1", "criterion": UPPER}) * 3000)
    asking = started(str(many), data_dir=tmp_path / "none")
    assert asking.stdout.readline()
    asking.stdout.close()
    assert (asking.wait(timeout=60), asking.stderr.read()) == (0, b"")
    asking.stdin.close()
    asking.stderr.close()
