"""Judge JSON lines by limits given beside each reading; no database is touched."""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Iterator
from contextlib import nullcontext
from typing import Any, BinaryIO

from django.core.management.base import BaseCommand, CommandError, CommandParser
from django.utils import translation

from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.judging_lines import answer, judge_line
from qa_tracker.services.wording import refusal, verdict_sentence

LONGEST_LINE = 1_000_000
ABOUT = """\
Each line is one JSON object, numbers as text:

  value, nominal, baseline, reference (the other reading of a ratio),
  quantity (for bands), uncertainty (expanded, k = 2),
  rule        simple (default), guarded or zones
  criterion   basis      nominal, baseline, none or ratio
              direction  either, above or below
              strict     true for "more than" (default), false for "at least"
              remedial and/or suspension: absolute, percent,
                         governs: larger (default), smaller or either
              bands      a list of: from, below, remedial, suspension

Each answer is one JSON line in the same order: verdict, and where something
was compared departure, allowance, used and (with an uncertainty) probability;
always a sentence. A line that can't be read answers {"error": ...} and the
others go on.
"""


class Command(BaseCommand):
    """Answer each line with its verdict, the arithmetic and the sentence."""

    help = "Judge readings from JSON lines, without a database. Exit status 1 if any line could not be read."
    requires_system_checks = ()

    def create_parser(self, prog_name: str, subcommand: str, **kwargs: Any) -> CommandParser:
        parser = super().create_parser(prog_name, subcommand, epilog=ABOUT, **kwargs)
        parser.formatter_class = argparse.RawDescriptionHelpFormatter
        return parser

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument(
            "file", nargs="?", default="-", help="JSON lines to judge; - or nothing: standard input"
        )

    def handle(self, *args: Any, **options: Any) -> None:
        refused = False
        try:
            with translation.override("en"), _opened(options["file"]) as lines:
                for told in answers(lines):
                    refused = refused or "error" in told
                    self.stdout.write(json.dumps(told, ensure_ascii=False))
            self.stdout.flush()
        except BrokenPipeError:
            # Whoever read the answers has had enough; nothing is left to be flushed into a closed pipe.
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        if refused:
            sys.exit(1)


def _opened(name: str) -> Any:
    if name == "-":
        return nullcontext(sys.stdin.buffer)
    try:
        return open(name, "rb")  # closed by the caller's with
    except OSError as error:
        raise CommandError(
            f"{name} can't be read: {error.strerror}. Name a file of JSON lines, or -."
        ) from error


def answers(lines: BinaryIO) -> Iterator[dict[str, Any]]:
    """Answer every line that holds something."""
    first = True
    while raw := lines.readline(LONGEST_LINE + 1):
        whole = raw.endswith(b"\n") or len(raw) <= LONGEST_LINE
        while not raw.endswith(b"\n") and not whole and (rest := lines.readline(LONGEST_LINE)):
            if rest.endswith(b"\n"):
                break
        if first:
            raw, first = raw.removeprefix(b"\xef\xbb\xbf"), False
        if not whole:
            yield _error(Invalid("line.too_large", most=LONGEST_LINE))
        elif raw.strip():
            yield answer_line(raw)


def answer_line(raw: bytes) -> dict[str, Any]:
    """Answer one line: the verdict with its sentence, or what is wrong with the line."""
    try:
        judgement = judge_line(_parsed(raw))
    except DomainError as error:
        return _error(error)
    sentence = verdict_sentence(
        str(judgement.code), judgement.parameters, judgement.verdict, judgement.level or ""
    )
    return {**answer(judgement), "sentence": sentence}


def _error(error: DomainError) -> dict[str, str]:
    return {"error": refusal(error)}


def _parsed(raw: bytes) -> Any:
    try:
        return json.loads(
            raw.decode("utf-8"),
            object_pairs_hook=_once_each,
            parse_float=_as_number,
            parse_int=_as_text,
            parse_constant=_as_number,
        )
    except UnicodeDecodeError as error:
        raise Invalid("line.not_utf8", at=error.start + 1) from error
    except json.JSONDecodeError as error:
        raise Invalid("line.not_json", at=error.pos + 1) from error
    except RecursionError as error:
        raise Invalid("line.too_deep") from error


def _once_each(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) < len(pairs):
        names = [name for name, _ in pairs]
        twice = next(name for name in names if names.count(name) > 1)
        raise Invalid("line.key_twice", field=twice, key=twice)
    return found


def _as_text(digits: str) -> str:
    """Take a whole number as its digits, which are exact."""
    return digits


def _as_number(text: str) -> Any:
    """Refuse a JSON number: a reader or writer may have made a binary float of it on its way."""
    raise Invalid("line.not_text", value=text[:40])
