"""What an engineer writes to name a fluid, as one hashable value."""
from __future__ import annotations

from dataclasses import dataclass

MODELS = ("Helmholtz", "IAPWS-95", "IF97", "mixture", "ideal gas", "incompressible")
REFERENCES = ("IIR", "ASHRAE", "NBP")


@dataclass(frozen=True, slots=True)
class FluidDefinition:
    """A fluid as designated in a spec; two equal definitions open one fluid.

    ``name`` is the designation ("R-1234ze(E)", "water", "ethylene glycol");
    ``model`` one of :data:`MODELS`, or "" for the usual choice; ``reference``
    one of :data:`REFERENCES` for the zero of h and s, or "" for the model's own.
    ``mass_fraction`` is that of the solute of a brine, 0 to 1. ``composition``
    lists (component, share) of an ideal-gas mixture, shares by ``basis``
    ("mole" or "mass"). ``constant_cp`` [J/(kg K)] makes a stream of constant
    heat capacity, with ``density`` [kg/m3] if one is known.
    """

    name: str = ""
    model: str = ""
    reference: str = ""
    mass_fraction: float | None = None
    composition: tuple[tuple[str, float], ...] = ()
    basis: str = "mole"
    constant_cp: float | None = None
    density: float | None = None

    @property
    def words(self) -> str:
        """The definition as the sheet states it, whole: ``R-290; reference IIR``."""
        parts = [self.name or "unnamed"]
        parts += [f"model {self.model}"] if self.model else []
        parts += [f"reference {self.reference}"] if self.reference else []
        if self.mass_fraction is not None:
            parts.append(f"mass fraction {self.mass_fraction!r}")
        if self.composition:
            parts.append(f"shares by {self.basis}: " + ", ".join(f"{name} {x!r}" for name, x in self.composition))
        if self.constant_cp is not None:
            parts.append(f"heat capacity {self.constant_cp!r} J/(kg·K)")
        if self.density is not None:
            parts.append(f"density {self.density!r} kg/m³")
        return "; ".join(parts)
