"""Typed texts of a draft, read as the values of a document; what can't be read stays the text it is."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, TypeAlias

Typed: TypeAlias = Mapping[str, str]
"""Inputs by name, just as typed; several choices of one input are joined by blanks, an empty one may be absent."""

YES = "yes"


def neat(typed: Typed, name: str) -> str:
    """Give a text without the blanks around it; empty where nothing was typed."""
    return typed.get(name, "").strip().replace("\r\n", "\n")


def marked(typed: Typed, name: str) -> bool:
    """Tell whether a box was marked."""
    return bool(neat(typed, name))


def flag(value: Any) -> str:
    """Write a mark as it is typed."""
    return YES if value else ""


def words(typed: Typed, name: str) -> list[str]:
    """Give the single words of a text, each once.

    Examples
    --------
    >>> words({"criteria": "TG1-PEN  TG128-PEN TG1-PEN"}, "criteria")
    ['TG1-PEN', 'TG128-PEN']
    """
    return list(dict.fromkeys(neat(typed, name).split()))


def whole(text: str) -> int | str:
    """Read a whole number; any other text stays as it is, to be refused.

    Examples
    --------
    >>> whole("6"), whole("six")
    (6, 'six')
    """
    return int(text) if text.isascii() and text.isdecimal() and len(text) < 7 else text


def decimal(text: str) -> str:
    """Write a decimal with a point, as documents have it.

    Examples
    --------
    >>> decimal(" 0,5 ")
    '0.5'
    """
    return text.strip().replace(",", ".")
