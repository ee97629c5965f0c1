"""What happens in the demo, in order of time: events that may lead to further events."""

from __future__ import annotations

import datetime as dt
import heapq
import itertools
from collections.abc import Callable
from dataclasses import dataclass, field

Event = Callable[[dt.datetime], None]


@dataclass
class Timeline:
    """Events up to a last moment; what lies after it never happens."""

    until: dt.datetime
    _events: list[tuple[dt.datetime, int, Event]] = field(default_factory=list)
    _numbers: itertools.count[int] = field(default_factory=itertools.count)

    def put(self, at: dt.datetime, event: Event) -> None:
        """Let something happen at a moment; of two at the same moment the first put happens first."""
        if at < self.until:
            heapq.heappush(self._events, (at, next(self._numbers), event))

    def play(self) -> None:
        """Let everything happen."""
        while self._events:
            at, _, event = heapq.heappop(self._events)
            event(at)
