"""Every property function against its source of truth: one list for the tests and the page.

Tables are copies of rows that libraries or publications gave; their first lines name them.
Amounts in them are per kg of water; the volume of what is dissolved turns them into mol/m3.
"""

import csv
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from strata import gas, water
from strata.constants import ATMOSPHERE
from strata.gas.carbonate import ln_first_constant, ln_second_constant
from strata.species import SPECIES
from strata.water.salinity import IONS

FOLDER = Path(__file__).parent / "reference"

SEA_SALT = 0.7586512e-3  # contraction of sea salt, where the salt term was fitted
ENGINE = {"k_ij": 0.0, "salting_out": "generic"}  # laws of the engine

MIXES = {
    "NaHCO3": {"Na": 1, "HCO3": 1},
    "Mg(HCO3)2": {"Mg": 0.5, "HCO3": 1},
    "NaMgKCa": {"Na": 0.4, "Mg": 0.225, "K": 0.1, "Ca": 0.025, "HCO3": 1},
    "NaCl": {"Na": 1, "Cl": 1},
}
# contraction of each salt as the engine's own densities give it at 20-25 degC
CONTRACTION = {
    "NaHCO3": 0.7273e-3,
    "Mg(HCO3)2": 0.80955e-3,
    "NaMgKCa": 0.7554e-3,
    "NaCl": 0.7207e-3,
}


def table(name: str) -> dict[str, np.ndarray]:
    """Return the columns of a reference table; numbers where a column holds numbers."""
    lines = [ln for ln in (FOLDER / f"{name}.csv").read_text().splitlines() if ln[:1] != "#"]
    head, *rows = csv.reader(lines)
    columns = {}
    for i, key in enumerate(head):
        cells = [row[i] for row in rows]
        try:
            columns[key] = np.array([float(cell) if cell else np.nan for cell in cells])
        except ValueError:
            columns[key] = np.array(cells)
    return columns


def pressure(t):
    """Return the pressure column [Pa]."""
    return t["p_bar_abs"] * 1e5


def kilograms(temperature, at=ATMOSPHERE):
    """Return kg of water in a litre of pure water."""
    return water.density(temperature, 0.0, at) * 1e-3


def per_volume(t, columns, salt=0.0, at=ATMOSPHERE):
    """Return mol/m3 of gases given in mmol per kg of water, salt being its volume [m3/kg]."""
    amounts = {name: t[column] * 1e-3 for name, column in columns.items()}
    volume = 1.0 / water.density(t["T_degC"], 0.0, at) + salt
    for name, amount in amounts.items():
        volume = volume + amount * SPECIES[name].molar_volume
    return {name: amount / volume for name, amount in amounts.items()}


@dataclass(frozen=True)
class Check:
    """One comparison: what, with what, over what, and how far it may be off."""

    function: str
    source: str
    span: str
    unit: str
    tolerance: float
    errors: Callable[[], np.ndarray]  # in the unit
    note: str = ""


def relative(ours, theirs):
    """Return the relative difference in per cent."""
    return 100.0 * (np.asarray(ours) / theirs - 1.0)


def _water(name, column, function, kind="difference"):
    """Return a comparison of a function of temperature and pressure with a table."""

    def errors():
        t = table(name)
        ours = function(t["T_degC"], pressure(t) if "p_bar_abs" in t else ATMOSPHERE)
        return relative(ours, t[column]) if kind == "relative" else ours - t[column]

    return errors


def _sea(name, column, function, kind="difference", keep=None):
    """Return a comparison of a function of temperature, salinity and pressure with a table."""

    def errors():
        t = table(name)
        chosen = np.ones(t["T_degC"].size, bool) if keep is None else keep(t)
        t = {key: value[chosen] for key, value in t.items()}
        ours = function(t["T_degC"], t["S_g_kg"], pressure(t))
        return relative(ours, t[column]) if kind == "relative" else ours - t[column]

    return errors


def dimer_constant(temperature):
    """Return the engine's constant of (CO2)2 [kg/mol]."""
    kelvin = temperature + 273.15
    return 10.0 ** (8.68 - 0.0103 * kelvin - 2190.0 / kelvin)


