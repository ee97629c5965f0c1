"""Shapes shared by all nouns: moments, words, pages. Shapes of one noun lie beside its routes."""

from __future__ import annotations

import datetime as dt
import uuid
from typing import Annotated, Any

from ninja import Schema
from pydantic import AfterValidator, AwareDatetime, ConfigDict, Field, PlainSerializer, WithJsonSchema

LARGEST_KEY = 2**63 - 1
MOST = 200


def _written(moment: dt.datetime) -> str:
    return moment.astimezone(dt.UTC).isoformat().replace("+00:00", "Z")


def _plain(words: str) -> str:
    if "\x00" in words or any("\ud800" <= letter <= "\udfff" for letter in words):
        raise ValueError("holds a character that can not be kept")
    return words


Moment = Annotated[
    AwareDatetime,
    PlainSerializer(_written, return_type=str),
    WithJsonSchema({"type": "string", "format": "date-time"}),
]
"""An instant, read with any offset and written in UTC."""

Words = Annotated[str, AfterValidator(_plain), Field(max_length=4000)]
Short = Annotated[str, AfterValidator(_plain), Field(max_length=300)]
Name = Annotated[str, AfterValidator(_plain), Field(max_length=120)]
Mark = Annotated[str, AfterValidator(_plain), Field(max_length=60)]
Secret = Annotated[
    str, AfterValidator(_plain), Field(max_length=300, json_schema_extra={"format": "password"})
]
Sha256 = Annotated[str, Field(pattern="^[0-9a-f]{64}$")]
Cursor = Annotated[int, Field(ge=0, le=LARGEST_KEY, description="`next` of the page before.")]
Limit = Annotated[int, Field(ge=1, le=MOST, description="Most rows of a page.")]


class Given(Schema):
    """A body: a name it does not know is refused, so that a slip can't pass unseen."""

    model_config = ConfigDict(extra="forbid")


class Ref(Schema):
    """The address of a thing."""

    uid: uuid.UUID


def page(rows: list[Any], limit: int, cursor_of: str = "id") -> dict[str, Any]:
    """One page out of ``limit + 1`` rows: its items, and the cursor of the next page while there is one."""
    items = rows[:limit]
    following = getattr(items[-1], cursor_of) if len(rows) > limit else None
    return {"items": items, "next": following}
