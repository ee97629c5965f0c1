"""Who can sign in to the demo, as columns for a terminal."""

from __future__ import annotations

SHOWN = ("name", "username", "password", "role", "site")


def people_table(people: list[dict[str, str]]) -> str:
    """The people in columns under their headings; nothing for nobody."""
    if not people:
        return ""
    rows = [{key: key for key in SHOWN}, *people]
    widths = {key: max(len(row[key]) for row in rows) for key in SHOWN}
    return "\n".join("  ".join(row[key].ljust(widths[key]) for key in SHOWN).rstrip() for row in rows)