def compressibility(temperature, at):
    """Return the isothermal compressibility [1/bar] by a central difference."""
    step = 1e3
    high, low = (water.density(temperature, 0.0, at + d) for d in (step, -step))
    return (high - low) / (2 * step * 1e-5) / water.density(temperature, 0.0, at)


def lake_density():
    """Return errors of the rise over pure water, with the engine's molal volumes [kg/m3]."""
    t = table("b_lake_water_density")
    temperature, at, salt = t["T_degC"], pressure(t), t["salt"]
    plain = (
        (t["salt_meq_kgw"] == 0) & (t["co2_added_mmol_kgw"] == 0) & (t["ch4_mmol_kgw"] == 0)
    )
    plain &= salt == "NaHCO3"
    base = {(temperature[i], at[i]): t["density_kg_m3"][i] for i in np.flatnonzero(plain)}
    of_water = np.array([base[key] for key in zip(temperature, at, strict=True)])
    mass = np.array(
        [sum(n * IONS[ion].mass for ion, n in MIXES[kind].items()) for kind in salt]
    )
    salinity = t["salt_meq_kgw"] * mass / (1.0 + 1e-3 * t["salt_meq_kgw"] * mass)
    # the engine's dimer counts as two of CO2
    monomer = t["co2_aq_mmol_kgw"]
    dimer = dimer_constant(temperature) * 1e-3 * monomer**2
    volume_co2 = np.interp(temperature, [20.0, 25.0], [34.18e-6, 34.42e-6])
    volume_ch4 = SPECIES["CH4"].molar_volume
    errors = np.empty(temperature.size)
    for i in range(temperature.size):
        contraction = CONTRACTION[str(salt[i])]
        salty = water.density(
            temperature[i], salinity[i], at[i], haline_contraction=contraction
        )
        litres = salty * (1.0 - 1e-3 * salinity[i]) * 1e-3
        co2, ch4 = (monomer[i] + 2 * dimer[i]) * litres, t["ch4_mmol_kgw"][i] * litres
        whole = 1.0 + co2 * volume_co2[i] + ch4 * volume_ch4
        ours = water.density(
            temperature[i],
            salinity[i],
            at[i],
            {"CO2": co2 / whole, "CH4": ch4 / whole},
            haline_contraction=contraction,
            co2_molar_volume=volume_co2[i],
        )
        rise = ours - water.density(temperature[i], 0.0, at[i])
        errors[i] = rise - (t["density_kg_m3"][i] - of_water[i])
    return errors


def contraction_of_ions():
    """Return errors of the contraction from ion lists against the engine's densities [%]."""
    errors = []
    for kind, mix in MIXES.items():
        salt = water.salt_from_ions({ion: 0.04 * n for ion, n in mix.items()})
        errors.append(relative(salt.haline_contraction, CONTRACTION[kind]))
    return np.array(errors)


def stability():
    """Return errors of the buoyancy frequency squared, in per cent of the largest."""
    t = table("b_nsquared_cast")
    squared, _ = water.buoyancy_frequency_squared(
        t["z_m"],
        t["T_insitu_degC"],
        t["S_g_kg"],
        ATMOSPHERE + 1e4 * t["p_dbar"],
        haline_contraction=SEA_SALT,
        gravity=water.standard_gravity(-2.0),
    )
    theirs = t["N2_1_s2"][:-1]
    return 100.0 * (squared - theirs) / theirs.max()


def henry(name):
    """Return errors of Henry's constant in the form of the table [%]."""

    def errors():
        t = table("d_henry_iapws_g704")
        keep = t["T_degC"] >= SPECIES[name].henry_from
        temperature = t["T_degC"][keep]
        ours = 1e5 / (gas.henry_constant(name, temperature) * 1e3 * kilograms(temperature))
        return relative(ours, t[f"K_{name}_mol_kgbar"][keep])

    return errors


