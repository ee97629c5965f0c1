"""The acoustic figures of the page, each with its questions, its formula and where it comes from."""

from __future__ import annotations

from decimal import Decimal
from functools import partial

from django.utils.translation import gettext_lazy as _

from qa_tracker.core import acoustics, acoustics_doppler, acoustics_media, acoustics_output, acoustics_pulses
from qa_tracker.core.acoustic_quantities import finite, not_negative, positive
from qa_tracker.core.decimals import plain
from qa_tracker.services import cautions
from qa_tracker.web.forms.figures import Asked, Choice, Figure, Given
from qa_tracker.web.presenters.figures import Result, Source, amount, with_unit

DISTANCE_STEP_MM = Decimal("0.01")
OPENSTAX = "OpenStax College Physics 2e, 17.7"
DEFINED = "ISO 80000-8, IEC 60027-3"
# A term is not broken over two lines.
MARCZAK = "c = 1402.385 + 5.038813~T − 5.799136~×~10⁻²~T² + 3.287156~×~10⁻⁴~T³ − 1.398845~×~10⁻⁶~T⁴ + 2.787860~×~10⁻⁹~T⁵".replace(
    "~", "\N{NO-BREAK SPACE}"
)
SPEED = Asked("speed", _("Speed of sound"), "m/s", "1540", positive)
FREQUENCY = Asked("frequency", _("Frequency"), "MHz", "3.5", positive)
DEPTH = Asked("depth", _("Depth"), "cm", "10", not_negative)


def _interface(given: Given) -> list[Result]:
    first = acoustics.impedance_mrayl(given["density1"], given["speed1"])
    second = acoustics.impedance_mrayl(given["density2"], given["speed2"])
    return [
        Result(_("Impedance, first side"), amount(first, "MRayl")),
        Result(_("Impedance, second side"), amount(second, "MRayl")),
        Result(_("Intensity reflected"), amount(100 * acoustics.reflected_intensity(first, second), "%")),
        Result(_("Intensity transmitted"), amount(100 * acoustics.transmitted_intensity(first, second), "%")),
    ]


def _loss(given: Given) -> list[Result]:
    told = (given["coefficient"], given["frequency"], given["depth"])
    one_way, both = (
        acoustics.attenuation_db(*told, both_ways=both_ways, power=given["power"])
        for both_ways in (False, True)
    )
    per_cm = acoustics.attenuation_db(*told[:2], 1.0, both_ways=False, power=given["power"])
    return [
        Result(_("Loss one way"), amount(one_way, "dB")),
        Result(_("Loss there and back"), amount(both, "dB")),
        Result(_("There and back, in nepers"), amount(acoustics.np_from_db(both), "Np")),
        Result(_("Pressure left, there and back"), amount(100 * acoustics.pressure_share(both), "%")),
        Result(_("Intensity left, there and back"), amount(100 * acoustics.intensity_share(both), "%")),
        Result(_("Coefficient µ"), amount(acoustics.intensity_coefficient_per_cm(per_cm), "cm⁻¹")),
    ]


def _levels(given: Given) -> list[Result]:
    return [
        Result(_("The decibels in nepers"), amount(acoustics.np_from_db(given["db"]), "Np")),
        Result(_("The nepers in decibels"), amount(acoustics.db_from_np(given["np"]), "dB")),
    ]


def _pulse(given: Given) -> list[Result]:
    frequency, speed = given["frequency"], given["speed"]
    fine = acoustics_pulses.axial_resolution_mm(frequency, given["cycles"], speed)
    thick = acoustics_pulses.crystal_thickness_mm(frequency, given["crystal"])
    return [
        Result(_("Wavelength"), amount(acoustics_pulses.wavelength_mm(frequency, speed), "mm")),
        Result(_("Expected axial resolution"), amount(fine, "mm")),
        Result(_("Thickness of a resonant crystal"), amount(thick, "mm")),
    ]


def _echo(given: Given) -> list[Result]:
    time = acoustics_pulses.echo_time_us(given["depth"], given["speed"])
    return [
        Result(_("Time to that depth and back"), amount(time, "µs")),
        Result(
            _("Depth of that time"),
            amount(acoustics_pulses.echo_depth_cm(given["time"], given["speed"]), "cm"),
        ),
    ]


def _shift(given: Given) -> list[Result]:
    shift = acoustics_doppler.doppler_shift_khz(
        given["velocity"], given["frequency"], given["angle"], given["speed"]
    )
    return [Result(_("Doppler shift"), amount(shift, "kHz"))]


