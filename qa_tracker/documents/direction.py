"""Reading order: a line of text to the order its glyphs stand in, by the Unicode bidirectional algorithm.

The library orders and mirrors, but knows neither isolates nor paired brackets (rule N0 of UAX 9). Isolates
are ordered one by one, which is what they mean; brackets get direction marks that decide for them.
"""

from __future__ import annotations

import re
import unicodedata

from bidi import get_base_level
from bidi.algorithm import get_display

OPEN_ISOLATE, CLOSE_ISOLATE = "\u2068", "\u2069"
ISOLATES = re.compile(f"[{OPEN_ISOLATE}{CLOSE_ISOLATE}]")
RIGHT_TO_LEFT = re.compile("[\u0590-\u08ff\ufb1d-\ufdff\ufe70-\ufefc]")
MARKS = {"L": "\u200e", "R": "\u200f"}
BRACKETS = {"(": ")", "[": "]", "{": "}"}
STRONG = {"L": "L", "R": "R", "AL": "R", "EN": "R", "AN": "R"}


def visual(line: str) -> str:
    """Give the line as drawn from left to right; fields set as isolates keep their places."""
    if not RIGHT_TO_LEFT.search(line):
        return ISOLATES.sub("", line)
    return "".join(_ordered(field) for field in ISOLATES.split(line))


def _ordered(field: str) -> str:
    if not RIGHT_TO_LEFT.search(field):
        return field
    base = "R" if get_base_level(field) else "L"
    drawn = str(get_display(_with_brackets_decided(field, base), base_dir=base))
    return drawn.replace(MARKS["L"], "").replace(MARKS["R"], "")


def _with_brackets_decided(field: str, base: str) -> str:
    """Put marks on both sides of every paired bracket, by rule N0 of UAX 9."""
    decided = {}
    for opening, closing in _pairs(field):
        direction = _bracket_direction(field, opening, closing, base)
        decided[opening] = decided[closing] = MARKS[direction]
    return "".join(
        f"{decided[place]}{character}{decided[place]}" if place in decided else character
        for place, character in enumerate(field)
    )


def _pairs(field: str) -> list[tuple[int, int]]:
    """Match brackets from the inside out; unmatched ones are left to the library."""
    opened: list[tuple[str, int]] = []
    pairs = []
    for place, character in enumerate(field):
        if character in BRACKETS:
            opened.append((BRACKETS[character], place))
        elif opened and character == opened[-1][0]:
            pairs.append((opened.pop()[1], place))
    return sorted(pairs)


def _bracket_direction(field: str, opening: int, closing: int, base: str) -> str:
    """Follow what is inside if it agrees with the line; else what is inside and before, if they agree."""
    inside = _strong(field[opening:closing])
    if not inside or base in inside:
        return base
    before = _strong(field[:opening]) or [base]
    return inside[-1] if before[-1] == inside[-1] else base


def _strong(text: str) -> list[str]:
    kinds = (unicodedata.bidirectional(character) for character in text)
    return [STRONG[kind] for kind in kinds if kind in STRONG]
