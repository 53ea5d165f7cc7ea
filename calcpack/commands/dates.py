"""The text of a --date option to the day that it means."""
from __future__ import annotations

import datetime

from calcpack.errors import CommandError, Fault


def day(text: str | None) -> str:
    """The ISO date in ``text``; today's where there is none.

    Raises
    ------
    CommandError
        For a text that is no day of the calendar.
    """
    if text is None:
        return datetime.date.today().isoformat()
    try:
        found = datetime.date.fromisoformat(text).isoformat()
    except ValueError:
        found = ""
    if found != text:
        raise CommandError(Fault("--date is not a day of the calendar", found=text,
                                 expected="year-month-day, such as 2026-03-31"))
    return found
