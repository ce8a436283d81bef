"""Tables for the terminal: plain text, units in the headings, numbers aligned."""

from collections.abc import Mapping, Sequence

import numpy as np
import xarray as xr

from strata.gradients import Gradient, StabilityProfiles
from strata.limits import (
    BREACHED,
    KEPT,
    MILLION,
    UNCERTAIN,
    StepChange,
    Verdict,
    VerdictRow,
)
from strata.margins import cubic_kilometres, lifting_energy, tonnes

BAR = 1e5

_SHORT = {KEPT: "kept", UNCERTAIN: "uncertain", BREACHED: "BREACHED"}


def aligned(headings: Sequence[str], rows: Sequence[Sequence[str]], left: int = 1) -> str:
    """Return a text table: the first columns to the left, the others to the right."""
    widths = [
        max(len(row[column]) for row in (headings, *rows)) for column in range(len(headings))
    ]

    def line(cells: Sequence[str]) -> str:
        padded = [
            cell.ljust(width) if column < left else cell.rjust(width)
            for column, (cell, width) in enumerate(zip(cells, widths, strict=True))
        ]
        return "  ".join(padded).rstrip()

    return "\n".join(
        [line(headings), line(["-" * width for width in widths]), *map(line, rows)]
    )


def digits(value: float, places: int = 2, sign: bool = False) -> str:
    """Return a number with that many decimals; a dash where there is none."""
    if not np.isfinite(value):
        return "–"
    value = round(value, places) + 0.0  # no minus before a nought
    text = f"{value:+.{places}f}" if sign else f"{value:.{places}f}"
    return text.replace("-", "−")


def places_for(bound: float) -> int:
    """Return the decimals in which distances to a bound are worth giving."""
    size = abs(bound)
    return 0 if size >= 100 else 1 if size >= 10 else 2 if size >= 1 else 3


def distance_text(row: VerdictRow) -> str:
    """Return the least distance of a limit with its unit."""
    return amount_text(row.least_distance, row, sign=True)


def amount_text(value: float, row: VerdictRow, sign: bool = False) -> str:
    """Return a number of a verdict with its unit and the digits worth giving."""
    unit = "" if row.unit == "1" else f" {row.unit}"
    if abs(row.bound) >= MILLION:
        return (
            f"{digits(value / MILLION, places_for(row.bound / MILLION), sign)} million{unit}"
        )
    return digits(value, places_for(row.bound), sign) + unit


def verdicts(found: Mapping[str, Verdict]) -> str:
    """Return the table of limit by plan, status and least distance, then the first dates."""
    plans = list(found)
    first = found[plans[0]]
    rows = [
        (f"{row.limit}, {row.rule}", *(_cell(found[plan].rows[number]) for plan in plans))
        for number, row in enumerate(first.rows)
    ]
    dates = [
        f"{plan}: {row.limit} {row.status} from {row.first_date}"
        for plan, verdict in found.items()
        for row in verdict.rows
        if row.first_date
    ]
    note = [first.note] if first.note else []
    table = aligned(("limit: least distance to it", *plans), rows, left=1 + len(plans))
    return "\n".join([table, *note, "", *dates]).rstrip()


def _cell(row: VerdictRow) -> str:
    """Return one verdict in few letters."""
    number = row.least_distance / (MILLION if abs(row.bound) >= MILLION else 1.0)
    bound = row.bound / (MILLION if abs(row.bound) >= MILLION else 1.0)
    return f"{_SHORT[row.status]} {digits(number, places_for(bound), sign=True)}"


def end_numbers(result: xr.Dataset) -> dict[str, float]:
    """Return what a comparison shows of one projection, start against end."""
    start, end = result.isel(time=0), result.isel(time=-1)
    methane = float(start["methane_in_place"])
    return {
        "methane in place [%]": 100.0 * float(end["methane_in_place"]) / methane,
        "delivered [%]": 100.0 * float(end["methane_recovered"]) / methane,
        "lost upward [%]": 100.0 * float(end["methane_lost_to_upper_lake"]) / methane,
        "largest saturation": float(np.nanmax(result["largest_saturation"])),
        "gradient depth [m]": float(end["gradient_depth"]),
        "moved [m]": float(end["gradient_depth"] - start["gradient_depth"]),
        "strength [%]": 100.0
        * float(end["gradient_strength"])
        / float(start["gradient_strength"]),
        "net power [MW]": mean_net_power(result),
    }


def mean_net_power(result: xr.Dataset) -> float:
    """Return the mean net electric power of all plants [MW]; NaN without a plant."""
    if "plant_net_power" not in result:
        return float("nan")
    power = result["plant_net_power"].values
    return float(np.mean(np.nansum(power, axis=0))) / 1e6


_PLACES = {"largest saturation": 3}


def comparison(results: Mapping[str, xr.Dataset], found: Mapping[str, Verdict]) -> str:
    """Return plans side by side: what the lake is at the end, and the verdicts.

    Parameters
    ----------
    results : mapping
        Name of the plan -> projection, the lake left alone first.
    found : mapping
        Name of the plan -> verdict; may be empty.
    """
    numbers = {name: end_numbers(result) for name, result in results.items()}
    first = next(iter(results.values()))
    years = first["time"].dt.year.values
    rows = [
        (
            key,
            *(
                digits(row[key], _PLACES.get(key, 1), sign=key == "moved [m]")
                for row in numbers.values()
            ),
        )
        for key in next(iter(numbers.values()))
    ]
    table = aligned((f"{years[0]} to {years[-1]}", *numbers), rows)
    return f"{table}\n\n{verdicts(found)}" if found else table