def weiss():
    """Return errors of the solubility of CO2 in fresh water [%]."""
    t = table("d_co2_K0_weiss1974")
    fresh = t["S_g_kg"] == 0
    temperature = t["T_degC"][fresh]
    ours = ATMOSPHERE / (gas.henry_constant("CO2", temperature) * 1e3 * kilograms(temperature))
    return relative(ours, t["K0_mol_kgsoln_atm"][fresh])


def bunsen():
    """Return errors against Wiesenburg & Guinasso in fresh water of 15 to 30 degC [%]."""
    t = table("d_ch4_bunsen_wg1979")
    keep = (t["S_g_kg"] == 0) & (t["T_degC"] >= 15)
    ours = ATMOSPHERE / (1e3 * gas.henry_constant("CH4", t["T_degC"][keep]))
    return relative(ours, t["K_mol_L_atm"][keep])


def generic_salting_out():
    """Return errors of the generic rule against the engine's activity coefficients [%]."""
    t = table("d_salting_out")
    mass = np.where(t["salt"] == "NaCl", 58.443, 84.007)
    errors = []
    bicarbonate = (t["salt"] == "NaHCO3") & (t["salt_mmol_kgw"] > 0)
    temperature, molal = t["T_degC"][bicarbonate], t["salt_mmol_kgw"][bicarbonate] * 1e-3
    salinity = 1e3 * molal * mass[bicarbonate] / (1e3 + molal * mass[bicarbonate])
    for name in ("CH4", "CO2", "N2"):
        gamma = t[f"gamma_{name}"][bicarbonate]
        ours = gas.salting_out(name, temperature, salinity, {"salting_out": "generic"})
        salty = water.density(temperature, salinity, ATMOSPHERE, haline_contraction=0.7273e-3)
        of_water = salty * (1.0 - 1e-3 * salinity) / (1e3 * kilograms(temperature))
        errors.append(relative(ours * of_water, gamma))
    return np.concatenate(errors)


def pure_gas(name, low, high):
    """Return errors of a pure gas's fugacity coefficient over a range of pressure [bar; %]."""

    def errors():
        t = table(f"c_fugacity_{name}")
        keep = (t["p_bar_abs"] > low) & (t["p_bar_abs"] <= high)
        phi = gas.fugacity_coefficients(t["T_degC"], pressure(t), {name: 1.0})[name]
        return relative(phi, t["phi"])[keep]

    return errors


def mixed_gas(k_ij, low, high):
    """Return errors of both fugacity coefficients of CH4 with CO2 [%]."""

    def errors():
        t = table("c_fugacity_mix_CH4_CO2")
        keep = (t["p_bar_abs"] > low) & (t["p_bar_abs"] <= high)
        y = {"CH4": t["y_CH4"], "CO2": 1.0 - t["y_CH4"]}
        phi = gas.fugacity_coefficients(t["T_degC"], pressure(t), y, {"k_ij": k_ij})
        both = [relative(phi[name], t[f"phi_{name}"])[keep] for name in phi]
        return np.concatenate(both)

    return errors


def high_pressure(name, low, high):
    """Return errors of the pressure over water that holds what it takes up there [%]."""

    def errors():
        t = table("d_high_pressure_solubility")
        keep = (t["gas"] == name) & (t["p_bar_abs"] > low) & (t["p_bar_abs"] <= high)
        t = {key: value[keep] for key, value in t.items()}
        amount = t["m_mol_kgw"]
        if name == "CO2":  # less the dimer, which the model does not have
            twice = 2.0 * dimer_constant(t["T_degC"])
            amount = (np.sqrt(1.0 + 4.0 * twice * amount) - 1.0) / (2.0 * twice)
        t["mmol"] = 1e3 * amount
        bubble = gas.bubble_point(t["T_degC"], 0.0, per_volume(t, {name: "mmol"}))
        return relative(bubble.pressure, pressure(t))

    return errors


_GASES = {"CH4": "ch4_mmol_kgw", "CO2": "co2_aq_mmol_kgw"}


