"""The tables of states in DEVELOPERS.md are those of the code."""

from __future__ import annotations

from config.env import BASE_DIR
from qa_tracker.ops.management.commands.print_workflow import workflow_section


def test_workflow_section_is_current_when_the_tables_change():
    text = (BASE_DIR / "DEVELOPERS.md").read_text(encoding="utf-8")
    section = text.split("compared by a test -->\n")[1].split("<!-- /workflow -->")[0]
    assert section.strip() == workflow_section().strip()
