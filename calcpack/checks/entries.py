"""The shape of a check's entry in the record, and numbers in the words of a finding."""
from __future__ import annotations

from typing import Any

from calcpack.record.build import printed_level
from calcpack.solving.solution import Solution, printed_freely
from calcpack.units import Dimension, print_unit, unit

TEMPERATURE: Dimension = unit("K").dimension


def entry(name: str, group: str, text: str, value: str, allowed: str, status: str = "ok",
          detail: str = "") -> dict[str, Any]:
    """One check of the record; ``status`` is 'ok', 'fails' or 'not evaluated'."""
    return {"id": name, "group": group, "text": text, "value": value, "allowed": allowed, "status": status,
            "detail": detail}


def printed(solution: Solution, value: float, dimension: Dimension, significant: int = 2) -> str:
    """An SI value that is no symbol's, with so many digits in the sheet's customary unit."""
    return printed_freely(value, print_unit(dimension, solution.system), significant)


def temperature(solution: Solution, value: float) -> str:
    """A level, such as ``354.78 K (81.63 °C)``."""
    return printed_level(value, solution.system)


def difference(solution: Solution, value: float, significant: int = 3) -> str:
    """A temperature difference, such as ``5.12 K``."""
    return printed(solution, value, TEMPERATURE, significant)


def pressure(solution: Solution, value: float, significant: int = 4) -> str:
    """An absolute pressure in bar or psi."""
    return printed(solution, value, unit("bar").dimension, significant)


def gauge(solution: Solution, value: float, significant: int = 3) -> str:
    """An absolute pressure as a gauge one, above the sheet's atmospheric pressure."""
    return pressure(solution, value - solution.p_atm, significant) + "(g)"


def mass(solution: Solution, value: float, significant: int = 4) -> str:
    """A mass in kg or lb."""
    return printed(solution, value, unit("kg").dimension, significant)


def density(solution: Solution, value: float, significant: int = 3) -> str:
    """A mass in a volume, in kg/m³ or lb/ft³."""
    return printed(solution, value, unit("kg/m³").dimension, significant)


def air_flow(solution: Solution, value: float, significant: int = 4) -> str:
    """A flow of air in m³/h or ft³/min."""
    return printed_freely(value, unit("m³/h" if solution.system == "si" else "ft³/min"), significant)


def percent(share: float, significant: int = 3) -> str:
    """A share as a percentage, such as ``0.0025 %``."""
    return printed_freely(share, unit("%"), significant)
