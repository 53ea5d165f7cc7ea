"""The dew points of a flue gas to cautions on corrosion and condensate."""
from __future__ import annotations

import math

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import COMPUTED, PRACTICE, TEXT, Caution, Source, Topic
from calcpack.checks.entries import temperature
from calcpack.errors import CalcpackError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.plan.facts import StreamLine
from calcpack.units import unit

HAZARD = "Flue gas"

# Metal or gas should stay 10 to 20 K above the acid dew point (from memory): the larger is taken.
ACID_MARGIN = 20.0
SO3_SYMBOL = "p_SO3"

F1 = Topic("C-F1", HAZARD, "Acid dew point",
           "Metal or gas below the acid dew point and its margin corrodes by sulfuric acid.",
           Source("Verhoff and Banchero's equation (from the text); margin of 20 K from memory", TEXT))
F2 = Topic("C-F2", HAZARD, "Water dew point",
           "Gas cooled below its water dew point sheds acid condensate: drains and materials must suit it.",
           Source(f"saturation of water, {COMPUTED}; " + PRACTICE.text, COMPUTED))


def acid_dew_point(p_water: float, p_SO3: float) -> float:
    """The sulfuric-acid dew point [K] from the partial pressures of water and SO3 [Pa].

    Verhoff and Banchero: 1000/T = 2.276 - 0.0294 ln pw - 0.0858 ln ps + 0.0062 ln pw ln ps, p in mmHg.
    """
    mmHg = unit("mmHg")
    w, s = math.log(mmHg.from_si(p_water)), math.log(mmHg.from_si(p_SO3))
    return 1000.0 / (2.276 - 0.0294 * w - 0.0858 * s + 0.0062 * w * s)


def acid(case: Case) -> Caution | None:
    """The coldest end of a wet gas against the acid dew point; needs the input ``p_SO3``."""
    stream = _flue_gas(case)
    if stream is None:
        return None
    p_water, p_SO3 = _water_pressure(case, stream), case.value(SO3_SYMBOL)
    if p_SO3 is None or p_water is None:
        return F1.not_evaluated(f"needs the partial pressure of SO3 as an input {SO3_SYMBOL} and the gas pressure")
    if p_SO3 <= 0.0:
        return F1.not_evaluated(f"the input {SO3_SYMBOL} is not above zero")
    dew = acid_dew_point(p_water, p_SO3)
    coldest = _coldest(case, stream)
    return F1.evaluated(coldest < dew + ACID_MARGIN, temperature(case.solution, coldest),
                        f"below {temperature(case.solution, dew + ACID_MARGIN)}",
                        f"acid dew point {temperature(case.solution, dew)}")


def water(case: Case) -> Caution | None:
    """The coldest end of a wet gas against the dew point of its water."""
    stream = _flue_gas(case)
    if stream is None:
        return None
    p_water = _water_pressure(case, stream)
    if p_water is None:
        return F2.not_evaluated("the gas pressure is not on this sheet")
    try:
        dew = open_fluid(FluidDefinition("water")).reader("T", ("p", "x"))(p_water, 1.0)
    except CalcpackError:
        return F2.not_evaluated("the share of water is outside the saturation line of water")
    coldest = _coldest(case, stream)
    return F2.evaluated(coldest < dew, temperature(case.solution, coldest),
                        f"below {temperature(case.solution, dew)}", "dew point of the water in the gas as it enters")


def _flue_gas(case: Case) -> StreamLine | None:
    """A stream that is a gas mixture with water in it and cools down."""
    return next((one for one in case.streams if _water_share(case, one) and
                 (case.value(one.T_out) or 0.0) < (case.value(one.T_in) or 0.0)), None)


def _water_share(case: Case, stream: StreamLine) -> float:
    """The mole share of water in a gas mixture, 0 where the stream is none."""
    definition = case.solution.spec.case.fluids.get(stream.role)
    if definition is None or not definition.composition:
        return 0.0
    from calcpack.fluids.gas import mole_shares
    return dict(mole_shares(definition.composition, definition.basis)).get("Water", 0.0)


def _water_pressure(case: Case, stream: StreamLine) -> float | None:
    p = case.value(stream.p)
    return None if p is None else p * _water_share(case, stream)


def _coldest(case: Case, stream: StreamLine) -> float:
    return min(value for value in (case.value(stream.T_in), case.value(stream.T_out)) if value is not None)


CAUTIONS = (acid, water)