def ledger_worst(result: xr.Dataset) -> tuple[str, float]:
    """Return the tracer whose books close worst at any time, and by how much."""
    worst = np.abs(result["ledger_error"].values).max(axis=1)
    tracer = int(worst.argmax())
    return str(result["tracer"].values[tracer]), float(worst[tracer])


def ledger_line(result: xr.Dataset) -> str:
    """Return one line that says how well the books close."""
    tracer, error = ledger_worst(result)
    count = result.sizes["tracer"]
    name = result.attrs["plan_name"]
    return (
        f"ledger of {name}: {count} tracers close to {error:.1e} or better (worst: {tracer})"
    )


def step_changes(changes: Sequence[StepChange]) -> str:
    """Return what halving the step changes in every quantity that can be limited."""
    rows = [
        (
            f"{one.words} [{one.unit}]",
            f"{one.value:.6g}",
            f"{one.halved:.6g}",
            f"{one.change:.2g}",
        )
        for one in changes
    ]
    heads = ("worst over the run", "step", "half the step", "largest change")
    return aligned(heads, rows)


def gradients_of(result: xr.Dataset, time: int = 0) -> tuple[Gradient, ...]:
    """Return all gradients of density at one time, from the top down."""
    profiles = StabilityProfiles(
        result["face"].values[1:-1].astype(float),
        result["buoyancy_frequency_squared"].values[time, 1:-1].astype(float),
        float(result.attrs["gravity_m_s2"]),
    )
    return profiles.gradients(0)


def inspect(result: xr.Dataset) -> str:
    """Return what a column is today: gas in place, saturation, stability, gradients.

    Parameters
    ----------
    result : xarray.Dataset
        Its first record is described.
    """
    now = result.isel(time=0)
    pairs = [
        ("largest saturation", float(now["largest_saturation"]), 3, "1"),
        ("  at depth", float(now["largest_saturation_depth"]), 1, "m"),
        ("  standard error from the casts", _error_of_saturation(now), 3, "1"),
        ("  rise until it bubbles", float(_of_worst(now)["lift_to_bubbling"]), 1, "m"),
        ("  work of that rise, unmixed", work_to_bubbling(now), 0, "J/m3"),
        ("least pressure margin", float(now["least_pressure_margin"]) / BAR, 2, "bar"),
        ("  at depth", float(now["least_pressure_margin_depth"]), 1, "m"),
        ("least lift to bubbling", float(now["least_lift"]), 1, "m"),
        ("  at depth", float(now["least_lift_depth"]), 1, "m"),
        (
            "saturation in the surface layer, without air",
            float(now["surface_saturation"]),
            3,
            "1",
        ),
        ("mixed layer", float(now["mixed_layer_depth"]), 1, "m"),
        ("oxic layer", float(now["oxic_depth"]), 1, "m"),
        ("Schmidt stability", float(now["schmidt_stability"]) / 1000.0, 1, "kJ/m2"),
    ]
    facts = aligned(
        ("quantity", "value", "unit"),
        [(name, digits(value, places), unit) for name, value, places, unit in pairs],
    )
    return "\n\n".join([facts, inventory(now), gradient_table(result)])


def _error_of_saturation(now: xr.Dataset) -> float:
    return float(_of_worst(now)["gas_pressure_error"] * now["largest_saturation"])


def _of_worst(now: xr.Dataset) -> xr.Dataset:
    """Return the layer of the largest saturation."""
    return now.sel(depth=float(now["largest_saturation_depth"]), method="nearest")


def work_to_bubbling(now: xr.Dataset) -> float:
    """Return the work that lifts the most saturated water until it bubbles [J m-3]."""
    start = float(now["largest_saturation_depth"])
    lift = float(_of_worst(now)["lift_to_bubbling"])
    stability = now["buoyancy_frequency_squared"].values[1:-1].astype(float)
    return lifting_energy(now["face"].values[1:-1], stability, start, start - lift)


def inventory(now: xr.Dataset) -> str:
    """Return the gas in place by zone and in all at one time."""
    rows = []
    for gas, name, key in (
        ("methane", "CH4", "CH4"),
        ("carbon_dioxide", "free CO2", "CO2"),
    ):
        zones = dict(zip(now["zone"].values, now[f"{gas}_in_zone"].values, strict=True))
        for zone, amount in [*zones.items(), ("whole lake", float(now[f"{gas}_in_place"]))]:
            rows.append(
                (
                    name,
                    str(zone),
                    digits(float(amount) / 1e9, 2),
                    digits(float(tonnes(amount, key)) / 1e6, 3),
                    digits(float(cubic_kilometres(amount)), 3),
                )
            )
    return aligned(("gas", "zone", "Gmol", "Mt", "km3 at 0 degC, 1 atm"), rows, left=2)


def gradient_table(result: xr.Dataset, time: int = 0) -> str:
    """Return all gradients of density at one time; the main one is marked."""
    main = float(result["gradient_depth"][time])
    rows = [
        (
            "main" if abs(one.depth - main) < 0.5 else "",
            digits(one.depth, 1),
            digits(one.thickness, 1),
            digits(one.strength, 3),
            f"{one.peak:.1e}",
        )
        for one in gradients_of(result, time)
    ]
    headings = (
        "gradient",
        "depth [m]",
        "thickness [m]",
        "density step [kg/m3]",
        "peak N2 [1/s2]",
    )
    return aligned(headings, rows)
