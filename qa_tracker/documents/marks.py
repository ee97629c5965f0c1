"""Verdict marks and the words beside them, set into a flow of text."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from qa_tracker.core.figures import VERDICT_COLOURS, Shape, verdict_mark
from qa_tracker.documents.canvas import Cell, Flow, Style
from qa_tracker.documents.fonts import BOLD, text_width
from qa_tracker.documents.text import printable

MARK = 7.6
GAP = 4.5


def scaled(shape: Shape, scale: float) -> Shape:
    """Give a shape of the unit square in points."""
    steps = tuple((letter, tuple(n * scale for n in numbers)) for letter, numbers in shape.steps)
    return replace(shape, steps=steps, stroke_width=shape.stroke_width * scale)


def draw_mark(flow: Flow, verdict: str, x: float, top: float, size: float = MARK) -> None:
    """Draw the mark of a verdict with its upper left corner at a place."""
    flow.draw((scaled(shape, size) for shape in verdict_mark(verdict)), x, top)


def word_style(verdict: str, size: float, leading: float) -> Style:
    """Give the style of a verdict's word."""
    return Style(size, leading, BOLD, VERDICT_COLOURS[verdict])


def verdict_cell(
    flow: Flow, verdict: str, labels: Mapping[str, str], x: float, width: float, leading: float = 12.5
) -> Cell:
    """Draw the mark for the row about to be set, and give the cell with its word; no mark where nothing judged."""
    if not verdict:
        return Cell(printable(labels["no_limit"]), x, width, Style(8.2, leading))
    draw_mark(flow, verdict, x, flow.y - leading / 2 + MARK / 2 - 0.6)
    word = printable(labels[verdict])
    return Cell(word, x + MARK + GAP, width - MARK - GAP, word_style(verdict, 8.6, leading))


def verdict_width(verdict: str, labels: Mapping[str, str], style: Style) -> float:
    """Measure mark and word together."""
    return MARK + GAP + text_width(printable(labels[verdict]), style.font, style.size)
