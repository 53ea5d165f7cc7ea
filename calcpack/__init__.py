"""calcpack: engineering calculation packages for heat engines and heat pumps.

>>> import calcpack
>>> record = calcpack.solve("specs/dryer-heat-pump.yaml")   # doctest: +SKIP
>>> record["COP"]                                           # doctest: +SKIP
"""
from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calcpack.record import Record

__version__ = "0.1.0"
__all__ = ["__version__", "solve"]


def solve(spec: str | Path, **inputs: str) -> Record:
    """Solve the spec in a file; ``inputs`` replace its values (``T_source_in="40 degC"``).

    Returns
    -------
    Record
        ``record["COP"]`` is a pint quantity, ``record.data`` the JSON object.

    Raises
    ------
    calcpack.errors.CalcpackError
        With every fault, as the command line prints them.
    """
    from calcpack.pipeline import solve_spec
    return solve_spec(Path(spec), inputs)