def bubble_errors(name, laws):
    """Return errors of the bubble pressure [%] and of its composition."""
    t = table(name)
    bubble = gas.bubble_point(t["T_degC"], 0.0, per_volume(t, _GASES), laws)
    shares = [bubble.composition[key] - t[f"y_{key}"] for key in ("CH4", "CO2", "H2O")]
    return relative(bubble.pressure, t["p_bubble_bar"] * 1e5), np.concatenate(shares)


def saline_errors():
    """Return the same for bicarbonate water with nitrogen, by the engine's rule."""
    whole = table("d_bubble_point_saline")
    pressures, shares = [], []
    cases = (("Na", "NaHCO3", {}), ("Mg", "Mg(HCO3)2", {"magnesium_share": 1.0}))
    for cation, kind, share in cases:
        chosen = whole["cation"] == cation
        t = {key: value[chosen] for key, value in whole.items()}
        mass = sum(n * IONS[ion].mass for ion, n in MIXES[kind].items())
        salinity = t["alk_meq_kgw"] * mass / (1.0 + 1e-3 * t["alk_meq_kgw"] * mass)
        salty = water.density(
            t["T_degC"], salinity, ATMOSPHERE, haline_contraction=CONTRACTION[kind]
        )
        room = 1.0 / (salty * (1.0 - 1e-3 * salinity)) - 1.0 / (1e3 * kilograms(t["T_degC"]))
        dissolved = per_volume(t, {**_GASES, "N2": "n2_mmol_kgw"}, salt=room)
        bubble = gas.bubble_point(t["T_degC"], salinity, dissolved, {**ENGINE, **share})
        pressures.append(relative(bubble.pressure, t["p_bubble_bar"] * 1e5))
        for key in ("CH4", "CO2", "N2", "H2O"):
            shares.append(bubble.composition[key] - t[f"y_{key}"])
    return np.concatenate(pressures), np.concatenate(shares)


def carbonate(name, rich, what):
    """Return errors of CO2 [%] or pH where DIC exceeds 1.2 of the alkalinity, or elsewhere."""

    def errors():
        t = table(name)
        dic, alk, litre = t["DIC_mmol_kgw"], t["alk_meq_kgw"], kilograms(t["T_degC"])
        mixed = "mixed" in name
        ours = gas.speciate(
            t["T_degC"],
            0.0,
            dic * litre,
            alk * litre,
            magnesium=0.225 * alk * litre * mixed,
            calcium=0.025 * alk * litre * mixed,
        )
        keep = (dic > 1.2 * alk) == rich
        if what == "ph":
            return (ours.ph - t["pH"])[keep]
        theirs = t["co2_aq_mmol_kgw"] + 2 * t["co2_dimer_mmol_kgw"]
        return relative(ours.co2 / litre, theirs)[keep]

    return errors


def carbonate_pressure(column):
    """Return errors at pressure: pH or calcite saturation."""

    def errors():
        t = table("e_carbonate_pressure")
        litre = kilograms(t["T_degC"], pressure(t))
        dic, alk = t["DIC_mmol_kgw"] * litre, t["alk_meq_kgw"] * litre
        ours = gas.speciate(
            t["T_degC"], 0.0, dic, alk, pressure(t), magnesium=0.225 * alk, calcium=0.025 * alk
        )
        if column == "pH":
            return ours.ph - t["pH"]
        return ours.calcite_saturation - t["SI_calcite"]

    return errors


def calcite(kind):
    """Return errors of the saturation of calcite or aragonite."""

    def errors():
        t = table("e_calcite_si")
        litre = kilograms(t["T_degC"])
        ours = gas.speciate(
            t["T_degC"],
            0.0,
            t["DIC_mmol_kgw"] * litre,
            t["alk_meq_kgw"] * litre,
            calcium=t["ca_mmol_kgw"] * litre,
        )
        return getattr(ours, f"{kind}_saturation") - t[f"SI_{kind}"]

    return errors


def dissociation():
    """Return errors of pK1 and pK2 without ions."""
    t = table("e_carbonate_PyCO2SYS_fresh")
    errors = []
    for name, function in (("pK1", ln_first_constant), ("pK2", ln_second_constant)):
        ours = [-function(value, ATMOSPHERE) / np.log(10.0) for value in t["T_degC"]]
        errors.append(np.array(ours) - t[name])
    return np.concatenate(errors)


