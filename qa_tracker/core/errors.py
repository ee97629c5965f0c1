"""Refusals as codes and parameters; the sentence a person reads is made at the edge, in their language."""

from __future__ import annotations


class DomainError(Exception):
    """A command was refused.

    Parameters
    ----------
    code
        Stable dotted name, e.g. ``"reading.too_fine"``; every code has a sentence in
        ``services/wording.py`` (a test compares the two).
    field
        The input the refusal belongs to, where there is one.
    parameters
        Values the sentence needs.
    """

    def __init__(self, code: str, *, field: str = "", **parameters: object) -> None:
        super().__init__(code, parameters)
        self.code = code
        self.field = field
        self.parameters = parameters


class Invalid(DomainError):
    """What was given can't be used."""


class Forbidden(DomainError):
    """The person's role does not allow it here."""


class NotFound(DomainError):
    """There is no such thing, or it is out of the person's sight: the two are never told apart."""


class Conflict(DomainError):
    """The thing is in a state, or was changed meanwhile, so that this can't be done now."""


class SeveralInvalid(DomainError):
    """Several refusals at once, one for each input that needs mending."""

    def __init__(self, errors: tuple[DomainError, ...]) -> None:
        super().__init__("several")
        self.errors = errors
