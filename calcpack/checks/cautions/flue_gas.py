"""The dew points of a flue gas to cautions on corrosion and condensate."""
from __future__ import annotations

import math

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import COMPUTED, MEMORY, PRACTICE, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import percent, temperature
from calcpack.errors import CalcpackError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.plan.facts import StreamLine
from calcpack.units import unit

HAZARD = "Flue gas"

# Metal or gas should stay 10 to 20 K above the acid dew point (from memory): the larger is taken.
ACID_MARGIN = 20.0
SO3_SYMBOL = "p_SO3"
CONVERSION = (0.01, 0.05)

F1 = Topic("C-F1", HAZARD, "Acid dew point",
           "Metal or gas below the acid dew point and its margin corrodes by sulfuric acid.",
           Source("Verhoff and Banchero's equation (from the text); margin of 20 K from memory", TEXT))
F3 = Topic("C-F3", HAZARD, "Share of SO2 that turns to SO3",
           "The acid dew point hangs on this share, which is assumed, not computed: the assumption is declared.",
           Source("an example page with 2 %; the range of 1 to 5 %", MEMORY))
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


def acid_dew_point_okkes(p_water: float, p_SO3: float) -> float:
    """The same by Okkes' equation (Hydrocarbon Processing, July 1987), p in atm.

    T in °C = 203.25 + 27.6 log pw + 10.83 log ps + 1.06 (log ps + 8)^2.19.
    """
    atm = unit("atm")
    w, s = math.log10(atm.from_si(p_water)), math.log10(atm.from_si(p_SO3))
    return unit("degC").to_si(203.25 + 27.6 * w + 10.83 * s + 1.06 * max(s + 8.0, 0.0) ** 2.19)


def _worked_dew_point(p_water: float, p_SO3: float) -> Worked:
    mmHg = unit("mmHg")
    return worked("T_dew", "1000 / (2.276 - 0.0294 * ln(p_w) - 0.0858 * ln(p_s) + 0.0062 * ln(p_w) * ln(p_s))", "K",
                  p_w=(mmHg.from_si(p_water), "mmHg"), p_s=(mmHg.from_si(p_SO3), "mmHg"))


def _sulfur_trioxide(case: Case, stream: StreamLine) -> tuple[float | None, Worked | None]:
    """The partial pressure of SO3 [Pa]: as given, as the input of that name, or from SO2 and its conversion."""
    given = case.given(SO3_SYMBOL) or case.value(SO3_SYMBOL)
    SO2, share, p = case.given("SO2"), case.given("SO3_conversion"), case.value(stream.p)
    if given is not None or SO2 is None or share is None or p is None:
        return given, None
    found = worked("p_SO3", "p * y_SO2 * f", "Pa", p=(p, "Pa"), y_SO2=SO2, f=share)
    return found.value, found


def acid(case: Case) -> Caution | None:
    """The coldest end of a wet gas against the acid dew point; needs the partial pressure of SO3."""
    stream = _flue_gas(case)
    if stream is None:
        return None
    p_water, (p_SO3, from_SO2) = _water_pressure(case, stream), _sulfur_trioxide(case, stream)
    if p_SO3 is None or p_water is None:
        return F1.not_evaluated(f"not given: {SO3_SYMBOL} under case.safety or as an input, or SO2 with "
                                "SO3_conversion, and the gas pressure")
    if p_SO3 <= 0.0:
        return F1.not_evaluated(f"the input {SO3_SYMBOL} is not above zero")
    dew = acid_dew_point(p_water, p_SO3)
    coldest = _coldest(case, stream)
    return F1.evaluated(coldest < dew + ACID_MARGIN, temperature(case.solution, coldest),
                        f"below {temperature(case.solution, dew + ACID_MARGIN)}",
                        f"acid dew point {temperature(case.solution, dew)}, by Okkes' equation "
                        f"{temperature(case.solution, acid_dew_point_okkes(p_water, p_SO3))}",
                        lines(from_SO2, _worked_dew_point(p_water, p_SO3)))


def conversion(case: Case) -> Caution | None:
    """The assumed share of SO2 against the usual range."""
    share = case.given("SO3_conversion")
    if share is None or _flue_gas(case) is None:
        return None
    low, high = CONVERSION
    return F3.evaluated(not low <= share <= high, percent(share), f"outside {percent(low)} to {percent(high)}")


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
    p, given = case.value(stream.p), case.given("p_H2O")
    if given is not None:
        return given
    return None if p is None else p * _water_share(case, stream)


def _coldest(case: Case, stream: StreamLine) -> float:
    return min(value for value in (case.value(stream.T_in), case.value(stream.T_out)) if value is not None)


CAUTIONS = (acid, water, conversion)
