"""A spec's path and its record to the standing of the check that lies beside it."""
from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from calcpack.review.reading import read_review
from calcpack.review.standing import Standing, standing
from calcpack.review.writing import review_path

if TYPE_CHECKING:
    from calcpack.record import Record


def standing_beside(spec_path: Path, record: Record) -> Standing | None:
    """How the check of a sheet stands; None where no review file lies beside the spec.

    Raises
    ------
    SpecError
        For a review file that cannot be read, or is that of another sheet.
    """
    path = review_path(spec_path)
    return standing(record.data, read_review(path, number=record.number)) if path.exists() else None
