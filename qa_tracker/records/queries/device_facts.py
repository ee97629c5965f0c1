"""Facts of devices that decide whether a limit may judge, as they were on record at any time."""

from __future__ import annotations

import datetime as dt
import json
from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass, replace

from qa_tracker.records.models import Version

NOUNS = ("probefacts", "scannerfacts")


@dataclass(frozen=True)
class FactsThen:
    """Facts of one device from a moment on; empty where it has no such fact."""

    recorded_at: dt.datetime
    array_kind: str = ""
    applied_part: str = ""
    protection_class: str = ""


def facts_over_time() -> dict[int, list[FactsThen]]:
    """By device key, each version of its facts, oldest first; a handheld has those of both kinds."""
    found: dict[int, list[FactsThen]] = defaultdict(list)
    rows = Version.objects.filter(noun__in=NOUNS).order_by("recorded_at", "id")
    for moment, text in rows.values_list("recorded_at", "columns"):
        columns = json.loads(text)
        before = found[int(columns["device_id"])]
        names = [name for name in ("array_kind", "applied_part", "protection_class") if columns.get(name)]
        then = replace(before[-1], recorded_at=moment) if before else FactsThen(moment)
        before.append(replace(then, **{name: columns[name] for name in names}))
    return dict(found)


def facts_at(over_time: Sequence[FactsThen], moment: dt.datetime) -> FactsThen:
    """The facts of a device that were on record at a moment; empty where none were."""
    for facts in reversed(over_time):
        if facts.recorded_at <= moment:
            return facts
    return FactsThen(moment)
