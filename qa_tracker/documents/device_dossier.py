"""A device dossier as a PDF: frozen content in, the same bytes out every time."""

from __future__ import annotations

from collections.abc import Sequence

from qa_tracker.core.figures import RULE, VERDICT_COLOURS, Shape
from qa_tracker.documents.canvas import COLUMN, HEIGHT, LEFT, RIGHT, SMALL, Flow, Page, Style, paint
from qa_tracker.documents.chapters import draw_back, draw_checks, draw_front
from qa_tracker.documents.content import DeviceDossier
from qa_tracker.documents.fonts import text_width
from qa_tracker.documents.frozen import require_complete
from qa_tracker.documents.text import printable, shortened

HEADER_Y = HEIGHT - 44
FOOTER_Y = 34.0
DEMO = Style(SMALL.size, SMALL.leading, colour=VERDICT_COLOURS["suspension"])


def device_dossier_pdf(content: DeviceDossier) -> bytes:
    """Draw the dossier; it is complete but for its seal."""
    require_complete(content)
    pages = laid_out(content)
    return paint(
        pages,
        title=printable(f"{content.title}: {content.device}"),
        author=printable(content.group),
        subject=printable(content.uid),
        language=content.language,
    )


def laid_out(content: DeviceDossier) -> Sequence[Page]:
    """Give the finished pages, header and footer on each."""
    flow = Flow()
    draw_front(flow, content)
    draw_checks(flow, content)
    draw_back(flow, content)
    for number, page in enumerate(flow.pages, start=1):
        _footer(page, content, number, len(flow.pages))
        if number > 1:
            _header(page, content)
    return flow.pages


def _header(page: Page, content: DeviceDossier) -> None:
    group = shortened(content.group, SMALL.font, SMALL.size, COLUMN / 2 - 10)
    device = shortened(content.device, SMALL.font, SMALL.size, COLUMN / 2 - 10)
    page.texts.append((LEFT, HEADER_Y, SMALL, group))
    page.texts.append((RIGHT - text_width(device, SMALL.font, SMALL.size), HEADER_Y, SMALL, device))
    _hairline(page, HEADER_Y - 6)


def _footer(page: Page, content: DeviceDossier, number: int, count: int) -> None:
    place = printable(content.labels["page"].replace("{n}", str(number)).replace("{m}", str(count)))
    _hairline(page, FOOTER_Y + 12)
    page.texts.append((LEFT, FOOTER_Y, SMALL, shortened(content.uid, SMALL.font, SMALL.size, COLUMN / 2)))
    page.texts.append((RIGHT - text_width(place, SMALL.font, SMALL.size), FOOTER_Y, SMALL, place))
    if content.demo_key:
        notice = shortened(content.labels["demo_key"], DEMO.font, DEMO.size, COLUMN)
        page.texts.append((LEFT, FOOTER_Y - 12, DEMO, notice))


def _hairline(page: Page, y: float) -> None:
    steps = (("M", (0.0, 0.0)), ("L", (COLUMN, 0.0)))
    page.shapes.append((LEFT, y, Shape(steps, "rule", stroke=RULE, stroke_width=0.5)))
