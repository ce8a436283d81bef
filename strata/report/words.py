"""Sentences and captions made from the numbers of a projection."""

from collections.abc import Mapping

import numpy as np
import xarray as xr

from strata.gradients import main_gradient
from strata.limits import BREACHED, UNCERTAIN, Limits, Verdict
from strata.margins import cubic_kilometres
from strata.plant.account import Account
from strata.plant.plan import Plan
from strata.report.tables import digits, end_numbers, gradients_of, mean_net_power

BAR = 1e5


def listed(items: list[str]) -> str:
    """Return items as a list in a sentence."""
    return items[0] if len(items) == 1 else f"{', '.join(items[:-1])} and {items[-1]}"


def span(result: xr.Dataset) -> tuple[int, int]:
    """Return the first and last calendar year."""
    years = result["time"].dt.year.values
    return int(years[0]), int(years[-1])


def of_plants(plan: Plan) -> list[str]:
    """Return what the plants of a plan do, one sentence each."""
    sentences = []
    for plant in plan.plants:
        lime = ", binds CO2 as calcite with lime" if plant.lime else ""
        wash = ", washes the gas" if plant.wash else ""
        until = f" until {plant.stop.isoformat()}" if plant.stop else ""
        pressures = listed([f"{stage.pressure / BAR:g}" for stage in plant.stages])
        sentences.append(
            f"{plant.name.capitalize()} takes {plant.flow:g} m³/s from "
            f"{plant.intake_depth:g} m, "
            f"separates gas at {pressures} bar{lime}{wash} and returns the water at "
            f"{plant.return_water.depth:g} m, from {plant.start.isoformat()}{until}."
        )
    return sentences


def gradient_moved(result: xr.Dataset) -> str:
    """Return what became of the main gradient."""
    depth, strength = result["gradient_depth"].values, result["gradient_strength"].values
    moved = float(depth[-1] - depth[0])
    share = 100.0 * float(strength[-1] / strength[0])
    way = "sinks" if moved > 0 else "rises"
    if abs(moved) < 0.5:
        place = f"The main gradient stays at {depth[-1]:.0f} m"
    else:
        way_m = f"{way} {abs(moved):.1f} m, from {depth[0]:.0f} to {depth[-1]:.0f} m"
        place = f"The main gradient {way_m}"
    told = f"{place}, and its density step ends at {share:.0f} % of that at the start."
    strongest = main_gradient(gradients_of(result, -1))
    if strongest is not None and strongest.strength > 1.05 * float(strength[-1]):
        told += (
            f" The strongest gradient then lies at {strongest.depth:.0f} m "
            f"({strongest.strength:.2f} kg/m³)."
        )
    return told


def methane_went(result: xr.Dataset, baseline: xr.Dataset | None) -> str:
    """Return where the methane went."""
    numbers = end_numbers(result)
    parts = [f"{numbers['methane in place [%]']:.0f} % is in the lake at the end"]
    if float(result["methane_recovered"][-1]) > 0.0:
        parts.append(f"plants delivered {numbers['delivered [%]']:.0f} %")
    vented = 100.0 * float(result["methane_vented"][-1] / result["methane_in_place"][0])
    if vented > 0.05:
        parts.append(f"plants vented {vented:.1f} %")
    lost = f"{digits(numbers['lost upward [%]'], 1)} % left the deep water upward"
    if baseline is not None:
        natural = end_numbers(baseline)["lost upward [%]"]
        lost += f" ({digits(natural, 1)} % in the lake left alone)"
    parts.append(lost)
    return f"Of the methane at the start, {listed(parts)}; supply goes on adding to it."


def returned_where(result: xr.Dataset) -> str:
    """Return where the return water came to rest and what that does; empty without a plant."""
    if "plant_trap_depth" not in result:
        return ""
    trapped = result["plant_trap_depth"].values
    gradient = result["gradient_depth"].values
    running = np.isfinite(trapped)
    if not running.any():
        return ""
    above = float(np.mean((trapped < gradient)[running]))
    mean = float(np.mean(trapped[running]))
    if above > 0.5:
        effect = (
            "above the main gradient: water drawn from below is not replaced there, so the "
            "gradient moves down into the room it leaves"
        )
    else:
        effect = (
            "below the main gradient: it fills the room of the water drawn, so the gradient "
            "is "
            "not drawn down"
        )
    volume = float(result["return_water_above_gradient"][-1]) / 1e9
    return (
        f"The return water comes to rest at {mean:.0f} m on average, {effect}. At the end "
        f"{volume:.1f} km³ of it lie above the gradient."
    )


def bubbling(result: xr.Dataset) -> str:
    """Return how close to bubbling the water came."""
    saturation = result["largest_saturation"].values
    worst = int(np.nanargmax(saturation))
    when = str(result["time"].values[worst])[:10]
    return (
        f"The largest saturation below the surface layer is {saturation[0]:.2f} at the start, "
        f"{saturation[-1]:.2f} at the end and never more than {saturation[worst]:.2f} "
        f"({when}, "
        f"{float(result['largest_saturation_depth'][worst]):.0f} m)."
    )


