"""Every unit of a plant against its source of truth: one list for the tests and the page."""

import math
from datetime import date

import numpy as np
from scipy.integrate import quad

from strata.gas import dose_lime, henry_constant
from strata.gas.henry import henry_of_row
from strata.plant import power
from strata.plant.chemistry import part, table_of
from strata.plant.operate import operate
from strata.plant.plan import Lime, Plant, Return, Riser, Stage, Wash
from strata.plant.riser import lift
from strata.plant.streams import GasStream, WaterStream
from strata.plant.wash import wash_gas
from strata.species import LAKE_GASES, VAPOUR
from strata.water.density import parcel_density, pure_water_density, specific_heat
from strata.water.intrusion import SINK_COEFFICIENT, layer_shares
from strata.water.plume import ENTRAINMENT_COEFFICIENT, follow_plume
from strata.water.transport import vapour_pressure
from tests.plant_cases import DEEP, ENGINE_SITE, PLAIN_SITE, SHALLOW, SITE, table
from tests.property_checks import Check, relative

ENGINE = "IPhreeqc 3.8.6"
MTT = "Morton, Taylor & Turner 1956"
GRAVITY = 9.81

# Separator ----------------------------------------------------------------------------------


def plain_henry():
    """Return errors of the recovery of one gas against 1 - P / (H c0), cooling or not."""
    feed = WaterStream(1.0, 25.0, 0.0, {"CH4": 16.0, "DIC": 0.0, "alkalinity": 0.0})
    errors = []
    for pressure in (0.1e5, 1e5, 5e5, 10e5):
        for cooling in (False, True):
            done = part(feed, pressure, PLAIN_SITE, cooling=cooling)
            constant = float(henry_constant("CH4", done.water.temperature))
            errors.append(done.gas.of("CH4") / 16.0 - 1.0 + pressure / (constant * 16.0))
    return np.array(errors)


def _feed_of(row):
    """Return one row of the separator table as a stream of 1 m3/s."""
    alkalinity = row["alk_meq_kgw"]
    methane, carbon = row["ch4_in_mmol_kgw"], alkalinity + row["co2_added_mmol_kgw"]
    mass = 1.0 + 1e-6 * (
        alkalinity * 84.007 + methane * 16.0425 + row["co2_added_mmol_kgw"] * 44.0095
    )
    per = 1e-3 * row["rho_in_kg_m3"] / mass  # m3 of solution hold so many kg of water x 1e-3
    dissolved = {"CH4": methane * per, "DIC": carbon * per, "alkalinity": alkalinity * per}
    return WaterStream(1.0, row["T_degC"], alkalinity * 84.007e-3 / mass, dissolved)


def _flashes():
    """Yield every flash of the table with gas: its row, what came out, the feed."""
    for row in table("f_separator_flash.csv"):
        if row["gas_mmol_kgw"] > 0.0:
            feed = _feed_of(row)
            yield row, part(feed, row["p_bar_abs"] * 1e5, ENGINE_SITE, cooling=False).gas, feed


def flash_released():
    """Return errors [%] of the methane released where more than 30 % is."""
    return np.array(
        [
            relative(gas.of("CH4") / feed.of("CH4"), row["frac_CH4_to_gas"])
            for row, gas, feed in _flashes()
            if row["frac_CH4_to_gas"] > 0.3
        ]
    )


def flash_near_onset():
    """Return errors of the share of the methane released where less than 30 % is."""
    return np.array(
        [
            gas.of("CH4") / feed.of("CH4") - row["frac_CH4_to_gas"]
            for row, gas, feed in _flashes()
            if row["frac_CH4_to_gas"] <= 0.3
        ]
    )


def flash_composition():
    """Return errors of the mole fraction of methane."""
    return np.array([gas.of("CH4") / gas.total - row["y_CH4"] for row, gas, _ in _flashes()])