def _velocity(given: Given) -> list[Result]:
    as_set, off = given["angle"], given["off"]
    velocity = acoustics_doppler.doppler_velocity_cm_s(
        given["shift"], given["frequency"], as_set, given["speed"]
    )
    found = [Result(_("Velocity"), amount(velocity, "cm/s"))]
    for true in dict.fromkeys((as_set - off, as_set + off)):
        words = _("Its error if the true angle is %(angle)s") % {"angle": amount(true, "°", digits=6)}
        error = acoustics_doppler.velocity_error_percent(true, as_set)
        found.append(Result(words, amount(error, "%", digits=3, signed=True)))
    return found


def _water(given: Given) -> list[Result]:
    speed = acoustics_media.water_sound_speed_m_s(given["temperature"])
    return [Result(_("Speed of sound"), amount(speed, "m/s", digits=5))]


def _air(given: Given) -> list[Result]:
    speed = acoustics_media.air_sound_speed_m_s(given["temperature"])
    return [Result(_("Speed of sound"), amount(speed, "m/s"))]


def _distance(given: Given) -> list[Result]:
    found = acoustics_media.corrected_distance_mm(
        given.exact["reading"],
        object_m_s=given.exact["object"],
        console_m_s=given.exact["console"],
        resolution_mm=DISTANCE_STEP_MM,
        along_beam=given.chosen["direction"] == "along",
        layout_compensated=given.chosen["layout"] == "compensated",
    )
    shown = acoustics_media.shown_distance_mm(given["reading"], given["object"], given["console"])
    words = _("A true %(distance)s would read") % {"distance": with_unit(plain(given.exact["reading"]), "mm")}
    return [
        Result(_("Corrected distance"), with_unit(plain(found), "mm")),
        Result(words, amount(shown, "mm", digits=5)),
    ]


def _mechanical(given: Given) -> list[Result]:
    return [
        Result(
            "MI", amount(acoustics_output.mechanical_index(given["pressure"], given["frequency"]), digits=3)
        )
    ]


def _thermal(given: Given) -> list[Result]:
    row = acoustics_output.dwell(cautions.published()["obstetric-dwell"].table, given.exact["index"])
    return [Result(_("As a caution, never a permission"), row.says)] if row else []


