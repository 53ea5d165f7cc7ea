"""What 'calcpack fluids FLUID' prints: every fact with its source, in 80 columns."""
from __future__ import annotations

import pytest
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.fluids.register import facts_for


@pytest.mark.parametrize("name", ["R-1234ze(E)", "R-134a", "R-454B", "R-717", "cyclopentane", "toluene"])
def test_a_fluid_is_shown_whole_in_80_columns(name: str) -> None:
    shown = CliRunner().invoke(main, ["fluids", name]).output
    assert max(len(line) for line in shown.splitlines()) <= 80
    words = " ".join(shown.split())
    for fact in facts_for(name):
        assert fact.value in words and " ".join(fact.source.split()[:2]) in words
    for heading in ("Properties", "Constants", "T_crit", "equation", "Ozone"):
        assert heading in shown
    assert "kg/m3" not in shown and "degC" not in shown


def test_what_the_register_lacks_is_told() -> None:
    shown = " ".join(CliRunner().invoke(main, ["fluids", "toluene"]).output.split())
    assert "Not in the register safety class, toxicity and limits of concentration" in shown


def test_a_brine_is_shown_at_a_share_of_its_own() -> None:
    shown = CliRunner().invoke(main, ["fluids", "ethylene glycol"]).output
    assert "30 % by mass" in shown and "T_freeze" in shown


def test_an_unknown_fluid_is_refused_with_the_nearest_name() -> None:
    missing = CliRunner().invoke(main, ["fluids", "R-1234zz"])
    assert missing.exit_code == 2 and "did you mean" in missing.output