def lime(what):
    """Return errors of limed water: CO2, calcite, residual calcium [%] or pH."""

    def errors():
        t = table("e_lime_dosing")
        dosed = t["lime_mmol_kgw"] > 0
        t = {key: value[dosed] for key, value in t.items()}
        litre = kilograms(t["T_degC"])
        alk = t["alk0_meq_kgw"] * litre
        mixed = t["water"] == "mixed"
        ours = gas.dose_lime(
            t["T_degC"],
            0.0,
            t["dic0_mmol_kgw"] * litre,
            alk,
            t["lime_mmol_kgw"] * litre,
            0.025 * alk * mixed,
            magnesium=0.225 * alk * mixed,
        )
        if what == "co2":
            return ours.co2 / litre - t["co2_aq_mmol_kgw"]
        if what == "calcite":
            return ours.calcite / litre - t["calcite_mmol_kgw"]
        if what == "calcium":
            return relative(ours.calcium / litre, t["ca_mmol_kgw"])
        low = t["pH"] < 8
        return (ours.ph - t["pH"])[low if what == "ph below 8" else ~low]

    return errors


def flash_errors():
    """Return the share of CH4 released, ours and the engine's, and errors of composition."""
    t = table("f_separator_flash")
    t = {key: value[t["ch4_in_mmol_kgw"] > 0] for key, value in t.items()}
    feed = per_volume(t, {"CH4": "ch4_in_mmol_kgw", "CO2": "co2_aq_in_mmol_kgw"})
    volume = 1e-3 * t["ch4_in_mmol_kgw"] / feed["CH4"]
    ours = gas.flash(
        t["T_degC"],
        0.0,
        feed,
        pressure(t),
        alkalinity=1e-3 * t["alk_meq_kgw"] / volume,
        laws=ENGINE,
    )
    share = ours.released["CH4"] / feed["CH4"]
    gassy = t["gas_mmol_kgw"] > 0
    y = [(ours.composition[key] - t[f"y_{key}"])[gassy] for key in ("CH4", "CO2", "H2O")]
    return share, t["frac_CH4_to_gas"], np.concatenate(y)


def flash_share(rich):
    """Return errors of the CH4 released [%] where more, or not more, than 30 % is."""

    def errors():
        ours, theirs, _ = flash_errors()
        keep = (theirs > 0.3) if rich else (theirs > 0) & (theirs <= 0.3)
        return relative(ours[keep], theirs[keep])

    return errors


def diffusivities():
    """Return errors of the diffusivities of gases against the engine [%]."""
    t = table("g_diffusivity_phreeqc")
    each = [
        relative(gas.gas_diffusivity(name, t["T_degC"]), t[f"D_{name}_m2_s"])
        for name in ("CO2", "CH4", "N2", "O2", "H2S")
    ]
    return np.concatenate(each)


def jaehne():
    """Return errors of the diffusivities of CO2 and CH4 against their own law [%]."""
    t = table("g_diffusivity_jahne1987")
    each = [
        relative(gas.gas_diffusivity(name, t["T_degC"]), t[f"D_{name}_m2_s"])
        for name in ("CO2", "CH4")
    ]
    return np.concatenate(each)


def air(name, file, column, own):
    """Return errors of air-saturated water, by our constants or the sea-water fit [%]."""

    def errors():
        t = table(file)
        if not own:
            ours = gas.sea_water_equilibrium(name, t["T_degC"], t["S_g_kg"])
            return relative(ours, 1e-6 * t[column])
        keep = (t["S_g_kg"] == 0) & (t["T_degC"] >= 15)
        temperature = t["T_degC"][keep]
        ours = gas.air_equilibrium(name, temperature, 0.0, ATMOSPHERE)
        return relative(ours / (1e3 * kilograms(temperature)), 1e-6 * t[column][keep])

    return errors


