"""Cautions that compare a value with practice to the usual limits of each piece of equipment.

They stand beside the spec's own limits, marked as usual practice, and decide
nothing: no exit status and no title page hangs on them. A threshold is written
once, in its caution; here it is turned round into what holds.
"""
from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.checks.cautions.caution import NOT_EVALUATED, TRIGGERED

HOLDS, OUTSIDE = "holds", "outside"


@dataclass(frozen=True, slots=True)
class Usual:
    """A usual limit: the caution that holds its threshold, the equipment, and what is limited."""

    caution: str
    equipment: str
    title: str


CATALOGUE: tuple[Usual, ...] = (
    Usual("C-K1", "Compressor", "Discharge temperature"),
    Usual("C-K2", "Compressor", "Temperature at the discharge valve, mineral oil"),
    Usual("C-K3", "Compressor", "Discharge temperature, ammonia"),
    Usual("C-K4", "Compressor", "Pressure ratio of a stage"),
    Usual("C-K10b", "Compressor", "Dryness at the suction"),
    Usual("C-K11", "Compressor", "Superheat at the suction"),
    Usual("C-K15b", "Compressor", "Velocity in the suction line"),
    Usual("C-K9", "Turbine", "Dryness at the exhaust, steam"),
    Usual("C-K10a", "Expander", "Dryness at the outlet"),
    Usual("C-K16a", "Turbine", "Steam temperature"),
    Usual("C-K16b", "Turbine", "Gas temperature at the inlet, uncooled"),
    Usual("C-K15c", "Turbine", "Velocity in the steam main"),
    Usual("C-K12", "Feed pump", "Head available at the inlet"),
    Usual("C-K5", "Condenser", "Condensing temperature and the critical one"),
    Usual("C-K14", "Heat exchanger", "Smallest temperature difference"),
    Usual("C-K15a", "Heat exchanger", "Velocity of water in tubes"),
    Usual("C-H8", "Evaporator", "Evaporating and leaving temperature, plain water"),
    Usual("C-K6", "Working fluid", "Highest temperature and thermal stability"),
    Usual("C-K8", "Circuit", "Lowest pressure and the atmosphere"),
    Usual("C-P20", "Circuit", "Highest operating pressure over PS"),
    Usual("C-P18", "Circuit", "Standstill pressure"),
    Usual("C-R5", "Relief", "Pressure over the critical one"),
    Usual("C-R7", "Relief", "Losses of the discharge line"),
    Usual("C-R8", "Relief", "Loss before the device"),
    Usual("C-H2", "Surface", "Temperature where a person can touch it"),
    Usual("C-M5", "Surface", "Temperature where a flammable leak can reach it"),
    Usual("C-F1", "Flue gas", "Temperature and the acid dew point"),
)
"""By equipment, in the order of print."""

TURNED: Mapping[str, str] = {
    "at or above ": "below ", "at or below ": "above ", "above ": "at most ", "below ": "at least ",
    "less than ": "at least ", "outside ": "", "vapour fraction below ": "vapour fraction at least ",
    "evaporating below ": "evaporating at least "}
"""How a caution's threshold begins, and how the limit that it breaks does."""


def usual_limits(found: Iterable[Mapping[str, Any]]) -> tuple[dict[str, Any], ...]:
    """The usual limits that concern a sheet, from its cautions: holds, outside or not evaluated."""
    cautions = {one["id"]: one for one in found}
    return tuple(_entry(usual, cautions[usual.caution]) for usual in CATALOGUE if usual.caution in cautions)


def _entry(usual: Usual, caution: Mapping[str, Any]) -> dict[str, Any]:
    status = {TRIGGERED: OUTSIDE, NOT_EVALUATED: NOT_EVALUATED}.get(caution["status"], HOLDS)
    return {"id": "U" + usual.caution[1:], "caution": usual.caution, "equipment": usual.equipment,
            "text": usual.title, "value": caution["value"], "bound": bound_words(caution["threshold"]),
            "status": status, "source": caution["source"], "confirmed": caution["confirmed"],
            "reason": caution["reason"]}


def bound_words(threshold: str) -> str:
    """What holds, in words, from the threshold of a caution; KeyError for words that are not known here."""
    if not threshold:
        return ""
    for beginning, turned in TURNED.items():
        if threshold.startswith(beginning):
            rest = threshold.removeprefix(beginning)
            return turned + rest.replace(" or leaving below ", " and leaving at least ")
    raise KeyError(threshold)
