"""The derived measurands of a procedure, checked before an edition is published, and the order to work them out in."""

from __future__ import annotations

import re
from collections.abc import Collection, Sequence
from dataclasses import dataclass
from graphlib import CycleError, TopologicalSorter
from typing import Final

from qa_tracker.core import decimals
from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_grammar import parse
from qa_tracker.core.formula_kinds import Form, Kind, Reading, nearest
from qa_tracker.core.formula_names import (
    CONSOLE_SPEED,
    FUNCTIONS,
    NAMED_VALUES,
    NAMES,
    NOMINAL,
    NOMINALS,
    OBJECT_SPEED,
    YES_NO,
)
from qa_tracker.core.formula_tree import Name, excerpt, names_in
from qa_tracker.core.formula_units import code_of, over, powers_of
from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec

_NO_WORD: Final = re.compile(r"\W+")
# Words of a measurand's code or name that tell why the speed of sound doesn't scale it.
_ACROSS: Final = re.compile(r"(?:.*_)?(?:horizontal|lateral|width|elevational)(?:_.*)?")
_NO_DISTANCE: Final = re.compile(r"(?:.*_)?(?:penetration|resolution|fwhm)(?:_.*)?")
_NUMBERS: Final = ("number", "count", "image", "derived")
_WORDS: Final = {NOMINAL, NOMINALS, *FUNCTIONS, *(name.partition(".")[0] for name in (*NAMED_VALUES, *NAMES))}


def check_formulas(spec: ProcedureSpec) -> None:
    """Refuse a procedure one of whose formulas is wrong.

    Parameters
    ----------
    spec
        The procedure as read; one without derived measurands is let through.

    Raises
    ------
    Invalid
        As ``check_formula`` for the first wrong one, or ``formula.cycle`` as of ``order``. The ``field`` is
        the formula's place in the document, such as ``measurands[3].formula``.
    """
    for measurand in spec.measurands:
        if measurand.kind == "derived":
            check_formula(measurand, spec)
    order(spec.measurands)


def check_formula(measurand: MeasurandSpec, spec: ProcedureSpec) -> None:
    """Refuse a derived measurand whose formula is wrong.

    Parameters
    ----------
    measurand
        The derived one; may be a draft of one of ``spec``.
    spec
        The procedure it belongs to, whose readings it may name.

    Raises
    ------
    Invalid
        With ``field`` the formula's place, ``column`` from 1 and ``at`` what stands there: ``formula.syntax``,
        ``formula.unfinished``, ``formula.whole_number``, ``formula.too_long`` or ``formula.too_deep``;
        ``formula.unknown_name``, ``formula.name_taken``, ``formula.reading_no_number``, ``formula.no_nominal``,
        ``formula.no_aperture``, ``formula.no_condition`` or ``formula.no_test_object``; what
        ``formula_kinds.Reading.kind`` raises; ``formula.result_unit``; ``formula.repeated``;
        ``formula.lateral_correction``, ``formula.no_correction`` or ``formula.no_console_speed``.
    """
    place = _place(measurand, spec.measurands)
    formula, field = measurand.formula or "", f"{place}.formula"
    if measurand.repeats > 1:
        raise Invalid("formula.repeated", field=f"{place}.repeats", repeats=str(measurand.repeats))
    if decimals.parse(measurand.resolution).scaled <= 0:
        raise Invalid("number.step", field=f"{place}.resolution", step=measurand.resolution)
    root = parse(formula, field=field)
    around = _Around(measurand, spec, formula, field)
    measure = Reading(formula, field, around.kind_of).number(root)
    if measure is not None and measure != powers_of(measurand.unit):
        raise Invalid(
            "formula.result_unit",
            field=field,
            column=root.start + 1,
            at=excerpt(formula, root),
            unit=code_of(measure),
            wanted=measurand.unit,
        )
    around.check_correction(names_in(root))


def order(measurands: Sequence[MeasurandSpec]) -> tuple[MeasurandSpec, ...]:
    """Put the derived measurands in an order in which each comes after those its formula names.

    Parameters
    ----------
    measurands
        Those of one procedure; what is not derived is left out.

    Raises
    ------
    Invalid
        ``formula.cycle`` with ``names``, each using the next and the last being the first again; ``field`` and
        ``column`` are where the first of them names the second. Also what ``formula_grammar.parse`` raises.
    """
    derived = {one.code: one for one in measurands if one.kind == "derived"}
    uses = {code: _used(one, derived) for code, one in derived.items()}
    try:
        return tuple(derived[code] for code in TopologicalSorter(uses).static_order())
    except CycleError as error:
        # Each of a cycle is said to come before the next, so the next uses it.
        cycle: list[str] = error.args[1][:0:-1]
    start = min(range(len(cycle)), key=lambda at: list(derived).index(cycle[at]))
    names = (*cycle[start:], *cycle[: start + 1])
    first = derived[names[0]]
    place = next(name for name in names_in(parse(first.formula or "")) if name.dotted == names[1])
    raise Invalid(
        "formula.cycle", field=f"{_place(first, measurands)}.formula", column=place.start + 1, names=names
    )


def is_listed(reading: MeasurandSpec, derived: MeasurandSpec) -> bool:
    """Whether a formula sees a measurand as the list of its readings rather than as one number.

    So it is where there is more than one reading to each value of the derived one: repeats, the apertures of a
    device where the derived measurand belongs to the whole device, the conditions where it is not by condition.
    A list goes through a function of lists only, so no reading is ever taken for another.
    """
    return (
        reading.repeats > 1
        or (reading.per == "aperture" and derived.per != "aperture")
        or (reading.by_condition and not derived.by_condition)
    )


