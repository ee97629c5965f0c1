"""Asking and answering: a page with one form that shows what was typed again where it is refused."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render

from qa_tracker.core.errors import DomainError, Forbidden, Invalid, NotFound, SeveralInvalid
from qa_tracker.web import refused
from qa_tracker.web.forms.fields import Field, Words, keep, unanswered
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.refused import Refused

NOTHING = Refused()


@dataclass(frozen=True)
class Asked:
    """One form: its words, its fields, and the way back."""

    title: Words
    button: Words
    back: str
    back_to: Words
    fields: tuple[Field, ...] = ()
    lead: Words = ""
    notes: tuple[Words, ...] = ()
    cautions: tuple[Words, ...] = ()
    preview: Words = ""
    action: str = ""
    refused: Refused = NOTHING


@dataclass(frozen=True)
class Done:
    """What was recorded, and where to go on."""

    says: Words
    address: str


Act = Callable[[Typed], Done]


def attempt(request: HttpRequest, act: Act) -> HttpResponseRedirect | Refused:
    """Do what was asked and go on, or say what kept it from being recorded.

    A role that does not allow it, and what is out of sight, are no matter of the form.
    """
    try:
        done = act(Typed(request.POST))
    except (NotFound, Forbidden):
        raise
    except DomainError as error:
        return refused.of(error)
    messages.success(request, done.says)
    return HttpResponseRedirect(done.address)


def ask(
    request: HttpRequest, asked: Asked, act: Act, template: str = "ask.html", **context: object
) -> HttpResponse:
    """Show the form, or act on what it sent; refused, the page comes again as it was typed, with status 422."""
    if request.method != "POST":
        return render(request, template, {"asked": asked, **context})
    answer = attempt(request, act)
    if isinstance(answer, HttpResponse):
        return answer
    return show_again(request, asked, answer, template, **context)


def show_again(
    request: HttpRequest, asked: Asked, answer: Refused, template: str = "ask.html", **context: object
) -> HttpResponse:
    """The page as it was typed, with what was refused."""
    whole = _with_unanswered(answer, unanswered(asked.fields, request.POST))
    kept = replace(asked, fields=keep(asked.fields, request.POST), refused=whole)
    return render(request, template, {"asked": kept, **context}, status=422)


def _with_unanswered(answer: Refused, names: tuple[str, ...]) -> Refused:
    """What was refused, and every further question that was left open, so that all are mended at once."""
    open_ones = tuple(Invalid("form.unanswered", field=name) for name in names if not answer.at(name))
    if not open_ones:
        return answer
    return Refused((*answer.refusals, *refused.of(SeveralInvalid(open_ones)).refusals))
