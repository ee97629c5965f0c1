"""Formulas ready to use: templates whose roles are filled with measurands of the procedure at hand."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

from qa_tracker.core.formula_names import CONSOLE_SPEED, LAYOUT_COMPENSATED, OBJECT_SPEED


@dataclass(frozen=True, slots=True)
class Role:
    """A measurand that a template asks for.

    Parameters
    ----------
    name
        Its place in the template.
    unit
        Code of the unit it has to be in; None for any, the same for all that say None.
    repeated
        Whether it is read several times, and so is a list.
    """

    name: str
    unit: str | None = None
    repeated: bool = False


@dataclass(frozen=True, slots=True)
class ReadyFormula:
    """A formula with roles in braces.

    Parameters
    ----------
    unit
        Code of the result's unit; None for that of the roles.
    needs
        Dotted names that have to have a value beside the roles.
    source, standing
        Where it comes from, and how well that is known: ``confirmed``, ``memory`` or ``practice``.
    """

    code: str
    template: str
    unit: str | None
    roles: tuple[Role, ...]
    needs: tuple[str, ...]
    source: str
    standing: str


def fill(ready: ReadyFormula, measurands: Mapping[str, str]) -> str:
    """Put the codes of measurands in a ready formula's roles; whether they fit is told when it is published.

    Parameters
    ----------
    ready
        One of ``READY_FORMULAS``.
    measurands
        A measurand's code for each role's name.

    Raises
    ------
    KeyError
        For a role that is left out.

    Examples
    --------
    >>> fill(READY_FORMULAS[0], {"reading": "vertical_distance"})
    'vertical_distance - nominals.vertical_distance'
    """
    return ready.template.format_map(measurands)


_VIM: Final = "JCGM 200:2012, 2.16 (measurement error)"
_PRACTICE: Final = "common practice, no source"

READY_FORMULAS: Final = (
    ReadyFormula(
        code="distance_error",
        template="{reading} - nominals.{reading}",
        unit="mm",
        roles=(Role("reading", "mm"),),
        needs=("nominals.{reading}",),
        source=_VIM,
        standing="memory",
    ),
    ReadyFormula(
        code="percent_error",
        template="percent * ({reading} - nominals.{reading}) / nominals.{reading}",
        unit="%",
        roles=(Role("reading"),),
        needs=("nominals.{reading}",),
        source=_VIM,
        standing="memory",
    ),
    ReadyFormula(
        code="ellipsoid_volume",
        template="pi / 6.0 * {length} * {width} * {height} / (mm_per_cm * mm_per_cm * mm_per_cm)",
        unit="cm3",
        roles=(Role("length", "mm"), Role("width", "mm"), Role("height", "mm")),
        needs=(),
        source="geometry: 4/3 pi times the three half axes",
        standing="confirmed",
    ),
    ReadyFormula(
        code="range_of_repeats",
        template="range({reading})",
        unit=None,
        roles=(Role("reading", repeated=True),),
        needs=(),
        source=_PRACTICE,
        standing="practice",
    ),
    ReadyFormula(
        code="mean_of_repeats",
        template="mean({reading})",
        unit=None,
        roles=(Role("reading", repeated=True),),
        needs=(),
        source=_PRACTICE,
        standing="practice",
    ),
    ReadyFormula(
        code="difference",
        template="{after} - {before}",
        unit=None,
        roles=(Role("after"), Role("before")),
        needs=(),
        source=_PRACTICE,
        standing="practice",
    ),
    ReadyFormula(
        code="ratio",
        template="{reading} / {other}",
        unit="1",
        roles=(Role("reading"), Role("other")),
        needs=(),
        source=_PRACTICE,
        standing="practice",
    ),
    ReadyFormula(
        code="sound_speed_correction",
        template=f"{{reading}} * {OBJECT_SPEED} / {CONSOLE_SPEED}",
        unit=None,
        roles=(Role("reading"),),
        needs=(OBJECT_SPEED, CONSOLE_SPEED, LAYOUT_COMPENSATED),
        source="Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143",
        standing="confirmed",
    ),
)
"""In the order shown. What the last may not be used for, and why, is in ``formula_check.correction_problem``."""
