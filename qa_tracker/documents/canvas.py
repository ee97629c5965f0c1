"""Pages laid out as plain marks first and painted afterwards, so that every page knows how many there are."""

from __future__ import annotations

import io
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from typing import Any

from reportlab.lib.colors import HexColor
from reportlab.lib.pagesizes import A4
from reportlab.pdfgen.canvas import Canvas

from qa_tracker.core.figures import BORDER, INK, RULE, Shape
from qa_tracker.documents.fonts import BOLD, REGULAR, face, text_width
from qa_tracker.documents.text import wrapped

WIDTH, HEIGHT = float(A4[0]), float(A4[1])
LEFT, RIGHT = 56.0, WIDTH - 48.0
TOP, BOTTOM = HEIGHT - 68.0, 62.0
COLUMN = RIGHT - LEFT


@dataclass(frozen=True)
class Style:
    """A way to set text; sizes in points."""

    size: float
    leading: float
    font: str = REGULAR
    colour: str = INK


DISPLAY = Style(21, 26, BOLD)
SECTION = Style(13, 17, BOLD)
HEADING = Style(10.5, 14, BOLD)
BODY = Style(9, 12.5)
SMALL = Style(7.8, 10.6, colour=BORDER)


@dataclass
class Page:
    """What stands on one page, in points from its lower left corner."""

    texts: list[tuple[float, float, Style, str]] = field(default_factory=list)
    shapes: list[tuple[float, float, Shape]] = field(default_factory=list)
    bookmarks: list[tuple[str, int, float]] = field(default_factory=list)


@dataclass(frozen=True)
class Cell:
    """Text in a column of a row."""

    text: str
    x: float
    width: float
    style: Style = BODY
    to_right: bool = False

    def lines(self) -> tuple[str, ...]:
        """Break the text to the column."""
        return wrapped(self.text, self.style.font, self.style.size, self.width)


class Flow:
    """A pen that walks down the pages; ``y`` is the top of what comes next.

    ``carried`` is repeated at the head of every page it is turned to, so that nothing stands there unnamed.
    """

    def __init__(self) -> None:
        self.pages = [Page()]
        self.y = TOP
        self.carried = ""

    @property
    def page(self) -> Page:
        """Give the page being filled."""
        return self.pages[-1]

    @property
    def at_top(self) -> bool:
        """Say whether nothing but the carried line stands on this page yet."""
        return self.y >= TOP - (16 if self.carried else 0)

    def turn(self) -> None:
        """Begin a new page."""
        self.pages.append(Page())
        self.y = TOP
        if self.carried:
            self.page.texts.append((LEFT, TOP - 8, SMALL, self.carried))
            self.y = TOP - 16

    def need(self, height: float) -> None:
        """Turn the page unless the height still fits."""
        if self.y - height < BOTTOM and not self.at_top:
            self.turn()

    def space(self, height: float) -> None:
        """Leave a gap, except at the top of a page."""
        if not self.at_top:
            self.y -= height

    def bookmark(self, title: str, level: int) -> None:
        """Let the outline lead here."""
        self.page.bookmarks.append((title, level, self.y))

    def write(self, text: str, style: Style = BODY, x: float = LEFT, width: float = COLUMN) -> None:
        """Set a paragraph, over the end of the page where it must."""
        self.row((Cell(text, x, width, style),))

    def row(self, cells: Sequence[Cell]) -> None:
        """Set cells side by side; a tall row runs on overleaf."""
        columns = [(cell, cell.lines()) for cell in cells]
        tallest = max((len(lines) for _, lines in columns), default=0)
        leading = max((cell.style.leading for cell in cells), default=0.0)
        for number in range(tallest):
            self.need(leading)
            self.y -= leading
            for cell, lines in columns:
                if number < len(lines):
                    self._put(cell, lines[number], leading)

    def _put(self, cell: Cell, line: str, leading: float) -> None:
        x = cell.x
        if cell.to_right:
            x += cell.width - text_width(line, cell.style.font, cell.style.size)
        self.page.texts.append((x, self.y + leading * 0.26, cell.style, line))

    def draw(self, shapes: Iterable[Shape], x: float, top: float) -> None:
        """Put shapes with their upper left corner at a place on this page."""
        self.page.shapes.extend((x, top, shape) for shape in shapes)

    def rule(self, colour: str = RULE, weight: float = 0.5, x: float = LEFT, width: float = COLUMN) -> None:
        """Draw a hairline here."""
        steps = (("M", (0.0, 0.0)), ("L", (width, 0.0)))
        self.draw((Shape(steps, "rule", stroke=colour, stroke_width=weight),), x, self.y)


def paint(pages: Sequence[Page], *, title: str, author: str, subject: str, language: str) -> bytes:
    """Write the pages as a PDF; the same pages give the same bytes."""
    face(REGULAR), face(BOLD)
    out = io.BytesIO()
    canvas = Canvas(
        out,
        pagesize=A4,
        invariant=1,
        pageCompression=0,
        initialFontName=REGULAR,
        lang=language,
        pdfVersion=(1, 7),
    )
    canvas.setTitle(title)
    canvas.setAuthor(author)
    canvas.setSubject(subject)
    canvas.setCreator("Leadline")
    for number, page in enumerate(pages):
        _paint_bookmarks(canvas, page, number)
        for x, top, shape in page.shapes:
            _paint_shape(canvas, x, top, shape)
        _paint_texts(canvas, page)
        canvas.showPage()
    canvas.showOutline()
    canvas.save()
    return out.getvalue()


def _paint_bookmarks(canvas: Any, page: Page, number: int) -> None:
    for index, (title, level, top) in enumerate(page.bookmarks):
        key = f"{number}-{index}"
        canvas.bookmarkPage(key, fit="XYZ", left=0, top=top + 8, zoom=0)
        canvas.addOutlineEntry(title, key, level, closed=level > 0)


def _paint_shape(canvas: Any, x: float, top: float, shape: Shape) -> None:
    path = canvas.beginPath()
    for letter, numbers in shape.steps:
        points = [top - n if index % 2 else x + n for index, n in enumerate(numbers)]
        {"M": path.moveTo, "L": path.lineTo, "C": path.curveTo, "Z": path.close}[letter](*points)
    if shape.fill != "none":
        canvas.setFillColor(HexColor(shape.fill))
    if shape.stroke != "none":
        canvas.setStrokeColor(HexColor(shape.stroke))
        canvas.setLineWidth(shape.stroke_width)
    canvas.drawPath(path, stroke=shape.stroke != "none", fill=shape.fill != "none", fillMode=1)


def _paint_texts(canvas: Any, page: Page) -> None:
    """Draw all text of a page in one text object, changing face and colour only where they change."""
    text = canvas.beginText()
    now: Style | None = None
    for x, y, style, line in page.texts:
        if now is None or (style.font, style.size) != (now.font, now.size):
            text.setFont(style.font, style.size)
        if now is None or style.colour != now.colour:
            text.setFillColor(HexColor(style.colour))
        now = style
        text.setTextOrigin(x, y)
        text.textOut(line)
    canvas.drawText(text)
