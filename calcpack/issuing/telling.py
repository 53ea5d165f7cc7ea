"""An issue to the lines that the terminal shows of it."""
from __future__ import annotations

import textwrap
from collections.abc import Iterator

from calcpack.issuing.issue import Issue

WIDTH = 80


def told(done: Issue, dry_run: bool) -> list[str]:
    """What was written, or would be."""
    return list(_lines(done, dry_run))


def _lines(done: Issue, dry_run: bool) -> Iterator[str]:
    yield f"{'would issue' if dry_run else 'issued'} {done.path}"
    yield f"  sheet       {done.number}, revision {done.revision}, {done.kind}, {done.date}"
    if not dry_run:
        yield f"  SHA-256     {done.sha256}"
    yield f"  record      {done.record_sha256}"
    if done.supersedes:
        yield f"  supersedes  revision {done.supersedes}"
    if done.open:
        yield f"  open at issue: {len(done.open)}"
        for line in done.open:
            yield from textwrap.wrap(line, WIDTH, initial_indent="  - ", subsequent_indent="    ")
    for path in done.derived:
        yield f"  made        {path}"
    if dry_run:
        yield "nothing was written"
