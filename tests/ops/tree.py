"""A supervised tree of small programs: ``tree.py DATA_DIR [steady|stubborn|hopeless]``."""

from __future__ import annotations

import sys
from pathlib import Path

from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.processes import Child
from qa_tracker.ops.supervisor import Refused, Supervisor

PROGRAMS = {
    "steady": "import time; print('here'); time.sleep(600)",
    "stubborn": "import signal, time; signal.signal(signal.SIGTERM, signal.SIG_IGN); print('deaf'); time.sleep(600)",
    "hopeless": "raise SystemExit('no such database')",
    # A grandchild that outlives its parent, in the group of the child.
    "family": "import subprocess, time; subprocess.Popen(['sleep', '600']); time.sleep(600)",
}


def ended_note(folder: Path, name: str) -> str:
    """A program that notes the moment it was asked to end."""
    return (
        "import pathlib, signal, sys, time\n"
        f"def end(*_):\n    pathlib.Path({str(folder)!r}, 'order').open('a').write('{name} ')\n    sys.exit(0)\n"
        "signal.signal(signal.SIGTERM, end)\n"
        f"pathlib.Path({str(folder)!r}, '{name}.up').touch()\n"
        "time.sleep(600)"
    )


def children(folder: Path, kind: str) -> list[Child]:
    if kind == "ordered":
        return [
            Child(
                name,
                (sys.executable, "-c", ended_note(folder, name)),
                ready=(folder / f"{name}.up").exists,
            )
            for name in ("broker", "catcher", "web", "worker", "beat")
        ]
    return [
        Child("broker", (sys.executable, "-uc", PROGRAMS["steady"])),
        Child(
            "worker",
            (sys.executable, "-uc", PROGRAMS[kind]),
            stop_limit_s=0.5,
            ready=lambda: kind != "hopeless",
        ),
    ]


def main(folder: Path, kind: str) -> int:
    with Interruptions() as interruptions:
        try:
            with Supervisor(folder, interruptions) as supervisor:
                tree = children(folder, kind)
                for child in tree:
                    supervisor.start(child)
                supervisor.wait_ready(*(child.name for child in tree), limit_s=20)
                print("ready", flush=True)
                supervisor.watch()
        except KeyboardInterrupt:
            return 0
        except Refused as refusal:
            print(refusal, flush=True)
            return 1
    return 0


if __name__ == "__main__":
    sys.exit(main(Path(sys.argv[1]), sys.argv[2]))
