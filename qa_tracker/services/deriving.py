"""Working out the derived quantities of a check from its readings and the attributes around them."""

from __future__ import annotations

from collections.abc import Mapping

from qa_tracker.records.models import Device, TestObject


def attributes_of(device: Device, test_object: TestObject | None) -> Mapping[str, Mapping[str, object]]:
    """What formulas may name of the device and of what it was measured on."""
    return {}
