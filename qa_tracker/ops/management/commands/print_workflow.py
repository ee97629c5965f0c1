"""Print the states and their transitions as DEVELOPERS.md shows them."""

from __future__ import annotations

from typing import Any

from django.core.management.base import BaseCommand

from qa_tracker.core.workflow import WORKFLOWS, markdown_table


def workflow_section() -> str:
    """Every table of states as Markdown, under its noun."""
    return "\n".join(
        f"### {noun.capitalize()}\n\n{markdown_table(workflow)}" for noun, workflow in WORKFLOWS.items()
    )


class Command(BaseCommand):
    """Print the workflow section."""

    help = "Print the tables of states for DEVELOPERS.md (between its two workflow marks)."

    def handle(self, *args: Any, **options: Any) -> None:
        self.stdout.write(workflow_section())
