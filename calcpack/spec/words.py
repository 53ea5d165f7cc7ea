"""The kinds of text that a spec holds, each with its rule and its JSON Schema.

A rule is a pattern with the words that say it to the reader; pydantic runs it,
and the same pattern goes into the JSON Schema for editors.
"""
from __future__ import annotations

import datetime
import math
import re
from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Annotated, Any

from pydantic import AfterValidator, GetCoreSchemaHandler, GetJsonSchemaHandler, WithJsonSchema
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from calcpack.errors import Fault, FormulaError, UnitError
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import CONSTANTS, FUNCTIONS
from calcpack.spec.scalars import clipped, quantity

MAX_LINE = 200
MAX_TEXT = 8000
MAX_SYMBOL = 40

SYMBOL = r"[A-Za-z][A-Za-z0-9]*(_[A-Za-z0-9]+)*"
RESERVED = frozenset((*FUNCTIONS, *CONSTANTS, "and", "or"))
_NUMBER = r"[A-Za-z0-9._-]{1,40}"
_IDENTITY = r"[A-Za-z][A-Za-z0-9._-]{0,19}"
# I, O, Q, S, X and Z are left out of revision letters: they are taken for 1, 0, 5 and 2 on prints.
_REVISION = r"([A-HJ-NPRT-WY]{1,3}|[0-9]{1,3})"
_DATE = r"[0-9]{4}-[0-9]{2}-[0-9]{2}"


LINK_EXPECTED = "the number of a sheet, a point and one of its symbols, such as MT-101.T_out"


def told(fault: Fault) -> PydanticCustomError:
    """The error by which a rule hands its own fault through pydantic."""
    return PydanticCustomError("written", "{what}", {"what": fault.what, "fault": fault})


def wrong(what: str, expected: str | None = None, hint: str | None = None) -> PydanticCustomError:
    """The same, for a fault that is about the whole text."""
    return told(Fault(what, expected=expected, hint=hint))


@dataclass(frozen=True, slots=True)
class Matches:
    """The whole text matches ``pattern``; ``noun`` and ``expected`` say so in words."""

    pattern: str
    noun: str
    expected: str

    def __call__(self, text: str) -> str:
        if not re.fullmatch(self.pattern, text):
            raise wrong(f"{clipped(text)} is not {self.noun}" if text else "a text is empty", self.expected)
        return text


def _line(text: str) -> str:
    if not text:
        raise wrong("a text is empty")
    if "\n" in text:
        raise wrong("a line break stands in a text that is one line", "one line")
    if len(text) > MAX_LINE:
        raise wrong(f"a text of {len(text)} characters is too long here", f"at most {MAX_LINE} characters")
    return text


def _text(text: str) -> str:
    if not text:
        raise wrong("a text is empty")
    if len(text) > MAX_TEXT:
        raise wrong(f"a text of {len(text)} characters is too long", f"at most {MAX_TEXT} characters")
    return text


def _date(text: str) -> str:
    Matches(_DATE, "a date", "year-month-day, such as 2026-03-31")(text)
    try:
        datetime.date.fromisoformat(text)
    except ValueError:
        raise wrong(f"{text!r} is not a day of the calendar", "year-month-day, such as 2026-03-31") from None
    return text


def _symbol(text: str) -> str:
    Matches(SYMBOL, "a symbol", "letters and digits in parts joined by '_', such as T_source_in")(text)
    if text in RESERVED:
        raise wrong(f"{text!r} has a meaning of its own in formulas and is no symbol",
                    hint="add a part, such as " + repr(text + "_1"))
    if len(text) > MAX_SYMBOL:
        raise wrong(f"a symbol is longer than {MAX_SYMBOL} characters", f"at most {MAX_SYMBOL} characters")
    return text


def _link(text: str) -> str:
    number, dot, symbol = text.rpartition(".")
    if not dot:
        raise wrong(f"{clipped(text)} names no value of a sheet", LINK_EXPECTED)
    Matches(_NUMBER, "a sheet number", LINK_EXPECTED)(number)
    _symbol(symbol)
    return text


def _format(text: str) -> str:
    if text != "1":
        raise wrong("this calcpack reads format 1", "calcpack: 1")
    return text


def _parses(reader: Callable[[str], Any]) -> Callable[[str], str]:
    def check(text: str) -> str:
        try:
            reader(_text(text))
        except FormulaError as error:
            raise told(error.faults[0]) from None
        return text
    return check


def _unit(text: str) -> str:
    from calcpack.units import unit
    try:
        unit(_line(text))
    except UnitError as error:
        raise told(error.faults[0]) from None
    return text


