"""The column of a lake as an object: its state, its books, and how it is carried on.

The compiled loop of :mod:`strata.column.kernel` does the work; this holds its arrays,
refreshes what is held between visits of the clock, and words what the loop could not do.
"""

from collections.abc import Mapping, Sequence
from dataclasses import fields, replace

import numpy as np
from numpy.typing import NDArray

from strata.column import gases, kernel, ledger
from strata.column.air import air_table
from strata.column.inflows import Inflow, even_shares
from strata.column.laws import bed_coefficient, law_of, staircase_window
from strata.column.slow import SlowProperties, slow_properties
from strata.column.streams import Give, Source, Surroundings, Take, not_followed, stack
from strata.column.supply import supply_of
from strata.column.surface import wind_power
from strata.column.tracers import (
    SALINITY,
    TEMPERATURE,
    index,
    names,
)
from strata.column.transport import face_weights
from strata.compiled import broadcast
from strata.errors import ComputationError
from strata.lake.basin import Basin, build_basin
from strata.lake.climate import Weather
from strata.lake.site import Lake, River, Spring
from strata.species import SPECIES
from strata.water.density import (
    parcel_density,
    potential_temperature,
)
from strata.water.stability import mixed_layer_depth, standard_gravity

Array = NDArray[np.float64]

#: Turns heat into kelvin and wind stress into friction velocity, the same everywhere in a run:
#: fresh water near 23 degC (Fofonoff & Millard 1983), so that the books of heat close.
REFERENCE_DENSITY = 998.0  # kg m-3
REFERENCE_HEAT_CAPACITY = 4180.0  # J kg-1 K-1
#: Largest relative error of the books that a run may end with.
LEDGER_TOLERANCE = 1e-10
#: Gases in the order of the kernel's masses and volumes.
GASES = ("CO2", "CH4", "N2", "O2", "H2S")
#: Tracers are laid out in groups of this many.
LANES = 4


