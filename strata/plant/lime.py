"""CO2 bound as calcite before the separator, and what that does to the water.

The chemistry is :func:`strata.gas.dose_lime`; here it changes a stream: calcium and
bicarbonate in its salinity, calcite in suspension, solids taken out.
"""

from dataclasses import dataclass, replace

from scipy.optimize import brentq

from strata.constants import BICARBONATE_MASS, CALCITE_MASS, CALCIUM_MASS
from strata.gas import Limed, dose_lime
from strata.gas.ions import equivalents_of
from strata.lake.site import Site
from strata.plant.chemistry import free_gases
from strata.plant.plan import Lime
from strata.plant.streams import WaterStream

#: mol CO2 given off per mol of Ca(OH)2 made from limestone: 0.785 t per t of CaO (IPCC 2006
#: Guidelines, vol. 3, table 2.1) times the molar masses of CaO and CO2; fuel not included.
KILN_CARBON_DIOXIDE = 0.785 * 56.0774 / 44.0095


@dataclass(frozen=True)
class LimedStream:
    """Water after liming, and what went in and out beside it."""

    water: WaterStream
    lime: float = 0.0  # mol/s of Ca(OH)2
    settled: float = 0.0  # mol/s of calcite taken out
    ph: float = float("nan")
    overdosed: bool = False


def add_lime(lime: Lime, water: WaterStream, site: Site) -> LimedStream:
    """Return the stream with its CO2 bound: water and lime in, water and calcite out.

    Salinity changes by the calcium and the bicarbonate (as which all alkalinity counts) that
    stay in solution.
    """
    dose = _dose_to_target(lime, water, site) if lime.dose is None else lime.dose
    done = _dosed(lime, water, site, dose)
    calcite = float(done.calcite)
    alkalinity, calcium = float(done.alkalinity), float(done.calcium)
    ions = (alkalinity - water.of("alkalinity")) * BICARBONATE_MASS
    ions += (calcium - water.of("calcium")) * CALCIUM_MASS
    limed = water.changed(DIC=float(done.dic), alkalinity=alkalinity, calcium=calcium)
    return LimedStream(
        replace(
            limed,
            salinity=max(water.salinity + ions, 0.0),  # kg per m3 of water is g/kg to 0.3 %
            solids=water.solids + calcite * (1.0 - lime.settled) * CALCITE_MASS,
        ),
        water.flow * dose,
        water.flow * calcite * lime.settled,
        float(done.ph),
        bool(done.overdosed),
    )


def _dosed(lime: Lime, water: WaterStream, site: Site, dose: float) -> Limed:
    """Return what a dose [mol m-3] does."""
    alkalinity = water.of("alkalinity")
    cations = equivalents_of(
        water.salinity, alkalinity, site.magnesium_share, site.calcium_share
    )
    return dose_lime(
        water.temperature,
        water.salinity,
        water.of("DIC"),
        alkalinity,
        dose,
        water.of("calcium"),
        magnesium=0.5 * site.magnesium_share * cations,
        approach=lime.approach,
    )


def _dose_to_target(lime: Lime, water: WaterStream, site: Site) -> float:
    """Return the dose [mol m-3] that leaves the target of free CO2; nil if there is less."""
    target = lime.target_co2 or 0.0
    excess = free_gases(water, site).gases["CO2"] - target
    if lime.target_co2 is None or excess <= 0.0:
        return 0.0

    def over(dose: float) -> float:
        return float(_dosed(lime, water, site, dose).co2) - target

    high = 1.2 * excess + 1.0
    while over(high) > 0.0:
        high *= 1.5
    return float(brentq(over, 0.0, high, xtol=1e-7))