@dataclass(frozen=True, slots=True)
class Reads:
    """The text reads as a quantity of the ``kind`` [SI], between ``above`` (excluded) and ``most``.

    With no kind any unit will do, and gauge pressures too (against an infinite
    ambient pressure, so that none is refused): both are known later. With
    ``gauge`` a pressure may be written as one.
    """

    kind: Any = None                 # a name of KINDS, or a Kind
    noun: str | None = None
    above: float = -math.inf
    most: float = math.inf
    expected: str | None = None
    gauge: bool = False

    def __call__(self, text: str) -> str:
        p_atm = math.inf if self.kind is None or self.gauge else None
        try:
            value = quantity(_line(text), self.kind, p_atm=p_atm).value
        except UnitError as error:
            raise told(self.worded(error.faults[0])) from None
        if not self.above < value <= self.most:
            raise wrong(f"{clipped(text)} is out of range", self.expected)
        return text

    def worded(self, fault: Fault) -> Fault:
        """The fault in the words of the key: a heat capacity has the kind of an entropy."""
        if self.kind is None or self.noun is None:
            return fault
        return replace(fault, what=fault.what.replace(self.kind, self.noun))


def is_symbol(text: str) -> bool:
    """True if a text that may be a quantity or a symbol is a symbol."""
    return re.fullmatch(SYMBOL, text) is not None and text.casefold() not in ("nan", "inf", "infinity")


def _bound(text: str) -> str:
    return _symbol(text) if is_symbol(text) else Reads()(text)


def _schema(pattern: str | None = None, types: str | list[str] = "string", **more: Any) -> WithJsonSchema:
    return WithJsonSchema({"type": types, **({"pattern": f"^(?:{pattern})$"} if pattern else {}), **more})


_WRITTEN_NUMBER = _schema(types=["string", "number"])

Format = Annotated[str, AfterValidator(_format), WithJsonSchema({"const": 1})]
Line = Annotated[str, AfterValidator(_line), _schema(minLength=1, maxLength=MAX_LINE)]
Text = Annotated[str, AfterValidator(_text), _schema(minLength=1, maxLength=MAX_TEXT)]
Choice = Annotated[str, AfterValidator(_line), _schema(types=["string", "number", "boolean"])]
Date = Annotated[str, AfterValidator(_date), _schema(_DATE)]
Symbol = Annotated[str, AfterValidator(_symbol), _schema(SYMBOL)]
QuantityText = Annotated[str, AfterValidator(Reads()), _WRITTEN_NUMBER]
PressureText = Annotated[str, AfterValidator(Reads("pressure", above=0.0, expected="above 0 bar")), _schema()]
LevelText = Annotated[str, AfterValidator(Reads("temperature", above=0.0, expected="a temperature such as 15 degC")),
                      _schema()]
HeatCapacityText = Annotated[str, AfterValidator(Reads(
    "specific entropy", "specific heat capacity", above=0.0, expected="above 0 kJ/(kg·K)")), _schema()]
DensityText = Annotated[str, AfterValidator(Reads("density", above=0.0, expected="above 0 kg/m³")), _schema()]
ShareText = Annotated[str, AfterValidator(Reads(
    "number", above=-5e-324, most=1.0, expected="0 to 1, or 0 % to 100 %")), _WRITTEN_NUMBER]
LinkText = Annotated[str, AfterValidator(_link), _schema(rf"{_NUMBER}\.{SYMBOL}")]
BoundText = Annotated[str, AfterValidator(_bound), _WRITTEN_NUMBER]
FormulaText = Annotated[str, AfterValidator(_parses(parse)), _WRITTEN_NUMBER]
ConditionText = Annotated[str, AfterValidator(_parses(parse_condition)), _schema()]
UnitText = Annotated[str, AfterValidator(_unit), _schema()]
SheetNumber = Annotated[str, AfterValidator(Matches(
    _NUMBER, "a sheet number", "1 to 40 letters, digits, '.', '_' and '-'")),
    _schema(_NUMBER, ["string", "number"])]
Identity = Annotated[str, AfterValidator(Matches(
    _IDENTITY, "an id", "a letter, then letters, digits, '.', '_' and '-', such as R1")), _schema(_IDENTITY)]
FluidGroup = Annotated[str, AfterValidator(Matches("[12]", "a fluid group", "1 or 2")),
                       _schema("[12]", ["string", "integer"])]
RevisionMark = Annotated[str, AfterValidator(Matches(
    _REVISION, "a revision", "1 to 3 capital letters without I O Q S X Z, or 1 to 3 digits")),
    _schema(_REVISION, ["string", "integer"])]


@dataclass(frozen=True, slots=True)
class ShortForm:
    """Marks a model that may be written as one text, which is its ``key``."""

    key: str
    types: tuple[str, ...] = ("string",)

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.no_info_before_validator_function(self.expand, handler(source))

    def expand(self, written: Any) -> Any:
        """``written`` as the long form, where it is the short one."""
        return {self.key: written} if isinstance(written, str) else written

    def __get_pydantic_json_schema__(self, inner: CoreSchema, handler: GetJsonSchemaHandler,
                                     ) -> dict[str, Any]:
        return {"anyOf": [{"type": list(self.types)}, handler(inner)]}