class Column:
    """A column that can be carried on in time.

    Parameters
    ----------
    lake : Lake
        The site and all that acts on it.
    values : ndarray, shape (n, m)
        Tracers of the layers in the order of :func:`strata.column.tracers.names`.
    tags : sequence of str
        Names of the passive tracers behind the standard ones.
    """

    def __init__(self, lake: Lake, values: Array, tags: Sequence[str] = ()) -> None:
        self.lake = lake
        self.tags = tuple(tags)
        self.basin: Basin = build_basin(lake.hypsography, lake.layer_faces)
        self.gravity = standard_gravity(lake.site.latitude)
        self.tracers = names(tags)
        # the compiler's loops over tracers run in fours: columns of nothing fill the last four
        width = -(-len(self.tracers) // LANES) * LANES
        values = np.pad(values, ((0, 0), (0, width - values.shape[1])))
        self.molar_mass = np.array([SPECIES[gas].molar_mass for gas in GASES])
        self.molar_volume = np.array(
            [lake.site.co2_molar_volume] + [SPECIES[gas].molar_volume for gas in GASES[1:]]
        )
        self.hydrogen = np.full(self.basin.layers, 1e-4)
        self.face_pressure, self.pressure = self._hydrostatic(values)
        self._supply = supply_of(lake, self.basin, self.tracers, width, self.heat_capacity)
        self.grid = self._grid()
        self.state = kernel.State(
            values=values,
            hydrogen=self.hydrogen,
            mixed_depth=np.array([self._first_mixed_depth(values)]),
            books=np.zeros((len(ledger.LEDGER_TERMS), width)),
            taken=np.zeros((0, width)),
        )
        self.start = self.inventory()
        count = self.basin.layers + 1
        self.seen = kernel.Seen(np.zeros(count), np.zeros(count), np.zeros(count))
        self._inflows = self._inflows_of_lake()
        self._air = air_table(lake.site)
        self.slow: SlowProperties
        self.refresh()

    @property
    def values(self) -> Array:
        """Return the tracers of the layers, (n, m); a view."""
        return self.state.values[:, : len(self.tracers)]

    @property
    def books(self) -> Array:
        """Return the running sums of the ledger since the start, (terms, m)."""
        return self.state.books[:, : len(self.tracers)]

    def inventory(self) -> Array:
        """Return the content of the lake for every tracer [tracer unit times m3]."""
        return self.basin.volume @ self.values

    def ledger_error(self) -> Array:
        """Return what the books miss, relative to the start and all that passed."""
        missing = self.start + self.books.sum(axis=0) - self.inventory()
        scale = np.abs(self.start) + np.abs(self.books).sum(axis=0)
        return np.where(scale > 0, np.abs(missing) / np.where(scale > 0, scale, 1.0), 0.0)

    def to_arrays(self) -> dict[str, Array]:
        """Return what the column must remember to go on with the same bytes."""
        state = self.state
        return {
            "values": state.values,
            "hydrogen": state.hydrogen,
            "mixed_depth": state.mixed_depth,
            "books": state.books,
            "start": self.start,
            **{f"slow_{name}": held for name, held in vars(self.slow).items()},
        }

    def from_arrays(self, arrays: Mapping[str, Array]) -> None:
        """Take up what :meth:`to_arrays` gave; the rest follows at the next refresh."""
        for name in ("values", "hydrogen", "mixed_depth", "books"):
            getattr(self.state, name)[...] = arrays[name]
        self.start = arrays["start"]
        held = {field.name: arrays[f"slow_{field.name}"] for field in fields(SlowProperties)}
        self.slow = SlowProperties(**held)

    def check_ledger(self) -> None:
        """Refuse to go on if the books of any tracer do not close.

        Raises
        ------
        strata.ComputationError
            With the tracer and the size of the fault.
        """
        error = self.ledger_error()
        if not np.all(error <= LEDGER_TOLERANCE):
            worst = int(np.argmax(error))
            raise ComputationError(
                f"the books of {self.tracers[worst]} are off by {error[worst]:.1e} of what was"
                f" there and passed; {LEDGER_TOLERANCE:.0e} is allowed"
            )

    def _hydrostatic(self, values: Array) -> tuple[Array, Array]:
        """Return absolute pressure [Pa] at the faces and the middles of the layers."""
        basin, site = self.basin, self.lake.site
        pressure = site.air_pressure + 1000.0 * self.gravity * basin.depth
        face = site.air_pressure + 1000.0 * self.gravity * basin.faces
        for _ in range(3):
            constants = self._carbonate_constants(values, pressure)
            mass, space = self._gas_load(values, constants)
            rho = broadcast(parcel_density)(
                values[:, TEMPERATURE],
                values[:, SALINITY],
                pressure,
                mass,
                space,
                site.haline_contraction,
            )
            face = site.air_pressure + np.concatenate(
                [[0.0], np.cumsum(rho * self.gravity * basin.thickness)]
            )
            pressure = 0.5 * (face[1:] + face[:-1])
        return face, pressure

    def _carbonate_constants(self, values: Array, pressure: Array) -> Array:
        """Return (n, 3) conditional constants of the carbonate system of the layers."""
        site = self.lake.site
        constants = np.empty((len(values), 3))
        gases.carbonate_rows(
            values, pressure, site.magnesium_share, site.calcium_share, constants
        )
        return constants

    def _gas_load(self, values: Array, constants: Array) -> tuple[Array, Array]:
        """Return mass [kg m-3] and volume [m3 m-3] of the dissolved gases."""
        mass, space = np.empty(len(values)), np.empty(len(values))
        gases.gas_load(
            values, constants, self.hydrogen, self.molar_mass, self.molar_volume, mass, space
        )
        return mass, space

    def _first_mixed_depth(self, values: Array) -> float:
        """Return the depth of the mixed layer as the casts show it [m]."""
        constants = self._carbonate_constants(values, self.pressure)
        mass, space = self._gas_load(values, constants)
        density = broadcast(parcel_density)(
            values[:, TEMPERATURE],
            values[:, SALINITY],
            self.pressure[0],
            mass,
            space,
            self.lake.site.haline_contraction,
        )
        return float(mixed_layer_depth(self.basin.depth, density))

    def _grid(self) -> kernel.Grid:
        """Return what never changes in a run, as the kernel wants it."""
        basin, lake = self.basin, self.lake
        weight, start = face_weights(basin.volume)
        distance = np.concatenate([[1.0], np.diff(basin.depth), [1.0]])
        mixing, rates = lake.mixing, lake.reactions
        law = law_of(mixing, basin)
        window, reach = staircase_window(basin, mixing)
        return kernel.Grid(
            volume=basin.volume,
            area=basin.area,
            face=basin.faces,
            depth=basin.depth,
            distance=distance,
            weight=weight,
            start=start,
            pressure=self.face_pressure,
            middle_pressure=self.pressure,
            physics=np.array(
                [
                    self.gravity,
                    lake.site.haline_contraction,
                    mixing.convection_efficiency,
                    mixing.overshoot,
                ]
            ),
            mixing=np.array([law.power, law.least, law.most]),
            turbulent=law.coefficient,
            at_bed=bed_coefficient(mixing, basin, REFERENCE_DENSITY),
            window=window,
            reach=reach,
            rates=np.array(
                [
                    rates.methane_oxidation,
                    rates.half_methane,
                    rates.half_oxygen,
                    rates.sulfide_oxidation,
                    rates.oxygen_demand,
                    rates.phosphate_removal,
                ]
            ),
            steady=self._supply.bed + self._supply.sources,
            decay=self._supply.decay,
            conversion=self._supply.conversion,
            molar_mass=self.molar_mass,
            molar_volume=self.molar_volume,
        )

    @property
    def heat_capacity(self) -> float:
        """Return the reference heat capacity per volume [J m-3 K-1]."""
        return REFERENCE_DENSITY * REFERENCE_HEAT_CAPACITY

    def refresh(self, slow: bool = True) -> None:
        """Work out what is held between visits of the clock, with the slow part if asked."""
        values = self.state.values
        if not np.isfinite(values).all():
            layer, tracer = np.argwhere(~np.isfinite(values))[0]
            raise self._not_a_number(layer, tracer)
        self.constants = self._carbonate_constants(values, self.pressure)
        self.gas_mass, self.gas_volume = self._gas_load(values, self.constants)
        grid = self.grid
        kernel.pair_stability(
            values,
            self.gas_mass,
            self.gas_volume,
            grid.pressure,
            grid.distance,
            grid.physics,
            self.seen.stability,
        )
        if slow:
            self.slow = slow_properties(
                values,
                self.free_co2(),
                self.face_pressure,
                self.gravity,
                self.lake.mixing.staircase_step,
            )

    def _not_a_number(self, layer: int, tracer: int) -> ComputationError:
        """Return the error for a value that is no longer a number."""
        depth = self.basin.depth[layer]
        return ComputationError(
            f"{self.tracers[tracer]} at {depth:.1f} m is no longer a number"
        )

    def free_co2(self) -> Array:
        """Return free CO2 of the layers [mol m-3]."""
        co2 = np.empty(self.basin.layers)
        gases.free_co2_rows(self.state.values, self.constants, self.hydrogen, co2)
        return co2

    def surroundings(self) -> Surroundings:
        """Return the water a plume meets, as of the last refresh."""
        return Surroundings(
            basin=self.basin,
            temperature=np.ascontiguousarray(self.values[:, TEMPERATURE]),
            salinity=np.ascontiguousarray(self.values[:, SALINITY]),
            gas_mass=self.gas_mass,
            gas_volume=self.gas_volume,
            pressure=self.pressure,
            stability=self.seen.stability[1:-1].copy(),
            haline_contraction=self.lake.site.haline_contraction,
            gravity=self.gravity,
        )

    def pressure_at(self, depth: float) -> float:
        """Return absolute pressure at a depth [Pa]."""
        return float(np.interp(depth, self.basin.faces, self.face_pressure))

    def parcel(
        self, temperature: float, salinity: float, dissolved: Mapping[str, float], depth: float
    ) -> tuple[Array, float, float]:
        """Return the tracers, gas mass [kg m-3] and gas volume [m3 m-3] of water at a depth.

        ``temperature`` is potential; ``dissolved`` maps tracer names to mol m-3.
        """
        pressure = self.pressure_at(depth)
        row = np.zeros((1, len(self.tracers)))
        row[0, TEMPERATURE], row[0, SALINITY] = temperature, salinity
        for name, amount in dissolved.items():
            row[0, index(name)] = amount
        constants = self._carbonate_constants(row, np.array([pressure]))
        mass, space = np.empty(1), np.empty(1)
        gases.gas_load(
            row, constants, np.full(1, 1e-4), self.molar_mass, self.molar_volume, mass, space
        )
        return row[0], float(mass[0]), float(space[0])

    def _inflow_source(
        self, kind: str, water: Spring | River, temperature: float, depth: float
    ) -> tuple[Source, Array]:
        """Return a spring or river at its mouth and what it carries, amount per second."""
        row, mass, space = self.parcel(temperature, water.salinity, water.dissolved, depth)
        if f"{kind}_{water.name}" in self.tags:
            row[index(f"{kind}_{water.name}", self.tags)] = 1.0
        source = Source(
            name=f"{kind} {water.name}",
            depth=depth,
            flow=water.flow,
            temperature=temperature,
            salinity=water.salinity,
            gas_mass=mass,
            gas_volume=space,
        )
        return source, water.flow * row

    def _inflows_of_lake(self) -> list[Inflow]:
        """Return all springs and rivers with what they carry."""
        found = []
        for spring in self.lake.springs:
            pressure = self.pressure_at(spring.depth)
            theta = float(potential_temperature(spring.temperature, pressure))
            source, carried = self._inflow_source("spring", spring, theta, spring.depth)
            source = replace(
                source,
                ports=spring.ports,
                port_diameter=spring.port_diameter,
                port_spacing=spring.port_spacing,
            )
            shares = None if spring.spread is None else even_shares(spring.spread, self.basin)
            found.append(Inflow(ledger.SPRINGS, source, carried, shares))
        for river in self.lake.rivers:
            source, carried = self._inflow_source("river", river, river.temperature, 0.0)
            found.append(Inflow(ledger.RIVERS, source, carried))
        return found

    def natural(self, around: Surroundings) -> list[Give]:
        """Return all springs and rivers as they enter the column as it is."""
        return [inflow.enter(around, self.lake.mixing) for inflow in self._inflows]

    def advance(
        self,
        weather: Weather,
        takes: Sequence[Take],
        gives: Sequence[Give],
        steps: int,
        dt: float,
        reference: Array | None = None,
    ) -> tuple[bool, int]:
        """Carry the column on; stop early when the feed of a plant has changed.

        Parameters
        ----------
        weather : Weather
            Held throughout.
        takes : sequence of Take
            Withdrawals.
        gives : sequence of Give
            Springs, rivers and returns.
        steps : int
            Number of steps of ``dt`` seconds.
        reference : ndarray, shape (takes, m), optional
            Feeds for which the factors in ``gives`` were found.

        Returns
        -------
        early : bool
            Whether a feed has changed.
        done : int
            Steps made.

        Raises
        ------
        strata.ComputationError
            If a value is no longer a number, or more would leave a layer than it holds.
        """
        width = self.state.values.shape[1]
        stacked = stack(takes, gives, self.basin.layers, width)
        watched = np.full((len(takes), width), np.nan)
        if reference is not None:
            watched[:, : reference.shape[1]] = reference
        self.state = self.state._replace(taken=np.zeros((len(takes), width)))
        mixing = self.lake.mixing
        held = kernel.Held(
            constants=self.constants,
            **vars(self.slow),
            air=np.array(
                [
                    weather.equilibrium_temperature,
                    weather.exchange_coefficient * self.basin.area[0] / self.heat_capacity,
                    wind_power(
                        weather.wind_speed,
                        mixing.wind_efficiency,
                        mixing.drag_coefficient,
                        REFERENCE_DENSITY,
                    ),
                    weather.rain,
                    weather.evaporation,
                ]
            ),
            exchange=self._air.exchange(weather.wind_speed, self.values[0], width),
            reference=watched,
            from_bed=self._supply.bed_total,
            from_sources=self._supply.source_total,
            **vars(stacked),
        )
        code, done, layer, tracer = kernel.advance(
            self.state, self.grid, held, self.seen, steps, dt
        )
        if code == kernel.NOT_FINITE:
            raise self._not_a_number(layer, tracer)
        if code == kernel.NOT_FOLLOWED:
            lost = gives[layer].source
            assert lost is not None  # only plumes of sources are followed
            raise not_followed(lost)
        if code == kernel.OVERDRAWN:
            raise ComputationError(
                f"more water would leave the layer at {self.basin.depth[layer]:.1f} m in a"
                " step than it can give"
            )
        return code == kernel.FEED_CHANGED, int(done)
