"""Give the property library's names, states and errors to the fluids that use it.

CoolProp is imported here, on first use: it takes almost two seconds.
"""
from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from functools import cache
from types import ModuleType
from typing import Any

from calcpack.errors import Fault, MissingPartError
from calcpack.fluids import wording
from calcpack.fluids.register import folded

# What the library raises for a state that it cannot find.
FLASH_ERRORS = (ValueError, IndexError)


@cache
def library() -> ModuleType:
    """The property library; MissingPartError if it is not installed."""
    try:
        from CoolProp import CoolProp
    except ImportError as error:
        raise MissingPartError(Fault("the property library CoolProp is not installed",
                                     hint="python -m pip install CoolProp", detail=str(error))) from error
    return CoolProp


def new_state(backend: str, name: str) -> Any:
    """A fresh low-level state; one for each fluid, never shared between threads."""
    return library().AbstractState(backend, name)


@contextmanager
def plain_faults(what: str, found: str, expected: str | None, hint: str | None = None) -> Iterator[None]:
    """Turn a library error inside the block into ours, its raw text kept as detail."""
    try:
        yield
    except FLASH_ERRORS as error:
        raise wording.out_of_range(what, found, expected, hint, detail=str(error)) from error


@cache
def names() -> dict[str, str]:
    """The library's name of each of its fluids by every folded alias."""
    found: dict[str, str] = {}
    for name in _listed(library().FluidsList()):
        aliases = library().get_fluid_param_string(name, "aliases").split(",")
        found.update({folded(alias): name for alias in [*aliases, name] if alias})
    return found


@cache
def blends() -> dict[str, str]:
    """The library's predefined mixtures by folded designation: 'r454c' → 'R454C.mix'."""
    listed = _listed(library().get_global_param_string("predefined_mixtures"))
    return {folded(name.removesuffix(".mix")): name for name in listed if name.endswith(".mix")}


@cache
def liquids() -> tuple[frozenset[str], frozenset[str]]:
    """The library's keys of incompressible pure liquids and of solutions."""
    ask = library().get_global_param_string
    return (frozenset(_listed(ask("incompressible_list_pure"))),
            frozenset(_listed(ask("incompressible_list_solution"))))


def _listed(text: str | list[str]) -> list[str]:
    return text.split(",") if isinstance(text, str) else list(text)
