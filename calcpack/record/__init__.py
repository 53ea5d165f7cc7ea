"""The record: a plan with its numbers, as plain data that every output reads."""
from calcpack.record.record import Record, read_record

__all__ = ["Record", "read_record"]
