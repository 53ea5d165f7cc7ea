"""Pages of the example package and of published examples with every kind of step, made once."""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.pipeline import solve_spec, spec_files
from calcpack.render.sheet import sheet_html
from calcpack.verification.published import published_folder

ROOT = Path(__file__).parent.parent.parent
PUBLISHED = ("0_2_slopes_of_the_adiabat", "4_14_optimum_liao_by_method", "7_04_part_load_b", "10_10_pinch_two_by_two")


@pytest.fixture(scope="session")
def example_pages() -> dict[str, str]:
    """The pages of the example specs and of some published examples, by name."""
    paths = [*spec_files([ROOT / "specs"]), *(published_folder() / f"{name}.yaml" for name in PUBLISHED)]
    return {path.stem: sheet_html(solve_spec(path)) for path in paths}
