"""The worked examples in the docstrings of acoustics."""

from __future__ import annotations

import doctest

import pytest

from qa_tracker.core import (
    acoustic_quantities,
    acoustics,
    acoustics_doppler,
    acoustics_media,
    acoustics_output,
    acoustics_pulses,
)

MODULES = (
    acoustic_quantities, acoustics, acoustics_doppler, acoustics_media, acoustics_output, acoustics_pulses,
)  # fmt: skip


@pytest.mark.parametrize("module", MODULES)
def test_examples_give_what_they_say(module):
    found = doctest.testmod(module)
    assert found.attempted > 1
    assert found.failed == 0
