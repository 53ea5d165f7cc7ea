"""The published checks, run on the machine at hand, and the record of such a run.

The checks are specs with published values beside them, each with its source;
the tests of the source tree run the same files through the same code.
"""
from __future__ import annotations
