"""Facts of the trade that need more than one solve: Carnot's relation and what it does not depend on.

Common practice, from memory; each test's name gives the row that it covers.
"""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.pipeline import solve_spec
from calcpack.verification.published import Case, cases, method_of, published_folder, value_of

CYCLE = published_folder() / "0_2_slopes_of_the_adiabat.yaml"
STATION = published_folder() / "5_01_coal_station.yaml"


MACHINES = [case for case in cases() if method_of(case.spec) in ("organic-rankine", "vapour-compression")]


def _solved(spec: Path, symbol: str, **overrides: str) -> float:
    return value_of(solve_spec(spec, overrides), symbol)[0]


@pytest.mark.parametrize("gamma", ["1.4", "1.667", "1.29"])
@pytest.mark.parametrize("amount", ["0.1 mol", "1 mol", "10 mol"])
def test_row_0_3_efficiency_depends_on_neither_gas_nor_amount(gamma: str, amount: str) -> None:
    # 1 - 300 K / 600 K; eta comes from the heat and work of the four processes, not from the temperatures.
    record = solve_spec(CYCLE, {"gamma": gamma, "n": amount})
    eta, heat_hot, heat_cold = (value_of(record, symbol)[0] for symbol in ("eta", "Q_12", "Q_34"))
    assert eta == pytest.approx(0.5, rel=1e-12)
    assert heat_hot / 600.0 == pytest.approx(-heat_cold / 300.0, rel=1e-12)


def test_row_0_4_celsius_in_the_spec_gives_the_kelvin_result() -> None:
    celsius = _solved(STATION, "eta_rev", T_h="565 degC", T_c="25 degC")
    kelvin = _solved(STATION, "eta_rev", T_h="838.15 K", T_c="298.15 K")
    assert celsius == pytest.approx(kelvin, rel=1e-14)
    assert celsius == pytest.approx(1.0 - 298.15 / 838.15, rel=1e-12)
    assert abs(celsius - (1.0 - 25.0 / 565.0)) > 0.3


def test_row_0_5_a_kelvin_off_the_cold_side_helps_more_than_one_on_the_hot_side() -> None:
    base = _solved(STATION, "eta_rev", T_h="838.15 K", T_c="298.15 K")
    hotter = _solved(STATION, "eta_rev", T_h="839.15 K", T_c="298.15 K") - base
    colder = _solved(STATION, "eta_rev", T_h="838.15 K", T_c="297.15 K") - base
    assert 0.0 < hotter < colder
    # The derivatives are T_c / T_h^2 and 1 / T_h.
    assert colder == pytest.approx(1.0 / 838.15, rel=1e-9)
    assert hotter == pytest.approx(298.15 / 838.15**2, rel=2e-3)


@pytest.mark.parametrize("case", MACHINES, ids=lambda case: case.name)
def test_row_0_6_no_machine_reaches_the_bound_between_its_own_extremes(case: Case) -> None:
    record = solve_spec(case.spec, case.overrides)
    if method_of(case.spec) == "organic-rankine":
        levels = [value_of(record, f"T_{state}")[0] for state in "1234"]
        assert 0.0 < value_of(record, "eta_th")[0] < 1.0 - min(levels) / max(levels)
    else:
        cold, hot = value_of(record, "T_e")[0], value_of(record, "T_c")[0]
        assert 0.0 < value_of(record, "COP")[0] < cold / (hot - cold)
