"""A plant at work: from its feed to return water, product and vent, and what it all costs.

The units are in the modules beside this one.  Here they are put in order, gas is routed, power
is added up and the balance of every element is struck over the whole plant.
"""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cache, partial
from typing import Any

from strata.errors import ComputationError
from strata.gas import speciate
from strata.lake.site import Site
from strata.plant import power
from strata.plant.chemistry import density_of, free_gases, gas_pressure, laws_of
from strata.plant.lime import KILN_CARBON_DIOXIDE, LimedStream, add_lime
from strata.plant.plan import Plant, Return
from strata.plant.riser import RiserFlow, lift, pump_pressure
from strata.plant.separator import run_train
from strata.plant.streams import (
    NO_GAS,
    GasStream,
    WaterStream,
    element_flows,
    imbalance,
    joined_gas,
    joined_water,
)
from strata.plant.wash import wash_gas
from strata.species import VAPOUR
from strata.water.density import in_situ_temperature
from strata.water.stability import standard_gravity

#: Largest relative error in the balance of an element before a plant refuses to go on.
BALANCE = 1e-10
#: log10 of calcite saturation above which pipes and packing scale within weeks (practice).
SCALING = 0.3


_gravity = cache(standard_gravity)


@dataclass(frozen=True)
class Operation:
    """What a plant makes of its feed, per second."""

    returned: WaterStream  # the feed, treated
    wash_returned: WaterStream | None  # wash water, used; None without a wash
    product: GasStream
    vented: GasStream
    lime: float  # mol/s of Ca(OH)2
    solids: float  # mol/s of calcite taken out
    kiln_carbon_dioxide: float  # mol/s given off in making the lime
    power: Mapping[
        str, float
    ]  # W by name; "electric" is made, "net" is left, all else is used
    balance: Mapping[str, float]  # element -> (in - out) / throughput
    streams: Mapping[str, WaterStream | GasStream] = field(default_factory=dict)
    look: Callable[[], dict[str, str]] = dict  # for what a user should act on

    @property
    def findings(self) -> dict[str, str]:
        """Return what a user should act on by its kind; worked out when it is asked for."""
        return self.look()

    @property
    def warnings(self) -> tuple[str, ...]:
        """Return what a user should act on."""
        return tuple(self.findings.values())

    @property
    def recovery(self) -> float:
        """Return the share of the methane fed that is in the product."""
        fed = self.streams["feed"]
        methane = fed.flow * fed.of("CH4")  # type: ignore[union-attr]
        return self.product.of("CH4") / methane if methane > 0.0 else 0.0


def operate(
    plant: Plant, feed: WaterStream, wash_feed: WaterStream | None, site: Site
) -> Operation:
    """Return what a plant does with its feed and wash water.

    Parameters
    ----------
    plant : Plant
        As set on the day (``timetable.plant_on``).
    feed, wash_feed : WaterStream
        What intake and wash intake draw, at the load of the day.
    site : Site

    Raises
    ------
    strata.OutOfRangeError, strata.ComputationError
        If a unit cannot do what is asked of it, naming plant and unit; or if an element does
        not balance to 1e-10.
    """
    limed = LimedStream(feed) if plant.lime is None else add_lime(plant.lime, feed, site)
    water, gases = run_train(plant.stages, limed.water, site, f"plant {plant.name}, ")
    routed = {
        way: [
            gas for gas, stage in zip(gases, plant.stages, strict=True) if stage.gas_to == way
        ]
        for way in ("product", "wash", "vent", "return")
    }
    used = {"auxiliary": plant.delivery.auxiliary_power}
    washed_water, washed_gas = wash_feed, []
    if plant.wash is not None and wash_feed is not None:
        raw = _brought_to(plant, routed["wash"], plant.wash.pressure, site, used)
        done = wash_gas(plant.wash, raw, wash_feed, site, f"plant {plant.name}, wash")
        washed_water, washed_gas = done.water, [done.gas]
    product = _delivered(plant, [*routed["product"], *washed_gas], site, used)
    vented = _brought_to(plant, routed["vent"], site.air_pressure, site, used)
    water = _dissolved_again(plant, routed["return"], water, site, used)
    water = replace(
        water, temperature=water.temperature + plant.return_water.temperature_change
    )
    if washed_water is not None and plant.return_wash is not None:
        washed_water = replace(
            washed_water,
            temperature=washed_water.temperature + plant.return_wash.temperature_change,
        )
    used["pump"] = float(_pumping(plant, feed, limed.water, wash_feed, site))
    electric = plant.electric_efficiency * power.thermal_power(product)
    used_sum = sum(used.values())
    balance = imbalance(
        element_flows([feed, *([wash_feed] if wash_feed else [])], lime=limed.lime),
        element_flows(
            [water, *([washed_water] if washed_water else [])],
            [product, vented],
            limed.settled,
        ),
    )
    _check(plant, balance)
    operation = Operation(
        returned=water,
        wash_returned=washed_water,
        product=product,
        vented=vented,
        lime=limed.lime,
        solids=limed.settled,
        kiln_carbon_dioxide=limed.lime * KILN_CARBON_DIOXIDE,
        power={**used, "electric": electric, "net": electric - used_sum},
        balance=balance,
        streams=_streams(
            feed, limed.water, gases, wash_feed, washed_water, water, product, vented
        ),
    )
    return replace(operation, look=partial(_findings, plant, limed, feed, operation, site))


