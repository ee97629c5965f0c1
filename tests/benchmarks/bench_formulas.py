"""How many derived quantities are worked out in a second, by ``evaluate`` (CEL alone) and by ``derive``.

Not collected by the ordinary run: ``pytest tests/benchmarks/bench_formulas.py --benchmark-enable -p no:randomly -s``.
Wanted are 10,000 a second of either; timings are reported and decide nothing.
"""

from __future__ import annotations

import time
from decimal import Decimal

import pytest

from qa_tracker.core import formula_grammar
from qa_tracker.core.formulas import derive, evaluate
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.core.ready_formulas import READY_FORMULAS, fill
from tests.core.formula_documents import derived_spec

D = Decimal
ROLES = {
    "reading": "x",
    "other": "y",
    "after": "x",
    "before": "y",
    "length": "x",
    "width": "y",
    "height": "x",
}
VALUES = {
    "x": D("101.7"),
    "y": D("152.3"),
    "r": [D("1.1"), D("1.2"), D("1.5")],
    "nominals": {"x": D("100.0")},
    "test_object": {"sound_speed_m_s": D("1450"), "layout_compensated": False},
    "condition": {"sound_speed_m_s": D("1540")},
}
WANTED = 10_000


def formulas() -> dict[str, str]:
    """The ready ones, and one whose double can't tell to which side it rounds."""
    ready = {
        each.code: fill(each, ROLES | ({"reading": "r"} if each.roles[0].repeated else {}))
        for each in READY_FORMULAS
    }
    return ready | {"tie": "x - y - 0.05", "own choice": "x > y ? x - y : percent * y / x"}


def a_second(action, times: int = 3_000) -> float:
    """Calls a second, the quickest of three rounds."""
    taken = []
    for _ in range(3):
        began = time.perf_counter()
        for _ in range(times):
            action()
        taken.append(time.perf_counter() - began)
    return times / min(taken)


def measured(spec: MeasurandSpec) -> tuple[float, float]:
    """Evaluations and derivations a second of one formula."""
    return a_second(lambda: evaluate(spec.formula, VALUES)), a_second(lambda: derive(spec, VALUES))


def test_formulas_a_second(benchmark, capsys):
    specs = {name: derived_spec(formula) for name, formula in formulas().items()}
    found = {name: measured(spec) for name, spec in specs.items()}
    benchmark(derive, specs["percent_error"], VALUES)
    with capsys.disabled():
        print(f"\n{'a second':<24}{'evaluate':>12}{'derive':>12}   ({WANTED:,} wanted of each)")
        for name, (evaluated, derived) in found.items():
            print(f"  {name:<22}{evaluated:>12,.0f}{derived:>12,.0f}")
        least = [min(column) for column in zip(*found.values(), strict=True)]
        print(f"  {'slowest':<22}{least[0]:>12,.0f}{least[1]:>12,.0f}")


def test_formulas_read_a_second(capsys):
    """Reading a formula anew, as while it is being typed."""
    texts = iter(f"percent * (x - nominals.x - {number}.0) / nominals.x" for number in range(10_000))
    with capsys.disabled():
        print(
            f"\nformulas read anew a second: {a_second(lambda: formula_grammar.parse(next(texts)), 500):,.0f}"
        )


pytestmark = pytest.mark.filterwarnings("ignore")
