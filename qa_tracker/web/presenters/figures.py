"""Acoustic figures for the page: what is asked, how it is worked out, and where the formula comes from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from decimal import Decimal

from django.utils.functional import Promise
from django.utils.translation import gettext_lazy as _

from qa_tracker.core import acoustics, decimals
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.units import with_symbol
from qa_tracker.services import wording

Words = str | Promise
PRACTICE = _("common practice, no source")
DIGITS = 4


@dataclass(frozen=True)
class Asked:
    """One number of a figure: its name in the address, its words, its unit's symbol, and an ordinary value."""

    name: str
    label: Words
    unit: str
    start: str


@dataclass(frozen=True)
class Figure:
    """One figure: ``work_out`` takes the numbers by name and gives results with their words and units."""

    code: str
    title: Words
    asked: tuple[Asked, ...]
    work_out: Callable[[Mapping[str, float]], tuple[tuple[Words, float, str], ...]]
    formula: Words
    source: Words


SPEED = Asked("speed", _("Speed of sound"), "m/s", "1540")
FREQUENCY = Asked("frequency", _("Frequency"), "MHz", "3.5")

FIGURES: tuple[Figure, ...] = (
    Figure(
        "interface",
        _("At an interface"),
        (
            Asked("density1", _("Density, first side"), "kg/m³", "925"),
            Asked("speed1", _("Speed of sound, first side"), "m/s", "1450"),
            Asked("density2", _("Density, second side"), "kg/m³", "1075"),
            Asked("speed2", _("Speed of sound, second side"), "m/s", "1590"),
        ),
        lambda n: _interface(n),
        "Z = ρ c;  R = ((Z₂ − Z₁) / (Z₂ + Z₁))²;  T = 1 − R",
        "OpenStax College Physics 2e, 17.7",
    ),
    Figure(
        "loss",
        _("Attenuation of an echo"),
        (
            Asked("coefficient", _("Attenuation, one way"), "dB/(cm MHz)", "0.5"),
            FREQUENCY,
            Asked("depth", _("Depth"), "cm", "10"),
        ),
        lambda n: _loss(n),
        _("L = 2 a f d;  what is left of the intensity = 10^(−L/10);  1 Np = 8.686 dB"),
        _("ISO 80000-8; linear in frequency by common practice, no source"),
    ),
    Figure(
        "wavelength",
        _("Wavelength and axial resolution"),
        (FREQUENCY, SPEED, Asked("cycles", _("Cycles in a pulse"), "", "2")),
        lambda n: (
            (_("Wavelength"), acoustics.wavelength_mm(n["frequency"], n["speed"]), "mm"),
            (
                _("Expected axial resolution"),
                acoustics.axial_resolution_mm(n["frequency"], n["cycles"], n["speed"]),
                "mm",
            ),
        ),
        _("λ = c / f;  resolution = cycles × λ / 2"),
        _("OpenStax College Physics 2e, 17.7; half the pulse length by common practice, no source"),
    ),
    Figure(
        "echo",
        _("Time to a depth and back"),
        (Asked("depth", _("Depth"), "cm", "10"), SPEED),
        lambda n: ((_("Time"), acoustics.echo_time_us(n["depth"], n["speed"]), "µs"),),
        "t = 2 d / c",
        "OpenStax College Physics 2e, 17.7",
    ),
    Figure(
        "doppler",
        _("Doppler shift and the error of its angle"),
        (
            Asked("velocity", _("Velocity"), "cm/s", "50"),
            Asked("frequency", _("Frequency"), "MHz", "5"),
            Asked("angle", _("True angle between beam and motion"), "°", "60"),
            Asked("set", _("Angle set on the console"), "°", "65"),
            SPEED,
        ),
        lambda n: (
            (
                _("Doppler shift"),
                acoustics.doppler_shift_khz(n["velocity"], n["frequency"], n["angle"], n["speed"]),
                "kHz",
            ),
            (
                _("Error of the velocity shown"),
                acoustics.velocity_error_percent(n["angle"], n["set"]),
                "%",
            ),
        ),
        _("Δf = 2 f v cos θ / c;  error = cos(true) / cos(set) − 1"),
        "OpenStax College Physics 2e, 17.7",
    ),
    Figure(
        "water",
        _("Speed of sound in water"),
        (Asked("temperature", _("Temperature, 0 to 95"), "°C", "20"),),
        lambda n: ((_("Speed of sound"), acoustics.water_sound_speed_m_s(n["temperature"]), "m/s"),),
        _("a polynomial of the fifth degree in temperature, for pure water at atmospheric pressure"),
        "Marczak 1997, JASA 102:2776-2779",
    ),
    Figure(
        "distance",
        _("A distance along the beam in another medium"),
        (
            Asked("reading", _("Reading on the screen"), "mm", "106.2"),
            Asked("object", _("Speed of sound in the object"), "m/s", "1450"),
            Asked("console", _("The console's own setting"), "m/s", "1540"),
        ),
        lambda n: _distance(n),
        _("corrected = reading × c of the object / c of the console; along the beam only, and never where the object's layout is already compensated"),
        "Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143",
    ),
    Figure(
        "mi",
        _("Mechanical index"),
        (Asked("pressure", _("Derated peak rarefactional pressure"), "MPa", "1.5"), FREQUENCY),
        lambda n: ((_("MI"), acoustics.mechanical_index(n["pressure"], n["frequency"]), ""),),
        "MI = p / √f",
        _("IEC 62359 (clause from memory); FDA CDRH guidance, 27 June 2019"),
    ),
)  # fmt: skip


