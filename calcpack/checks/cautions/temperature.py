"""Temperatures to cautions: discharge and oil, touch, scalding, legionella, freezing, frost."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, PRACTICE, SECOND_HAND, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.room import hottest
from calcpack.checks.entries import temperature
from calcpack.plan.facts import StreamLine

OIL, TOUCH, WATER, COLD = "Oil and compressor", "Hot surfaces and water", "Legionella", "Freezing and frost"
ZERO = 273.15

# 225 °F at the discharge line of hermetic and semi-hermetic compressors; the valve about 75 °F hotter. Mineral oil
# breaks down at 350 °F, ester oil at 400 °F (trade articles, second-hand).
DISCHARGE_LINE = ZERO + 107.0
VALVE_ABOVE_LINE = 42.0
MINERAL_OIL, ESTER_OIL = ZERO + 177.0, ZERO + 204.0
# Ammonia reciprocating compressors: 120 °C, the lower end of practice (from memory).
AMMONIA_DISCHARGE = ZERO + 120.0
# Smooth bare metal burns within 1 s at 65 °C (ISO 13732-1:2006, from memory).
TOUCH_ONE_SECOND = ZERO + 65.0
# Usual industrial surface limit with ASTM C1055's 5 s of contact (60 °C from memory).
INDUSTRIAL_SURFACE = ZERO + 60.0
# Serious burn by hot water after more than five minutes (burn-institute table, second-hand).
SCALD_FROM = ZERO + 49.0
SCALD_TIMES = ((68.0, "about 1 s"), (66.0, "about 1.5 s"), (63.0, "under 3 s"), (60.0, "under 5 s"),
               (57.0, "about 10 s"), (55.0, "about 30 s"), (52.0, "1.5 to 2 min"), (49.0, "over 5 min"))
# Hot water is stored at 60 °C or more (health and safety executive, hot and cold water page, from the text).
STORE_AT = ZERO + 60.0
# Legionella grow between 20 and 45 °C (building-services pages, second-hand).
GROWTH = (ZERO + 20.0, ZERO + 45.0)
# Baths at most at 44 °C, showers and basins at 41 °C (building-services page, second-hand).
BATH, SHOWER = ZERO + 44.0, ZERO + 41.0
# Leaving water below 4 °C can freeze in an evaporator (from memory).
LEAVING_WATER = ZERO + 4.0

K1 = Topic("C-K1", OIL, "Discharge temperature",
           "A hot discharge line tells of hotter valves, where oil breaks down, acid forms and wear grows.",
           Source("hermetic and semi-hermetic practice, trade articles", SECOND_HAND))
K2 = Topic("C-K2", OIL, "Oil at the discharge valve",
           "Oil at the valve, taken 42 K above the line, decomposes: mineral oil first, ester oil at 204 °C.",
           Source("trade articles; a training page gives 119 °C for polyvinyl ether", SECOND_HAND))
K3 = Topic("C-K3", OIL, "Ammonia discharge temperature",
           "Above this ammonia compressors call for two stages, injection or oil cooling.", PRACTICE)
H1 = Topic("C-H1", TOUCH, "Burn within a second",
           "Bare smooth metal this hot burns the skin within a second of contact.",
           Source("ISO 13732-1:2006", MEMORY))
H2 = Topic("C-H2", TOUCH, "Hot surface",
           "Surfaces this hot are insulated or guarded where a person can touch them.",
           Source("ASTM C1055 (5 s of contact); 60 °C is industrial practice", MEMORY))
H3 = Topic("C-H3", TOUCH, "Scalding",
           "Where a person may draw this water it scalds: a mixing valve at the tap bounds its temperature.",
           Source("burn-institute table of times to a serious burn", SECOND_HAND))
H4 = Topic("C-H4", TOUCH, "Temperature at the tap",
           "In care settings a mixing valve keeps the tap to 44 °C for baths and 41 °C for showers and basins.",
           Source("building-services page", SECOND_HAND))
H7 = Topic("C-H7", WATER, "Condensing below the storage temperature",
           "The machine alone cannot heat water to the storage temperature: it needs back-up heat or a regular hot "
           "cycle where the water is stored.", PRACTICE)
H5 = Topic("C-H5", WATER, "Storage temperature",
           "Where the water is stored and drawn for washing, water below this temperature lets legionella survive; "
           "back-up heat or a regular hot cycle is then needed.",
           Source("Health and Safety Executive, hot and cold water systems page", TEXT))
H6 = Topic("C-H6", WATER, "Growth band",
           "Legionella grow in water that stands between these temperatures.",
           Source("building-services pages", SECOND_HAND))
H8 = Topic("C-H8", COLD, "Water near freezing",
           "Plain water that freezes in the evaporator bursts its tubes; a limiter of low pressure or temperature "
           "guards it.",
           Source("RD 552/2019 IF-08 3.2.5 (limiter, from the text); 4 °C leaving water", MEMORY))
H9 = Topic("C-H9", COLD, "Frost on an air coil",
           "A coil below freezing and below the dew point of the air frosts: allow for defrosting in heat and power.",
           PRACTICE)
H10 = Topic("C-H10", COLD, "Condensation on cold surfaces",
            "Surfaces below the dew point of the room drip and corrode under the insulation without a vapour barrier.",
            Source("RD 552/2019 IF-05 3.2", TEXT))

USE = "what the water is used for is not an input of this sheet"


def discharge(case: Case) -> Caution | None:
    """The temperature at the compressor outlet."""
    T = case.part("discharge")
    if T is None or case.working is None:
        return None
    return K1.evaluated(T > DISCHARGE_LINE, temperature(case.solution, T), _above(case, DISCHARGE_LINE))


def oil(case: Case) -> Caution | None:
    """The discharge valve against the oil's breakdown."""
    T = case.part("discharge")
    if T is None or case.working is None:
        return None
    valve = T + VALVE_ABOVE_LINE
    extra = f"ester oil at {temperature(case.solution, ESTER_OIL)}; the oil is not an input of this sheet"
    return K2.evaluated(valve > MINERAL_OIL, temperature(case.solution, valve), _above(case, MINERAL_OIL), extra)


