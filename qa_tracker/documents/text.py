"""Text made safe to draw: nothing in it is markup, nothing invisible acts, every letter has a glyph.

Arabic letters are put in the right order but not joined: the face holds the joined forms only behind a
shaping table.
"""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable, Iterator
from functools import lru_cache

from qa_tracker.documents.direction import CLOSE_ISOLATE, OPEN_ISOLATE, visual
from qa_tracker.documents.fonts import has_glyph, text_width

# Marks that only steer order, joining or hyphenation: dropped, since order comes from the letters.
SILENT = frozenset("\u200b\u200c\u200d\u200e\u200f\u061c\u2060\ufeff\u00ad")
SEPARATOR = " · "


@lru_cache(maxsize=8192)
def printable_character(character: str) -> str:
    """Give what is drawn for one character; what can't be drawn shows as its code point, never as nothing."""
    if character in SILENT:
        return ""
    if character.isspace():
        return " "
    if unicodedata.category(character) not in ("Cc", "Cf", "Cs", "Co", "Cn") and has_glyph(character):
        return character
    return f"[U+{ord(character):04X}]"


def printable(text: str) -> str:
    """Give the text to draw, composed where Unicode has a composed form, spaces single."""
    drawn = "".join(printable_character(character) for character in unicodedata.normalize("NFC", text))
    return " ".join(drawn.split())


def joined(parts: Iterable[str], separator: str = SEPARATOR) -> str:
    """Set fields side by side so that the direction of one never moves its neighbours; empty ones are left out."""
    fields = [printable(part) for part in parts]
    return separator.join(f"{OPEN_ISOLATE}{part}{CLOSE_ISOLATE}" for part in fields if part)


def wrapped(text: str, font: str, size: float, width: float) -> tuple[str, ...]:
    """Break printable text into lines in the order they are drawn; a word too long is broken anywhere."""
    return tuple(visual(line) for line in _lines(text, font, size, width))


def _lines(text: str, font: str, size: float, width: float) -> Iterator[str]:
    space = text_width(" ", font, size)
    line, used = "", 0.0
    for word in _short_words(text, font, size, width):
        needed = text_width(word, font, size)
        if line and used + space + needed > width:
            yield line
            line, used = word, needed
        else:
            used += needed + (space if line else 0.0)
            line = f"{line} {word}" if line else word
    if line:
        yield line


def _short_words(text: str, font: str, size: float, width: float) -> Iterator[str]:
    for word in text.split(" "):
        if text_width(word, font, size) <= width:
            yield word
        else:
            yield from _pieces(word, font, size, width)


def _pieces(word: str, font: str, size: float, width: float) -> Iterator[str]:
    """Cut a word that is wider than the column, never before a mark that sits on its letter."""
    piece, used = "", 0.0
    for character in word:
        needed = text_width(character, font, size)
        if piece and used + needed > width and not unicodedata.combining(character):
            yield piece
            piece, used = "", 0.0
        piece += character
        used += needed
    yield piece


def shortened(text: str, font: str, size: float, width: float) -> str:
    """Give the first line of a text, with an ellipsis where there is more."""
    lines = wrapped(printable(text), font, size, width)
    if len(lines) < 2:
        return "".join(lines)
    return wrapped(printable(text), font, size, width - text_width("…", font, size))[0] + "…"


def moment_text(moment: str) -> str:
    """Write an ISO moment to the minute with its offset: ``2026-03-14 09:31 +00:00``."""
    if len(moment) < 16 or moment[10:11] != "T":
        return moment
    clock, sign, offset = moment[11:], "", ""
    for mark in ("+", "-"):
        before, found, after = clock.partition(mark)
        if found:
            clock, sign, offset = before, mark, after
    if clock.endswith("Z"):
        clock, sign, offset = clock[:-1], "+", "00:00"
    return f"{moment[:10]} {clock[:5]} {sign}{offset}".strip()
