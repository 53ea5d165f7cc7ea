"""What defines an input or a step, as a hash: equal identities mean nothing upstream has moved."""
from __future__ import annotations

import hashlib
import json
from collections.abc import Iterable, Mapping
from typing import Any

LENGTH = 20


def identity(parts: Iterable[Any]) -> str:
    """A short hash of plain values."""
    text = json.dumps(list(parts), ensure_ascii=False, separators=(",", ":"))
    return hashlib.sha256(text.encode()).hexdigest()[:LENGTH]


def input_identity(symbol: str, value: float, unit: str) -> str:
    """The identity of an input: its symbol, its value in SI, its unit of print."""
    return identity(("input", symbol, repr(float(value)), unit))


def step_identity(symbol: str, kind: str, formulas: Iterable[str], unit: str, uses: Iterable[str],
                  known: Mapping[str, str], fluids: Iterable[str]) -> str:
    """The identity of a step: its formulas, its unit, the fluids' equations, and all that it uses.

    A root uses itself by way of its body; symbols that are not known yet stand
    by name, and the root's closing formulas are among ``formulas``.
    """
    return identity(("step", symbol, kind, *formulas, unit, *(known.get(name, name) for name in uses), *fluids))
