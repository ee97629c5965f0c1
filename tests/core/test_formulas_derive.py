"""A derived quantity has a value rounded once, or the reason it has none, and its arithmetic either way."""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from decimal import Decimal

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_inputs import Qualified
from qa_tracker.core.formulas import derive, evaluate
from tests.core.formula_documents import derived_spec

D = Decimal
OBJECT = {"sound_speed_m_s": D("1450"), "layout_compensated": False}
CORRECTED = "{} * test_object.sound_speed_m_s / condition.sound_speed_m_s"
CONSOLE = {"sound_speed_m_s": D("1540")}

# formula, resolution, values, value, arithmetic
WORKED_OUT = [
    ("after - before", "1", {"after": D("146"), "before": D("152")}, "-6", "146 - 152"),
    ("x - y", "0.1", {"x": D("1.15"), "y": D("1.0")}, "0.2", "1.15 - 1.0"),
    ("x - y", "0.1", {"x": D("1000.15"), "y": D("1000.0")}, "0.2", "1000.15 - 1000.0"),
    ("x + y - z", "0.1", {"x": D("0.1"), "y": D("0.2"), "z": D("0.25")}, "0.0", "0.1 + 0.2 - 0.25"),
    ("x / y", "1", {"x": D("-1"), "y": D("2")}, "0", "(-1) / 2"),
    ("x / y", "0.5", {"x": D("7"), "y": D("4")}, "2.0", "7 / 4"),
    (
        "percent * (x - nominals.x) / nominals.x",
        "0.1",
        {"x": D("101.7"), "nominals": {"x": D("100")}},
        "1.7",
        "100 * (101.7 - 100) / 100",
    ),
    ("mean(r)", "0.1", {"r": [D("1.1"), D("1.2"), D("1.15")]}, "1.2", "mean([1.1, 1.2, 1.15])"),
    ("range(r)", "0.01", {"r": (D("1.1"), D("1.35"))}, "0.25", "range([1.1, 1.35])"),
    ("standard_deviation(r)", "0.01", {"r": [D("2"), D("4")]}, "1.41", "standard_deviation([2, 4])"),
    ("least(a, b) + greatest([a, b])", "1", {"a": D("3"), "b": D("-4")}, "-1", "least(3, (-4)) + greatest([3, (-4)])"),
    ("abs(a) * 2.0", "0.1", {"a": D("-0.4")}, "0.8", "abs((-0.4)) * 2.0"),
    ("sqrt(a)", "0.1", {"a": D("0.0225")}, "0.2", "sqrt(0.0225)"),
    ("pi / 6.0 * a", "0.01", {"a": D("6")}, "3.14", "pi / 6.0 * 6"),
    ("a > b ? a : b", "1", {"a": D("1"), "b": D("2")}, "2", "1 > 2 ? 1 : 2"),
    ("a - b > 0.15 ? a : b", "1", {"a": D("1.15"), "b": D("1.0")}, "1", "1.15 - 1.0 > 0.15 ? 1.15 : 1.0"),
    ("a - b >= 0.15 ? a : 9.0", "0.01", {"a": D("1.15"), "b": D("1.0")}, "1.15", "1.15 - 1.0 >= 0.15 ? 1.15 : 9.0"),
    ("sqrt(a) > 0.15 ? a : 9.0", "1", {"a": D("0.0225")}, "9", "sqrt(0.0225) > 0.15 ? 0.0225 : 9.0"),
    ("x ? 1.0 : 2.0", "1", {"x": False}, "2", "false ? 1.0 : 2.0"),
    (
        CORRECTED.format("x"),
        "0.01",
        {"x": D("106.21"), "test_object": OBJECT, "condition": CONSOLE},
        "100.00",
        "106.21 * 1450 / 1540",
    ),
]  # fmt: skip


@pytest.mark.parametrize(
    ("formula", "resolution", "values", "value", "text"), WORKED_OUT, ids=[row[0] for row in WORKED_OUT]
)
def test_formula_is_worked_out(formula, resolution, values, value, text):
    found = derive(derived_spec(formula, resolution), values)
    assert (str(found.value), found.problem, found.names, found.text) == (value, "", (), text)


