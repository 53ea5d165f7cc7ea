"""The endoreversible estimate: its closed forms, and that it is no bound."""
from __future__ import annotations

from math import sqrt

import pytest

from calcpack.checks import examine
from calcpack.errors import BrokenLawError, NoAnswerError
from calcpack.record.build import build_record

METHOD = "endoreversible-estimate"
GIVEN = {"conductances": "given"}


@pytest.mark.parametrize("UA_h, UA_c",
                         [("100 kW/K", "100 kW/K"), ("30 kW/K", "200 kW/K"), ("400 kW/K", "50 kW/K")])
def test_the_greatest_power_is_found_at_the_efficiency_of_the_closed_form(arranged, UA_h, UA_c):
    solution = arranged(METHOD, GIVEN, {"UA_h": UA_h, "UA_c": UA_c})
    T_h, T_c = solution.value("T_h"), solution.value("T_c")
    series = solution.value("UA_h") * solution.value("UA_c") / (solution.value("UA_h") + solution.value("UA_c"))
    assert solution.value("W_dot") == pytest.approx(series * (sqrt(T_h) - sqrt(T_c)) ** 2, rel=1e-9)
    assert solution.value("eta_W") == pytest.approx(1.0 - sqrt(T_c / T_h), rel=1e-5)
    assert T_h > solution.value("T_hw") > solution.value("T_cw") > T_c


def test_entropy_is_generated_in_the_exchangers_alone(arranged):
    solution = arranged(METHOD, GIVEN)
    engine = solution.value("Q_dot_c") / solution.value("T_cw") - solution.value("Q_dot_h") / solution.value("T_hw")
    assert engine == pytest.approx(0.0, abs=1e-9 * solution.value("S_dot"))
    assert solution.value("S_dot_gen") > 0.0


def test_the_estimate_does_not_hang_on_the_exchangers(arranged):
    assert arranged(METHOD, GIVEN).value("eta_CA") == arranged(METHOD).value("eta_CA")


def test_a_plant_may_pass_the_estimate_but_not_carnot(arranged):
    observed = {"observed": "efficiency"}
    above = arranged(METHOD, observed, {"eta_obs": "0.45"})
    assert above.value("r_obs") > 1.0
    findings = examine(above, build_record(above))
    assert [check for check in findings.checks if check["status"] == "fails"] == []
    beyond = arranged(METHOD, observed, {"eta_obs": "0.65"})
    with pytest.raises(BrokenLawError, match="eta_obs passes eta_C"):
        examine(beyond, build_record(beyond))


def test_a_source_colder_than_the_sink_is_told(arranged):
    with pytest.raises(NoAnswerError, match="the source is not warmer than the sink"):
        arranged(METHOD, inputs={"T_h": "20 degC"})
