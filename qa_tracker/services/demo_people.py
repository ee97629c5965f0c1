"""The demo's people, all invented. One password for all of them: it protects nothing and is shown on the screen."""

from __future__ import annotations

from dataclasses import dataclass

PASSWORD = "tarnwater-demo-1"
GROUP = "Tarnwater Hospitals Group"


@dataclass(frozen=True)
class Invented:
    """Someone of the demo; without a site the role holds in the whole group."""

    username: str
    name: str
    role: str
    site: str | None = None


CAST = (
    Invented("oduya", "Dr Maren Oduya", "physicist"),
    Invented("rao-lindqvist", "Tobias Rao-Lindqvist", "physicist"),
    Invented("castellane", "Ifeoma Castellane", "technician", "AG"),
    Invented("dragic", "Hywel Dragić", "technician", "AG"),
    Invented("achterberg", "Sunniva Achterberg", "technician", "KB"),
    Invented("penhallow", "Jory Penhallow", "technician", "SO"),
    Invented("okonjo", "Ruaridh Okonjo", "engineer"),
    Invented("nakamura-holt", "Priya Nakamura-Holt", "lead", "AG"),
    Invented("moss", "Benedikta Moss", "administrator"),
    Invented("fairweather", "Laszlo Fairweather", "auditor"),
    Invented("barak-yarden", "נוגה ברק־ירדן", "user", "AG"),
)
"""The names a reader meets; the last is written from right to left."""


def people() -> list[dict[str, str]]:
    """Everyone who can sign in to the demo, with what is needed to do so."""
    return [
        {
            "name": each.name,
            "username": each.username,
            "password": PASSWORD,
            "role": each.role,
            "site": each.site or "all",
        }
        for each in CAST
    ]
