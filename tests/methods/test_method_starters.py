"""Every method as `calcpack new` writes it: solves, balances, and keeps the second law."""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.errors import CommandError, SpecError
from calcpack.methods import methods
from calcpack.methods.starter import needs_of, starter
from calcpack.pipeline import solve_spec
from calcpack.plan.facts import Volume
from calcpack.units import read_quantity


def test_a_starter_solves_as_it_stands_and_no_check_fails(method, options):
    record = solve_spec(Path("new.yaml"), text=starter(method, options))
    assert [check for check in record.data["checks"] if check["status"] == "fails"] == []
    assert record.failed_limits == ()
    assert record.data["results"]
    given = {name: one["value"] for name, one in record.data["case"]["options"].items()}
    assert given == methods()[method].complete(options)


def volumes_of(solution):
    """The control volumes; a plan may state other balances beside them."""
    return [volume for volume in solution.plan.facts.volumes if isinstance(volume, Volume)]


def open_share(solution, volume):
    """The share of its scale by which a control volume's energy balance is open."""
    def carried(flows):
        return sum(solution.value(flow.m_dot) * solution.value(flow.h) for flow in flows)
    entering = carried(volume.flows_in) + sum(map(solution.value, volume.work_in))
    entering += sum(solution.value(heat) for heat, _ in volume.heat_in)
    leaving = carried(volume.flows_out) + sum(map(solution.value, volume.work_out))
    leaving += sum(solution.value(heat) for heat, _ in volume.heat_out)
    return abs(entering - leaving) / abs(solution.value(volume.scale))


def test_energy_balances_close_within_a_millionth_of_the_duty(arranged, method, options):
    solution = arranged(method, options)
    shares = {volume.name: open_share(solution, volume) for volume in volumes_of(solution)}
    assert all(share < 1e-6 for share in shares.values()), shares
    if method in ("vapour-compression", "organic-rankine"):
        assert [volume.name for volume in volumes_of(solution) if volume.cycle] in (
            ["whole machine"], ["whole engine"])
        assert len(shares) >= 5


def test_no_machine_or_exchanger_destroys_entropy(arranged, method, options):
    solution = arranged(method, options)
    for volume in volumes_of(solution):
        known = all(flow.s is not None for flow in (*volume.flows_in, *volume.flows_out))
        if known and volume.flows_in and not volume.heat_in and not volume.heat_out:
            grown = sum(solution.value(flow.m_dot) * solution.value(flow.s) for flow in volume.flows_out) - sum(
                solution.value(flow.m_dot) * solution.value(flow.s) for flow in volume.flows_in)
            assert grown > -1e-9 * abs(solution.value(volume.scale)), volume.name


def test_no_figure_passes_its_bound_and_equal_values_agree(arranged, method, options):
    solution = arranged(method, options)
    for bound in solution.plan.facts.bounds:
        assert solution.value(bound.symbol) <= solution.value(bound.limit) * (1 + 1e-12), bound.text
    for pair in solution.plan.facts.equals:
        assert solution.value(pair.symbol) == pytest.approx(solution.value(pair.other), rel=pair.relative), pair.text


def test_the_plan_hangs_on_options_alone_and_names_what_it_lays(arranged, method, options):
    solution = arranged(method, options)
    known = solution.values
    facts = solution.plan.facts
    for point in facts.states:
        assert point.T in known and point.p in known
    named = [symbol for stream in facts.streams for symbol in (stream.m_dot, stream.T_in, stream.T_out, stream.Q_dot)]
    assert all(symbol in known for symbol in named)
    boxes = {box.name for box in facts.sketch.boxes}
    assert all(link.start in boxes or link.end in boxes for link in facts.sketch.links)
    assert all(symbol in known for symbol in methods()[method].results(solution.options))


@pytest.mark.parametrize("name", list(methods()))
def test_a_methods_typical_values_are_of_their_kind_and_in_range(name):
    method = methods()[name]
    for need in needs_of(method, method.complete({})).values():
        reading = read_quantity(need.typical, need.kind)
        if need.low is not None:
            assert reading.value >= read_quantity(need.low, need.kind).value
        if need.high is not None:
            assert reading.value <= read_quantity(need.high, need.kind).value


@pytest.mark.parametrize("name", list(methods()))
def test_a_starter_has_every_option_with_its_alternatives(name):
    text = starter(name, {})
    for option in methods()[name].options:
        line = next(line for line in text.splitlines() if line.startswith(f"    {option.name}: "))
        for value in option.values:
            assert value in line


@pytest.mark.parametrize("name, options, what, hint", [
    ("carnot-bond", {}, "there is no method 'carnot-bond'", "did you mean 'carnot-bound'?"),
    ("carnot-bound", {"machin": "engine"}, "carnot-bound has no option machin=engine", "did you mean 'machine'?"),
    ("carnot-bound", {"machine": "heatpump"}, "carnot-bound has no option machine=heatpump",
    "did you mean 'heat-pump'?")])
def test_what_cannot_be_started_is_told(name, options, what, hint):
    with pytest.raises(CommandError) as caught:
        starter(name, options)
    assert (caught.value.faults[0].what, caught.value.faults[0].hint) == (what, hint)


@pytest.mark.parametrize("name, options", [
    ("vapour-compression", {"source_stream": "none"}), ("vapour-compression", {"sink_stream": "none"}),
    ("organic-rankine", {"sink_stream": "none"}), ("organic-rankine", {"evaporating": "pinch",
    "source_stream": "none"}),
    ("carnot-bound", {"machine": "heat-pump", "between": "dead-state"})])
def test_contradicting_options_are_told_with_what_to_do(name, options):
    with pytest.raises(SpecError) as caught:
        starter(name, options)
    assert caught.value.exit_status == 2
    assert caught.value.faults[0].hint.startswith(("set ", "choose "))