_PURE = "IAPWS-95, CoolProp 8.0.0"
_TEOS = "TEOS-10, gsw 3.6.23"
_ENGINE = "IPhreeqc 3.8.6"
_MULTI = "multifluid equation, CoolProp 8.0.0"
_COLD = "0-40 degC, 1-60 bar"
_SEA = "5-35 degC, 0-10 g/kg, 1-60 bar"

WATER = [
    Check("density, pure water", _PURE, _COLD, "kg/m3", 0.005,
          _water("a_water_density", "density_kg_m3", lambda t, p: water.density(t, 0, p))),
    Check("thermal_expansion, pure water", _PURE, _COLD, "1/K", 2e-6,
          _water("a_water_thermal_expansion", "alpha_1_K",
                 lambda t, p: water.thermal_expansion(t, 0, p))),
    Check("compressibility of density", _PURE, _COLD, "%", 0.5,
          _water("a_water_isothermal_compressibility", "kappaT_1_bar", compressibility,
                 "relative")),
    Check("heat_capacity", _PURE, _COLD, "%", 0.1,
          _water("a_water_cp", "cp_J_kgK", lambda t, p: water.heat_capacity(t, 0, p),
                 "relative")),
    Check("dynamic_viscosity", "IAPWS R12-08, CoolProp 8.0.0", _COLD, "%", 1.0,
          _water("a_water_viscosity", "mu_Pa_s", lambda t, p: water.dynamic_viscosity(t),
                 "relative")),
    Check("thermal_conductivity", "IAPWS R15-11, CoolProp 8.0.0", _COLD, "%", 1.0,
          _water("a_water_thermal_conductivity", "k_W_mK",
                 lambda t, p: water.thermal_conductivity(t), "relative")),
    Check("vapour_pressure", _PURE, "0-40 degC", "%", 0.1,
          _water("a_water_vapour_pressure", "p_sat_bar",
                 lambda t, p: water.vapour_pressure(t) * 1e-5, "relative")),
    Check("density, sea salt", _TEOS, _SEA, "kg/m3", 0.01,
          _sea("b_seawater_density", "density_kg_m3",
               lambda t, s, p: water.density(t, s, p, haline_contraction=SEA_SALT))),
    Check("thermal_expansion, sea salt", _TEOS, "5-35 degC, 0.5-10 g/kg", "1/K", 2e-6,
          _sea("b_seawater_in_situ_derivatives", "alpha_1_K",
               lambda t, s, p: water.thermal_expansion(t, s, p, SEA_SALT))),
    Check("haline_contraction_at, sea salt", _TEOS, "5-35 degC, 0.5-10 g/kg", "%", 0.5,
          _sea("b_seawater_in_situ_derivatives", "beta_kg_g",
               lambda t, s, p: water.haline_contraction_at(t, s, p, SEA_SALT), "relative")),
    Check("adiabatic_lapse_rate", _TEOS, "10-35 degC, 0-10 g/kg, 1-60 bar", "%", 1.0,
          _sea("b_seawater_adiabatic_lapse_rate", "gamma_K_bar",
               lambda t, s, p: 1e5 * water.adiabatic_lapse_rate(t, s, p), "relative",
               lambda t: t["T_degC"] >= 10)),
    Check("adiabatic_lapse_rate, cold", _TEOS, "5 degC, 0-10 g/kg, 1-60 bar", "K/bar", 6e-6,
          _sea("b_seawater_adiabatic_lapse_rate", "gamma_K_bar",
               lambda t, s, p: 1e5 * water.adiabatic_lapse_rate(t, s, p),
               keep=lambda t: t["T_degC"] < 10),
          "near the temperature of largest density it passes through nil"),
    Check("buoyancy_frequency_squared", _TEOS, "one stepped cast", "% of largest", 2.0,
          stability),
    Check("density, lake water with CO2 and CH4", _ENGINE,
          "four salts, 0-70 meq/kg, CO2 to 120, CH4 to 15 mmol/kg, 20-25 degC, 1-30 bar",
          "kg/m3", 0.02, lake_density,
          "engine's molal volume of CO2; contraction of each salt as the engine has it"),
    Check("salt_from_ions, contraction", _ENGINE, "four salts, 40 meq/kg", "%", 1.0,
          contraction_of_ions),
    Check("thermal_diffusivity", "IAPWS, CoolProp 8.0.0", "5-30 degC", "%", 1.0,
          _water("g_diffusivity_heat_salt", "D_heat_m2_s",
                 lambda t, p: water.thermal_diffusivity(t), "relative")),
    Check("salt_diffusion", "Nernst-Hartley, " + _ENGINE, "5-30 degC, NaHCO3", "%", 10.0,
          _water("g_diffusivity_heat_salt", "D_NaHCO3_m2_s",
                 lambda t, p: water.salt_diffusion(t), "relative")),
]  # fmt: skip

