"""The timetable: one line. What is due is decided by the sweep from stored moments, never by the timetable."""

from __future__ import annotations

from typing import Any

SWEEP = "leadline.sweep"
DELIVER_DIGEST = "leadline.deliver_digest"
RENDER_DOSSIER = "leadline.render_dossier"

SWEEP_PERIOD_S = 60.0

EVERY_MINUTE: dict[str, dict[str, Any]] = {
    "sweep": {
        "task": SWEEP,
        "schedule": SWEEP_PERIOD_S,
        # Without a worker the sweeps of the night would wait in line; one is enough, and the next comes soon.
        "options": {"expires": SWEEP_PERIOD_S, "ignore_result": True},
    }
}
