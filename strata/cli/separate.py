"""``strata separate``: what a plant makes of its feed, and what other settings would."""

from pathlib import Path
from textwrap import fill
from typing import TYPE_CHECKING, Any

import click

from strata.cli import options

if TYPE_CHECKING:
    import xarray as xr

    from strata.studies.today import PlantStudy

NUMBERS = "separate.json"


@click.command(name="separate")
@options.lake
@click.argument("plan", metavar="PLAN", type=click.Path(path_type=Path))
@click.option("--plant", metavar="NAME", help="One plant of PLAN; all of them without it.")
@click.option(
    "-o",
    "--out",
    type=click.Path(path_type=Path),
    help="Folder for figures (PNG), sweeps (NetCDF) and all numbers (JSON).",
)
@options.as_json
def command(
    lake: Path, plan: Path, plant: str | None, out: Path | None, as_json: bool
) -> None:
    """Show what the plants of PLAN make of the water of LAKE today, and vary their settings.

    For each plant: product, power and what goes to the air; every stream; how its riser
    brings the water up, by its gas or with a pump; one separator at any pressure, CO2 left
    free beside CO2 bound as calcite, with the best pressure for recovery, heating value, net
    energy and density of the return water; two separators at any pair of pressures; the
    amount of wash water and of lime; and where the returned water goes, also a kelvin cooler
    or warmer and from fewer or more ports.

    \b
    Example:
      strata separate strata-demo/lake.toml strata-demo/staged-lime.toml --plant lime
    """
    from strata.cli import output, terminal
    from strata.inputs import load_lake, load_plan
    from strata.projection import today
    from strata.report import plant_files
    from strata.results import replacing
    from strata.studies.today import account_today, study_plant

    terminal.show_warnings()
    terminal.announce_compilation()
    site = load_lake(lake)
    planned = load_plan(plan, site)
    names = [plant] if plant else [one.name for one in planned.plants]
    accounts = [account_today(site, planned, name) for name in names]
    if out:
        output.writable_folder(out)
        for account in accounts:
            for path in plant_files.file_names(account, out).values():
                output.writable_file(path)
        output.writable_file(out / NUMBERS)
    studies = []
    with terminal.progress("sweeps of settings") as progress:
        for number, name in enumerate(names):

            def part(share: float, done: int = number) -> None:
                progress((done + share) / len(names))

            studies.append(study_plant(site, planned, name, part))
    plants = [_numbers(study) for study in studies]
    numbers: dict[str, Any] = {"lake": site.site.name, "plan": planned.name, "plants": plants}
    if out:
        gradient = float(today(site)["gradient_depth"][0])
        for study in studies:
            plant_files.write(
                study.account,
                study.sweeps,
                out,
                floor=float(site.hypsography.depth[-1]),
                gradient=gradient,
                title=f"{site.site.name}, {planned.name}, {study.account.plant.name}",
            )
        with replacing(out / NUMBERS) as partial:
            partial.write_text(terminal.json_text(numbers), encoding="utf-8")
    if as_json:
        terminal.report_json(numbers)
    else:
        where = f"figures and numbers: {out}" if out else "-o FOLDER keeps all, with figures"
        terminal.report("\n\n\n".join([site.site.name, *map(_text, studies), where]))


def _text(study: "PlantStudy") -> str:
    """Return a plant and its sweeps for a reader."""
    from strata.report import plant_tables

    name = f"{study.plan}, {study.account.plant.name}"
    found = plant_tables.of_study(name, study.account, study.sweeps)
    lines = [plant_tables.text(table) for table in found]
    warnings = [
        fill(f"warning: {line}", 95, subsequent_indent="    ")
        for line in study.account.operation.warnings
    ]
    return "\n\n".join([*lines, *warnings])


def _numbers(study: "PlantStudy") -> dict[str, Any]:
    """Return a plant and its sweeps for a script."""
    account = study.account
    return {
        "plant": account.plant.name,
        "figures": account.figures(),
        "streams": account.streams(),
        "power_W": dict(account.operation.power),
        "balance": dict(account.operation.balance),
        "riser": _riser(study),
        "warnings": list(account.operation.warnings),
        "sweeps": {name.replace(" ", "_"): _sweep(one) for name, one in study.sweeps.items()},
    }


def _riser(study: "PlantStudy") -> dict[str, Any] | None:
    """Return how the riser of a plant works and what goes on along it; None without one."""
    account = study.account
    flow = account.riser()
    if flow is None:
        return None
    along = {
        "depth_m": flow.depth,
        "pressure_Pa": flow.pressure,
        "void": flow.void,
        "water_velocity_m_s": flow.water_velocity,
        "gas_velocity_m_s": flow.gas_velocity,
    }
    return {**account.riser_figures(), "choked": flow.choked, "along": along}


def _sweep(sweep: "xr.Dataset") -> dict[str, Any]:
    """Return a sweep: every name with its unit -> dimensions and values."""
    return {
        _with_unit(str(name), str(variable.attrs.get("units", "1"))): {
            "dimensions": list(variable.dims),
            "values": variable.values,
        }
        for name, variable in sweep.variables.items()
    }


def _with_unit(name: str, unit: str) -> str:
    """Return a name that ends in its unit, as keys do."""
    return name if unit == "1" else f"{name}_{unit.replace(' ', '_').replace('-', '')}"
