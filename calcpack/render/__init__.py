"""Records to what people read: the sheet as HTML and PDF, and the site of all sheets.

Nothing here computes a quantity; what a sheet prints stands in its record.
"""
from __future__ import annotations
