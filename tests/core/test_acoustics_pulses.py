"""Wavelength, pulse and echo against a published text, the definitions, and facts of the trade."""

from __future__ import annotations

import pytest

from qa_tracker.core.acoustics_pulses import (
    axial_resolution_mm,
    crystal_thickness_mm,
    echo_depth_cm,
    echo_time_us,
    wavelength_mm,
)


def test_wavelength_and_depth_agree_with_the_text():
    # OpenStax College Physics 2e, 17.7: 0.22 mm at 7 MHz, and a depth of 500 wavelengths, 0.11 m
    assert wavelength_mm(7) == pytest.approx(0.2200, abs=5e-5)
    assert 500 * wavelength_mm(7) / 1e3 == pytest.approx(0.1100, abs=5e-5)


def test_wavelength_at_2_mhz_is_around_a_millimetre():
    # Common practice, no source.
    assert wavelength_mm(2) == pytest.approx(0.77)


def test_resonant_crystal_is_half_a_wavelength_thick():
    # Common practice, no source; barium titanate 5500 m/s (OpenStax College Physics 2e, Table 17.5).
    assert crystal_thickness_mm(3.5, 5500) == wavelength_mm(3.5, 5500) / 2
    assert crystal_thickness_mm(3.5, 5500) == pytest.approx(0.786, abs=5e-4)


def test_axial_resolution_is_half_the_pulse():
    # Common practice, no source.
    assert axial_resolution_mm(7, 2) == pytest.approx(wavelength_mm(7))
    assert axial_resolution_mm(7, 3) == pytest.approx(0.33)


def test_echo_takes_13_microseconds_a_centimetre():
    # Definitions (t = 2 d / c): 129.8701 us for 10 cm
    assert (echo_time_us(10), echo_time_us(1)) == pytest.approx((129.8701299, 12.987013), rel=1e-6)
    assert echo_depth_cm(echo_time_us(7.3, 1482.38), 1482.38) == pytest.approx(7.3)
