"""Methods: one file an arrangement; each lays a plan out of equipment.

The register is a plain dictionary, so that what there is stands in one place.
"""
from __future__ import annotations

from functools import lru_cache

from calcpack.methods.method import Method, Option, Role

__all__ = ["Method", "Option", "Role", "methods"]


@lru_cache(maxsize=1)
def methods() -> dict[str, Method]:
    """Every method by its name, in the order they are listed to the user."""
    from calcpack.methods import (
        carnot_bound,
        carnot_cycle,
        cascade,
        combined_plant,
        endoreversible_estimate,
        gas_engine,
        gas_turbine,
        heat_driven,
        organic_rankine,
        own_steps,
        regenerative_gas_cycle,
        reversed_gas_cycle,
        steam_plant,
        transcritical_co2,
        two_stage_compression,
        vapour_compression,
        vapour_recompression,
    )
    found = (carnot_bound.METHOD, carnot_cycle.METHOD, vapour_compression.METHOD,
             two_stage_compression.METHOD, cascade.METHOD, transcritical_co2.METHOD,
             vapour_recompression.METHOD, organic_rankine.METHOD, steam_plant.METHOD, combined_plant.METHOD,
             gas_engine.METHOD, regenerative_gas_cycle.METHOD, endoreversible_estimate.METHOD,
             gas_turbine.METHOD, reversed_gas_cycle.METHOD, heat_driven.METHOD, own_steps.METHOD)
    return {one.name: one for one in found}