def flash_heat():
    """Return what the water gives up over desorption and evaporation [%].

    Enthalpies by R T^2 d ln(k)/dT from the same Henry functions and vapour pressure, over
    wider differences than the code's.
    """
    rows, errors = table_of(SITE).rows, []
    for pressure in (0.1e5, 0.5e5, 1e5, 3e5):
        done = part(DEEP, pressure, SITE)
        t = done.water.temperature
        scale = 8.314462618 * (t + 273.15) ** 2 / 0.5

        def slope(function, t=t, scale=scale):
            return scale * (np.log(function(t + 0.25)) - np.log(function(t - 0.25)))

        heat = done.gas.of(VAPOUR) * slope(vapour_pressure)
        for i, gas in enumerate(LAKE_GASES):
            heat += done.gas.of(gas) * slope(lambda x, i=i: henry_of_row(x, rows[i]))
        capacity = pure_water_density(t, pressure) * specific_heat(t, DEEP.salinity, pressure)
        errors.append(relative(DEEP.flow * capacity * (DEEP.temperature - t), heat))
    return np.array(errors)


# Wash tower and lime ------------------------------------------------------------------------


def _dilute(factor, stages, efficiency=1.0):
    """Return what is left of a trace of CO2 in methane over saturated water, and its share."""
    pressure, temperature, trace = 5e5, 23.0, 1e-9
    methane = pressure / float(henry_constant("CH4", temperature))
    constant = float(henry_constant("CO2", temperature)) / pressure  # y / c
    gas = GasStream({"CH4": 10.0, "CO2": trace}, temperature, pressure)
    water = WaterStream(factor * constant * 10.0, temperature, 0.0, {"CH4": methane})
    wash = Wash(pressure, 1.0, 0.0, stages, efficiency=efficiency)
    return wash_gas(wash, gas, water, PLAIN_SITE).gas.of("CO2") / trace


def kremser():
    """Return errors of the share absorbed of a trace against Kremser 1930."""
    errors = []
    for factor, stages in ((1.4, 5), (2.0, 4), (1.0, 6), (0.6, 10)):
        exact = stages / (stages + 1)
        if factor != 1.0:
            exact = (factor ** (stages + 1) - factor) / (factor ** (stages + 1) - 1)
        errors.append(1.0 - _dilute(factor, stages) - exact)
    return np.array(errors)


def murphree():
    """Return errors of one stage of some efficiency against its balance, Murphree 1925."""
    return np.array(
        [
            _dilute(factor, 1, e) - (1 - e + e / factor) / (1 + e / factor)
            for factor in (0.5, 1.4)
            for e in (0.3, 0.6, 1.0)
        ]
    )


def _columns():
    """Yield every column of the table: its row and the gas that leaves."""
    for row in table("f_wash_column.csv"):
        dissolved = {
            "CH4": 0.9976 * row["water_in_CH4_mmol_kgw"],
            "DIC": 0.9976 * row["water_in_CO2_mmol_kgw"],
            "alkalinity": 0.0,
        }
        water = WaterStream(1e-3 / 0.9976, row["T_degC"], 0.0, dissolved)  # holds a kilogram
        flows = {gas: 1e-3 * row[f"gas_in_{gas}_mmol_kgw"] for gas in ("CH4", "CO2")}
        gas = GasStream(flows, row["T_degC"], row["p_bar_abs"] * 1e5)
        wash = Wash(gas.pressure, 1.0, 0.0, int(row["stages"]))
        yield row, wash_gas(wash, gas, water, ENGINE_SITE).gas


def column_gas():
    """Return errors [%] of the gas that leaves a column."""
    return np.array(
        [
            relative(1e3 * gas.dry, row["gas_out_CH4_mmol_kgw"] + row["gas_out_CO2_mmol_kgw"])
            for row, gas in _columns()
        ]
    )


