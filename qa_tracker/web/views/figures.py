"""Acoustic figures that a physicist wants while testing, each with its source."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

from qa_tracker.services import cautions
from qa_tracker.web.presenters.figures import shown_figures

CAUTIONS = ("alara", "display-only", "obstetric-dwell")


def show(request: HttpRequest) -> HttpResponse:
    """Every figure, worked out from what the address says; nothing is stored."""
    dwell = cautions.published()["obstetric-dwell"]
    context = {
        "figures": shown_figures({name: str(value) for name, value in request.GET.items()}),
        "cautions": cautions.texts(CAUTIONS),
        "dwell": dwell,
    }
    return render(request, "figures.html", context)
