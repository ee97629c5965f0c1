"""The one place where the standalone program touches the demo's data."""

from __future__ import annotations

from django.core.management import call_command
from django.core.management.base import OutputWrapper

from qa_tracker.ops.people_table import SHOWN
from qa_tracker.records.queries.people import any_person, person_by_username
from qa_tracker.services.demo import people


def load_when_empty(progress: OutputWrapper) -> None:
    """Load the demo into a database that nobody can sign in to yet; never into one that is in use."""
    if not any_person():
        call_command("load_demo", stdout=progress, verbosity=0)


def demo_people() -> list[dict[str, str]]:
    """The demo's people who have an account in this database, with what is needed to sign in as them."""
    return [
        {key: str(person[key]) for key in SHOWN}
        for person in people()
        if person_by_username(str(person["username"])) is not None
    ]
