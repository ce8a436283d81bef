"""What is written of a plant and its sweeps: figures in PNG, numbers in NetCDF and JSON.

Every file carries the caution, by which strata knows its own files again.
"""

import re
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import xarray as xr

from strata import __version__
from strata.caution import CAUTION
from strata.plant.account import Account
from strata.report import riser
from strata.report import sweeps as drawn
from strata.report.diagram import diagram
from strata.report.figures import house_style, save
from strata.results import replacing


def file_names(account: Account, folder: Path) -> dict[str, Path]:
    """Return the files of a plant: kind ("diagram", "riser", ...) and suffix -> path."""
    stem = re.sub(r"[^a-z0-9]+", "-", account.plant.name.lower()).strip("-") or "plant"
    swept = ["pressure", "two pressures", "lime"]
    if account.plant.wash is not None:
        swept.append("wash")
    alone = ["diagram"] if account.plant.riser is None else ["diagram", "riser"]
    kinds = [(name, "png") for name in (*alone, *swept)]
    kinds += [(name, "nc") for name in (*swept, "outlets")]
    return {
        f"{kind}.{suffix}": folder / f"{stem}-{kind.replace(' ', '-')}.{suffix}"
        for kind, suffix in kinds
    }


def write(
    account: Account,
    sweeps: Mapping[str, xr.Dataset],
    folder: Path,
    *,
    floor: float,
    gradient: float | None = None,
    title: str = "",
) -> list[Path]:
    """Write figures and sweeps of a plant into a folder; return what was written.

    Parameters
    ----------
    account : Account
    sweeps : mapping
        As in ``strata.studies.today.PlantStudy``.
    folder : Path
    floor, gradient : float
        Depth of the lake and of its main gradient [m], for the diagram.
    title : str
        Of the NetCDF files.

    Raises
    ------
    strata.InputError
        If a file cannot be written.
    """
    names = file_names(account, folder)
    with house_style():
        figures = {
            "diagram.png": diagram(account, floor, gradient),
            "pressure.png": drawn.separator(sweeps["pressure"]),
            "two pressures.png": drawn.two_pressures(sweeps["two pressures"], account),
            "lime.png": drawn.lime(sweeps["lime"], account),
        }
        if account.plant.riser is not None:
            figures["riser.png"] = riser.figure(account)
        if "wash" in sweeps:
            figures["wash.png"] = drawn.wash(sweeps["wash"], account)
        for name, figure in figures.items():
            save(figure, names[name])
    for name, sweep in sweeps.items():
        _save_sweep(sweep, names[f"{name}.nc"], f"{title}: {name}")
    return list(names.values())


def _save_sweep(sweep: xr.Dataset, path: Path, title: str) -> None:
    """Write a sweep as NetCDF.

    The settings are auxiliary coordinates there: CF would take an axis of pressures for depth,
    and words may not bear the name of their dimension.
    """
    indexed = [str(name) for name in sweep.indexes]
    numbered = {name: f"{name}_number" for name in indexed}
    plain = sweep.reset_index(indexed).rename_dims(numbered)
    for name in indexed:
        plain[name].attrs.setdefault("long_name", name)
    program = f"strata {__version__}"
    plain.attrs |= {
        "Conventions": "CF-1.11",
        "title": title,
        "institution": "made by a user of strata",
        "source": program,
        "history": f"written by {program}",
        "references": "strata, docs/theory/plant.md",
        "comment": CAUTION,
    }
    real = [str(name) for name in plain.coords if plain[name].dtype.kind == "f"]
    encoding: dict[str, dict[str, Any]] = {name: {"_FillValue": None} for name in real}
    with replacing(path) as partial:
        plain.to_netcdf(partial, engine="netcdf4", format="NETCDF4", encoding=encoding)