FIGURES = (
    Figure(
        "interface", _("Interface"),
        (
            Asked("density1", _("Density, first side"), "kg/m³", "925", positive),
            Asked("speed1", _("Speed of sound, first side"), "m/s", "1450", positive),
            Asked("density2", _("Density, second side"), "kg/m³", "1075", positive),
            Asked("speed2", _("Speed of sound, second side"), "m/s", "1590", positive),
        ),
        _interface,
        ("Z = ρ c", _("R = ((Z₂ − Z₁) / (Z₂ + Z₁))² at normal incidence"), "T = 1 − R"),
        (Source(_("Impedance, reflection"), f"{OPENSTAX}, equations 17.38 and 17.39", "confirmed"),),
    ),
    Figure(
        "loss", _("Attenuation along a path"),
        (
            Asked("coefficient", _("Attenuation, one way"), "dB/(cm\N{NO-BREAK SPACE}MHzⁿ)", "0.5", not_negative),
            FREQUENCY,
            DEPTH,
            Asked("power", _("Power n: 1 soft tissue, 2 water"), "", "1", acoustics.frequency_power),
        ),
        _loss,
        (
            _("L = a fⁿ d one way, 2 a fⁿ d there and back"),
            "p = p₀ 10^(−L/20)",
            _("I = I₀ 10^(−L/10) = I₀ exp(−µ x), x the whole way of the sound"),
        ),
        (
            Source(_("Decibels, nepers"), DEFINED, "confirmed"),
            Source(_("A loss that grows with a power of the frequency"), "", "practice"),
        ),
    ),
    Figure(
        "levels", _("Decibels and nepers"),
        (
            Asked("db", _("Level difference"), "dB", "6", finite),
            Asked("np", _("Level difference"), "Np", "1", finite),
        ),
        _levels,
        ("1 Np = 20 / ln 10 dB = 8.685889638 dB", _("for coefficients in dB/cm and Np/cm too")),
        (Source(_("Definition"), DEFINED, "confirmed"),),
    ),
    Figure(
        "wavelength", _("Wavelength, pulse and crystal"),
        (
            FREQUENCY,
            SPEED,
            Asked("cycles", _("Cycles in a pulse"), "", "2", positive),
            Asked("crystal", _("Speed of sound in the crystal"), "m/s", "5500", positive),
        ),
        _pulse,
        (
            "λ = c / f",
            _("axial resolution = half the length of a pulse = cycles × λ / 2"),
            _("thickness of a crystal = λ / 2 in it"),
        ),
        (
            Source(_("Wavelength"), OPENSTAX, "confirmed"),
            Source(_("Resolution, crystal"), "", "practice"),
        ),
    ),
    Figure(
        "echo", _("Time and depth of an echo"),
        (DEPTH, Asked("time", _("Time"), "µs", "130", not_negative), SPEED),
        _echo,
        ("t = 2 d / c", "d = c t / 2"),
        (Source(_("Time goes with distance"), OPENSTAX, "confirmed"),),
    ),
    Figure(
        "doppler", _("Doppler shift"),
        (
            Asked("velocity", _("Velocity"), "cm/s", "50", finite),
            Asked("frequency", _("Frequency"), "MHz", "5", positive),
            Asked(
                "angle", _("Angle between beam and motion"), "°", "60", partial(acoustics_doppler.angle, most=180)
            ),
            SPEED,
        ),
        _shift,
        ("Δf = 2 f v cos θ / c",),
        (Source(_("To first order in v / c"), f"{OPENSTAX}, equations 17.43 and 17.45", "confirmed"),),
    ),
    Figure(
        "velocity", _("Doppler velocity and its angle"),
        (
            Asked("shift", _("Doppler shift"), "kHz", "1.623", finite),
            Asked("frequency", _("Frequency"), "MHz", "5", positive),
            Asked(
                "angle", _("Angle set on the console"), "°", "60",
                partial(acoustics_doppler.angle, most=acoustics_doppler.MOST_SET_DEG),
            ),
            Asked("off", _("Wrong by, either way"), "°", "5", not_negative),
            SPEED,
        ),
        _velocity,
        ("v = c Δf / (2 f cos θ)", _("error = cos(true angle) / cos(set angle) − 1")),
        (
            Source(_("To first order in v / c"), f"{OPENSTAX}, equations 17.43 and 17.45", "confirmed"),
            Source(_("Error of the angle"), "", "practice"),
        ),
        {"true_angle_deg": "off"},
    ),
    Figure(
        "water", _("Speed of sound in water"),
        (
            Asked(
                "temperature", _("Temperature, 0 to 95"), "°C", "20",
                partial(acoustics_media.temperature, within_degc=acoustics_media.WATER_RANGE_DEGC),
            ),
        ),
        _water,
        (
            MARCZAK,
            _("for pure water at atmospheric pressure"),
        ),
        (Source(_("Polynomial"), "Marczak 1997, JASA 102:2776-2779", "confirmed"),),
    ),
    Figure(
        "air", _("Speed of sound in air"),
        (
            Asked(
                "temperature", _("Temperature, 0 to 30"), "°C", "20",
                partial(acoustics_media.temperature, within_degc=acoustics_media.AIR_RANGE_DEGC),
            ),
        ),
        _air,
        (
            _("c = 331.3 √(1 + T / 273.15) for dry air"),
            _("Humid air is faster, at 30\N{NO-BREAK SPACE}°C by up to 2.5\N{NO-BREAK SPACE}m/s."),
        ),
        (
            Source(_("Simple law"), "", "practice"),
            Source(_("Compared with"), "Cramer 1993, JASA 93:2510", "confirmed"),
        ),
    ),
    Figure(
        "distance", _("Distance along the beam in another medium"),
        (
            Asked("reading", _("Reading on the screen"), "mm", "106.21", not_negative),
            Asked("object", _("Speed of sound in the object"), "m/s", "1450", positive),
            Asked("console", _("The console's own setting"), "m/s", "1540", positive),
            Choice(
                "direction", _("Direction"),
                (("along", _("along the beam")), ("lateral", _("lateral"))), "along",
            ),
            Choice(
                "layout", _("Layout of the object"),
                (("true", _("true distances")), ("compensated", _("already compensated"))), "true",
            ),
        ),
        _distance,
        (
            _("corrected = reading × c of the object / c of the console"),
            _("Exact, to 0.01 mm. Along the beam only, which is radially in a sector."),
        ),
        (Source(_("Correction"), "Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143", "confirmed"),),
        {"along_beam": "direction", "layout_compensated": "layout"},
    ),
    Figure(
        "mi", _("Mechanical index"),
        (Asked("pressure", _("Derated peak rarefactional pressure"), "MPa", "1.5", not_negative), FREQUENCY),
        _mechanical,
        ("MI = p / √f", _("with p in MPa, derated by 0.3 dB/(cm MHz), and f in MHz")),
        (Source(_("Definition"), "IEC 62359; FDA CDRH guidance, 27 June 2019", "confirmed"),),
        cautions=("alara", "display-only"),
    ),
    Figure(
        "ti", _("Thermal index in obstetric scanning"),
        (Asked("index", _("TIS before ten weeks, TIB after"), "", "0.7", not_negative),),
        _thermal,
        (_("A row of the table holds its lower end, not its upper."),),
        (Source(_("Table"), "BMUS 2009", "memory"),),
        cautions=("obstetric-dwell", "alara", "display-only"),
    ),
)  # fmt: skip