def _streams(
    feed: WaterStream,
    limed: WaterStream,
    gases: Sequence[GasStream],
    wash_feed: WaterStream | None,
    washed: WaterStream | None,
    returned: WaterStream,
    product: GasStream,
    vented: GasStream,
) -> dict[str, WaterStream | GasStream]:
    """Return every stream by name, in the order of the process."""
    named: dict[str, WaterStream | GasStream] = {"feed": feed}
    if limed is not feed:
        named["limed feed"] = limed
    named |= {f"gas of stage {number}": gas for number, gas in enumerate(gases, 1)}
    if wash_feed is not None and washed is not None:
        named |= {"wash water": wash_feed, "used wash water": washed}
    return named | {"return water": returned, "product": product, "vent": vented}


def _brought_to(
    plant: Plant, gases: list[GasStream], pressure: float, site: Site, used: dict[str, float]
) -> GasStream:
    """Return gases joined at a pressure; what compression costs is added to ``used``.

    Up to the pressure of the air it counts as vacuum, above as compression.
    """
    for gas in gases:
        whole = _compression(plant, gas, pressure)
        vacuum = _compression(plant, gas, min(site.air_pressure, pressure))
        used["vacuum"] = used.get("vacuum", 0.0) + vacuum
        used["compression"] = used.get("compression", 0.0) + whole - vacuum
    return joined_gas(gases, pressure)


def _compression(plant: Plant, gas: GasStream, pressure: float) -> float:
    """Return the power to bring one stream to a pressure [W]."""
    delivery = plant.delivery
    return power.compression_power(
        gas,
        pressure,
        plant.compressor_efficiency,
        delivery.compressor_stages,
        delivery.cooling_temperature,
    )


def _delivered(
    plant: Plant, gases: list[GasStream], site: Site, used: dict[str, float]
) -> GasStream:
    """Return the product at its pressure: as asked, or that of its weakest part or the air."""
    parts = [gas for gas in gases if gas.total > 0.0]
    if not parts:
        return NO_GAS
    asked = plant.delivery.product_pressure
    lowest = max(site.air_pressure, min(gas.pressure for gas in parts))
    return _brought_to(plant, parts, lowest if asked is None else asked, site, used)


def _dissolved_again(
    plant: Plant,
    gases: list[GasStream],
    water: WaterStream,
    site: Site,
    used: dict[str, float],
) -> WaterStream:
    """Return the water with gas put back into it at the pressure of its outlet."""
    gas = _brought_to(plant, gases, pressure_at(plant.return_water.depth, site), site, used)
    if gas.dry <= 0.0:
        return water
    added = {
        ("DIC" if name == "CO2" else name): flow / water.flow
        for name, flow in gas.flows.items()
        if name not in (VAPOUR, "Ar")
    }
    return water.changed(**{name: water.of(name) + x for name, x in added.items()})


def pressure_at(depth: float, site: Site) -> float:
    """Return the pressure [Pa] at a depth of fresh water."""
    return site.air_pressure + 1000.0 * _gravity(site.latitude) * depth


def _pumping(
    plant: Plant,
    feed: WaterStream,
    limed: WaterStream,
    wash_feed: WaterStream | None,
    site: Site,
) -> float:
    """Return the power of all pumps [W].

    Feed: what the riser asks for, or without one a head of ``pump_head`` and the pressure of
    the first stage above the air's.  Water that leaves the last stage under vacuum is
    brought back to the pressure of the air; wash water to that of its tower.
    """
    first, last = plant.stages[0].pressure, plant.stages[-1].pressure
    if plant.riser is None:
        head = 1000.0 * _gravity(site.latitude) * plant.pump_head
        rise = head + max(first - site.air_pressure, 0.0)
    else:
        rise = _riser_pressure(plant, limed, site)
    total = power.pump_power(feed.flow, rise, plant.pump_efficiency)
    total += power.pump_power(feed.flow, site.air_pressure - last, plant.pump_efficiency)
    if plant.wash is not None and wash_feed is not None:
        total += power.pump_power(
            wash_feed.flow, plant.wash.pressure - site.air_pressure, plant.pump_efficiency
        )
    return total


