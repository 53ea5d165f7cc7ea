"""A finished page to what a reader can do again with it, from its visible text alone.

Nothing here reads a record, a plan or a solution: what is not printed on the
page does not exist for this room.
"""
from __future__ import annotations
