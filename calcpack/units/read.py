"""What an engineer writes for a quantity to an SI float, strictly.

A value is ``number space unit``: no arithmetic, no commas, units from the
list only. A level is not a difference, and a gauge pressure is absolute once
it is read.
"""
from __future__ import annotations

import math
import re
from dataclasses import dataclass

from calcpack.errors import Fault, UnitError
from calcpack.units.kinds import KINDS, Kind
from calcpack.units.spellings import GAUGE, folded
from calcpack.units.unit import Unit, dimension_text, unit

_QUANTITY = re.compile(r"\s*([+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?)(?:\s+(\S.*?))?\s*\Z")
_GLUED = re.compile(r"\s*[+-]?\d[\d.]*(?:[eE][+-]?\d+)?[A-Za-z°%µ]")


@dataclass(frozen=True, slots=True)
class Reading:
    """A quantity as read: SI ``value``, the ``unit`` it was written in, the ``text`` of its number.

    ``gauge`` marks a pressure that was written as gauge; its ``value`` is absolute.
    """

    value: float
    unit: Unit
    text: str
    gauge: bool = False


def read_quantity(text: str, kind: Kind | str | None = None, *, p_atm: float | None = None) -> Reading:
    """Read ``'12.5 bar'`` as ``kind``; ``p_atm`` [Pa] is what a gauge pressure adds.

    With ``kind`` None any unit of the list is taken, and K may be level or
    difference.

    Raises
    ------
    UnitError
        With what was found and what would be right; no place, the caller knows it.
    """
    wanted = KINDS[kind] if isinstance(kind, str) else kind
    number, spelled = _split(text, wanted)
    if folded(spelled) in GAUGE or spelled in GAUGE:
        return _gauge(text, number, spelled, wanted, p_atm)
    written = unit(spelled)
    if wanted is not None:
        _require_kind(text, written, wanted)
    value = written.to_si(float(number))
    if not math.isfinite(value):
        raise UnitError(Fault(f"{text.strip()!r} is not a finite number", found=repr(text.strip())))
    if wanted is not None and wanted.level and value <= 0.0:
        raise UnitError(Fault("a temperature at or below absolute zero", found=repr(text.strip()),
                              expected="above 0 K (-273.15 degC)"))
    return Reading(value, written, number)


def _split(text: str, wanted: Kind | None) -> tuple[str, str]:
    match = _QUANTITY.match(text)
    if match:
        return match.group(1), match.group(2) or ""
    example = _example(wanted)
    hint = None
    if re.match(r"\s*[+-]?\d+,\d", text):
        hint = "write the decimal point as '.', and no thousands separators"
    elif re.match(r"\s*[+-]?\.?(nan|inf)", text, re.IGNORECASE):
        hint = "a value must be a finite number"
    elif _GLUED.match(text):
        hint = "put a space between number and unit"
    raise UnitError(Fault(f"{text.strip()!r} is not a quantity", found=repr(text.strip()),
                          expected=f"number, space, unit: such as {example!r}", hint=hint))


def _example(wanted: Kind | None) -> str:
    if wanted is None:
        return "4.2 kJ/(kg·K)"
    return {"temperature": "38 degC", "number": "0.72"}.get(wanted.name, f"5 {wanted.si}")


def _require_kind(text: str, written: Unit, wanted: Kind) -> None:
    if written.dimension != wanted.dimension:
        found = f"{text.strip()!r}, {dimension_text(written.dimension)}"
        if not written.symbol:
            found = f"{text.strip()!r}, without a unit"
        raise UnitError(Fault(f"a {wanted.name} is meant here", found=found,
                              expected=f"a quantity such as {_example(wanted)!r}"))
    if written.level and not wanted.level:
        raise UnitError(Fault("a temperature level stands where a difference is meant", found=repr(text.strip()),
                              expected="a difference, in K or °R", hint=f"write {text.split()[0]} K"
                              if written.symbol == "°C" else f"write {text.split()[0]} degR"))
    if wanted.level and folded(text.split()[-1]) in ("delta_degC", "delta_degF", "Δ°C", "Δ°F", "dK"):
        raise UnitError(Fault("a temperature difference stands where a level is meant", found=repr(text.strip()),
                              expected="a level, in degC, degF or K"))


def _gauge(text: str, number: str, spelled: str, wanted: Kind | None, p_atm: float | None) -> Reading:
    if wanted is not None and wanted.name != "pressure":
        raise UnitError(Fault(f"a {wanted.name} is meant here", found=repr(text.strip()),
                              expected=f"a quantity such as {_example(wanted)!r}"))
    if p_atm is None:
        raise UnitError(Fault("a gauge pressure cannot be read here", found=repr(text.strip()),
                              expected="an absolute pressure, in bar, kPa, MPa or psi"))
    scale = unit(GAUGE.get(spelled) or GAUGE[folded(spelled)])
    value = scale.to_si(float(number)) + p_atm
    if value <= 0.0:
        raise UnitError(Fault("the absolute pressure is not above zero", found=repr(text.strip())))
    return Reading(value, scale, number, gauge=True)