def judged(verdict: Verdict) -> str:
    """Return the verdict in one sentence."""
    breached = [row for row in verdict.rows if row.status == BREACHED]
    unsure = [row for row in verdict.rows if row.status == UNCERTAIN]
    total = len(verdict.rows)
    if breached:
        first = min(breached, key=lambda row: row.first_date or row.worst_date)
        names = listed([row.limit for row in breached])
        sentence = (
            f"It breaches {len(breached)} of {total} limits ({names}), first on "
            f"{first.first_date}."
        )
    else:
        sentence = f"It breaches none of {total} limits."
    if unsure:
        sentence += f" Kept but uncertain: {listed([row.limit for row in unsure])}."
    return sentence


def plan_story(
    result: xr.Dataset, verdict: Verdict, plan: Plan | None, baseline: xr.Dataset | None
) -> list[str]:
    """Return what a plan does, sentence by sentence."""
    power = mean_net_power(result)
    told = of_plants(plan) if plan else []
    told += [returned_where(result), gradient_moved(result), methane_went(result, baseline)]
    told.append(bubbling(result))
    if np.isfinite(power):
        told.append(f"Net electric power is {power:.1f} MW averaged over the whole time.")
    told.append(judged(verdict))
    return [sentence for sentence in told if sentence]


# Captions and what stands in place of a picture ---------------------------------------------


def gradient_caption(results: Mapping[str, xr.Dataset]) -> tuple[str, str]:
    """Return caption and alternative text of the figure of the main gradient."""
    moves = {
        name: float(result["gradient_depth"][-1] - result["gradient_depth"][0])
        for name, result in results.items()
    }
    most = max(moves, key=lambda name: abs(moves[name]))
    caption = (
        f"The main gradient moves most under {most}, by {digits(moves[most], 1, sign=True)} m "
        "(positive is down)."
    )
    alt = "Depth and density step of the main gradient through time. " + "; ".join(
        f"{name}: from {float(result['gradient_depth'][0]):.0f} to "
        f"{float(result['gradient_depth'][-1]):.0f} m, step from "
        f"{float(result['gradient_strength'][0]):.2f} to "
        f"{float(result['gradient_strength'][-1]):.2f} kg/m³"
        for name, result in results.items()
    )
    return caption, alt + "."


def limits_caption(found: Mapping[str, Verdict], limits: Limits) -> tuple[str, str]:
    """Return caption and alternative text of the figure of all limits."""
    kept = [name for name, verdict in found.items() if not verdict.breached]
    caption = (
        f"{listed(kept)} {'stays' if len(kept) == 1 else 'stay'} on the allowed side of every "
        "limit."
        if kept
        else "Every run breaches at least one limit."
    )
    alt = (
        f"{len(limits.limits)} small drawings, one per limit, every plan in each. "
        + "; ".join(f"{name}: {verdict.status}" for name, verdict in found.items())
    )
    return caption, alt + "."


def pressure_caption(results: Mapping[str, xr.Dataset]) -> tuple[str, str]:
    """Return caption and alternative text of the figure of gas pressure."""
    ends = {name: float(result["largest_saturation"][-1]) for name, result in results.items()}
    highest, lowest = max(ends, key=ends.__getitem__), min(ends, key=ends.__getitem__)
    caption = (
        "Water bubbles where gas pressure reaches the hydrostatic line; at the end it comes "
        "to "
        f"{ends[highest]:.2f} of it under {highest}"
        + (f" and {ends[lowest]:.2f} under {lowest}." if lowest != highest else ".")
    )
    alt = "Total gas pressure against depth with the hydrostatic line. " + "; ".join(
        f"{name}: largest saturation {float(result['largest_saturation'][0]):.2f} at the "
        "start, "
        f"{float(result['largest_saturation'][-1]):.2f} at the end, at "
        f"{float(result['largest_saturation_depth'][-1]):.0f} m"
        for name, result in results.items()
    )
    return caption, alt + "."


def methane_caption(results: Mapping[str, xr.Dataset]) -> tuple[str, str]:
    """Return caption and alternative text of the figure of methane."""
    left = {
        name: end_numbers(result)["methane in place [%]"] for name, result in results.items()
    }
    least = min(left, key=left.__getitem__)
    caption = (
        f"{least.capitalize()} leaves the least methane in the lake: {left[least]:.0f} % of "
        "the "
        "start."
    )
    alt = "Methane in place by zone, and delivered, vented and lost upward. " + "; ".join(
        f"{name}: {float(cubic_kilometres(result['methane_in_place'][0])):.1f} km³ at the "
        "start, "
        f"{float(cubic_kilometres(result['methane_in_place'][-1])):.1f} km³ at the end, "
        f"delivered {digits(end_numbers(result)['delivered [%]'], 0)} %"
        for name, result in results.items()
    )
    return caption, alt + "."


