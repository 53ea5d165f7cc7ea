"""Published values against what a spec's record says, each through the whole program as a user would."""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import astuple
from pathlib import Path

import pytest

from calcpack.pipeline import solve_spec
from calcpack.verification.published import Case, cases, companions, compare, read_companion, read_known


@pytest.mark.parametrize("case", cases(), ids=lambda case: case.name)
def test_the_record_agrees_with_the_published_values(case: Case,
                                                     record_property: Callable[[str, object], None]) -> None:
    record = solve_spec(case.spec, case.overrides)
    found = compare(case, record)
    for one in found:
        record_property("published value", astuple(one))
    assert found
    beyond = [str(one) for one in found if not one.holds]
    assert not beyond, "\n".join(beyond)


@pytest.mark.parametrize("case", cases(), ids=lambda case: case.name)
def test_no_check_of_the_sheet_fails(case: Case) -> None:
    """Balances, laws, and every printed result done again by hand from the printed numbers."""
    record = solve_spec(case.spec, case.overrides)
    assert record.data["checks"]
    failed = [f"{check['id']} {check['text']}: {check['value']} {check['detail']}"
              for check in record.data["checks"] if check["status"] == "fails"]
    assert not failed, "\n".join(failed)


@pytest.mark.parametrize("path", companions(), ids=lambda path: path.name)
def test_every_row_names_its_source_and_whether_it_is_from_memory(path: Path) -> None:
    written = read_companion(path)
    assert written["source"]
    read_known(written["known"])
    spec = path.with_name(path.name.replace(".expected.yaml", ".yaml"))
    assert path.name.startswith(written["row"].replace(".", "_"))
    # The sheet names the same source, so that it can be read by itself.
    assert any(one["text"] == written["source"] for one in solve_spec(spec).data["references"])
