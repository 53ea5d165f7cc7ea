"""Units at the edges: what people write, what sheets print; inside, SI floats.

:mod:`spellings` holds the list of units that can be written, :mod:`unit` turns
a spelling into a factor and a dimension through the one pint registry,
:mod:`read` reads quantities strictly, :mod:`kinds` says which unit each kind of
quantity is printed in, :mod:`digits` writes numbers.
"""
from calcpack.units.digits import shown, shown_with_unit
from calcpack.units.kinds import KINDS, Kind, kind_of_unit, print_unit
from calcpack.units.read import Reading, read_quantity
from calcpack.units.unit import DIMENSIONLESS, Dimension, Unit, dimension_text, pint_quantity, registry, unit

__all__ = ["DIMENSIONLESS", "KINDS", "Dimension", "Kind", "Reading", "Unit", "dimension_text", "kind_of_unit",
           "pint_quantity", "print_unit", "read_quantity", "registry", "shown", "shown_with_unit", "unit"]
