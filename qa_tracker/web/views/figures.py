"""Acoustic figures that a physicist wants while testing, each with its source."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

from qa_tracker.services import cautions
from qa_tracker.web.forms.figure_list import FIGURES
from qa_tracker.web.forms.figures import shown_figures
from qa_tracker.web.presenters.known_numbers import known_numbers


def show(request: HttpRequest) -> HttpResponse:
    """Every figure, worked out from what the address says; nothing is stored."""
    typed = {name: str(value) for name, value in request.GET.items()}
    context = {
        "figures": shown_figures(FIGURES, typed),
        "dwell": cautions.published()["obstetric-dwell"],
        "numbers": known_numbers(),
    }
    return render(request, "figures.html", context)