def _riser_pressure(plant: Plant, water: WaterStream, site: Site) -> float:
    """Return what the pumps of the risers must add [Pa]; negative is throttled away."""
    assert plant.riser is not None
    return pump_pressure(
        plant.riser, *_in_riser(plant, water, site), water.flow, **_laws(site)
    )


def lift_of(plant: Plant, water: WaterStream, site: Site, demanded: bool = True) -> RiserFlow:
    """Return how the risers of a plant work with the water they get.

    Parameters
    ----------
    plant : Plant
        With a riser.
    water : WaterStream
        After lime, if there is any.
    site : Site
    demanded : bool
        Whether the flow is that of the stream; else it is the self-lifted one.
    """
    assert plant.riser is not None
    flow = water.flow if demanded else None
    return lift(plant.riser, *_in_riser(plant, water, site), flow, **_laws(site))


def _laws(site: Site) -> dict[str, Any]:
    """Return gravity and laws as the riser takes them."""
    return {"gravity": _gravity(site.latitude), "laws": laws_of(site)}


def _in_riser(
    plant: Plant, water: WaterStream, site: Site
) -> tuple[float, float, float, Mapping[str, float], float, float]:
    """Return depth, temperature, salinity, free gases, outlet and foot pressure of a riser.

    The lake above the intake weighs as much as the water of the intake, which is within 0.3 %.
    """
    gravity = _gravity(site.latitude)
    middle = site.air_pressure + 500.0 * gravity * plant.intake_depth
    weight = density_of(water, site, middle) * gravity
    foot = site.air_pressure + weight * plant.intake_depth
    return (
        plant.intake_depth,
        float(in_situ_temperature(water.temperature, middle)),
        water.salinity,
        free_gases(water, site, foot).gases,
        plant.stages[0].pressure,
        foot,
    )


def _check(plant: Plant, balance: Mapping[str, float]) -> None:
    """Refuse a plant whose books do not close."""
    for element, error in balance.items():
        if not abs(error) <= BALANCE:
            raise ComputationError(
                f"plant {plant.name}: {element} in and out differ by {error:.1e} of it;"
                f" {BALANCE:g} is allowed"
            )


def _findings(
    plant: Plant, limed: LimedStream, feed: WaterStream, operation: Operation, site: Site
) -> dict[str, str]:
    """Return what a user should act on, by its kind."""
    found = {}
    if limed.overdosed:
        found["lime"] = (
            f"lime is over-dosed: {limed.lime / feed.flow:.1f} mol/m3 exceed the free CO2"
            f" of the feed; the limed water has pH {limed.ph:.1f}"
        )
    scale = _calcite_saturation(operation.returned, site)
    if scale > SCALING:
        found["scale"] = (
            f"return water is {10.0**scale:.0f} times saturated with calcite: it will scale"
        )
    for number, (outlet, water) in enumerate(outlets(plant, operation), 1):
        around = pressure_at(outlet.depth, site)
        inside = gas_pressure(water, site, around)
        if inside > around:
            found[f"gas at outlet {number}"] = (
                f"gas does not stay dissolved in the water returned at {outlet.depth:g} m:"
                f" its pressure is {inside / 1e5:.1f} bar against {around / 1e5:.1f} bar there"
            )
    return found


def _calcite_saturation(water: WaterStream, site: Site) -> float:
    """Return log10 of the saturation with calcite; -inf without calcium."""
    if water.of("calcium") <= 0.0:
        return float("-inf")
    done = speciate(
        water.temperature,
        water.salinity,
        water.of("DIC"),
        water.of("alkalinity"),
        site.air_pressure,
        calcium=water.of("calcium"),
    )
    return float(done.calcite_saturation)


def outlets(plant: Plant, operation: Operation) -> tuple[tuple[Return, WaterStream], ...]:
    """Return every outlet and its water; wash water without an outlet is mixed in."""
    if operation.wash_returned is None:
        return ((plant.return_water, operation.returned),)
    if plant.return_wash is None:
        both = joined_water([operation.returned, operation.wash_returned])
        return ((plant.return_water, both),)
    return (
        (plant.return_water, operation.returned),
        (plant.return_wash, operation.wash_returned),
    )
