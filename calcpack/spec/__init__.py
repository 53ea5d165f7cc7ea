"""What the engineer writes: YAML with line marks to a frozen Spec, or to all its faults at once.

:mod:`reading` names the stages in order.
"""
from calcpack.spec.model import Spec
from calcpack.spec.reading import read_for_faults, read_spec
from calcpack.spec.schema import json_schema

__all__ = ["Spec", "json_schema", "read_for_faults", "read_spec"]
