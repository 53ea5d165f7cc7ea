"""A sheet as it stands to an issued PDF that carries its spec and record, and what is kept of all that was issued."""
from __future__ import annotations