def column_composition():
    """Return errors of the mole fractions that leave a column."""
    return np.array(
        [
            gas.of(name) / gas.total - row[f"y_out_{name}"]
            for row, gas in _columns()
            for name in ("CH4", "CO2")
        ]
    )


def _doses():
    """Yield the doses of sodium water in range: row, outcome, mol/m3 per mmol/kg."""
    for row in table("e_lime_dosing.csv"):
        if row["water"] == "Na" and row["pH"] <= 11 and row["alk0_meq_kgw"] <= 60:
            per = 0.997  # 0.998 kg/L less the mass of ions
            salinity = 0.084 * row["alk0_meq_kgw"] / 1.003
            amounts = (row["dic0_mmol_kgw"], row["alk0_meq_kgw"], row["lime_mmol_kgw"])
            done = dose_lime(row["T_degC"], salinity, *(per * amount for amount in amounts))
            yield row, done, per


def lime_carbon_dioxide():
    """Return errors of the CO2 left free [mol/m3]."""
    return np.array(
        [float(done.co2) - per * row["co2_aq_mmol_kgw"] for row, done, per in _doses()]
    )


def lime_calcite():
    """Return errors of the calcite formed [mol/m3]."""
    return np.array(
        [float(done.calcite) - per * row["calcite_mmol_kgw"] for row, done, per in _doses()]
    )


def lime_ph(low, high):
    """Return a function of the errors of the pH between two pH of the engine."""
    return lambda: np.array(
        [float(done.ph) - row["pH"] for row, done, _ in _doses() if low <= row["pH"] < high]
    )


# Power --------------------------------------------------------------------------------------


def heating_values():
    """Return errors [%] of the lower heating value."""
    errors = []
    for row in table("h_heating_value.csv"):
        gas = GasStream({"CH4": row["y_CH4"], "CO2": 1.0 - row["y_CH4"]}, 25.0, 1e5)
        errors.append(relative(power.heating_value(gas), 1e6 * row["LHV_MJ_Nm3_ideal"]))
    return np.array(errors)


def _compressions():
    """Yield row, work and end temperature of every compression of the table."""
    for row in table("h_isentropic_compression.csv"):
        shares = {"CH4": row["y_CH4"], "CO2": 1.0 - row["y_CH4"]}
        pressures = (row["p_in_bar"] * 1e5, row["p_out_bar"] * 1e5)
        yield row, *power.isentropic_work(shares, row["T_in_degC"], *pressures)


def compression_work():
    """Return errors [%] of the work of compression."""
    return np.array([relative(work, row["work_J_mol"]) for row, work, _ in _compressions()])


def compression_temperature():
    """Return errors [K] of the temperature after compression."""
    return np.array([end - row["T_out_degC"] for row, _, end in _compressions()])


# Riser --------------------------------------------------------------------------------------

#: One pipe of 0.145 m bore from 203 m in Lake Nyos, January 2001 (Halbwachs et al. 2004); CO2
#: after Evans et al. 1993 and Kusakabe et al. 2008, air 0.89 bar.
NYOS = {"CO2": 0.366 * 997.0, "N2": 0.4}


def _nyos():
    foot = 0.89e5 + 9.78 * 1000.0 * 203.0
    return lift(Riser(0.145), 203.0, 25.3, 1.0, NYOS, 0.89e5, foot, gravity=9.78)


def riser_flow():
    """Return the error [%] of the self-lifted flow over the middle of 63 to 70 L/s."""
    return np.array([relative(_nyos().flow, 66.5e-3)])


def riser_gas():
    """Return the error of the share of gas in the jet over nine tenths."""
    return np.array([_nyos().outlet_gas_share - 0.9])


# Plume and intake ---------------------------------------------------------------------------

SQUARE = 1e-4  # s-2
_PURE = parcel_density(20.0, 1.0, 101325.0, 0.0, 0.0, 0.75e-3)


def _linear(depth):
    """Return the density over that of the surface [kg/m3] at the frequency of these checks."""
    return SQUARE * _PURE / GRAVITY * depth


