"""The train of separators: pressure falls stage by stage, and gas is taken off each."""

from collections.abc import Sequence
from dataclasses import replace

from strata.lake.site import Site
from strata.plant.chemistry import part
from strata.plant.plan import Stage
from strata.plant.streams import GasStream, WaterStream
from strata.species import VAPOUR


def approach_of(stage: Stage) -> float:
    """Return the share of the way to equilibrium that a stage goes.

    As given, or by its residence time in a well mixed vessel, ``k_L a t / (1 + k_L a t)``.
    """
    if stage.residence_time is None or stage.mass_transfer is None:
        return stage.approach
    units = stage.residence_time * stage.mass_transfer
    return units / (1.0 + units)


def separate(
    stage: Stage, water: WaterStream, site: Site, where: str = "separator"
) -> tuple[WaterStream, GasStream]:
    """Return water and gas that leave one stage; water plus gas out is water in.

    Gas carried under goes with the water, in which it counts as dissolved again.
    """
    parted = part(water, stage.pressure, site, approach_of(stage), where=where)
    under = stage.carry_under
    if under == 0.0:
        return parted.water, parted.gas
    back = {
        ("DIC" if gas == "CO2" else gas): under * flow / water.flow
        for gas, flow in parted.gas.flows.items()
        if gas not in (VAPOUR, "Ar")
    }
    out = parted.water.changed(
        **{name: parted.water.of(name) + amount for name, amount in back.items()}
    )
    taken = {gas: (1.0 - under) * flow for gas, flow in parted.gas.flows.items()}
    return out, replace(parted.gas, flows=taken)


def run_train(
    stages: Sequence[Stage], water: WaterStream, site: Site, where: str = ""
) -> tuple[WaterStream, tuple[GasStream, ...]]:
    """Return the water that leaves the last stage, and the gas of each."""
    gases = []
    for number, stage in enumerate(stages, 1):
        water, gas = separate(stage, water, site, f"{where}stage {number}")
        gases.append(gas)
    return water, tuple(gases)
