"""The closed list of safety quantities to the keys that a spec may give under ``case.safety``.

They are no inputs of the calculation: cautions alone read them, and one that
lacks what it needs says so on the sheet.
"""
from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import AfterValidator, WithJsonSchema

from calcpack.spec.scalars import quantity
from calcpack.spec.words import Reads
from calcpack.units import Kind

EMISSION_FACTOR = Kind("specific emission", "kg/kWh", "kg/kWh")


@dataclass(frozen=True, slots=True)
class SafetyQuantity:
    """A quantity that cautions may need: its ``kind``, what it is, how it is written, its bounds [SI]."""

    name: str
    kind: str
    says: str
    example: str
    above: float = 0.0
    most: float = math.inf

    @property
    def read_as(self) -> str | Kind:
        """What :func:`calcpack.units.read_quantity` takes as the kind."""
        return EMISSION_FACTOR if self.kind == EMISSION_FACTOR.name else self.kind

    def value(self, text: str, p_atm: float) -> float:
        """The SI value of a text that is known to read; a gauge pressure adds ``p_atm`` [Pa]."""
        return quantity(text, self.read_as, p_atm=p_atm).value


def _q(name: str, kind: str, says: str, example: str, above: float = 0.0, most: float = math.inf) -> SafetyQuantity:
    return SafetyQuantity(name, kind, says, example, above, most)


_ANY = -math.inf
_FROM_ZERO = -5e-324

QUANTITIES: tuple[SafetyQuantity, ...] = (
    _q("charge", "mass", "Working fluid in the largest circuit; of a cascade, in the low one.", "12 kg"),
    _q("charge_high", "mass", "Working fluid in the high circuit of a cascade.", "18 kg"),
    _q("room_volume", "volume", "Volume of the room that a leak fills.", "300 m³"),
    _q("room_area", "area", "Floor area of that room.", "75 m²"),
    _q("mounting_height", "length", "Height of the unit in a room for people: 0.6 m floor, 1.0 m window, 1.8 m wall, "
       "2.2 m ceiling.", "2.2 m"),
    _q("ventilation", "volume flow", "Mechanical ventilation of the room in an emergency.", "1200 m³/h"),
    _q("enclosure_volume", "volume", "Volume of a ventilated enclosure round the machine.", "4 m³"),
    _q("enclosure_ventilation", "volume flow", "Air drawn from that enclosure.", "250 m³/h"),
    _q("concentration", "number", "Share of the working fluid in the room's air, by volume, where it is known.",
       "0.002 %", _FROM_ZERO, 1.0),
    _q("concentration_high", "number", "Share of the high circuit's working fluid in the room's air, by volume.",
       "0.001 %", _FROM_ZERO, 1.0),
    _q("PS", "pressure", "Maximum allowable pressure of the working fluid's circuit.", "25 bar(g)"),
    _q("PS_secondary", "pressure", "Maximum allowable pressure of the secondary circuits.", "10 bar(g)"),
    _q("vessel_volume", "volume", "Volume of the largest vessel of the working fluid's circuit.", "40 L"),
    _q("vessel_area", "area", "External area of that vessel.", "1.2 m²"),
    _q("pipe_DN", "number", "Nominal size DN of the largest pipe of the circuit.", "50", 0.0, 5000.0),
    _q("relief_set", "pressure", "Set pressure of the relief device.", "24 bar(g)"),
    _q("relief_inlet_loss", "pressure", "Pressure lost in the line to the relief device, a difference.", "0.4 bar"),
    _q("relief_outlet_loss", "pressure", "Pressure lost in its discharge line, a difference.", "1.5 bar"),
    _q("swept_volume", "volume", "Volume that the compressor sweeps in a turn.", "0.8 L"),
    _q("speed", "frequency", "Speed of the compressor.", "1450 1/min"),
    _q("volumetric_efficiency", "number", "Volumetric efficiency at suction nominal and relieving discharge pressure.",
       "0.85", 0.0, 1.0),
    _q("ambient_max", "temperature", "Highest temperature of the surroundings.", "38 degC"),
    _q("ambient_min", "temperature", "Lowest temperature of the surroundings.", "-10 degC"),
    _q("room_dew_point", "temperature", "Dew point of the air in the room.", "12 degC"),
    _q("air_dew_point", "temperature", "Dew point of the air over the coil.", "4 degC"),
    _q("surface_temperature", "temperature", "Hottest surface that a person or a leak can reach.", "55 degC"),
    _q("store_temperature", "temperature", "Temperature at which hot water is stored.", "60 degC"),
    _q("tap_temperature", "temperature", "Temperature of the water at the tap.", "41 degC"),
    _q("water_velocity", "velocity", "Velocity of water in tubes.", "1.5 m/s"),
    _q("suction_velocity", "velocity", "Velocity of the gas in the suction line.", "12 m/s"),
    _q("steam_velocity", "velocity", "Velocity of the steam in its main.", "35 m/s"),
    _q("NPSH_required", "length", "Head that the pump needs at its inlet.", "1.2 m"),
    _q("suction_head", "length", "Height of the liquid level above the pump.", "2 m", _ANY),
    _q("suction_loss", "length", "Head lost in the suction line.", "0.3 m", _FROM_ZERO),
    _q("p_SO3", "pressure", "Partial pressure of SO3 in the flue gas.", "0.2 Pa"),
    _q("p_H2O", "pressure", "Partial pressure of water in the flue gas, if not from its composition.", "80 mbar"),
    _q("SO2", "number", "Share of SO2 in the flue gas, by volume.", "0.03 %", 0.0, 1.0),
    _q("SO3_conversion", "number", "Share of the SO2 that turns to SO3.", "2 %", 0.0, 1.0),
    _q("annual_energy", "power", "Energy that the plant takes in a year.", "120 MWh/a"),
    _q("years", "time", "Years of operation.", "15 a"),
    _q("grid_emission", EMISSION_FACTOR.name, "CO2 equivalent of the energy taken.", "0.35 kg/kWh", _FROM_ZERO),
    _q("recovery", "number", "Share of the charge that is recovered at the end.", "95 %", _FROM_ZERO, 1.0),
)
"""Every quantity, in the order of the schema."""

BY_NAME: Mapping[str, SafetyQuantity] = {one.name: one for one in QUANTITIES}
PLAIN_PRESSURES = frozenset({"relief_inlet_loss", "relief_outlet_loss", "p_SO3", "p_H2O"})
"""Pressures that are differences or partial pressures, which no gauge reads."""


def text_type(one: SafetyQuantity) -> Any:
    """The annotated text by which the schema reads a safety quantity."""
    gauge = one.kind == "pressure" and one.name not in PLAIN_PRESSURES
    reads = Reads(one.read_as, above=one.above, most=one.most, expected=f"such as {one.example!r}", gauge=gauge)
    types = ["string", "number"] if one.kind == "number" else "string"
    return Annotated[str, AfterValidator(reads), WithJsonSchema({"type": types})]
