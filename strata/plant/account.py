"""What a plant amounts to: every stream as a row, and the product, energy and air in a year.

Rows are mappings of names with units to numbers, so that text, JSON and the dossier show the
same thing.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass

from scipy.optimize import brentq

from strata.constants import CALCITE_MASS, GAS_CONSTANT, LIME_MASS, WATER_MASS, ZERO_CELSIUS
from strata.gas import compressibility_factor, fugacity_coefficients, speciate
from strata.lake.site import Site
from strata.plant import power
from strata.plant.chemistry import density_of, free_gases
from strata.plant.operate import Operation, lift_of, pressure_at
from strata.plant.plan import Plant
from strata.plant.riser import RiserFlow
from strata.plant.streams import NORMAL_PRESSURE, GasStream, WaterStream
from strata.species import LAKE_GASES, SPECIES, VAPOUR
from strata.water.transport import vapour_pressure_at

Row = dict[str, float | str]

_WATER_VOLUME = 18.07e-6  # m3/mol, liquid water at 25 degC
_WATER_GASES = ("CH4", "CO2", "N2", "O2", "H2S")


@dataclass(frozen=True)
class Account:
    """A plant, what it makes of its feed, and the site whose laws that follows."""

    plant: Plant
    operation: Operation
    site: Site

    def streams(self) -> list[Row]:
        """Return one row per stream; see :func:`stream_rows`."""
        return stream_rows(self.plant, self.operation, self.site)

    def figures(self) -> dict[str, float]:
        """Return what the plant makes, uses and lets go; see :func:`figures`."""
        return figures(self.operation)

    def riser(self) -> RiserFlow | None:
        """Return how the riser brings up the feed; None where the plant has none."""
        if self.plant.riser is None:
            return None
        streams = self.operation.streams
        water = streams.get("limed feed", streams["feed"])
        assert isinstance(water, WaterStream)
        return lift_of(self.plant, water, self.site)

    def riser_figures(self) -> dict[str, float]:
        """Return how the riser works; see :func:`riser_figures`.  Nothing without one."""
        flow = self.riser()
        return {} if flow is None else riser_figures(flow, self.plant)


def stream_rows(plant: Plant, operation: Operation, site: Site) -> list[Row]:
    """Return one row per stream of a plant, in the order of the process.

    Water: m3/s, degC, pressure (of the lake where it is drawn or put back, of the unit it
    enters elsewhere), pH and density at the pressure of the air, solids, mol/m3 of the free
    gases, DIC, alkalinity, calcium.  Gas: mol/s, normal m3/h, degC, bar, density at these,
    mole fractions with vapour.
    """
    pressures = _water_pressures(plant, site)
    return [
        _water_row(name, stream, pressures[name], site)
        if isinstance(stream, WaterStream)
        else _gas_row(name, stream)
        for name, stream in operation.streams.items()
    ]


def _water_pressures(plant: Plant, site: Site) -> dict[str, float]:
    """Return the pressure of every stream of water [Pa], by its name."""
    pressures = {
        "feed": pressure_at(plant.intake_depth, site),
        "limed feed": plant.stages[0].pressure,
        "return water": pressure_at(plant.return_water.depth, site),
    }
    if plant.wash is not None:
        outlet = plant.return_wash or plant.return_water
        pressures["wash water"] = pressure_at(plant.wash.water_depth, site)
        pressures["used wash water"] = pressure_at(outlet.depth, site)
    return pressures


def _water_row(name: str, water: WaterStream, pressure: float, site: Site) -> Row:
    """Return one water stream as a row."""
    carbonate = speciate(
        water.temperature,
        water.salinity,
        water.of("DIC"),
        water.of("alkalinity"),
        site.air_pressure,
    )
    free = free_gases(water, site).gases
    row: Row = {
        "stream": name,
        "kind": "water",
        "flow_m3_s": water.flow,
        "temperature_degC": water.temperature,
        "pressure_bar": pressure / 1e5,
        "pH": float(carbonate.ph),
        "density_kg_m3": density_of(water, site, site.air_pressure),
        "salinity_g_kg": water.salinity,
        "solids_kg_m3": water.solids,
    }
    row |= {f"{gas}_mol_m3": free[gas] for gas in _WATER_GASES}
    row |= {f"{part}_mol_m3": water.of(part) for part in ("DIC", "alkalinity", "calcium")}
    return row


def _gas_row(name: str, gas: GasStream) -> Row:
    """Return one gas stream as a row."""
    total = gas.total
    parts = (*LAKE_GASES, VAPOUR)
    shares = {part: gas.of(part) / total if total > 0.0 else 0.0 for part in parts}
    row: Row = {
        "stream": name,
        "kind": "gas",
        "flow_mol_s": total,
        "normal_flow_m3_h": 3600.0 * gas.normal_flow,
        "temperature_degC": gas.temperature,
        "pressure_bar": gas.pressure / 1e5,
        "density_kg_m3": _gas_density(gas, shares) if total > 0.0 else math.nan,
    }
    return row | {f"{part}_share": share for part, share in shares.items()}


def _gas_density(gas: GasStream, shares: Mapping[str, float]) -> float:
    """Return the density of a gas [kg m-3] by Peng-Robinson."""
    mass = sum(
        share * (WATER_MASS if part == VAPOUR else SPECIES[part].molar_mass)
        for part, share in shares.items()
    )
    factor = float(compressibility_factor(gas.temperature, gas.pressure, shares))
    return gas.pressure * mass / (factor * GAS_CONSTANT * (gas.temperature + ZERO_CELSIUS))


def dew_point(gas: GasStream) -> float:
    """Return the temperature [degC] at which the vapour of a gas condenses; nan without it.

    At its pressure over pure water, supercooled below 0 degC; the gas by Peng-Robinson.
    """
    if gas.of(VAPOUR) <= 0.0:
        return math.nan
    shares = {name: flow / gas.total for name, flow in gas.flows.items()}
    real = fugacity_coefficients(gas.temperature, gas.pressure, shares)[VAPOUR]
    wanted = gas.pressure * shares[VAPOUR] * float(real)
    kelvin = gas.temperature + ZERO_CELSIUS
    wanted /= math.exp(_WATER_VOLUME * gas.pressure / (GAS_CONSTANT * kelvin))
    return float(brentq(lambda t: vapour_pressure_at(t) - wanted, -60.0, 200.0, xtol=1e-6))


def figures(operation: Operation) -> dict[str, float]:
    """Return what a plant makes, uses and lets go at this load, by names with units.

    Yearly sums are this load through a year of 365.25 days.  Emission is product burnt to
    CO2, vent as it is and the CO2 of the lime's kiln; methane counts 27.9 times its mass
    (IPCC AR6, 100 years, table 7.SM.7).
    """
    product, used = operation.product, operation.power
    year = power.SECONDS_PER_YEAR
    carbon = SPECIES["CO2"].molar_mass
    burnt = (product.of("CH4") + product.of("CO2")) * carbon
    vented = power.carbon_dioxide_equivalent(operation.vented)
    kiln = operation.kiln_carbon_dioxide * carbon
    methane = product.of("CH4")
    taken = sum(w for name, w in used.items() if name not in ("electric", "net"))
    return {
        "recovery": operation.recovery,
        "purity": product.share("CH4"),
        "normal_flow_m3_h": 3600.0 * product.normal_flow,
        "heating_value_MJ_m3": power.heating_value(product) / 1e6,
        "wobbe_index_MJ_m3": power.wobbe_index(product) / 1e6,
        "dew_point_degC": dew_point(product),
        "thermal_power_MW": power.thermal_power(product) / 1e6,
        "electric_power_MW": used["electric"] / 1e6,
        "used_power_MW": taken / 1e6,
        "net_power_MW": used["net"] / 1e6,
        "specific_power_kWh_m3": _per_normal_volume(taken, methane),
        "net_energy_GWh_a": used["net"] * year / 3.6e12,
        "CH4_vented_t_a": operation.vented.of("CH4") * SPECIES["CH4"].molar_mass * year / 1e3,
        "CO2_vented_t_a": operation.vented.of("CO2") * carbon * year / 1e3,
        "CO2_product_burnt_t_a": burnt * year / 1e3,
        "CO2_kiln_t_a": kiln * year / 1e3,
        "CO2_equivalent_t_a": (burnt + vented + kiln) * year / 1e3,
        "lime_t_a": operation.lime * LIME_MASS * year / 1e3,
        "calcite_t_a": operation.solids * CALCITE_MASS * year / 1e3,
    }


def riser_figures(flow: RiserFlow, plant: Plant) -> dict[str, float]:
    """Return how a riser works, by names with units.

    A pressure of the pump below nil is throttled away.  Start-up: what a pump must add to a
    still pipe until gas comes out and helps.  The first bubble lies at nil where no gas comes
    out on the way.
    """
    watts = power.pump_power(flow.flow, flow.pump_pressure, plant.pump_efficiency)
    return {
        "flow_m3_s": flow.flow,
        "self_lifted_m3_s": flow.self_lifted,
        "pump_pressure_bar": flow.pump_pressure / 1e5,
        "pump_power_MW": watts / 1e6,
        "startup_pressure_bar": flow.startup_pressure / 1e5,
        "bubble_depth_m": flow.bubble_depth,
        "bubble_pressure_bar": flow.bubble_pressure / 1e5,
        "foot_velocity_m_s": float(flow.water_velocity[0]),
        "top_pressure_bar": flow.outlet_pressure / 1e5,
        "top_void": flow.outlet_void,
        "top_gas_share_of_flow": flow.outlet_gas_share,
        "top_water_velocity_m_s": float(flow.water_velocity[-1]),
        "top_gas_velocity_m_s": float(flow.gas_velocity[-1]),
    }


def _per_normal_volume(watts: float, methane: float) -> float:
    """Return kWh per normal m3 of methane; nan without methane."""
    if methane <= 0.0:
        return math.nan
    volume = GasStream({"CH4": methane}, 0.0, NORMAL_PRESSURE).normal_flow
    return watts / volume / 3.6e6
