"""Sentences for what is refused of calendar feeds."""

from __future__ import annotations

from typing import Final

from django.utils.translation import gettext_noop as N_

FEEDS: Final = {
    "feed.none": N_("Your calendar has no address in force, so there is none to end. Get one first."),
}
