"""How long judging takes beside what NumPy needs to add the same arrays up, in one run.

Not collected by the ordinary run: ``pytest tests/benchmarks/bench_kernel.py --benchmark-enable -p no:randomly -s``.
Timings are reported as ratios and decide nothing.
"""

from __future__ import annotations

import json
import subprocess
import sys
import time
import tracemalloc
from concurrent.futures import ThreadPoolExecutor
from decimal import Decimal
from pathlib import Path

import numpy as np
import pytest

from qa_tracker.core.criteria import Criterion, Limit, from_json
from qa_tracker.core.verdict_groups import verdict_codes_by_criterion
from qa_tracker.core.verdict_kernel import Columns

ROWS = 10_000_000
CRITERIA_FOLDER = Path(__file__).parents[2] / "fixtures" / "criteria"


def published() -> list[Criterion]:
    """Every published limit on a number, each band by itself, at three scales."""
    found = []
    for path in sorted(CRITERIA_FOLDER.glob("*.json")):
        document = json.loads(path.read_text("utf-8"))
        for each in document["criteria"] if isinstance(document, dict) else ():
            limit = from_json(each["criterion"])
            flat = [limit.at(band.start or Decimal(0)) for band in limit.bands] if limit.bands else [limit]
            found += [one for one in flat if one and not one.grades and not one.of_own_spread]
    both = Limit(Decimal(2), Decimal(10), "either")
    return [
        *found,
        Criterion("baseline", "either", True, both),
        Criterion("ratio", "below", True, Limit(None, Decimal(80))),
    ]


def arrays(criteria: list[Criterion]) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Values, baselines and the index of each row's allowance, rows of one criterion together."""
    rng = np.random.default_rng(1985)
    index = np.sort(rng.integers(0, len(criteria), ROWS).astype(np.int32))
    return rng.integers(900, 1100, ROWS), rng.integers(950, 1050, ROWS), index


def best(action, times: int = 20) -> float:
    """The quickest of a few runs, in seconds."""
    taken = []
    for _ in range(times):
        began = time.perf_counter()
        action()
        taken.append(time.perf_counter() - began)
    return min(taken)


def further_memory(action) -> float:
    """The most it holds at once beside its inputs, in MiB: NumPy tells tracemalloc what it allocates.

    The resident size would say less: what earlier calls gave back is used again.
    """
    tracemalloc.start()
    action()
    most = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    return most / 1024**2


def by_two_threads(action) -> None:
    """Give each of two threads one half of the rows."""
    with ThreadPoolExecutor(2) as pool:
        list(pool.map(action, (slice(0, ROWS // 2), slice(ROWS // 2, ROWS))))


def test_ten_million_readings(benchmark, capsys):
    criteria = published()
    values, references, index = arrays(criteria)
    values, references = values * 10, references * 10
    columns = Columns(values, references, 2)
    scattered = np.random.default_rng(7).permutation(index)

    def add(part=slice(None)):
        return [each[part].sum() for each in (values, references, index)]

    def judge(part=slice(None)):
        return verdict_codes_by_criterion(criteria, index[part], columns.rows(part))

    def judge_scattered(part=slice(None)):
        return verdict_codes_by_criterion(criteria, scattered[part], columns.rows(part))

    added = best(add)
    rows = {
        "added up by two threads": best(lambda: by_two_threads(add)),
        "judged by one thread": best(judge),
        "judged by two threads": best(lambda: by_two_threads(judge)),
        "scattered, one thread": best(judge_scattered, 3),
        "scattered, two threads": best(lambda: by_two_threads(judge_scattered), 3),
    }
    further = {"together": further_memory(judge), "scattered": further_memory(judge_scattered)}
    benchmark.pedantic(judge, rounds=3)
    with capsys.disabled():
        print(f"\n{ROWS:,} readings, {len(criteria)} criteria; adding up takes {added * 1e3:.1f} ms")
        for name, taken in rows.items():
            print(f"  {name:<24}{taken / added:6.1f} times that, {ROWS / taken / 1e6:6.0f} million a second")
        for name, mebibytes in further.items():
            print(f"  further memory, {name:<9}{mebibytes:5.0f} MiB")


def test_lines_of_a_script(benchmark, tmp_path, capsys):
    """The command that judges JSON lines, start and all."""
    line = {"value": "145.4", "baseline": "152.0", "criterion": {
        "basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}, "suspension": {"absolute": "10"}}}  # fmt: skip
    given = (json.dumps(line) + "\n").encode() * 10_000
    command = [sys.executable, "manage.py", "judge"]
    root = Path(__file__).parents[2]

    def run():
        subprocess.run(command, input=given, cwd=root, capture_output=True, check=True)

    began = time.perf_counter()
    benchmark.pedantic(run, rounds=1)
    with capsys.disabled():
        print(f"\n10,000 lines in {time.perf_counter() - began:.1f} s")


pytestmark = pytest.mark.filterwarnings("ignore")
