"""Judge JSON lines by limits given beside each reading; no database is touched."""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Iterator
from contextlib import AbstractContextManager, nullcontext
from typing import Any, BinaryIO, Final

from django.core.management.base import BaseCommand, CommandError, CommandParser, DjangoHelpFormatter
from django.utils import translation

from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.judging_lines import answer, judge_line
from qa_tracker.services.wording import refusal, verdict_sentence

LONGEST_LINE = 1_000_000
MARK = b"\xef\xbb\xbf"
# JSON leaves these as they are, but many readers of lines end a line at them.
LINE_ENDS: Final = {0x85: "\\u0085", 0x2028: "\\u2028", 0x2029: "\\u2029"}
ABOUT = """\
Each line holds one JSON object:

  value        the reading
  nominal      the true value, for basis nominal
  baseline     the device's baseline, for basis baseline
  reference    the other reading, for basis ratio
  quantity     what bands are chosen by
  uncertainty  expanded, k = 2
  rule         simple (default), guarded or zones
  criterion    basis       nominal, baseline, none or ratio
               direction   either, above or below: which way is worse
               strict      true (default): exactly the limit conforms;
                           false: the limit itself is beyond
               remedial    one level or both, each with absolute, percent
               suspension  and governs: larger (default), smaller or either
               bands       instead of levels, a list of objects with from,
                           below (half-open), remedial, suspension

Numbers are text, such as "20.3" or "5e2", with a point. A JSON number is taken
only if it is whole, for it may have been a binary float. Null, a blank text and
a key that is left out mean the same; a key not named here is refused. NaN and
Infinity as text are not assessable. Empty lines are skipped.

Each answer is one line of JSON, in the order of the lines: verdict (conforming,
remedial, suspension, indeterminate or not_assessable); departure and allowance
of the level that decides, as exact decimals; used, the share of the first
level's allowance in percent; probability of conformity with the level that
decides (the first level of a conforming reading), where an uncertainty was
given; and always a sentence. What was not compared is left out. A line that
can't be read is answered by {"error": "what, why and what to do"}, and the
others go on.

For example, these two as one line each:

  {"value": "20.3", "nominal": "20.0", "criterion": {"basis": "nominal",
   "direction": "either", "remedial": {"absolute": "0.3"}}}
  {"verdict": "conforming", "departure": "0.3", "allowance": "0.3",
   "used": "100.0", "sentence": "20.3 is 0.3 more than the nominal value ..."}
"""


class _HelpFormatter(DjangoHelpFormatter, argparse.RawDescriptionHelpFormatter):
    """Leave the lines of the description as they are; what every command has stands last."""


class Command(BaseCommand):
    """Answer each line with its verdict, the arithmetic and the sentence."""

    help = (
        "Judge readings from JSON lines, by the limits given beside them, without a database.\n"
        "Exit status 1 if any line could not be read."
    )
    requires_system_checks = ()

    def create_parser(self, prog_name: str, subcommand: str, **kwargs: Any) -> CommandParser:
        return super().create_parser(
            prog_name, subcommand, epilog=ABOUT, formatter_class=_HelpFormatter, **kwargs
        )

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument(
            "file", metavar="FILE", nargs="?", default="-", help="JSON lines; - or nothing: standard input"
        )

    def handle(self, *args: Any, **options: Any) -> None:
        self._write_lines_at_once()
        refused = False
        try:
            # The sentences are written in English; without a language no catalogue is asked for each.
            with translation.override(None), _opened(options["file"]) as file:
                for told in answers(file):
                    refused = refused or "error" in told
                    self.stdout.write(written(told))
            self.stdout.flush()
        except BrokenPipeError:
            # Whoever read the answers has had enough; nothing is left to be flushed into a closed pipe.
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        except OSError as error:
            raise CommandError(
                f"Judging stopped where no more could be read or written: {error.strerror}."
            ) from error
        if refused:
            sys.exit(1)

    def _write_lines_at_once(self) -> None:
        """Write UTF-8 whatever the locale, and each answer before the next line is awaited.

        Half of a surrogate pair, which UTF-8 can't hold, is written as the escape that JSON has for it.
        """
        if reconfigure := getattr(self.stdout, "reconfigure", None):
            reconfigure(encoding="utf-8", errors="backslashreplace", newline="\n", line_buffering=True)


def _opened(name: str) -> AbstractContextManager[BinaryIO]:
    if name == "-":
        if sys.stdin is None:
            raise CommandError("Standard input is closed. Name a file of JSON lines.")
        return nullcontext(sys.stdin.buffer)
    try:
        return open(name, "rb")  # closed by the caller's with
    except OSError as error:
        raise CommandError(
            f"{name} can't be read: {error.strerror}. Name a file of JSON lines, or -."
        ) from error


def answers(file: BinaryIO) -> Iterator[dict[str, Any]]:
    """Answer every line that holds something."""
    for raw in _lines(file):
        if raw is None:
            yield _error(Invalid("line.too_large", most=LONGEST_LINE))
        elif held := raw.removeprefix(MARK).strip():
            yield answer_line(held)


def _lines(file: BinaryIO) -> Iterator[bytes | None]:
    """Give line after line; None for one that is too long, of which no more than a part is ever held."""
    while raw := file.readline(LONGEST_LINE + 1):
        if len(raw) <= LONGEST_LINE or raw.endswith(b"\n"):
            yield raw
            continue
        while (rest := file.readline(LONGEST_LINE)) and not rest.endswith(b"\n"):
            pass
        yield None


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


def written(told: dict[str, Any]) -> str:
    """Write an answer as one line; only an error can quote signs that end one."""
    text = json.dumps(told, ensure_ascii=False, allow_nan=False)
    return text.translate(LINE_ENDS) if "error" in told else text


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
        twice = next(name for name in names if names.count(name) > 1)[:40]
        raise Invalid("line.key_twice", field=twice, key=twice)
    return found


def _as_text(digits: str) -> str:
    """Take a whole number as its digits, which are exact."""
    return digits


def _as_number(text: str) -> Any:
    """Refuse a JSON number: a reader or writer may have made a binary float of it on its way."""
    raise Invalid("line.not_text", value=text[:40])