GAS = [
    *(Check(f"henry_constant, {name}", "IAPWS G7-04, iapws 1.5.5", f"{low}-40 degC", "%", 1e-4,
            henry(name))
      for name, low in (("CH4", "3"), ("N2", "5"), ("O2", "3"), ("H2S", "3"))),
    Check("henry_constant, CO2", "Weiss 1974, PyCO2SYS 1.8.3.4", "5-30 degC", "%", 1e-4,
          weiss),
    Check("henry_constant, CH4", "Wiesenburg & Guinasso 1979", "15-30 degC", "%", 1.5, bunsen,
          "2.9 % apart at 5 degC: the sources disagree"),
    Check("salting_out, generic rule", _ENGINE, "NaHCO3 to 0.15 mol/kg", "%", 0.2,
          generic_salting_out),
    *(Check(f"fugacity_coefficients, {name}", _MULTI, span, "%", limit, pure_gas(name, *ends))
      for name in ("CH4", "CO2", "N2")
      for span, limit, ends in (("10-40 degC, to 20 bar", 1.1, (0, 20)),
                                ("10-40 degC, 20-50 bar", 2.4, (20, 50)))),
    Check("fugacity_coefficients, CH4 with CO2", _MULTI, "10-40 degC, to 20 bar", "%", 1.3,
          mixed_gas(0.0919, 0, 20)),
    Check("fugacity_coefficients, CH4 with CO2", _MULTI, "10-40 degC, 20-50 bar", "%", 3.6,
          mixed_gas(0.0919, 20, 50), "3.5 with the best k_ij between 0.0919 and 0.10"),
    Check("fugacity_coefficients, k_ij 0", _MULTI, "10-40 degC, to 20 bar", "%", 3.0,
          mixed_gas(0.0, 0, 20)),
    Check("bubble_point, CH4 under pressure", _ENGINE, "15-30 degC, 1-50 bar", "%", 2.0,
          high_pressure("CH4", 0, 50)),
    Check("bubble_point, CO2 under pressure", _ENGINE, "15-30 degC, 1-20 bar", "%", 2.0,
          high_pressure("CO2", 0, 20), "without the engine's dimer"),
    Check("bubble_point, CO2 under pressure", _ENGINE, "15-30 degC, 20-50 bar", "%", 4.0,
          high_pressure("CO2", 20, 50), "without the engine's dimer"),
    Check("bubble_point, pressure, k_ij 0", _ENGINE, "20-28 degC, 0.3-25 bar, pure water", "%",
          0.4, lambda: bubble_errors("d_bubble_point", {"k_ij": 0.0})[0]),
    Check("bubble_point, composition, k_ij 0", _ENGINE, "the same", "mol/mol", 0.003,
          lambda: bubble_errors("d_bubble_point", {"k_ij": 0.0})[1]),
    Check("bubble_point, pressure", _MULTI, "20-28 degC, 0.3-25 bar, pure water", "%", 1.3,
          lambda: bubble_errors("d_bubble_point_multifluid", None)[0]),
    Check("bubble_point, composition", _MULTI, "the same", "mol/mol", 0.003,
          lambda: bubble_errors("d_bubble_point_multifluid", None)[1]),
    Check("bubble_point, pressure, generic rule", _ENGINE,
          "Na and Mg bicarbonate to 70 meq/kg, with N2", "%", 1.5, lambda: saline_errors()[0]),
    Check("bubble_point, composition, generic rule", _ENGINE, "the same", "mol/mol", 0.004,
          lambda: saline_errors()[1]),
    Check("carbonate constants, no ions", "PyCO2SYS 1.8.3.4", "15-30 degC", "pK", 0.0015,
          dissociation),
    *(Check(f"speciate, CO2, {label}", _ENGINE, "15-30 degC, DIC > 1.2 alkalinity", "%", 0.5,
            carbonate(name, True, "co2"), "the engine's dimer counts as two of CO2")
      for label, name in (("Na water", "e_carbonate_NaHCO3"),
                          ("Na-Mg-K-Ca water", "e_carbonate_mixed_cations"))),
    *(Check(f"speciate, pH, {label}", _ENGINE, span, "pH", 0.05, carbonate(name, rich, "ph"))
      for label, name in (("Na water", "e_carbonate_NaHCO3"),
                          ("Na-Mg-K-Ca water", "e_carbonate_mixed_cations"))
      for span, rich in (("DIC > 1.2 alkalinity", True), ("DIC <= 1.2 alkalinity", False))),
    Check("speciate, pH under pressure", _ENGINE, "20-25 degC, 1-50 bar", "pH", 0.05,
          carbonate_pressure("pH")),
    Check("speciate, calcite under pressure", _ENGINE, "20-25 degC, 1-50 bar", "log10", 0.1,
          carbonate_pressure("SI")),
    Check("speciate, calcite", _ENGINE, "Na-Ca water, 15-30 degC", "log10", 0.1,
          calcite("calcite")),
    Check("speciate, aragonite", _ENGINE, "Na-Ca water, 15-30 degC", "log10", 0.1,
          calcite("aragonite")),
    Check("dose_lime, CO2", _ENGINE, "Na and mixed water, to pH 12.7", "mmol/kg", 0.5,
          lime("co2"), "mostly the engine's dimer"),
    Check("dose_lime, calcite", _ENGINE, "the same", "mmol/kg", 0.8, lime("calcite")),
    Check("dose_lime, residual calcium", _ENGINE, "the same", "%", 25.0, lime("calcium")),
    Check("dose_lime, pH", _ENGINE, "below pH 8", "pH", 0.06, lime("ph below 8")),
    Check("dose_lime, pH", _ENGINE, "pH 8 and above", "pH", 0.2, lime("ph above 8")),
    Check("flash, CH4 released", _ENGINE, "23-26 degC, 0.1-6 bar, above 30 %", "%", 0.3,
          flash_share(True)),
    Check("flash, CH4 released", _ENGINE, "the same, up to 30 %", "%", 4.0, flash_share(False),
          "near onset an error in Henry's constant counts many times over"),
    Check("flash, composition", _ENGINE, "the same", "mol/mol", 0.005,
          lambda: flash_errors()[2]),
    Check("gas_diffusivity, CO2 and CH4", "Jaehne et al. 1987", "5-30 degC", "%", 1e-4,
          jaehne),
    Check("gas_diffusivity, CO2, CH4, N2, O2, H2S", _ENGINE, "5-30 degC", "%", 5.0,
          diffusivities),
    Check("air_equilibrium, N2", "Hamme & Emerson 2004", "15-30 degC, fresh", "%", 1.5,
          air("N2", "d_n2_air_equilibrium_he2004", "N2_umol_kg", True)),
    Check("air_equilibrium, O2", "Garcia & Gordon 1992, gsw 3.6.23", "15-30 degC, fresh", "%",
          1.5, air("O2", "d_o2_air_equilibrium_gg1992", "O2_umol_kg", True)),
    Check("sea_water_equilibrium, N2", "Hamme & Emerson 2004", "5-30 degC, 0-10 g/kg", "%",
          1e-4, air("N2", "d_n2_air_equilibrium_he2004", "N2_umol_kg", False)),
    Check("sea_water_equilibrium, O2", "Garcia & Gordon 1992, gsw 3.6.23",
          "5-30 degC, 0-10 g/kg", "%", 1e-4,
          air("O2", "d_o2_air_equilibrium_gg1992", "O2_umol_kg", False)),
]  # fmt: skip