def ammonia_discharge(case: Case) -> Caution | None:
    """For ammonia only."""
    T = case.part("discharge")
    if T is None or not case.is_fluid("R-717"):
        return None
    return K3.evaluated(T > AMMONIA_DISCHARGE, temperature(case.solution, T), _above(case, AMMONIA_DISCHARGE),
                        "practice is 120 to 150 °C for reciprocating, 80 to 100 °C for oil-flooded screw machines")


def tap(case: Case) -> Caution | None:
    """The tap, where its temperature is given."""
    T = case.given("tap_temperature")
    if T is None or case.working is None:
        return None
    return H4.evaluated(T > SHOWER, temperature(case.solution, T), f"above {temperature(case.solution, SHOWER)}",
                        "above that of a bath too" if T > BATH else "")


def burn(case: Case) -> Caution | None:
    """The hottest fluid against contact of one second."""
    if case.working is None:
        return None
    T, which = hottest(case)
    return H1.evaluated(T >= TOUCH_ONE_SECOND, temperature(case.solution, T),
                        f"at or {_above(case, TOUCH_ONE_SECOND)}", which)


def surface(case: Case) -> Caution | None:
    """The hottest fluid against the usual industrial surface."""
    if case.working is None:
        return None
    T, which = hottest(case)
    return H2.evaluated(T > INDUSTRIAL_SURFACE, temperature(case.solution, T), _above(case, INDUSTRIAL_SURFACE), which)


def scald(case: Case) -> Caution | None:
    """Heated water at its outlet."""
    T = _heated_water(case)
    if T is None:
        return None
    times = (f"{time} to a serious burn at {limit:.0f} °C" for limit, time in SCALD_TIMES if ZERO + limit <= T)
    return H3.evaluated(T >= SCALD_FROM, temperature(case.solution, T), f"at or {_above(case, SCALD_FROM)}",
                        next(times, ""))


