"""Gases at the surface of a lake: the table of those that cross it, and how fast they do."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from strata import ranges
from strata.column.surface import air_exchange
from strata.column.tracers import (
    DIC,
    METHANE,
    NITROGEN,
    OXYGEN,
    SALINITY,
    SULFIDE,
    TEMPERATURE,
)
from strata.constants import DRY_AIR
from strata.gas.laws import Laws
from strata.gas.table import gas_table
from strata.lake.site import Site
from strata.species import SPECIES

Array = NDArray[np.float64]

#: Free gases that cross the surface, by tracer column.
AT_SURFACE = {DIC: "CO2", METHANE: "CH4", NITROGEN: "N2", OXYGEN: "O2", SULFIDE: "H2S"}


@dataclass(frozen=True)
class AirTable:
    """Gases at the surface, in the order of ``AT_SURFACE``, as compiled code wants them."""

    air_pressure: float  # Pa
    rows: Array
    laws: Array
    shares: Array  # mole fractions of dry air
    schmidt: Array
    diffusion: Array

    def exchange(self, wind_speed: float, surface: Array, width: int) -> Array:
        """Return transfer velocity [m s-1] and equilibrium with air, (width, 2) by tracer.

        ``surface`` are the tracers of the top layer.

        Raises
        ------
        strata.OutOfRangeError
            If the surface is warmer or colder than the Schmidt numbers stand for.
        """
        temperature = ranges.within(
            "surface temperature",
            surface[TEMPERATURE],
            (0.0, 30.0),
            "degC",
            "Schmidt numbers of Wanninkhof 1992",
        )
        found = np.empty((len(AT_SURFACE), 2))
        air_exchange(
            wind_speed,
            float(temperature),
            surface[SALINITY],
            self.air_pressure,
            self.rows,
            self.laws,
            self.shares,
            self.schmidt,
            self.diffusion,
            found,
        )
        exchange = np.zeros((width, 2))
        exchange[list(AT_SURFACE)] = found
        return exchange


def air_table(site: Site) -> AirTable:
    """Return the table for the air and the laws of a site."""
    gases = list(AT_SURFACE.values())
    table = gas_table(gases, Laws.of(site.laws))
    return AirTable(
        air_pressure=site.air_pressure,
        rows=table.rows,
        laws=table.laws,
        shares=np.array([DRY_AIR.get(gas, 0.0) for gas in gases]),
        schmidt=np.array([SPECIES[gas].schmidt or (0.0,) * 4 for gas in gases]),
        diffusion=np.array([SPECIES[gas].diffusivity for gas in gases]),
    )
