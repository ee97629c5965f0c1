"""Reading what was typed: days, whole numbers, choices and lines, refused beside their field."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import QueryDict

from qa_tracker.core.errors import Invalid

LONGEST_REMARK = 4000
# What a state, a placement and an excuse keep of a reason.
LONGEST_REASON = 300


class Typed:
    """What a form sent."""

    def __init__(self, given: QueryDict) -> None:
        self.given = given

    def text(self, name: str, most: int = 120) -> str:
        """A text without surrounding blanks; refused when longer than can be kept (``form.too_long``)."""
        text = str(self.given.get(name, "")).strip()
        if len(text) > most:
            raise Invalid("form.too_long", field=name, most=most, length=len(text))
        return text

    def words(self, name: str) -> str:
        """A remark of several lines."""
        return self.text(name, LONGEST_REMARK).replace("\r\n", "\n")

    def raw(self, name: str) -> str:
        """A password, exactly as typed."""
        return str(self.given.get(name, ""))

    def ticked(self, name: str) -> bool:
        """Whether a box was ticked."""
        return bool(self.given.get(name))

    def several(self, name: str) -> list[str]:
        """Every value of a field."""
        return [str(value) for value in self.given.getlist(name)]

    def day(self, name: str) -> dt.date:
        """A day; refused when missing or no day (``form.day_wrong``)."""
        try:
            return dt.date.fromisoformat(self.text(name))
        except ValueError as error:
            raise Invalid("form.day_wrong", field=name, entered=self.text(name)) from error

    def day_or_none(self, name: str) -> dt.date | None:
        """A day, or none when left empty."""
        return self.day(name) if self.text(name) else None

    def whole(self, name: str, most: int = 99999) -> int:
        """A whole number from 0; refused otherwise (``form.whole_wrong``)."""
        return whole(self.text(name), name, most)

    def whole_or_none(self, name: str, most: int = 99999) -> int | None:
        """A whole number, or none when left empty."""
        return self.whole(name, most) if self.text(name) else None

    def choice(self, name: str) -> uuid.UUID:
        """The uid of what was chosen; refused when nothing was (``form.choice_missing``)."""
        try:
            return uuid.UUID(self.text(name))
        except ValueError as error:
            raise Invalid("form.choice_missing", field=name) from error

    def choice_or_none(self, name: str) -> uuid.UUID | None:
        """The uid of what was chosen, or none."""
        return self.choice(name) if self.text(name) else None

    def pairs(self, name: str) -> dict[str, str]:
        """Lines of ``name: value``; refused where a line has no colon or a name comes twice."""
        found: dict[str, str] = {}
        for line in self.words(name).splitlines():
            key, colon, value = (part.strip() for part in line.partition(":"))
            if not line.strip():
                continue
            if not (key and colon and value) or key in found:
                raise Invalid("form.line_wrong", field=name, line=line.strip())
            found[key] = value
        return found


def whole(text: str, name: str, most: int = 99999) -> int:
    """A whole number from 0 to ``most``, in plain digits."""
    if not (text.isascii() and text.isdigit() and len(text) < 7) or int(text) > most:
        raise Invalid("form.whole_wrong", field=name, entered=text, most=most)
    return int(text)
