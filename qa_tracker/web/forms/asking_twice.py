"""Asking, showing what it would change, and only then taking the signature: one address, three pages."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

from qa_tracker.core.errors import DomainError, Forbidden, NotFound
from qa_tracker.web import refused
from qa_tracker.web.forms.asking import Act, Asked, attempt, show_again
from qa_tracker.web.forms.fields import Field, Words, keep
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.refused import Refused

AT_SIGNING = frozenset({"password", "shown_sha256"})
NOT_KEPT = frozenset({"csrfmiddlewaretoken", "password", "shown_sha256", "change", "username"})


@dataclass(frozen=True)
class Ready:
    """What was asked for, as it would be recorded, and the hash that the signature is bound to."""

    shown_sha256: str
    context: Mapping[str, object]


@dataclass(frozen=True)
class Signing:
    """The page on which it is signed."""

    title: Words
    button: Words
    states: Words
    template: str


Propose = Callable[[Typed], Ready]
More = Callable[[Refused, Sequence[Field]], tuple[Field, ...]]


def ask_twice(
    request: HttpRequest, asked: Asked, signing: Signing, propose: Propose, act: Act, more: More
) -> HttpResponse:
    """Ask; show what was asked for as it would be recorded; sign it.

    ``more`` puts in the fields that a refusal asks for besides. Nothing is recorded before the signature, and what is
    signed is what was shown.
    """
    if request.method != "POST":
        return render(request, "ask.html", {"asked": asked})
    if "change" in request.POST:
        kept = replace(asked, fields=keep(asked.fields, request.POST))
        return render(request, "ask.html", {"asked": kept})
    answer: HttpResponse | Refused = Refused()
    if "shown_sha256" in request.POST:
        answer = attempt(request, act)
        if isinstance(answer, HttpResponse):
            return answer
    if any(each.field not in AT_SIGNING for each in answer.refusals):
        return _again(request, asked, answer, more)
    try:
        ready = propose(Typed(request.POST))
    except (NotFound, Forbidden):
        raise
    except DomainError as error:
        return _again(request, asked, refused.of(error), more)
    return _sign(request, asked, signing, ready, answer)


def _again(request: HttpRequest, asked: Asked, answer: Refused, more: More) -> HttpResponse:
    return show_again(request, replace(asked, fields=more(answer, asked.fields)), answer)


def _sign(
    request: HttpRequest, asked: Asked, signing: Signing, ready: Ready, answer: Refused
) -> HttpResponse:
    typed = [
        (name, value) for name, values in request.POST.lists() if name not in NOT_KEPT for value in values
    ]
    context = {"asked": asked, "signing": signing, "ready": ready, "typed": typed, "refused": answer}
    return render(request, signing.template, context | dict(ready.context), status=422 if answer else 200)
