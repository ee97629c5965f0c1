"""A physicist of the group with a draft of one procedure: what the tests of the editor's pages stand on."""

from __future__ import annotations

from dataclasses import dataclass

from django.test import Client
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.records.models import Person, Procedure
from qa_tracker.services import edition_drafts
from qa_tracker.services.edition_drafts import Kept
from tests import builders

REPAIR = "after-repair-or-change"


@dataclass(frozen=True)
class Ground:
    """Who writes, in which browser, and which procedure."""

    admin: Person
    physicist: Person
    client: Client
    procedure: Procedure

    def address(self, name: str = "", *more: str) -> str:
        """The address of one of the draft's pages."""
        return reverse(f"edition-draft-{name}" if name else "edition-draft", args=[self.procedure.uid, *more])

    def draft(self) -> Kept:
        """The draft as it is kept."""
        return edition_drafts.get(procedure=self.procedure.uid, actor=self.physicist, at=now())

    def key(self, code: str) -> str:
        """The key of a measurand by its code."""
        return next(each.key for each in self.draft().writing.measurands if each.typed.get("code") == code)

    def inputs(self, part: str, **typed: str) -> dict[str, object]:
        """What the page of a part would send, some of it typed anew."""
        kept = self.draft()
        before = dict(kept.writing.part(part).typed)
        limits = before.pop("criteria", "").split()
        several = ("performed_by", "cautions", "applies_kinds", "qualifiers", "kinds", "not_for_array_kinds")
        sent: dict[str, object] = {
            name: text.split() if name in several else text for name, text in before.items()
        }
        sent |= {f"limit-{number}": code for number, code in enumerate(limits, 1)}
        return sent | typed | {"seen": str(kept.revision)}

    def page(self, name: str = "", *more: str) -> str:
        """The text of one of the draft's pages."""
        return self.client.get(self.address(name, *more)).content.decode()


def ground(code: str = REPAIR) -> Ground:
    """A published procedure and its next edition, begun."""
    admin = builders.first_administrator()
    builders.publish([code])
    physicist = builders.person(admin, "oduya", "physicist", None, "Maren Oduya")
    client = builders.signed_in(physicist)
    made = Ground(admin, physicist, client, Procedure.objects.get())
    client.post(made.address("start"))
    return made
