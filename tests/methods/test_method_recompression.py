"""Mechanical vapour recompression: heat goes round, and little work lifts it."""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.errors import NoAnswerError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec

METHOD = "vapour-recompression"


def test_solids_are_kept(arranged):
    value = arranged(METHOD).value
    assert value("m_dot_feed") * 0.1 == pytest.approx(value("m_dot_conc") * 0.5, rel=1e-12)


def test_the_work_is_that_of_common_plants(arranged):
    """Some 10 to 25 kWh for a tonne of water at a rise of 5 to 10 K (common practice, from memory)."""
    work = arranged(METHOD).value("e_v") / 3600.0
    assert 10.0 < work < 25.0


@pytest.mark.parametrize("symbol", ["dT_hs", "dT_bpe"])
def test_every_kelvin_of_rise_costs_work(arranged, symbol):
    values = [arranged(METHOD, inputs={symbol: text}).value("e_v") for text in ("2 K", "4 K", "8 K")]
    assert values == sorted(values)


def test_injection_saturates_the_vapour_and_gives_the_same_heat(arranged):
    wet, dry = (arranged(METHOD, {"desuperheating": one}) for one in ("injection", "none"))
    assert wet.value("T_3") == pytest.approx(wet.value("T_c"), abs=1e-6)
    assert wet.value("Q_dot_hs") == pytest.approx(dry.value("Q_dot_hs"), rel=1e-9)


def test_a_preheated_feed_needs_less_heat_from_outside(arranged):
    warm, cold = (arranged(METHOD, {"preheating": one}) for one in ("condensate", "none"))
    assert cold.value("Q_dot_add") - warm.value("Q_dot_add") == pytest.approx(warm.value("Q_dot_pre"), rel=1e-9)


def test_feed_and_evaporation_are_two_ways_to_one_plant(arranged):
    base = arranged(METHOD)
    again = arranged(METHOD, {"size_by": "evaporation"}, {"m_dot_v": f"{base.value('m_dot_v')!r} kg/s"})
    for name in ("m_dot_feed", "W_dot_net", "Q_dot_add", "COP"):
        assert again.value(name) == pytest.approx(base.value(name), rel=1e-9), name


def test_compression_without_loss_still_stays_below_the_reversible_bound(arranged):
    ideal = {"eta_is": "1", "eta_drive": "1", "eta_motor": "1", "f_loss": "0", "dp_v": "0 bar"}
    assert 0.9 < arranged(METHOD, inputs=ideal).value("g_rev") < 1.0


def test_live_steam_alone_needs_ten_times_the_work_as_heat(arranged):
    value = arranged(METHOD).value
    assert value("Q_dot_need") > 10.0 * value("W_dot_net")


@pytest.mark.parametrize("inputs, what, hint", [
    ({"w_conc": "0.05"}, "the concentrate is not richer than the feed", "check the two mass fractions"),
    ({"T_feed": "90 degC"}, "the feed is not colder than the solution boils", "check the two temperatures"),
    ({"dp_v": "2 bar"}, "the pressure drop is not less than the pressure above the solution", "give a smaller"),
    ({"dT_pre": "40 K"}, "the condensate has nothing to give to the feed", "set preheating to none"),
    ({"cp_feed": "0.5 kJ/(kg·K)"}, "the preheater would warm the feed beyond what is possible",
     "heat capacity of the feed")])
def test_what_cannot_be_is_told_with_what_to_change(inputs, what, hint):
    with pytest.raises(NoAnswerError) as caught:
        solve_spec(Path("case.yaml"), inputs, text=starter(METHOD, {}))
    fault = caught.value.faults[0]
    assert what in fault.what and hint in (fault.hint or ""), fault
