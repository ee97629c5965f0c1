"""The worked examples in the docstrings of the judging modules, and of those that write editions."""

from __future__ import annotations

import doctest

import pytest

from qa_tracker.core import (
    allowances,
    baselines,
    combined_uncertainty,
    comparison,
    conformity,
    criteria,
    decimals,
    decision_risks,
    edition_differences,
    edition_draft,
    edition_places,
    edition_refusals,
    interval_factors,
    judged_again,
    measurand_draft,
    own_spread,
    procedure_differences,
    stated_uncertainty,
    typed_text,
    uncertainty,
    units,
    verdict_kernel,
)

MODULES = (
    allowances,
    baselines,
    combined_uncertainty,
    comparison,
    conformity,
    criteria,
    decimals,
    decision_risks,
    edition_differences,
    edition_draft,
    edition_places,
    edition_refusals,
    judged_again,
    measurand_draft,
    own_spread,
    procedure_differences,
    stated_uncertainty,
    interval_factors,
    typed_text,
    uncertainty,
    units,
    verdict_kernel,
)


@pytest.mark.parametrize("module", MODULES)
def test_examples_give_what_they_say(module):
    found = doctest.testmod(module)
    assert found.attempted > 0
    assert found.failed == 0
