"""What the equations of several methods stand on: each ground once, as a sheet prints it for the step's reference.

A ground is a law or a definition that a reader can look up under that name, or the derivation in a few words.
"""
from __future__ import annotations

# First law, steady flow.
HEAT_OF_FLOW = "first law at steady flow, no work: mass flow times change of enthalpy"
HEAT_OF_KILOGRAM = "first law at steady flow, no work: change of enthalpy"
FLOW_FOR_HEAT = "first law at steady flow, no work, solved for the mass flow"
WORK_OF_KILOGRAM = "first law at steady flow, adiabatic: change of enthalpy"
FLOW_FOR_WORK = "power is mass flow times specific work, solved for the mass flow"
POWER_OF_FLOW = "power is mass flow times specific work"
HEAT_OF_SPECIFIC = "heat flow is mass flow times heat a kilogram"
FIRST_LAW_OF_CYCLE = "first law over a cycle: net work is heat taken less heat given"
WHOLE = "first law for the whole, derived from the steps above: what enters leaves"
ALONG = "energy balance from the cold end to this place"
MASS = "mass balance"
VOLUME_FLOW = "volume flow is mass flow over density"
SUM = "sum over the parts"

# Machines.
NET_WORK = "definition of net work: work given less work drawn"
PRESSURE_RATIO = "definition of the pressure ratio: outlet pressure over inlet pressure"
HIGH_PRESSURE = "definition of the pressure ratio, solved for the outlet pressure"
EQUAL_RATIOS = "equal pressure ratios of the stages: root of the whole ratio"
LOSS_OF_PRESSURE = "definition of the relative loss: fall of pressure over pressure before it"
DROP = "definition of the pressure drop: pressure before less pressure behind"
BACK_WORK = "definition of the back-work ratio: work drawn over work given"
WORK_RATIO = "definition of the work ratio: net work over work given"
LOST_HEAT = "definition of the loss: share of the power at the shaft"
DRIVE = "definition of the efficiencies of drive and motor: power at the shaft over power drawn"
GENERATOR = "definition of the generator's efficiency: electrical power over power at the shaft"
NET_POWER = "balance of the electrical power"

# Saturation and exchangers.
SUPERHEAT = "definition of superheat: temperature above the dew point"
MIDDLE = "arithmetic mean of the zone's two ends"
SUBCOOLING = "definition of subcooling: temperature below the bubble point"
APPROACH = "definition of the approach: difference of the two sides' temperatures at this end"
TWO_SIDES = "derived: warmer side less cooler side at this place"
PINCH = "definition of the pinch: smallest temperature difference along the exchanger"
PINCH_OF_STEAM = "definition of the pinch: gas above saturation where boiling begins"
PROFILE = "energy balance from the cold end to each row; temperatures by the equations of state"
CONDUCTANCE = "definition of the conductance: heat over log-mean temperature difference"
CONDUCTANCES = "sum over the zones, each with its own log-mean temperature difference"
ONSET = "derived: dry vapour, or the inlet where that is wet already"
PARTS_OF_HEAT = "equal parts of the heat, reckoned from the cold end"

# Figures of merit.
COP = "definition of the coefficient of performance: useful heat over work or power"
EFFICIENCY = "definition of the thermal efficiency: work or power over heat taken"
SHARE_OF_BOUND = "definition of the second-law efficiency: figure reached over that of the reversible machine"
CARNOT = "Carnot: absolute temperatures"
SHARE_OF_CARNOT = "efficiency reached over Carnot's"
MEAN_TEMPERATURE = "thermodynamic mean temperature Δh/Δs at constant pressure"
MEAN_OF_HEAT = "definition of the entropic mean temperature: heat over change of entropy"
ENTROPY_OF_HEAT = "second law: entropy flow of heat is heat over absolute temperature"
EXERGY_OF_FLOW = "exergy flow is mass flow times specific exergy"
BEST_COP = "condition of the greatest coefficient of performance, found by search between the bounds"
BEST_POWER = "condition of the greatest net power, found by search between the bounds"

# Ideal gases and zeros.
CELSIUS = "zero of the Celsius scale, exact by definition"
ZERO_OF_PRESSURE = "chosen zero of entropy; it cancels in every difference"
HEAT_CAPACITY = "ideal gas of constant heat capacity"
AMOUNT = "definition of the molar mass: mass over amount"

# Energy over time.
ENERGY = "energy is power times time, constant within the row"
EMISSIONS = "energy of each carrier times its factor"
COSTS = "energy of each carrier times its price"
