"""The numbers of a result as a script wants them: names with units."""

from typing import Any

import xarray as xr

#: Name and unit printed -> variable of a result, and what its SI value is divided by.
_SERIES = {
    "methane_in_place_mol": ("methane_in_place", 1.0),
    "carbon_dioxide_in_place_mol": ("carbon_dioxide_in_place", 1.0),
    "largest_saturation": ("largest_saturation", 1.0),
    "largest_saturation_depth_m": ("largest_saturation_depth", 1.0),
    "surface_saturation": ("surface_saturation", 1.0),
    "least_pressure_margin_bar": ("least_pressure_margin", 1e5),
    "least_lift_m": ("least_lift", 1.0),
    "gradient_depth_m": ("gradient_depth", 1.0),
    "gradient_strength_kg_m3": ("gradient_strength", 1.0),
    "gradient_thickness_m": ("gradient_thickness", 1.0),
    "schmidt_stability_J_m2": ("schmidt_stability", 1.0),
    "phosphate_flux_up_mol_s": ("phosphate_flux_up", 1.0),
    "oxic_depth_m": ("oxic_depth", 1.0),
    "mixed_layer_depth_m": ("mixed_layer_depth", 1.0),
}
_SUMS = {
    "methane_recovered_mol": "methane_recovered",
    "methane_lost_to_upper_lake_mol": "methane_lost_to_upper_lake",
    "methane_vented_mol": "methane_vented",
}


def state(result: xr.Dataset, time: int = 0) -> dict[str, Any]:
    """Return what the lake is at one time of a result."""
    now = result.isel(time=time)
    numbers: dict[str, Any] = {
        name: float(now[variable]) / unit for name, (variable, unit) in _SERIES.items()
    }
    return {"date": str(now["time"].values.astype("datetime64[D]"))} | numbers


def outcome(result: xr.Dataset) -> dict[str, Any]:
    """Return what became of the lake: start, end, sums over the time between, ledger."""
    error = abs(result["ledger_error"]).max("time")
    names = (str(name) for name in result["tracer"].values)
    return {
        "plan": result.attrs["plan_name"],
        "start": state(result, 0),
        "end": state(result, -1),
        **{name: float(result[variable][-1]) for name, variable in _SUMS.items()},
        "ledger_error": dict(zip(names, error.values.tolist(), strict=True)),
        "warnings": [line for line in str(result.attrs["warnings"]).splitlines() if line],
    }
