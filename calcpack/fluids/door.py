"""Turn a fluid definition into the one object that answers for its properties."""
from __future__ import annotations

from functools import cache

from calcpack.errors import Fault, SpecError, nearest
from calcpack.fluids import library, register
from calcpack.fluids.base import Fluid
from calcpack.fluids.brine import SOLUTIONS, Brine
from calcpack.fluids.constant import ConstantHeat
from calcpack.fluids.definition import MODELS, REFERENCES, FluidDefinition
from calcpack.fluids.register import folded

_PLAIN_SOLUTIONS = {folded(name): key for name, key in SOLUTIONS.items()} | {
    "seawater": "MITSW", "ethanolwater": "MEA", "methanolwater": "MMA", "ammoniawater": "MAM"}


@cache
def open_fluid(definition: FluidDefinition) -> Fluid:
    """The fluid of ``definition``; the same object for an equal definition.

    Raises SpecError for an unknown name, model or reference, and for parts
    that do not go together.
    """
    _check(definition)
    if definition.constant_cp is not None:
        return ConstantHeat(definition.name, definition.constant_cp, definition.density)
    if definition.composition:
        return _gas_mixture(definition)
    if not definition.name:
        raise SpecError(Fault("a fluid needs a name, a composition or a constant heat capacity",
                              hint="R-290, water, air, ethylene glycol …"))
    key = _liquid_key(definition)
    if key is not None:
        _no_reference(definition)
        return Brine(key, definition.name, definition.mass_fraction)
    return _by_model(definition)


def _check(definition: FluidDefinition) -> None:
    for value, known, what in ((definition.model, MODELS, "model"),
                               (definition.reference, REFERENCES, "reference state")):
        if value and value not in known:
            raise SpecError(Fault(f"unknown {what} {value!r} of a fluid", found=value,
                                  expected=", ".join(known), hint=nearest(value, known)))
    if definition.composition and definition.model not in ("", "ideal gas"):
        raise SpecError(Fault("a composition is taken as an ideal-gas mixture only", found=definition.model,
                              hint="for a refrigerant blend give its designation"))


def _gas_mixture(definition: FluidDefinition) -> Fluid:
    from calcpack.fluids.gas import IdealGas, mole_shares
    _no_reference(definition)
    shares = mole_shares(definition.composition, definition.basis)
    return IdealGas(shares, definition.name or "gas mixture")


def _by_model(definition: FluidDefinition) -> Fluid:
    entry = register.find(definition.name)
    name = entry.library_name if entry else _library_name(definition.name)
    designation = _designation(definition.name, entry)
    facts = register.facts_for(entry.designation) if entry else ()
    model = definition.model or ("ideal gas" if name == "Air" else
                                 "mixture" if name.endswith(".mix") else "Helmholtz")
    if model == "ideal gas":
        from calcpack.fluids.gas import IdealGas
        _no_reference(definition)
        return IdealGas(((_one_equation(name, definition), 1.0),), designation, facts)
    if model == "IF97":
        from calcpack.fluids.steam import IndustrialSteam
        _only_water(name, definition)
        return IndustrialSteam(designation, definition.reference, facts)
    if model == "mixture":
        from calcpack.fluids.blend import Blend
        return Blend(_mixture_name(name, definition), designation, definition.reference, facts)
    from calcpack.fluids.pure import PureFluid
    if model == "IAPWS-95":
        _only_water(name, definition)
    return PureFluid(_one_equation(name, definition), designation, definition.reference, facts)


def _designation(name: str, entry: register.Entry | None) -> str:
    """The register's spelling of a designation; a common name stays as it was written."""
    return entry.designation if entry and folded(name) == folded(entry.designation) else name


def _liquid_key(definition: FluidDefinition) -> str | None:
    """The library's key if the definition means a brine or a heat-transfer liquid."""
    pure, solutions = library.liquids()
    name = definition.name
    if definition.mass_fraction is not None:
        key = _PLAIN_SOLUTIONS.get(folded(name), name)
        if key not in solutions:
            raise SpecError(Fault(f"no solution {name!r} is known to take a mass fraction", found=name,
                                  expected=", ".join(SOLUTIONS), hint=nearest(name, SOLUTIONS)))
        return key
    if definition.model == "incompressible":
        if name in pure:
            return name
        raise SpecError(Fault(f"no incompressible liquid {name!r}", found=name,
                              expected="a name that the property library lists, as it is spelled there",
                              hint=nearest(name, pure) or "a solution needs a mass_fraction"))
    means_solution = folded(name) in _PLAIN_SOLUTIONS and not register.find(name)
    if definition.model or register.find(name) or (folded(name) in library.names() and not means_solution):
        return None
    if folded(name) in _PLAIN_SOLUTIONS or name in solutions:
        return _need_fraction(name)
    return name if name in pure else None


def _need_fraction(name: str) -> str:
    raise SpecError(Fault(f"{name} needs the mass fraction of its solution in water", found=name,
                          hint="mass_fraction: 0.30"))


def _library_name(name: str) -> str:
    found = library.names().get(folded(name)) or library.blends().get(folded(name))
    if found is None:
        known = [each for entry in register.entries() for each in entry.names]
        known += [*SOLUTIONS, *library.library().FluidsList()]
        raise SpecError(Fault(f"unknown fluid {name!r}", found=name,
                              expected="a designation such as R-290, or a name such as water, air, toluene",
                              hint=nearest(name, known)))
    return found


def _one_equation(name: str, definition: FluidDefinition) -> str:
    if name.endswith(".mix"):
        raise SpecError(Fault(f"{definition.name} has no equation of state of its own",
                              found=definition.model, expected="mixture",
                              hint="leave model out, or write mixture"))
    return name


def _mixture_name(name: str, definition: FluidDefinition) -> str:
    found = library.blends().get(folded(name.removesuffix(".mix")))
    if found is None:
        raise SpecError(Fault(f"{definition.name} is not a blend", found="model mixture",
                              hint="leave model out"))
    return found


def _only_water(name: str, definition: FluidDefinition) -> None:
    if name != "Water":
        raise SpecError(Fault(f"{definition.model} is a formulation for water only", found=definition.name,
                              hint="leave model out"))


def _no_reference(definition: FluidDefinition) -> None:
    if definition.reference:
        raise SpecError(Fault("a reference state is for fluids with a saturation line",
                              found=f"{definition.reference} for {definition.name or 'a gas mixture'}",
                              hint="leave reference out"))
