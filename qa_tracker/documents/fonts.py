"""The two faces of a document, FiraGO regular and bold, given to the PDF library as bytes and embedded."""

from __future__ import annotations

import io
from functools import cache, lru_cache

import pymupdf_fonts
from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont

REGULAR = "FiraGO-Regular"
BOLD = "FiraGO-Bold"
UNDRAWN = "\u2068\u2069"
FILES = {REGULAR: "figo", BOLD: "figbo"}


@cache
def face(name: str) -> TTFont:
    """Give a face, registered with the PDF library on first use."""
    font = TTFont(name, io.BytesIO(pymupdf_fonts.myfont(FILES[name])))
    pdfmetrics.registerFont(font)
    return font


def has_glyph(character: str) -> bool:
    """Say whether both faces can draw a character."""
    return all(ord(character) in face(name).face.charToGlyph for name in FILES)


@cache
def advances(name: str) -> dict[str, float]:
    """Give the width of every character in parts of the type size."""
    widths = {chr(code): width / 1000 for code, width in face(name).face.charWidths.items()}
    return widths | dict.fromkeys(UNDRAWN, 0.0)


@lru_cache(maxsize=16384)
def text_width(text: str, name: str, size: float) -> float:
    """Measure printable text in points."""
    widths = advances(name)
    return size * sum(widths.get(character, 0.0) for character in text)