def _interface(n: Mapping[str, float]) -> tuple[tuple[Words, float, str], ...]:
    first = acoustics.impedance_mrayl(n["density1"], n["speed1"])
    second = acoustics.impedance_mrayl(n["density2"], n["speed2"])
    return (
        (_("Impedance, first side"), first, "MRayl"),
        (_("Impedance, second side"), second, "MRayl"),
        (_("Intensity reflected"), 100 * acoustics.reflected_intensity(first, second), "%"),
        (_("Intensity transmitted"), 100 * acoustics.transmitted_intensity(first, second), "%"),
    )


def _loss(n: Mapping[str, float]) -> tuple[tuple[Words, float, str], ...]:
    loss = acoustics.attenuation_db(n["coefficient"], n["frequency"], n["depth"])
    return (
        (_("Loss there and back"), loss, "dB"),
        (_("The same in nepers"), acoustics.np_from_db(loss), "Np"),
        (_("Intensity left"), 100 * acoustics.intensity_share(loss), "%"),
    )


def _distance(n: Mapping[str, float]) -> tuple[tuple[Words, float, str], ...]:
    found = acoustics.corrected_distance_mm(
        Decimal(repr(n["reading"])),
        object_m_s=Decimal(repr(n["object"])),
        console_m_s=Decimal(repr(n["console"])),
        resolution_mm=Decimal("0.01"),
        along_beam=True,
        layout_compensated=False,
    )
    return ((_("Corrected distance"), float(found), "mm"),)


@dataclass(frozen=True)
class ShownInput:
    """One field with what was typed and why it was refused."""

    key: str
    asked: Asked
    value: str
    refusal: str


@dataclass(frozen=True)
class ShownFigure:
    """One section of the page."""

    figure: Figure
    inputs: tuple[ShownInput, ...]
    results: tuple[tuple[Words, str], ...]
    refusal: str


def shown_figures(typed: Mapping[str, str]) -> tuple[ShownFigure, ...]:
    """Every figure worked out from what was typed, or from ordinary values where nothing was."""
    return tuple(_shown(figure, typed) for figure in FIGURES)


def _shown(figure: Figure, typed: Mapping[str, str]) -> ShownFigure:
    inputs, numbers = [], {}
    for asked in figure.asked:
        key = f"{figure.code}-{asked.name}"
        text, refusal = typed.get(key, asked.start), ""
        try:
            numbers[asked.name] = float(decimals.parse(text, field=key).decimal)
        except Invalid as error:
            refusal = wording.refusal(error)
        inputs.append(ShownInput(key, asked, text, refusal))
    if len(numbers) < len(figure.asked):
        return ShownFigure(figure, tuple(inputs), (), "")
    try:
        found = figure.work_out(numbers)
    except DomainError as error:
        return ShownFigure(figure, tuple(inputs), (), wording.refusal(error))
    return ShownFigure(
        figure, tuple(inputs), tuple((name, _amount(value, unit)) for name, value, unit in found), ""
    )


def _amount(value: float, unit: str) -> str:
    """A figure to four significant digits, written out in full."""
    text = f"{Decimal(f'{value:.{DIGITS}g}'):f}"
    if unit in ("", "°"):
        return text + unit
    return with_symbol(text, "%") if unit == "%" else f"{text}\N{NO-BREAK SPACE}{unit}"
