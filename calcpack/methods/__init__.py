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
    from calcpack.methods import carnot_bound, carnot_cycle, organic_rankine, own_steps, vapour_compression
    found = (carnot_bound.METHOD, carnot_cycle.METHOD, vapour_compression.METHOD, organic_rankine.METHOD,
             own_steps.METHOD)
    return {one.name: one for one in found}
