"""Turn a fluid's designation into its properties, range, cited equation and cited facts."""
from __future__ import annotations

from calcpack.fluids.base import Fluid
from calcpack.fluids.curves import SaturationCurve, saturation_curve
from calcpack.fluids.definition import MODELS, REFERENCES, FluidDefinition
from calcpack.fluids.door import open_fluid
from calcpack.fluids.register import Fact, designations, fact, facts_for

__all__ = ["MODELS", "REFERENCES", "Fact", "Fluid", "FluidDefinition", "SaturationCurve", "designations",
           "fact", "facts_for", "open_fluid", "saturation_curve"]
