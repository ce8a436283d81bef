"""Every variable of a result: its dimensions, unit, name and what to know before using it.

One row per variable; ``docs/reference/results.md`` is this table for readers.
"""

from dataclasses import dataclass

_SEA = "the name is borrowed from sea water; the medium is lake water"

PROFILE = ("time", "depth")
FACE = ("time", "face")
SERIES = ("time",)


@dataclass(frozen=True)
class Variable:
    """What a reader of a result is told about one variable."""

    dims: tuple[str, ...]
    unit: str
    long_name: str
    standard_name: str = ""
    comment: str = ""

    @property
    def attributes(self) -> dict[str, str]:
        """Return the CF attributes."""
        comment = self.comment
        if "sea_water" in self.standard_name:
            comment = f"{comment}; {_SEA}" if comment else _SEA
        pairs = {
            "long_name": self.long_name,
            "units": self.unit,
            "standard_name": self.standard_name,
            "comment": comment,
            "units_metadata": "temperature: on_scale" if self.unit == "degree_C" else "",
        }
        return {key: value for key, value in pairs.items() if value}


def _concentration(name: str, standard: str = "", comment: str = "") -> Variable:
    standard = standard and f"mole_concentration_of_{standard}_in_sea_water"
    return Variable(PROFILE, "mol m-3", f"concentration of {name}", standard, comment)


_BELOW = (
    "extreme over the layers wholly below the surface layer, the one mixed within the year: "
    "water mixed in the windy season stays saturated with air through the calm one"
)

COORDINATES = {
    "time": Variable(("time",), "", "time", "time"),
    "depth": Variable(("depth",), "m", "depth of the middle of the layer", "depth"),
    "face": Variable(("face",), "m", "depth of the face between layers", "depth"),
    "zone": Variable(("zone",), "", "zone of the lake, bounded as at the start"),
    "tracer": Variable(("tracer",), "", "tracer of the ledger"),
    "ledger_term": Variable(("ledger_term",), "", "way into or out of the lake"),
    "plant": Variable(("plant",), "", "plant"),
}

