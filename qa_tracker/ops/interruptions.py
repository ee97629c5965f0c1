"""Ctrl-C, SIGTERM and a closed terminal as one KeyboardInterrupt, held back while a step must not be torn."""

from __future__ import annotations

import signal
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType
from typing import Any, Self


class Interruptions:
    """Handles the signals that end a program for as long as the ``with`` block lasts (main thread only)."""

    def __init__(self) -> None:
        self.arrived = False
        self.holding = False
        self.previous: dict[int, Any] = {}

    def __enter__(self) -> Self:
        for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
            # A program started to outlive its terminal has SIGHUP ignored, and keeps it so.
            if number != signal.SIGHUP or signal.getsignal(number) is not signal.SIG_IGN:
                self.previous[number] = signal.signal(number, self.arrive)
        return self

    def __exit__(self, *_: object) -> None:
        for number, handler in self.previous.items():
            signal.signal(number, handler)

    def arrive(self, number: int, frame: FrameType | None) -> None:
        """Interrupt what runs, now or when the step that holds is done."""
        self.arrived = True
        if not self.holding:
            raise KeyboardInterrupt

    @contextmanager
    def held(self) -> Iterator[None]:
        """Run a step to its end; an interruption that came meanwhile is raised after it."""
        self.holding = True
        try:
            yield
        finally:
            self.holding = False
        if self.arrived:
            raise KeyboardInterrupt
