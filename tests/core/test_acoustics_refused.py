"""What no figure is worked out from, by name; one number or many; what is given for each."""

from __future__ import annotations

import math

import numpy as np
import pytest

from qa_tracker.core import acoustics as a
from qa_tracker.core import acoustics_doppler as d
from qa_tracker.core import acoustics_media as m
from qa_tracker.core import acoustics_pulses as p
from qa_tracker.core.acoustics_output import mechanical_index
from qa_tracker.core.errors import Invalid

REFUSED = {
    "endless density": (lambda: a.impedance_mrayl(math.inf, 1540), "not_finite", "density_kg_m3"),
    "no impedance": (lambda: a.reflected_intensity(1.5, 0), "not_positive", "second_mrayl"),
    "negative impedance": (lambda: a.transmitted_intensity(-1.5, 1), "not_positive", "first_mrayl"),
    "huge density": (lambda: a.impedance_mrayl(1e16, 1540), "magnitude", "density_kg_m3"),
    "tiny frequency": (lambda: p.wavelength_mm(1e-300), "magnitude", "frequency_mhz"),
    "no frequency": (lambda: p.wavelength_mm(0), "not_positive", "frequency_mhz"),
    "no cycles": (lambda: p.axial_resolution_mm(7, 0), "not_positive", "cycles"),
    "depth above the skin": (lambda: p.echo_time_us(-1), "negative", "depth_cm"),
    "time before the pulse": (lambda: p.echo_depth_cm(-1), "negative", "time_us"),
    "a gain": (lambda: a.intensity_share(-3), "negative", "loss_db"),
    "no loss": (lambda: a.pressure_share(math.nan), "not_finite", "loss_db"),
    "no nepers": (lambda: a.db_from_np(math.nan), "not_finite", "loss_np"),
    "cube of the frequency": (lambda: a.attenuation_db(1, 1, 1, both_ways=True, power=3), "power", "power"),
    "negative path": (lambda: a.remaining_intensity(1, 1, -1), "negative", "path_cm"),
    "no velocity": (lambda: d.doppler_shift_khz(math.nan, 2, 0), "not_finite", "velocity_cm_s"),
    "backwards": (lambda: d.doppler_shift_khz(10, 2, 181), "angle", "angle_deg"),
    "set at a right angle": (lambda: d.velocity_error_percent(60, 90), "angle", "set_angle_deg"),
    "velocity at a right angle": (lambda: d.doppler_velocity_cm_s(1, 5, 90), "angle", "angle_deg"),
    "too hot": (lambda: m.water_sound_speed_m_s(95.1), "temperature", "temperature_degc"),
    "ice": (lambda: m.water_sound_speed_m_s(-0.1), "temperature", "temperature_degc"),
    "no temperature": (lambda: m.water_sound_speed_m_s(math.nan), "not_finite", "temperature_degc"),
    "hot air": (lambda: m.air_sound_speed_m_s(30.5), "temperature", "temperature_degc"),
    "negative pressure": (lambda: mechanical_index(-1, 2), "negative", "derated_peak_rarefactional_mpa"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_figure_is_refused_by_the_name_of_what_is_wrong(name):
    work_out, code, field = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        work_out()
    assert (refused.value.code, refused.value.field) == (f"acoustics.{code}", field)


def test_range_is_said_where_nothing_is_extrapolated():
    with pytest.raises(Invalid) as refused:
        m.water_sound_speed_m_s(np.array([20.0, 96.0, 97.0]))
    assert refused.value.parameters == {"value": "96", "low": "0", "high": "95"}


@pytest.mark.parametrize("end", [m.WATER_RANGE_DEGC, m.AIR_RANGE_DEGC], ids=["water", "air"])
def test_both_ends_of_a_range_are_inside(end):
    speed = m.water_sound_speed_m_s if end is m.WATER_RANGE_DEGC else m.air_sound_speed_m_s
    assert np.all(np.isfinite(speed(np.array(end))))


def test_many_numbers_give_an_array_and_one_a_plain_number():
    many = a.impedance_mrayl(np.array([[1000.0], [1060.0]]), np.array([1480.0, 1540.0, 1570.0]))
    assert many.shape == (2, 3)
    assert many[1, 2] == a.impedance_mrayl(1060, 1570)
    assert type(a.impedance_mrayl(np.float64(1060), np.int64(1570))) is float


def test_no_numbers_give_none():
    assert m.water_sound_speed_m_s(np.array([])).shape == (0,)
    assert d.doppler_shift_khz(np.array([]), 5, 60).shape == (0,)


@pytest.mark.parametrize("most", [1e15, 1e-15])
def test_no_number_that_is_taken_overflows(most):
    assert math.isfinite(a.impedance_mrayl(most, most))
    assert math.isfinite(a.attenuation_db(most, most, most, both_ways=True, power=2))
    assert math.isfinite(d.doppler_velocity_cm_s(1e15, most, 89, 1e15))
    assert 0 <= a.transmitted_intensity(most, 1.0) <= 1
    assert 0 <= a.remaining_intensity(1.0, most, most) <= 1
