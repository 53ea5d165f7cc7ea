"""The commands of a sheet's life after it is solved, one file each, and how every command tells its faults.

A file here parses and calls; :mod:`calcpack.cli` lists the commands.
"""
from __future__ import annotations
