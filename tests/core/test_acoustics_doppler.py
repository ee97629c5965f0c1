"""Doppler against a published worked example, and the exact error of a wrongly set angle."""

from __future__ import annotations

import math

import numpy as np
import pytest

from qa_tracker.core.acoustics_doppler import doppler_shift_khz, doppler_velocity_cm_s, velocity_error_percent


def test_shift_agrees_with_the_worked_example():
    # OpenStax College Physics 2e, 17.7, Doppler-shifted ultrasound: 2.50 MHz, 20.0 cm/s towards, 1540 m/s: 649 Hz
    assert doppler_shift_khz(20.0, 2.50, 0) == pytest.approx(0.649, abs=5e-4)


def test_shift_is_the_two_shifts_of_the_text_to_first_order():
    # The same, equations 17.43 and 17.45: f (c + v) / c, then c / (c - v)
    twice = 2.5e3 * (1540 + 0.2) / 1540 * 1540 / (1540 - 0.2) - 2.5e3
    assert doppler_shift_khz(20.0, 2.5, 0) == pytest.approx(twice, rel=2e-4)


def test_shift_vanishes_at_a_right_angle_and_turns_beyond():
    assert doppler_shift_khz(100, 2, 90) == 0
    assert doppler_shift_khz(100, 2, 120) == pytest.approx(-doppler_shift_khz(100, 2, 60))
    assert doppler_shift_khz(-100, 2, 60) == -doppler_shift_khz(100, 2, 60)


@pytest.mark.parametrize("angle", [0, 30, 60, 89])
def test_velocity_is_that_of_the_shift(angle):
    shift = doppler_shift_khz(43.0, 4.5, angle, 1566)
    assert doppler_velocity_cm_s(shift, 4.5, angle, 1566) == pytest.approx(43.0)


def test_five_degrees_at_sixty_are_some_fifteen_percent():
    # Common practice, no source: about 15 to 17 % either way; exactly, by which of the two angles is 60:
    assert velocity_error_percent(55, 60) == pytest.approx(14.715, abs=5e-4)
    assert velocity_error_percent(65, 60) == pytest.approx(-15.476, abs=5e-4)
    assert velocity_error_percent(60, 65) == pytest.approx(18.310, abs=5e-4)
    assert velocity_error_percent(60, 55) == pytest.approx(-12.828, abs=5e-4)


def test_error_is_the_tangent_to_first_order():
    small = 100 * math.tan(math.radians(60)) * math.radians(0.01)
    assert velocity_error_percent(59.99, 60) == pytest.approx(small, rel=1e-3)
    assert velocity_error_percent(60, 60) == 0


def test_error_is_what_the_console_shows_too_much():
    shift = doppler_shift_khz(50, 5, 55)
    assert doppler_velocity_cm_s(shift, 5, 60) == pytest.approx(
        50 * (1 + velocity_error_percent(55, 60) / 100)
    )


def test_velocity_at_a_right_angle_is_missed_altogether():
    assert np.array_equal(velocity_error_percent(90, np.array([0, 60])), [-100, -100])
