"""Mean and spread against certified and published values; the allowance of a device's own spread."""

from __future__ import annotations

import math
from decimal import Decimal

import pytest
from reference_rows import entries, rows

from qa_tracker.core.baselines import own_allowance, spread_floor, summary
from qa_tracker.core.errors import Invalid

CERTIFIED = entries("strd_univariate.json")
PUBLISHED = entries("statistics.json")
P95 = Decimal(95)


def decimals(numbers):
    return [Decimal(str(number)) for number in numbers]


# NIST Statistical Reference Datasets, Univariate: certified mean and standard deviation.
@pytest.mark.parametrize("name", CERTIFIED)
def test_summary_gives_every_certified_digit(name):
    given = CERTIFIED[name]
    found = summary([Decimal(row["y"]) for row in rows(given["file"])])
    near = Decimal(5).scaleb(-given["tolerance"]["digits"])
    assert found.count == given["expected"]["n"]
    for got, text in ((found.mean, "mean"), (found.standard_deviation, "sd")):
        certified = Decimal(given["expected"][text])
        assert abs(got - certified) <= abs(certified) * near


SUMMARISED = {
    # NIST/SEMATECH e-Handbook, 6.3.2.2 (mean) and 1.4.2.8; US EPA 2009, Unified Guidance, Examples 17-3 and 18-1
    "CC-01": (lambda inputs: decimals(inputs["x"]), "mean", None),
    "DRIFT-02": (lambda _: [Decimal(row["calibration_factor"]) for row in ZARR13], "mean", "sd"),
    "TOL-05": (lambda inputs: decimals(map(math.log, inputs["background"])), "mean_ln", "sd_ln"),
    "TOL-06": (lambda inputs: decimals(inputs["baseline"]), "mean", "sd"),
}
ZARR13 = rows("nist_zarr13_heat_flow.csv")


@pytest.mark.parametrize("name", SUMMARISED)
def test_summary_agrees_with_published_examples(name):
    values_of, *keys = SUMMARISED[name]
    given = PUBLISHED[name]
    found = summary(values_of(given["inputs"]))
    for got, key in zip((found.mean, found.standard_deviation), keys, strict=True):
        if key:
            assert float(got) == pytest.approx(given["expected"][key], abs=given["tolerance"][key])


def test_mean_is_exact_where_it_ends():
    assert str(summary(decimals(["0.1", "0.2", "0.4", "0.8"])).mean) == "0.375"
    assert str(summary(decimals(["1", "1", "2"])).mean) == "1.333333333333333333333333333333333"


def test_summary_of_one_value_has_no_spread():
    assert summary([Decimal("8.5")]).standard_deviation is None


@pytest.mark.parametrize("values", [[], [Decimal("NaN"), Decimal(1)], [Decimal("Infinity")]])
def test_summary_is_refused_of_nothing_and_of_what_is_not_finite(values):
    with pytest.raises(Invalid):
        summary(values)


def test_spread_is_that_of_the_resolution_when_set_ups_agree():
    found = own_allowance(12, Decimal(0), Decimal("0.5"), P95, P95)
    assert found.floored
    assert found.spread == Decimal("0.1443")
    assert spread_floor(Decimal("0.5")) ** 2 * 12 == pytest.approx(Decimal("0.25"), abs=Decimal("1e-30"))


def test_spread_at_the_floor_is_not_called_floored():
    floor = spread_floor(Decimal("0.5"))
    found = own_allowance(12, floor, Decimal("0.5"), P95, P95)
    assert (found.floored, found.size) == (
        False,
        own_allowance(12, Decimal(0), Decimal("0.5"), P95, P95).size,
    )


def test_allowance_is_one_definite_decimal():
    found = own_allowance(12, Decimal("0.4166666666666666666"), Decimal("0.5"), P95, P95)
    assert not found.floored
    assert found.size == Decimal("1.323")
    assert float(found.size) == pytest.approx(found.factor * 0.4166666666666667, abs=5e-4)


@pytest.mark.parametrize(("resolution", "size"), [("10", "42.33"), ("1", "42.33"), ("0.01", "42.3289")])
def test_allowance_has_two_places_more_than_the_resolution(resolution, size):
    # 40 / 3 times the exact factor of 12 set-ups, 3.174664 by quadrature
    found = own_allowance(12, Decimal("13.33333333333333333"), Decimal(resolution), P95, P95)
    assert str(found.size) == size


REFUSED = {
    "too few set-ups": ((9, "0.4", "0.5", "95"), "baseline.too_few_setups"),
    "a deviation below zero": ((10, "-0.1", "0.5", "95"), "baseline.spread"),
    "a deviation that is no number": ((10, "NaN", "0.5", "95"), "baseline.spread"),
    "no resolution": ((10, "0.4", "0", "95"), "number.step"),
    "all of the population": ((10, "0.4", "0.5", "100"), "criterion.own_spread_share"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_allowance_is_refused(name):
    (count, *numbers), code = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        own_allowance(count, *map(Decimal, numbers), P95)
    assert refused.value.code == code
