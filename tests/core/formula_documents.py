"""Small procedures for the tests of formulas."""

from __future__ import annotations

import copy
import json
from dataclasses import replace
from pathlib import Path

from qa_tracker.core.library import procedure
from qa_tracker.core.library_specs import MeasurandSpec

_PATH = Path(__file__).parents[2] / "fixtures" / "procedures" / "after-repair-or-change.json"
_SHIPPED = json.loads(_PATH.read_text())
_READING = next(one for one in _SHIPPED["measurands"] if one["code"] == "vertical_distance")
_DERIVED = next(one for one in _SHIPPED["measurands"] if one["code"] == "vertical_distance_difference")
_SPEC = next(one for one in procedure(_SHIPPED).measurands if one.kind == "derived")


def read(code, **changes):
    """A number per aperture and condition, in mm, with a nominal value from the test object."""
    return copy.deepcopy(_READING) | {"code": code, "criteria": [], "sound_speed_correction": False} | changes


def without(measurand, key):
    """The same without one key."""
    return {name: value for name, value in measurand.items() if name != key}


def worked_out(code, formula, **changes):
    """A derived measurand of the same place and unit."""
    return copy.deepcopy(_DERIVED) | {"code": code, "formula": formula, "criteria": []} | changes


def document(*measurands, **changes):
    """A procedure of these measurands."""
    return copy.deepcopy(_SHIPPED) | {"measurands": list(measurands)} | changes


def derived_spec(formula, resolution="0.1", code="change") -> MeasurandSpec:
    """A derived measurand as it is worked out."""
    return replace(_SPEC, code=code, formula=formula, resolution=resolution)