def _plume(profile, depth, flow, excess, angle=0.0, alpha=ENTRAINMENT_COEFFICIENT, **port):
    """Return a plume in 400 m of water of one temperature whose density is given."""
    faces = np.linspace(0.0, 400.0, 801)
    one = np.ones(800)
    found = profile(0.5 * (faces[1:] + faces[:-1]))
    ports, diameter, spacing = (
        float(port.get(name, default))
        for name, default in (("ports", 1.0), ("diameter", 0.05), ("spacing", 10.0))
    )
    stability = GRAVITY / _PURE * np.diff(found * one) / 0.5  # layers of 0.5 m
    column = (faces, 20.0 * one, one, found * one, 0.0 * one, 101325.0 * one, stability)
    source = (float(depth), float(flow), 20.0, 1.0, float(excess), 0.0)
    shape = (ports, diameter, spacing, 0.0, float(angle), float(alpha))
    return faces, follow_plume(*column, 0.75e-3, GRAVITY, *source, *shape)


def _uniform(depth):
    return 0.0 * depth


def plume_top():
    """Return errors [%] of the top of a plume in linear stratification, both ways."""
    flow, buoyancy, errors = 2e-3, 1e-2, []
    length = buoyancy**0.25 * SQUARE**-0.375
    for alpha, top in ((0.093, 3.77), (0.083, 3.99)):  # printed for Gaussian profiles
        for way in (-1, 1):
            excess = _linear(200.0) + way * buoyancy / flow * _PURE / GRAVITY
            run = _plume(_linear, 200.0, flow, excess, alpha=alpha * math.sqrt(2.0))[1]
            errors.append(relative(abs(run[3] - 200.0) / length, top))
    return np.array(errors)


def plume_dilution():
    """Return errors [%] of the dilution in linear stratification against the exact integral.

    In time such a plume swings: F = B cos(N t), M = (B / N) sin(N t), and d(Q^2 / 2)/dt
    = 2 alpha pi^(1/2) M^(3/2) integrates to the turning point.
    """
    flow, buoyancy, frequency = 2e-3, 1e-2, math.sqrt(SQUARE)
    integral = quad(lambda x: np.sin(x) ** 1.5, 0.0, math.pi)[0]
    rate = 4 * ENTRAINMENT_COEFFICIENT * math.sqrt(math.pi) / frequency
    largest = math.sqrt(rate * (buoyancy / frequency) ** 1.5 * integral)
    errors = []
    for way in (-1, 1):
        excess = _linear(200.0) + way * buoyancy / flow * _PURE / GRAVITY
        errors.append(relative(_plume(_linear, 200.0, flow, excess)[1][4] * flow, largest))
    return np.array(errors)


def plume_jet():
    """Return the error [%] of the growth of a jet without buoyancy over 50 m."""
    flow, diameter = 0.1, 0.2
    momentum = flow**2 / (math.pi * diameter**2 / 4)
    run = _plume(_uniform, 50.0, flow, 0.0, angle=math.pi / 2, diameter=diameter)[1]
    growth = 2 * ENTRAINMENT_COEFFICIENT * math.sqrt(math.pi * momentum) * 50.0 / flow
    return np.array([relative(run[4], 1.0 + growth)])


def _five_thirds(buoyancy, height):
    """Return the flow of a point plume in uniform water [m3/s]."""
    alpha = ENTRAINMENT_COEFFICIENT
    constant = 1.2 * alpha * (0.9 * alpha) ** (1 / 3) * math.pi ** (2 / 3)
    return constant * buoyancy ** (1 / 3) * height ** (5 / 3)


def plume_uniform():
    """Return the error [%] of the flow of a plume in uniform water after 200 m."""
    flow, buoyancy = 1e-3, 1e-2
    run = _plume(_uniform, 200.0, flow, -buoyancy / flow * _PURE / GRAVITY)[1]
    return np.array([relative(run[4] * flow, _five_thirds(buoyancy, 200.0))])