# formula, values, problem, names, arithmetic
NOT_WORKED_OUT = [
    ("a - b", {"a": D("1")}, "missing", ("b",), "1 - b"),
    ("a - b", {"a": None}, "missing", ("a", "b"), "a - b"),
    ("b / aperture.pitch_mm", {"b": D("1")}, "missing", ("aperture.pitch_mm",), "1 / aperture.pitch_mm"),
    ("aperture.elements", {"aperture": {"elements": None}}, "missing", ("aperture.elements",), "aperture.elements"),
    ("mean(r)", {"r": [D("1.0"), None]}, "missing", ("r",), "mean([1.0, …])"),
    ("mean(r)", {"r": []}, "missing", ("r",), "mean([])"),
    ("a - b", {"a": D("1"), "b": Qualified(">", D("160"))}, "qualified", ("b",), "1 - (> 160)"),
    ("a - b", {"a": D("1"), "b": Qualified("not_seen")}, "qualified", ("b",), "1 - not_seen"),
    ("mean(r)", {"r": [D("1"), Qualified("<", D("2"))]}, "qualified", ("r",), "mean([1, (< 2)])"),
    ("a / b", {"a": D("1"), "b": D("0")}, "not_finite", (), "1 / 0"),
    ("a / (b - 0.3 + c)", {"a": D("1"), "b": D("0.1"), "c": D("0.2")}, "not_finite", (), "1 / (0.1 - 0.3 + 0.2)"),
    ("a / b > 1.0 ? a : b", {"a": D("1"), "b": D("0")}, "not_finite", (), "1 / 0 > 1.0 ? 1 : 0"),
    ("a / (sqrt(b) * sqrt(b) - b)", {"a": D("1"), "b": D("2")}, "not_finite", (), "1 / (sqrt(2) * sqrt(2) - 2)"),
    ("a / b > 1.0 ? a : b", {"a": D("0"), "b": D("0")}, "not_finite", (), "0 / 0 > 1.0 ? 0 : 0"),
    ("sqrt(a)", {"a": D("-1")}, "not_finite", (), "sqrt((-1))"),
    ("standard_deviation(r)", {"r": [D("1")]}, "not_finite", (), "standard_deviation([1])"),
    ("1.0 / a", {"a": D("Infinity")}, "not_finite", (), "1.0 / Infinity"),
    ("a * a", {"a": D("1e9")}, "out_of_range", (), "1000000000 * 1000000000"),
    (CORRECTED.format("horizontal_distance"), {}, "lateral_correction", (), CORRECTED.format("horizontal_distance")),
    (CORRECTED.format("penetration"), {}, "no_correction", (), CORRECTED.format("penetration")),
    (
        CORRECTED.format("x"),
        {"x": D("1"), "test_object": OBJECT | {"layout_compensated": True}, "condition": CONSOLE},
        "layout_compensated",
        (),
        "1 * 1450 / 1540",
    ),
    (
        CORRECTED.format("x"),
        {"x": D("1"), "test_object": {"sound_speed_m_s": D("1450")}, "condition": CONSOLE},
        "missing",
        ("test_object.layout_compensated",),
        "1 * 1450 / 1540",
    ),
]  # fmt: skip


@pytest.mark.parametrize(("formula", "values", "problem", "names", "text"), NOT_WORKED_OUT)
def test_formula_that_can_not_be_worked_out_says_why(formula, values, problem, names, text):
    found = derive(derived_spec(formula), values)
    assert (found.value, found.problem, found.names, found.text) == (None, problem, names, text)


def test_measurand_across_the_beam_is_never_corrected_whatever_it_names():
    values = {"x": D("1"), "test_object": OBJECT, "condition": CONSOLE}
    found = derive(derived_spec(CORRECTED.format("x"), code="lateral_distance_corrected"), values)
    assert found.problem == "lateral_correction"


def test_resolution_with_a_comma_is_read():
    assert derive(derived_spec("a", "0,5"), {"a": D("1.3")}).value == D("1.5")


def test_evaluation_gives_the_double():
    assert evaluate("x - y", {"x": D("1.15"), "y": D("1.0")}) == 1.15 - 1.0


@pytest.mark.parametrize(
    ("values", "code", "names"),
    [
        ({"a": D("1")}, "formula.value_missing", ("b",)),
        ({"a": D("1"), "b": Qualified("<", D("2"))}, "formula.value_qualified", ("b",)),
        ({"a": D("1"), "b": D("0")}, "formula.not_finite", None),
    ],
)
def test_evaluation_without_a_number_is_refused(values, code, names):
    with pytest.raises(Invalid) as refused:
        evaluate("a / b", values)
    assert (refused.value.code, refused.value.parameters.get("names")) == (code, names)


def test_list_in_place_of_a_number_is_an_error_of_the_caller():
    with pytest.raises(TypeError):
        derive(derived_spec("a - b"), {"a": [D("1")], "b": D("1")})


def test_one_formula_serves_many_threads():
    spec = derived_spec("percent * (mean(r) - a.b) / a.b", "0.01")
    values = [{"r": [D(n), D(n + 2)], "a": {"b": D(n)}} for n in range(1, 200)]
    alone = [derive(spec, each) for each in values]
    with ThreadPoolExecutor(8) as threads:
        assert list(threads.map(lambda each: derive(spec, each), values)) == alone
