"""An invented lake and made-up records of its future, for tests of what is derived and drawn.

Nothing here was projected: profiles are smooth steps, plans move and drain them by hand.
"""

from datetime import date

import numpy as np

from strata.column.ledger import LEDGER_TERMS
from strata.column.tracers import TRACERS
from strata.lake.site import (
    Cast,
    Climate,
    Hypsography,
    Lake,
    Mixing,
    Profile,
    Reactions,
    Site,
    Spring,
)
from strata.plant.plan import Plan, Plant, Return, Stage
from strata.results import Record

TERMS = ("start", *LEDGER_TERMS)


def lake(layers: int = 250) -> Lake:
    """Return the invented lake, 400 m deep."""
    depths = np.array([0.0, 50, 100, 150, 200, 250, 300, 350, 380, 400])
    areas = np.array([900.0, 800, 705, 620, 535, 440, 330, 190, 80, 0]) * 1e6
    samples = np.linspace(5.0, 395.0, 20)
    methane = _step(samples, 0.05, [(95, 12, 1.0), (205, 6, 9.0), (290, 8, 7.0)])
    carbon = _step(samples, 20.0, [(95, 12, 12.0), (205, 6, 70.0), (290, 8, 50.0)])
    ctd = np.arange(0.5, 400.0, 1.0)
    profiles = {
        "temperature": Profile(ctd, _temperature(ctd), np.full(len(ctd), 0.005)),
        "salinity": Profile(ctd, _salinity(ctd), np.full(len(ctd), 0.01)),
        "CH4": Profile(samples, methane, 0.03 * methane + 0.02),
        "DIC": Profile(samples, carbon, 0.02 * carbon),
        "alkalinity": Profile(samples, _alkalinity(samples), 0.01 * _alkalinity(samples)),
    }
    months = np.ones(12)
    return Lake(
        site=Site("Invented lake", 0.86e5, -2.0, date(2030, 1, 1)),
        hypsography=Hypsography(depths, areas),
        cast=Cast(profiles),
        climate=Climate(24 * months, 30 * months, 3 * months, 0 * months, 0 * months),
        springs=(Spring("deep", 386.0, 3.0, 25.8, 5.8, {"DIC": 164.0, "alkalinity": 72.0}),),
        rivers=(),
        bed=(),
        reactions=Reactions(),
        mixing=Mixing(2.8e-9, 1e-9, 1e-6, 0.7),
        layer_faces=np.linspace(0.0, 400.0, layers + 1),
        texts={"lake.toml": 'name = "Invented lake"\n', "gas.csv": "depth_m,CH4_mol_m3\n"},
    )


def plan(name: str = "shallow return") -> Plan:
    """Return a plan with one plant."""
    plant = Plant(
        name="north",
        intake_depth=345.0,
        flow=12.0,
        stages=(Stage(2.5e5),),
        return_water=Return(190.0, ports=100),
        start=date(2031, 1, 1),
    )
    return Plan(name, (plant,), {f"{name}.toml": f'name = "{name}"\n'})


def _step(depth, start, steps):
    """Return a profile that rises by smooth steps of (depth, width, height)."""
    depth = np.asarray(depth, dtype=float)
    return start + sum(h * 0.5 * (1 + np.tanh((depth - z) / w)) for z, w, h in steps)


def _temperature(depth, sink=0.0):
    return _step(depth, 23.2, [(62, 3, -0.6), (205 + sink, 8, 1.1), (290, 8, 1.3)])


def _salinity(depth, sink=0.0):
    return _step(
        depth, 1.2, [(62, 3, 0.25), (95, 4, 0.35), (205 + sink, 5, 2.0), (290, 5, 1.2)]
    )


def _alkalinity(depth, sink=0.0):
    return _step(depth, 18.0, [(95, 6, 3.0), (205 + sink, 6, 27.0), (290, 8, 22.0)])


