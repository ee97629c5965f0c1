"""The timetable: one line. What is due is decided by the sweep from stored moments, never by the timetable."""

from __future__ import annotations

import os
from typing import Any

SWEEP = "leadline.sweep"
DELIVER_DIGEST = "leadline.deliver_digest"
RENDER_DOSSIER = "leadline.render_dossier"

# A shorter period is for tests that measure in it; the header turns red after 3 minutes without a sweep.
SWEEP_PERIOD_S = float(os.environ.get("LEADLINE_SWEEP_PERIOD_S", "60"))

EVERY_MINUTE: dict[str, dict[str, Any]] = {
    "sweep": {
        "task": SWEEP,
        "schedule": SWEEP_PERIOD_S,
        # Without a worker the sweeps of the night would wait in line; one is enough, and the next comes soon.
        "options": {"expires": SWEEP_PERIOD_S, "ignore_result": True},
    }
}