def storage(case: Case) -> Caution | None:
    """Stored water, or heated water in its place, too cool to keep legionella down."""
    given = case.given("store_temperature")
    T = given if given is not None else _heated_water(case)
    if T is None or case.working is None:
        return None
    return H5.evaluated(T < STORE_AT, temperature(case.solution, T), f"below {temperature(case.solution, STORE_AT)}",
                        USE if given is None else "the store as given")


def condensing(case: Case) -> Caution | None:
    """A heat pump for water that condenses below the storage temperature."""
    T = case.part("condensing")
    if T is None or _heated_water(case) is None:
        return None
    return H7.evaluated(T < STORE_AT, temperature(case.solution, T), _below(case, STORE_AT), USE)


def growth(case: Case) -> Caution | None:
    """Stored water, or heated water at either end, inside the growth band."""
    stream, store = _sink_water(case), case.given("store_temperature")
    if stream is None:
        return None
    ends = [value for value in (case.value(stream.T_in), case.value(stream.T_out)) if value is not None]
    ends = ends if store is None else [store]
    low, high = (temperature(case.solution, end) for end in GROWTH)
    return H6.evaluated(any(GROWTH[0] < T < GROWTH[1] for T in ends),
                        " to ".join(temperature(case.solution, T) for T in ends), f"between {low} and {high}",
                        USE if store is None else "the store as given")


def freezing(case: Case) -> Caution | None:
    """Plain water that an evaporator cools."""
    T = case.part("evaporating")
    stream = next((one for one in case.streams if case.is_water(one) and _cools(case, one)), None)
    if T is None or stream is None or case.part("discharge") is None:
        return None
    leaving = case.value(stream.T_out)
    value = f"evaporating {temperature(case.solution, T)}, water leaves at {temperature(case.solution, leaving)}"
    limits = f"evaporating below {temperature(case.solution, ZERO)} or leaving {_below(case, LEAVING_WATER)}"
    return H8.evaluated(T < ZERO or leaving < LEAVING_WATER, value, limits)


def frost(case: Case) -> Caution | None:
    """An air coil colder than freezing; whether it frosts hangs on the air's dew point."""
    T = case.part("evaporating")
    air = any(case.is_gas(case.fluid_of(one)) and _cools(case, one) for one in case.streams)
    if T is None or not air or case.part("discharge") is None:
        return None
    dew = case.given("air_dew_point")
    limit, name = (ZERO, "; the dew point of the air is not given") if dew is None else (min(ZERO, dew), "")
    return H9.evaluated(limit > T, f"evaporating {temperature(case.solution, T)}", _below(case, limit),
                        f"the coil's surface is taken as cold as the refrigerant{name}")


def condensation(case: Case) -> Caution | None:
    """The coldest fluid against the dew point of the room."""
    if case.working is None:
        return None
    coldest, dew = min([*case.of_points("T"), *case.of_streams("T_in", "T_out")]), case.given("room_dew_point")
    if dew is not None:
        return H10.evaluated(coldest < dew, temperature(case.solution, coldest), _below(case, dew),
                             "a surface is taken as cold as the coldest fluid in it")
    if coldest >= ZERO + 20.0:
        return None
    return H10.not_evaluated(f"{case.missing('room_dew_point')}; the coldest fluid is at "
                             f"{temperature(case.solution, coldest)}")


def _cools(case: Case, stream: StreamLine) -> bool:
    inlet, outlet = case.value(stream.T_in), case.value(stream.T_out)
    return inlet is not None and outlet is not None and outlet < inlet


def _sink_water(case: Case) -> StreamLine | None:
    """The water that a heat pump heats; an engine's cooling water is not drawn by anybody."""
    if case.part("discharge") is None:
        return None
    return next((one for one in case.streams if case.is_water(one) and not _cools(case, one)), None)


def _heated_water(case: Case) -> float | None:
    stream = _sink_water(case)
    return case.value(stream.T_out) if stream is not None else None


def _above(case: Case, limit: float) -> str:
    return f"above {temperature(case.solution, limit)}"


def _below(case: Case, limit: float) -> str:
    return f"below {temperature(case.solution, limit)}"


CAUTIONS = (discharge, oil, ammonia_discharge, burn, surface, scald, tap, storage, condensing, growth, freezing, frost,
            condensation)
