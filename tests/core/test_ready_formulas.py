"""Every ready formula is published as it stands once its roles are filled, and gives what its title says."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formulas import derive
from qa_tracker.core.library import procedure
from qa_tracker.core.library_shapes import STANDINGS
from qa_tracker.core.ready_formulas import READY_FORMULAS, fill
from tests.core.formula_documents import derived_spec, document, read, worked_out

D = Decimal
BY_CODE = {ready.code: ready for ready in READY_FORMULAS}
VALUES = {
    "vertical": D("101.7"),
    "length": D("20.1"),
    "width": D("31.2"),
    "height": D("15.7"),
    "three": [D("1.1"), D("1.2"), D("1.5")],
    "nominals": {"vertical": D("100")},
    "test_object": {"sound_speed_m_s": D("1450"), "layout_compensated": False},
    "condition": {"sound_speed_m_s": D("1540")},
}
# code, measurands of its roles, value at a resolution of 0.1
GIVEN = [
    ("distance_error", {"reading": "vertical"}, "1.7"),
    ("percent_error", {"reading": "vertical"}, "1.7"),
    ("ellipsoid_volume", {"length": "length", "width": "width", "height": "height"}, "5.2"),
    ("range_of_repeats", {"reading": "three"}, "0.4"),
    ("mean_of_repeats", {"reading": "three"}, "1.3"),
    ("difference", {"after": "length", "before": "height"}, "4.4"),
    ("ratio", {"reading": "width", "other": "height"}, "2.0"),
    ("sound_speed_correction", {"reading": "vertical"}, "95.8"),
]
READINGS = (
    read("vertical", sound_speed_correction=True),
    read("horizontal"),
    read("penetration"),
    *(read(code) for code in ("length", "width", "height")),
    read("three", repeats=3),
)


def _published(ready, measurands):
    derived = worked_out("result", fill(ready, measurands), unit=ready.unit or "mm")
    return procedure(document(*READINGS, derived))


def test_every_ready_formula_is_tried():
    assert [row[0] for row in GIVEN] == list(BY_CODE)


@pytest.mark.parametrize(("code", "measurands", "value"), GIVEN, ids=[row[0] for row in GIVEN])
def test_ready_formula_is_published_and_worked_out(code, measurands, value):
    ready = BY_CODE[code]
    formula = _published(ready, measurands).measurands[-1].formula
    assert set(measurands) == {role.name for role in ready.roles}
    assert str(derive(derived_spec(formula), VALUES).value) == value


@pytest.mark.parametrize("ready", READY_FORMULAS, ids=list(BY_CODE))
def test_ready_formula_says_where_it_comes_from(ready):
    assert ready.source
    assert ready.standing in STANDINGS


@pytest.mark.parametrize(
    ("reading", "code"),
    [("horizontal", "formula.lateral_correction"), ("penetration", "formula.no_correction")],
)
def test_sound_speed_correction_is_refused_where_it_does_not_hold(reading, code):
    with pytest.raises(Invalid) as refused:
        _published(BY_CODE["sound_speed_correction"], {"reading": reading})
    assert refused.value.code == code


@pytest.mark.parametrize("named", [{"code": "span_lateral"}, {"name": "Distance, horizontal"}])
def test_sound_speed_correction_is_refused_across_the_beam_even_where_marked(named):
    across = read("span", sound_speed_correction=True) | named
    derived = worked_out("result", fill(BY_CODE["sound_speed_correction"], {"reading": across["code"]}))
    with pytest.raises(Invalid) as refused:
        procedure(document(across, derived))
    assert refused.value.code == "formula.lateral_correction"


def test_range_of_a_single_reading_is_refused():
    with pytest.raises(Invalid) as refused:
        _published(BY_CODE["range_of_repeats"], {"reading": "vertical"})
    assert refused.value.code == "formula.arguments"


def test_sound_speed_correction_brings_back_the_true_distance():
    """CRITERIA, "Test objects": at 1450 m/s a true 100 mm reads 106.21 on a console set to 1540."""
    formula = fill(BY_CODE["sound_speed_correction"], {"reading": "vertical"})
    found = derive(derived_spec(formula, "0.01"), VALUES | {"vertical": D("106.21")})
    assert found.value == D("100.00")