def plume_line():
    """Return the error [%] of the flow of a row of close ports against a line plume."""
    ports, spacing, flow, height, buoyancy = 401, 5.0, 4.0, 60.0, 0.2
    length = (ports - 1) * spacing
    excess = -buoyancy / flow * _PURE / GRAVITY
    port = {"ports": ports, "spacing": spacing, "diameter": 0.2}
    run = _plume(_uniform, height, flow, excess, **port)[1]
    exact = (2 * ENTRAINMENT_COEFFICIENT) ** (2 / 3) * (buoyancy / length) ** (1 / 3) * height
    return np.array([relative(run[4] * flow / length, exact)])


def plume_step():
    """Return errors [%] of what a plume brings to a step of density, weaker and stronger."""
    flow, buoyancy, errors = 0.01, 2e-2, []
    carried = _five_thirds(buoyancy, 60.0)
    left = buoyancy / carried * _PURE / GRAVITY  # kg/m3 lighter than the lower water, there
    for strength in (0.5, 2.0):
        size = strength * left

        def step(depth, size=size):
            return size * np.clip(depth - 139.5, 0.0, 1.0)

        excess = size - buoyancy / flow * _PURE / GRAVITY
        faces, run = _plume(step, 200.0, flow, excess, diameter=0.2)
        below = 0.5 * (faces[1:] + faces[:-1]) > 140.5
        errors.append(relative(flow + run[0][below].sum(), carried))
        assert run[5] == (1 if strength < 1.0 else 0)  # through, or stopped in the step
    return np.array(errors)


def intake_thickness():
    """Return errors [m] of the half-thickness of a withdrawal layer, (Q / N)^(1/3)."""
    faces = np.linspace(0.0, 400.0, 4001)
    errors = []
    for flow in (0.5, 5.0, 14.0):
        inner = np.full(3999, SQUARE)
        shares = layer_shares(faces, inner, 200.0, flow, SINK_COEFFICIENT)
        reach = faces[:-1][shares > 0]
        half = (flow / math.sqrt(SQUARE)) ** (1 / 3)
        errors += [reach.min() - 200.0 + half, reach.max() - 200.0 - half]
    return np.array(errors)


# The whole plant ----------------------------------------------------------------------------


def balances():
    """Return the largest imbalance of any element of plants of every kind."""
    lime = Lime(dose=40.0, settled=0.8)
    wash = Wash(6e5, SHALLOW.flow, 60.0, 6, 0.8)
    start = date(2027, 1, 1)
    stages = (Stage(3e5, 0.9, "wash"), Stage(1e5, 0.9, "vent"), Stage(0.4e5, 0.9, "return"))
    errors = []
    for train in (stages[:1], stages[:2], stages):
        for limed in (None, lime):
            plant = Plant(
                "p", 345.0, DEEP.flow, train, Return(190.0), start, lime=limed, wash=wash
            )
            errors += operate(plant, DEEP, SHALLOW, SITE).balance.values()
    return np.array(errors)