def section_caption(results: Mapping[str, xr.Dataset], what: str) -> tuple[str, str]:
    """Return caption and alternative text of depth-time sections."""
    lines = []
    for name, result in results.items():
        below = float(result["gradient_depth"][0]) + 40.0
        at = int(np.argmin(np.abs(result["depth"].values - below)))
        start, end = (float(result["methane"][t, at]) for t in (0, -1))
        lines.append(f"{name}: from {start:.1f} to {end:.1f} mol/m³")
    depth = float(next(iter(results.values()))["gradient_depth"][0]) + 40.0
    caption = (
        f"Methane at {depth:.0f} m, 40 m below the main gradient of the start: "
        f"{'; '.join(lines)}. The white line is the main gradient."
    )
    return caption, f"{what} over time and depth, one column per plan. {caption}"


def profile_caption(results: Mapping[str, xr.Dataset]) -> tuple[str, str]:
    """Return caption and alternative text of the profiles."""
    warmed = {
        name: float(result["temperature"][-1, -1] - result["temperature"][0, -1])
        for name, result in results.items()
    }
    caption = "The deepest layer changes by " + "; ".join(
        f"{digits(change, 2, sign=True)} °C ({name})" for name, change in warmed.items()
    )
    return caption + ".", f"Profiles of temperature, salinity, CH4 and free CO2. {caption}."


def difference_caption(
    results: Mapping[str, xr.Dataset], baseline: xr.Dataset
) -> tuple[str, str]:
    """Return caption and alternative text of the differences to the lake left alone."""
    parts = []
    for name, result in results.items():
        change = result["methane"].values[-1] - baseline["methane"].values[-1]
        at = int(np.argmin(change))
        parts.append(
            f"{name}: {digits(float(change[at]), 1, sign=True)} mol/m³ at "
            f"{float(result['depth'][at]):.0f} m"
        )
    caption = (
        f"Largest loss of methane against the lake left alone at the end: {'; '.join(parts)}"
    )
    return caption + ".", f"Plan less lake left alone, over time and depth. {caption}."


def plant_caption(results: Mapping[str, xr.Dataset]) -> tuple[str, str]:
    """Return caption and alternative text of the figure of the plants."""
    parts = []
    for name, result in results.items():
        if "plant_product_purity" not in result:
            continue
        purity = result["plant_product_purity"].values
        running = purity[np.isfinite(purity) & (purity > 0.0)]
        if running.size:
            parts.append(
                f"{name}: {mean_net_power(result):.1f} MW net, CH4 share of the "
                f"product {running.min():.2f} to {running.max():.2f}"
            )
    caption = f"Averages: {'; '.join(parts)}" if parts else "No plant runs"
    caption += "." + trap_words(results)
    return caption, f"Net power, purity, depth of the return water of every plant. {caption}"


def diagram_caption(name: str, account: Account) -> tuple[str, str]:
    """Return caption and alternative text of the diagram of a plant."""
    found = account.figures()
    caption = (
        f"{name.capitalize()}: with today's feed at full load it recovers "
        f"{100 * found['recovery']:.0f} % of the methane as gas of "
        f"{100 * found['purity']:.0f} % CH4 and leaves {found['net_power_MW']:.1f} MW."
    )
    steps = listed([str(row["stream"]) for row in account.streams()])
    alt = f"Diagram of the plant over a section of the lake. Streams: {steps}. {caption}"
    return caption, alt


def trap_words(results: Mapping[str, xr.Dataset]) -> str:
    """Return between which depths the return water of every plan spreads."""
    parts = []
    for name, result in results.items():
        if "plant_trap_depth" not in result:
            continue
        depth = result["plant_trap_depth"].values
        depth = depth[np.isfinite(depth)]
        if depth.size:
            parts.append(f"{name}: {depth.min():.0f} to {depth.max():.0f} m")
    return f" Return water spreads at {'; '.join(parts)}." if parts else ""


def today_caption(result: xr.Dataset) -> tuple[str, str]:
    """Return caption and alternative text of today's column."""
    caption = (
        f"Today gas pressure comes to {float(result['largest_saturation'][0]):.2f} of the "
        f"hydrostatic pressure at {float(result['largest_saturation_depth'][0]):.0f} m; the "
        "main "
        f"gradient (grey band) lies at {float(result['gradient_depth'][0]):.0f} m."
    )
    alt = (
        "Profiles of temperature, salinity, density, stability, CH4, free CO2, gas pressure "
        f"and saturation at the start, the casts' readings as points. {caption}"
    )
    return caption, alt


def separator_caption(sweep: xr.Dataset) -> tuple[str, str]:
    """Return caption and alternative text of the separator figure."""
    parts = []
    for case in sweep["case"].values:
        net = sweep["net_energy"].sel(case=case).values
        if not np.isfinite(net).any():
            continue
        best = int(np.nanargmax(net))
        one = sweep.sel(case=case).isel(pressure=best)
        parts.append(
            f"{case}: {float(one['pressure']) / BAR:.2g} bar, recovery "
            f"{float(one['recovery']):.2f}, purity {float(one['purity']):.2f}"
        )
    caption = f"Best separator pressure for net energy, {'; '.join(parts)}"
    return (
        caption + ".",
        f"Recovery, purity and net energy against separator pressure. {caption}.",
    )
