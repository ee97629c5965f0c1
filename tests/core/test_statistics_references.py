"""Mean, spread, tolerance factors and outliers against published and certified values."""

from __future__ import annotations

import csv
from decimal import Decimal
from pathlib import Path

import pytest

from qa_tracker.core.baselines import (
    LEAST_FOR_OUTLIERS,
    generalised_esd,
    outliers,
    own_allowance,
    spread_floor,
    summary,
    tolerance_factor,
)
from qa_tracker.core.errors import Invalid

FOLDER = Path(__file__).parents[2] / "fixtures" / "reference"
P95 = Decimal(95)


def rows(name):
    lines = (FOLDER / name).read_text("utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def column(name):
    return [Decimal(row["y"]) for row in rows(name)]


# NIST Statistical Reference Datasets, Univariate: certified mean and standard deviation, all 15 digits.
CERTIFIED = {
    "strd_lew.csv": ("-177.435000000000", "277.332168044316"),
    "strd_lottery.csv": ("518.958715596330", "291.699727470969"),
    "strd_numacc1.csv": ("10000002", "1"),
    "strd_numacc2.csv": ("1.2", "0.1"),
    "strd_numacc4.csv": ("10000000.2", "0.1"),
}


@pytest.mark.parametrize("name", CERTIFIED)
def test_summary_gives_every_certified_digit(name):
    mean, deviation = (Decimal(text) for text in CERTIFIED[name])
    found = summary(column(name))
    assert abs(found.mean - mean) <= abs(mean) * Decimal("5e-15")
    assert abs(found.standard_deviation - deviation) <= deviation * Decimal("5e-15")


def test_summary_of_one_value_has_no_spread():
    assert summary([Decimal("8.5")]).standard_deviation is None


@pytest.mark.parametrize("values", [[], [Decimal("NaN"), Decimal(1)], [Decimal("Infinity")]])
def test_summary_is_refused_of_nothing_and_of_what_is_not_finite(values):
    with pytest.raises(Invalid):
        summary(values)


def test_tolerance_factor_agrees_with_odeh_and_owen():
    for row in rows("odeh_owen_two_sided.csv"):
        assert tolerance_factor(int(row["n"]), P95, P95) == pytest.approx(float(row["k_published"]), abs=6e-4)


FACTORS = {
    # NIST e-Handbook 7.2.6.3 gives Howe's 2.217316; its "exact" 2.210167 swaps two arguments. By quadrature:
    "NIST 7.2.6.3, exact": (43, 90, 99, 2.222825, 1e-5),
    # What the swapped call works out: 99 % of the population with 5 % confidence.
    "NIST 7.2.6.3, as its script calls it": (43, 99, 5, 2.210167, 1e-6),
    # R package EnvStats 3.1.0, man/tolIntNormK.Rd
    "EnvStats": (20, 95, 95, 2.760346, 1e-6),
}


@pytest.mark.parametrize("name", FACTORS)
def test_tolerance_factor_agrees_with_published_and_recomputed_values(name):
    count, coverage, confidence, expected, near = FACTORS[name]
    found = tolerance_factor(count, Decimal(coverage), Decimal(confidence))
    assert found == pytest.approx(expected, abs=near)


# PRACTICE: 9.79 (n = 3), 5.08 (5), 3.39 (10), 2.76 (20), rounded.
@pytest.mark.parametrize(("count", "expected"), [(3, 9.79), (5, 5.08), (10, 3.39), (20, 2.76)])
def test_tolerance_factor_is_the_one_physicists_know(count, expected):
    assert tolerance_factor(count, P95, P95) == pytest.approx(expected, abs=5e-3)


@pytest.mark.parametrize(("count", "share"), [(1, P95), (10, Decimal(0)), (10, Decimal(100))])
def test_tolerance_factor_is_refused_out_of_range(count, share):
    with pytest.raises(Invalid):
        tolerance_factor(count, share, P95)


def test_spread_is_that_of_the_resolution_when_set_ups_agree():
    found = own_allowance(12, Decimal(0), Decimal("0.5"), P95, P95)
    assert found.floored
    assert found.spread == Decimal("0.1443")
    assert spread_floor(Decimal("0.5")) ** 2 * 12 == pytest.approx(Decimal("0.25"), abs=Decimal("1e-30"))


def test_allowance_is_one_definite_decimal():
    found = own_allowance(12, Decimal("0.4166666666666666666"), Decimal("0.5"), P95, P95)
    assert not found.floored
    assert found.size == Decimal("1.323")
    assert float(found.size) == pytest.approx(found.factor * 0.4166666666666667, abs=5e-4)


def test_allowance_is_refused_below_ten_set_ups():
    with pytest.raises(Invalid) as refused:
        own_allowance(9, Decimal("0.4"), Decimal("0.5"), P95, P95)
    assert refused.value.code == "baseline.too_few_setups"


# NIST e-Handbook 1.3.5.17.3 for Rosner 1983: three outliers, though R1 and R2 are below their critical values.
R = [3.1189, 2.943, 3.1794, 2.8102, 2.8156, 2.8482, 2.2793, 2.3104, 2.1016, 2.0672]
CRITICAL = [3.1588, 3.1514, 3.1439, 3.1362, 3.1282, 3.1201, 3.1118, 3.1032, 3.0945, 3.0854]


def test_generalised_esd_agrees_with_rosner():
    values = column("rosner_1983.csv")
    found = generalised_esd(values, 10)
    assert found.statistics == pytest.approx(R, abs=6e-4)
    assert found.critical == pytest.approx(CRITICAL, abs=6e-4)
    assert [values[at] for at in found.positions] == [Decimal("6.01"), Decimal("5.42"), Decimal("5.34")]


def test_grubbs_statistic_agrees_with_tietjen_and_moore():
    # NIST e-Handbook 1.3.5.17.1: G = 2.4687 (truncated), found an outlier
    texts = ("199.31", "199.53", "200.19", "200.82", "201.92", "201.95", "202.18", "245.57")
    found = generalised_esd([Decimal(text) for text in texts], 1)
    assert found.statistics[0] == pytest.approx(2.468765, abs=1e-6)
    assert found.positions == (7,)


def test_outliers_are_not_looked_for_among_few():
    few = [Decimal(1)] * (LEAST_FOR_OUTLIERS - 2) + [Decimal(50)]
    assert outliers(few) == ()
    assert outliers([*few, Decimal(1)]) == (LEAST_FOR_OUTLIERS - 2,)


def test_outliers_are_none_where_nothing_varies():
    assert outliers([Decimal(1)] * 20) == ()


def test_generalised_esd_is_refused_for_too_few():
    with pytest.raises(Invalid):
        generalised_esd([Decimal(1), Decimal(2)], 1)