def record(
    lake: Lake,
    *,
    years: float = 50.0,
    sinking: float = 0.0,
    drain: float = 0.0,
    plants=("north",),
) -> Record:
    """Return a made-up record: the main gradient sinks, methane below it is drained.

    Parameters
    ----------
    years : float
    sinking : float
        Of the main gradient, m per year.
    drain : float
        Share of the methane taken by the end.
    plants : tuple of str
        Empty for the lake left alone.
    """
    faces = lake.layer_faces
    depth = 0.5 * (faces[1:] + faces[:-1])
    area = np.interp(faces, lake.hypsography.depth, lake.hypsography.area)
    volume = 0.5 * (area[1:] + area[:-1]) * np.diff(faces)
    start = np.datetime64(lake.site.start, "s")
    months = np.arange(round(years * 12) + 1)
    time = start + (months * 2629746).astype("timedelta64[s]")
    when = months / 12.0
    values = np.zeros((len(time), len(depth), len(TRACERS) + 1))
    season = np.sin(2 * np.pi * when)
    for t, year in enumerate(when):
        sink = sinking * year
        left = 1.0 - drain * year / years
        column = values[t].T
        warm = 0.8 * (1 + season[t]) * 0.5 * (1 - np.tanh((depth - 25) / 5))
        column[0] = _temperature(depth, sink) + warm
        column[1] = _salinity(depth, sink)
        column[2] = _step(depth, 20.0, [(95, 12, 12.0), (205 + sink, 6, 70.0), (290, 8, 50.0)])
        column[3] = _alkalinity(depth, sink)
        column[4] = 0.5
        column[5] = _step(
            depth, 0.0, [(95, 12, 1), (205 + sink, 6, 9 * left), (290, 8, 7 * left)]
        )
        column[6] = 0.5
        column[7] = 0.2 * 0.5 * (1 - np.tanh((depth - 55 - 3 * season[t]) / 4))
        column[8] = _step(depth, 0.0, [(205 + sink, 6, 0.2)])
        column[9] = _step(depth, 0.001, [(62, 4, 0.03), (205 + sink, 6, 0.1)])
        column[10] = (0.004 * year if plants else 0.0) * np.exp(-(((depth - 180) / 30) ** 2))
    ledger = np.zeros((len(time), len(TERMS), values.shape[2]))
    now = np.einsum("tnm,n->tm", values, volume)
    ledger[:, 0] = now[0]
    change = now - now[0]
    ledger[:, TERMS.index("intake")] = change
    recovered = -0.9 * change[:, TRACERS.index("CH4")] if plants else np.zeros(len(time))
    on = (when >= 1.0).astype(float)
    series = {
        "flow": 12.0 * on,
        "feed_CH4": values[:, int(np.searchsorted(depth, 345)), 5] * on,
        "recovery": 0.85 * on,
        "product_CH4": np.maximum(np.gradient(recovered, when * 3.156e7), 0.0),
        "product_purity": np.where(on > 0, 0.42, np.nan),
        "electric_power": 40e6 * on,
        "net_power": 34e6 * on,
        "trap_depth": np.where(on > 0, 203.0, np.nan),
        "recovered_CH4": recovered,
        "vented_CH4_total": 0.02 * recovered,
    }
    faces_shape = (len(time), len(faces))
    return Record(
        time=time,
        face_depth=faces,
        face_area=area,
        volume=volume,
        pressure=lake.site.air_pressure + 9786.0 * depth,
        tracers=(*TRACERS, "return of north"),
        values=values,
        upward_flow=np.broadcast_to(np.where(faces < 386, 7.0, 0.0), faces_shape).copy(),
        diffusivity=np.full(faces_shape, 2e-8),
        mixed_layer_depth=45.0 + 15.0 * np.cos(2 * np.pi * when),
        ledger_terms=TERMS,
        ledger=ledger,
        ledger_error=np.abs(np.random.default_rng(1).normal(0, 1e-13, now.shape)),
        plants=dict.fromkeys(plants, series),
        return_tags=("return of north",),
        warnings=("made up for tests",),
        options={"step_days": 1.0, "seed": 0},
    )