SEPARATOR = [
    Check(
        "recovery of one gas, plain laws",
        "1 - P / (H c0)",
        "0.1-10 bar, with and without cooling",
        "1",
        1e-9,
        plain_henry,
    ),
    Check(
        "methane released, more than 30 %",
        ENGINE,
        "23-25 degC, 0.1-5 bar, CH4 to 25, CO2 to 120 mmol/kg",
        "%",
        0.5,
        flash_released,
    ),
    Check(
        "methane released, less than 30 %",
        ENGINE,
        "the same, near the onset",
        "1",
        0.003,
        flash_near_onset,
        "half a per cent of the bubble pressure, the engine's own tolerance, is as much",
    ),
    Check("mole fraction of methane", ENGINE, "the same", "mol/mol", 0.005, flash_composition),
    Check(
        "heat given up by the water",
        "enthalpies of the same Henry functions",
        "0.1-3 bar",
        "%",
        0.1,
        flash_heat,
    ),
]
WASH = [
    Check("share absorbed of a trace", "Kremser 1930", "4-10 stages", "1", 1e-6, kremser),
    Check("one stage, efficiency 0.3-1", "Murphree 1925", "dilute", "1", 1e-6, murphree),
    Check("gas that leaves", ENGINE, "23 degC, 2-8 bar, 1-6 stages", "%", 1.0, column_gas),
    Check(
        "mole fractions that leave", ENGINE, "the same", "mol/mol", 0.005, column_composition
    ),
]
LIME = [
    Check(
        "free CO2 left",
        ENGINE,
        "sodium water to 60 meq/kg, 20-25 degC, pH to 11",
        "mol/m3",
        0.5,
        lime_carbon_dioxide,
    ),
    Check("calcite formed", ENGINE, "the same", "mol/m3", 0.8, lime_calcite),
    Check("pH", ENGINE, "the same, below pH 8", "1", 0.06, lime_ph(0.0, 8.0)),
    Check("pH", ENGINE, "the same, above pH 8", "1", 0.2, lime_ph(8.0, 14.0)),
]
POWER = [
    Check(
        "lower heating value",
        "enthalpies of formation",
        "CH4 0-100 % in CO2",
        "%",
        0.1,
        heating_values,
    ),
    Check(
        "work of compression",
        "multifluid equation, CoolProp 8.0.0",
        "CH4 0-100 % in CO2, 0.2-8 bar",
        "%",
        0.5,
        compression_work,
    ),
    Check(
        "temperature after it",
        "multifluid equation, CoolProp 8.0.0",
        "the same",
        "K",
        1.0,
        compression_temperature,
    ),
]
RISER = [
    Check(
        "self-lifted flow over 66.5 L/s",
        "Halbwachs et al. 2004: 63-70 L/s",
        "0.145 m from 203 m, a CO2 lake",
        "%",
        15.0,
        riser_flow,
        "bore recalled, CO2 by Evans et al. 1993 and Kusakabe et al. 2008",
    ),
    Check(
        "gas in the jet, of the volume flow",
        "the same: nine tenths",
        "the same",
        "1",
        0.05,
        riser_gas,
    ),
]
PLUME = [
    Check("top in linear stratification", MTT, "rising and sinking", "%", 2.0, plume_top),
    Check(
        "dilution in linear stratification",
        f"exact integral of {MTT}",
        "rising and sinking",
        "%",
        2.0,
        plume_dilution,
    ),
    Check(
        "flow in uniform water", f"{MTT}, five thirds law", "200 m", "%", 2.0, plume_uniform
    ),
    Check("growth of a jet", "constant momentum, exact", "50 m", "%", 1.0, plume_jet),
    Check(
        "row of close ports",
        "line plume, exact",
        "60 m",
        "%",
        5.0,
        plume_line,
        "the row has round ends",
    ),
    Check(
        "flow brought to a step of density",
        f"{MTT}, five thirds law",
        "through a weaker, to a stronger",
        "%",
        2.0,
        plume_step,
    ),
    Check(
        "half-thickness of a withdrawal",
        "Imberger 1980",
        "0.5-14 m3/s, uniform N",
        "m",
        0.11,
        intake_thickness,
        "layers of 0.1 m",
    ),
]
PLANT = [
    Check(
        "balance of every element",
        "in = out",
        "one to three stages, wash, vent, return, lime",
        "1",
        1e-10,
        balances,
    ),
]
EVERY = {
    "Separator": SEPARATOR,
    "Wash tower": WASH,
    "Lime": LIME,
    "Product and power": POWER,
    "Riser": RISER,
    "Returns and intake": PLUME,
    "Whole plant": PLANT,
}
