"""The generalised ESD test, shown and never applied."""

from __future__ import annotations

from decimal import Decimal

import pytest
from reference_rows import entries, rows

from qa_tracker.core.baselines import LEAST_FOR_OUTLIERS, generalised_esd, outliers
from qa_tracker.core.errors import Invalid

PUBLISHED = entries("statistics.json")


def test_test_agrees_with_rosner():
    # NIST/SEMATECH e-Handbook, 1.3.5.17.3, for Rosner 1983: three outliers, though R1 and R2 are not beyond theirs
    given = PUBLISHED["OUT-02"]
    expected, near = given["expected"], given["tolerance"]
    values = [Decimal(row["y"]) for row in rows(given["file"])]
    found = generalised_esd(values, given["inputs"]["r"], Decimal(str(given["inputs"]["alpha"])))
    assert found.statistics == pytest.approx(expected["R"], abs=near["R"])
    assert found.critical == pytest.approx(expected["lambda"], abs=near["lambda"])
    assert [float(values[at]) for at in found.positions] == expected["outliers"]
    assert len(found.positions) == expected["number_of_outliers"]
    assert found.statistics[0] < found.critical[0]


def test_test_for_one_is_that_of_grubbs():
    # NIST/SEMATECH e-Handbook, 1.3.5.17.1 (Tietjen and Moore): one-sided 5 %, as two-sided 10 %
    given = PUBLISHED["OUT-01"]
    expected, near = given["expected"], given["tolerance"]
    values = [Decimal(str(number)) for number in given["inputs"]["x"]]
    found = generalised_esd(values, 1, Decimal(str(2 * given["inputs"]["alpha"])))
    assert found.statistics[0] == pytest.approx(expected["G"], abs=near["G"])
    assert found.critical[0] == pytest.approx(expected["critical_one_sided"], abs=near["critical_one_sided"])
    assert bool(found.positions) == expected["reject"]
    assert found.positions == (7,)


def test_outliers_are_not_looked_for_among_few():
    few = [Decimal(1)] * (LEAST_FOR_OUTLIERS - 2) + [Decimal(50)]
    assert outliers(few) == ()
    assert outliers([*few, Decimal(1)]) == (LEAST_FOR_OUTLIERS - 2,)


@pytest.mark.parametrize("value", ["1", "0.1", "145.37"])
def test_outliers_are_none_where_nothing_varies(value):
    assert outliers([Decimal(value)] * 20) == ()


def test_small_spread_on_a_large_value_is_not_lost():
    rosner = [Decimal(row["y"]) for row in rows("rosner_1983.csv")]
    shifted = [Decimal(10**15) + value / 1000 for value in rosner]
    assert generalised_esd(shifted, 10).statistics == pytest.approx(
        generalised_esd(rosner, 10).statistics, rel=1e-12
    )


REFUSED = {
    "too few values": (([1, 2], 1, "0.05"), "baseline.too_few_setups"),
    "no outlier looked for": (([1, 2, 3], 0, "0.05"), "baseline.outlier_terms"),
    "no significance": (([1, 2, 3], 1, "0"), "baseline.outlier_terms"),
    "full significance": (([1, 2, 3], 1, "1"), "baseline.outlier_terms"),
    "what is not finite": (([1, 2, "NaN"], 1, "0.05"), "number.not_finite"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_test_is_refused(name):
    (values, most, significance), code = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        generalised_esd([Decimal(value) for value in values], most, Decimal(significance))
    assert refused.value.code == code
