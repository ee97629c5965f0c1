"""Ends a process with the one that started it.

Run as a script it becomes a launcher: ``parent.py PID PROGRAM ARGUMENT...`` ties itself to its parent and then
turns into the program, so that any program can be tied without knowing of it.
"""

from __future__ import annotations

import ctypes
import os
import signal
import sys

PR_SET_PDEATHSIG = 1


def die_with_parent() -> None:
    """Ask the kernel to kill this process when its parent ends (Linux; elsewhere nothing is done).

    SIGKILL, because a worker that is told politely waits for tasks whose supervisor is gone.
    """
    if sys.platform == "linux":
        ctypes.CDLL(None, use_errno=True).prctl(PR_SET_PDEATHSIG, signal.SIGKILL)


def launch(parent: int, program: list[str]) -> None:
    """Turn into ``program``, unless the parent ended before the kernel was asked."""
    die_with_parent()
    if os.getppid() != parent:
        sys.exit(1)
    os.execvp(program[0], program)


if __name__ == "__main__":
    launch(int(sys.argv[1]), sys.argv[2:])