VARIABLES = {
    # profiles
    "temperature": Variable(
        PROFILE, "degree_C", "temperature in situ", "sea_water_temperature"
    ),
    "potential_temperature": Variable(
        PROFILE,
        "degree_C",
        "potential temperature",
        "sea_water_potential_temperature",
        "reference pressure 1 atm",
    ),
    "salinity": Variable(
        PROFILE,
        "g kg-1",
        "salinity",
        "",
        "mass of dissolved ions, bicarbonate included, dissolved gas not",
    ),
    "density": Variable(
        PROFILE, "kg m-3", "density in situ, dissolved gas included", "sea_water_density"
    ),
    "methane": _concentration("dissolved methane"),
    "carbon_dioxide": _concentration(
        "free carbon dioxide", "", "CO2(aq), from dissolved inorganic carbon and alkalinity"
    ),
    "dissolved_inorganic_carbon": _concentration(
        "dissolved inorganic carbon", "dissolved_inorganic_carbon"
    ),
    "alkalinity": Variable(
        PROFILE,
        "mol m-3",
        "alkalinity in mole equivalents",
        "sea_water_alkalinity_expressed_as_mole_equivalent",
    ),
    "calcium": _concentration("dissolved calcium"),
    "nitrogen": _concentration("dissolved nitrogen gas", "dissolved_molecular_nitrogen"),
    "oxygen": _concentration("dissolved oxygen", "dissolved_molecular_oxygen"),
    "hydrogen_sulfide": _concentration("hydrogen sulfide", "hydrogen_sulfide"),
    "phosphate": _concentration("phosphate", "phosphate"),
    "ph": Variable(PROFILE, "1", "pH"),
    "gas_pressure": Variable(
        PROFILE,
        "Pa",
        "total gas pressure",
        "",
        "pressure at which the first bubble would form, from all dissolved gases and water "
        "vapour",
    ),
    "methane_partial_pressure": Variable(
        PROFILE,
        "Pa",
        "partial pressure of methane in the first bubble",
        "partial_pressure_of_methane_in_sea_water",
    ),
    "carbon_dioxide_partial_pressure": Variable(
        PROFILE,
        "Pa",
        "partial pressure of carbon dioxide in the first bubble",
        "partial_pressure_of_carbon_dioxide_in_sea_water",
    ),
    "saturation": Variable(
        PROFILE, "1", "total gas pressure over absolute pressure at the same depth"
    ),
    "pressure_margin": Variable(PROFILE, "Pa", "absolute pressure less total gas pressure"),
    "lift_to_bubbling": Variable(
        PROFILE,
        "m",
        "rise after which water would form its first bubble",
        "",
        "missing where water could reach the surface without bubbling",
    ),
    # faces
    "buoyancy_frequency_squared": Variable(
        FACE,
        "s-2",
        "buoyancy frequency squared",
        "square_of_brunt_vaisala_frequency_in_sea_water",
        "missing at the surface and the floor",
    ),
    "diffusivity": Variable(FACE, "m2 s-1", "vertical diffusivity of solutes"),
    "upward_flow": Variable(FACE, "m3 s-1", "water flowing upward through the face"),
    # geometry
    "pressure": Variable(
        ("depth",), "Pa", "absolute pressure", "sea_water_pressure", "air pressure included"
    ),
    "volume": Variable(("depth",), "m3", "volume of the layer"),
    "area": Variable(("face",), "m2", "area of the lake at the face"),
    # gas in place
    "methane_in_place": Variable(SERIES, "mol", "methane in the whole lake"),
    "carbon_dioxide_in_place": Variable(
        SERIES, "mol", "free carbon dioxide in the whole lake"
    ),
    "methane_in_zone": Variable(("zone", "time"), "mol", "methane in a zone"),
    "carbon_dioxide_in_zone": Variable(
        ("zone", "time"), "mol", "free carbon dioxide in a zone"
    ),
    "zone_depth": Variable(("zone",), "m", "depth of the top of the zone"),
    # how close to bubbling
    "largest_saturation": Variable(SERIES, "1", "largest saturation", "", _BELOW),
    "largest_saturation_depth": Variable(SERIES, "m", "depth of the largest saturation"),
    "least_pressure_margin": Variable(SERIES, "Pa", "least pressure margin", "", _BELOW),
    "least_pressure_margin_depth": Variable(SERIES, "m", "depth of the least pressure margin"),
    "least_lift": Variable(SERIES, "m", "least lift to bubbling", "", _BELOW),
    "least_lift_depth": Variable(SERIES, "m", "depth of the least lift to bubbling"),
    "surface_saturation": Variable(
        SERIES,
        "1",
        "largest saturation with CH4, CO2 and H2S alone in the surface layer",
        "",
        "partial pressures of these gases over absolute pressure; air-saturated water is at "
        "1 by "
        "nature and says nothing",
    ),
    # the main gradient
    "gradient_depth": Variable(
        SERIES,
        "m",
        "depth of the main gradient",
        "",
        "where half of its density step is passed",
    ),
    "gradient_strength": Variable(SERIES, "kg m-3", "density step across the main gradient"),
    "gradient_thickness": Variable(
        SERIES,
        "m",
        "thickness of the main gradient",
        "",
        "where buoyancy frequency squared exceeds a tenth of its peak",
    ),
    "gradient_peak": Variable(
        SERIES, "s-2", "largest buoyancy frequency squared of the main gradient"
    ),
    "schmidt_stability": Variable(
        SERIES,
        "J m-2",
        "Schmidt stability",
        "",
        "of potential density, per area of the surface",
    ),
    # the surface layer
    "mixed_layer_depth": Variable(SERIES, "m", "depth of the mixed layer"),
    "surface_layer_depth": Variable(
        SERIES, "m", "depth of the layer mixed within the year that ends at this time"
    ),
    "phosphate_flux_up": Variable(
        SERIES, "mol s-1", "phosphate carried up into the surface layer"
    ),
    "methane_flux_up": Variable(
        SERIES, "mol s-1", "methane carried up into the surface layer"
    ),
    "oxic_depth": Variable(SERIES, "m", "depth at which oxygen falls below 2 mg/L"),
    # where plant water and methane went
    "return_water_above_gradient": Variable(
        SERIES, "m3", "return water of plants above the main gradient"
    ),
    "return_water_in_surface_layer": Variable(
        SERIES, "m3", "return water of plants in the surface layer"
    ),
    "methane_recovered": Variable(SERIES, "mol", "methane delivered since the start"),
    "methane_vented": Variable(SERIES, "mol", "methane vented by plants since the start"),
    "methane_lost_to_upper_lake": Variable(
        SERIES,
        "mol",
        "methane that left the water below the main gradient upward since the start",
        "",
        "change of what is above the gradient, plus what went to the air, the outlet and "
        "oxidation, less what rivers brought; the lake left alone loses some too",
    ),
    # how sure
    "gas_pressure_error": Variable(
        ("depth",),
        "1",
        "relative standard error of the total gas pressure",
        "",
        "from the errors stated with the casts of methane and carbon at the start",
    ),
    "methane_in_place_error": Variable(
        (), "1", "relative standard error of the methane in place at the start"
    ),
    "gradient_strength_error": Variable(
        (),
        "1",
        "relative standard error of the density step of the main gradient at the start",
    ),
    # books
    "ledger": Variable(
        ("ledger_term", "tracer", "time"),
        "1",
        "amount since the start, into the lake positive",
        "",
        "concentration of the tracer times m3: mol, degC m3, g/kg m3; the terms add up to "
        "what "
        "is there",
    ),
    "ledger_error": Variable(
        ("tracer", "time"),
        "1",
        "what the books do not explain, relative to start and throughput",
    ),
}

