"""A refused command as a form shows it: sentences beside their fields, and all of them at the top."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from qa_tracker.core.errors import DomainError, SeveralInvalid
from qa_tracker.services import wording


@dataclass(frozen=True)
class Refusal:
    """One sentence and the field it belongs to (empty: the whole form), with the field's name where several say it."""

    code: str
    field: str
    sentence: str
    name: str = ""


@dataclass(frozen=True)
class Refused:
    """Every refusal of one attempt; without any, nothing was refused."""

    refusals: tuple[Refusal, ...] = ()

    def __bool__(self) -> bool:
        return bool(self.refusals)

    def at(self, field: str) -> str:
        """The sentence beside a field, or nothing."""
        return " ".join(each.sentence for each in self.refusals if each.field == field)

    def codes_at(self, field: str) -> set[str]:
        """The codes beside a field."""
        return {each.code for each in self.refusals if each.field == field}

    def named(self, names: Mapping[str, str]) -> Refused:
        """The same refusals with the names of their fields, as far as they are known."""
        return Refused(tuple(replace(each, name=names.get(each.field, "")) for each in self.refusals))


def of(error: DomainError) -> Refused:
    """Put a refusal, or several, in words."""
    errors = error.errors if isinstance(error, SeveralInvalid) else (error,)
    return Refused(tuple(Refusal(one.code, one.field, wording.refusal(one)) for one in errors))
