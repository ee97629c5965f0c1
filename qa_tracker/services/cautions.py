"""The cautions that come with the published library, read once."""

from __future__ import annotations

import json
from collections.abc import Iterable
from functools import lru_cache

from django.conf import settings

from qa_tracker.core import library
from qa_tracker.core.library_specs import CautionSpec


@lru_cache(maxsize=1)
def published() -> dict[str, CautionSpec]:
    """Every caution by its code."""
    path = settings.BASE_DIR / "fixtures" / "criteria" / "cautions.json"
    found = library.cautions(json.loads(path.read_text(encoding="utf-8")))
    return {caution.code: caution for caution in found}


def texts(codes: Iterable[str]) -> tuple[str, ...]:
    """The sentences of these cautions, in their order."""
    return tuple(published()[code].text for code in codes if code in published())