def correction_problem(names: Collection[str]) -> str:
    """Say why a formula may not correct for the speed of sound, as far as its names tell.

    corrected = reading * c_object / c_console, along the beam only (radially for sectors): the echoes of a
    distance across the beam are placed by the beams' own spacing, and penetration and resolution are no distances
    between two targets. Goldstein 2000, Ultrasound Med Biol 26(7):1133-1143.

    Parameters
    ----------
    names
        What the formula names, dotted, and the code of the measurand itself.

    Returns
    -------
    str
        ``lateral_correction`` or ``no_correction``; empty where it may, or corrects nothing.

    Examples
    --------
    >>> correction_problem(["horizontal_distance", "test_object.sound_speed_m_s", "condition.sound_speed_m_s"])
    'lateral_correction'
    """
    if not corrects(names):
        return ""
    if any(map(_ACROSS.fullmatch, names)):
        return "lateral_correction"
    return "no_correction" if any(map(_NO_DISTANCE.fullmatch, names)) else ""


def corrects(names: Collection[str]) -> bool:
    """Whether a formula corrects for the speed of sound: it names the object's beside something that was read."""
    return OBJECT_SPEED in names and any(name not in NAMES and name not in NAMED_VALUES for name in names)


@dataclass(frozen=True)
class _Around:
    """One formula and what its names can mean."""

    measurand: MeasurandSpec
    spec: ProcedureSpec
    formula: str
    field: str

    @property
    def readings(self) -> dict[str, MeasurandSpec]:
        return {one.code: one for one in self.spec.measurands}

    def kind_of(self, name: Name) -> Kind:
        dotted = name.dotted
        if len(name.path) == 1 and dotted in self.readings:
            return self._reading(name)
        if dotted == NOMINAL:
            return self._nominal(name, self.measurand)
        if len(name.path) == 2 and name.path[0] == NOMINALS and name.path[1] in self.readings:
            return self._nominal(name, self.readings[name.path[1]])
        if dotted in NAMED_VALUES:
            found = NAMED_VALUES[dotted]
            return Kind("number", over(powers_of(found.above), powers_of(found.below)))
        if dotted in NAMES:
            return self._attribute(name)
        known = [*self.readings, NOMINAL, *NAMES, *NAMED_VALUES]
        column = name.start + 1
        raise Invalid(
            "formula.unknown_name", field=self.field, column=column, at=dotted, nearest=nearest(dotted, known)
        )

    def _reading(self, name: Name) -> Kind:
        reading, column = self.readings[name.dotted], name.start + 1
        if reading.code in _WORDS:
            raise Invalid("formula.name_taken", field=self.field, column=column, at=reading.code)
        if reading.kind not in _NUMBERS:
            raise Invalid(
                "formula.reading_no_number",
                field=self.field,
                column=column,
                at=reading.code,
                kind=reading.kind,
            )
        form: Form = "list" if is_listed(reading, self.measurand) else "number"
        return Kind(form, powers_of(reading.unit))

    def _nominal(self, name: Name, of: MeasurandSpec) -> Kind:
        if of.nominal is None and of.nominal_from is None:
            raise Invalid("formula.no_nominal", field=self.field, column=name.start + 1, at=name.dotted)
        return Kind("number", powers_of(of.unit))

    def _attribute(self, name: Name) -> Kind:
        column, at = name.start + 1, name.dotted
        of, kinds = name.path[0], self.spec.applies_to.kinds
        if of == "aperture" and self.measurand.per != "aperture":
            raise Invalid("formula.no_aperture", field=self.field, column=column, at=at)
        if of == "condition" and not self.measurand.by_condition:
            raise Invalid("formula.no_condition", field=self.field, column=column, at=at)
        if of == "test_object" and not self.spec.needs_test_object and "test_object" not in kinds:
            raise Invalid("formula.no_test_object", field=self.field, column=column, at=at)
        unit = NAMES[at]
        return Kind("yes_no") if unit == YES_NO else Kind("number", powers_of(unit))

    def check_correction(self, names: Sequence[Name]) -> None:
        """Refuse a correction for the speed of sound of what it doesn't scale."""
        places = {name.dotted: name for name in names}
        if not corrects(places):
            return
        if CONSOLE_SPEED not in places:
            column = places[OBJECT_SPEED].start + 1
            raise Invalid("formula.no_console_speed", field=self.field, column=column, at=OBJECT_SPEED)
        for name in names:
            reading = self.readings.get(name.dotted)
            if reading is not None:
                self._check_corrected(reading, name)

    def _check_corrected(self, reading: MeasurandSpec, name: Name) -> None:
        words = [
            _NO_WORD.sub("_", text.lower())
            for one in (reading, self.measurand)
            for text in (one.code, one.name)
        ]
        problem = correction_problem([*words, OBJECT_SPEED])
        column, at = name.start + 1, name.dotted
        if problem == "lateral_correction":
            raise Invalid("formula.lateral_correction", field=self.field, column=column, at=at)
        if problem or not reading.sound_speed_correction:
            raise Invalid("formula.no_correction", field=self.field, column=column, at=at)


def _place(measurand: MeasurandSpec, among: Sequence[MeasurandSpec]) -> str:
    codes = [one.code for one in among]
    return f"measurands[{codes.index(measurand.code)}]" if measurand.code in codes else measurand.code


def _used(measurand: MeasurandSpec, derived: Collection[str]) -> tuple[str, ...]:
    return tuple(
        dict.fromkeys(
            name.dotted for name in names_in(parse(measurand.formula or "")) if name.dotted in derived
        )
    )