_PLANT = {
    "flow": ("m3 s-1", "water taken in"),
    "feed_CH4": ("mol m-3", "methane in the feed"),
    "recovery": ("1", "share of the feed's methane that is delivered"),
    "product_CH4": ("mol s-1", "methane delivered"),
    "product_CO2": ("mol s-1", "carbon dioxide delivered with it"),
    "product_purity": ("1", "mole fraction of methane in the product"),
    "heating_value": (
        "J m-3",
        "lower heating value of the product per m3 at 0 degC and 1 atm",
    ),
    "vented_CH4": ("mol s-1", "methane vented"),
    "vented_CO2": ("mol s-1", "carbon dioxide vented"),
    "returned_CH4": ("mol s-1", "methane that goes back with the return water"),
    "lime": ("mol s-1", "lime used"),
    "solids": ("mol s-1", "calcite taken out as solids"),
    "electric_power": ("W", "electric power of the product"),
    "net_power": ("W", "electric power less own use"),
    "pump_power": ("W", "pumping power"),
    "compression_power": ("W", "compression power"),
    "vacuum_power": ("W", "vacuum power"),
    "return_density_excess": ("kg m-3", "return water heavier than the lake at its outlet"),
    "trap_depth": ("m", "depth at which the return water comes to rest"),
    "dilution": ("1", "lake water taken along per return water, plus one"),
    "upper_reach": ("1", "share of the return water that ends above its outlet"),
    "recovered_CH4": ("mol", "methane delivered since the start"),
    "vented_CH4_total": ("mol", "methane vented since the start"),
}

#: Series of a plant, by the name the projection gives them.
PLANT_SERIES = {
    name: Variable(("plant", "time"), unit, long_name)
    for name, (unit, long_name) in _PLANT.items()
}
