"""The table of gases: one row each, and water as the vapour that goes with them.

Adding a gas is adding a row to :data:`SPECIES`; no other place names its properties.  Sources
in brackets are listed in full in ``docs/reference/sources.md``.

Henry's constant has two forms, either or both of which a row may give:

- ``henry``: A, B, C of the guideline [IAPWS G7-04], fugacity over mole fraction at the vapour
  pressure of water;
- ``solubility``: A1, A2, A3 of Weiss's form, ln(solubility) = A1 + A2 100/T + A3 ln(T/100).

A row with both takes the first down to ``henry_from`` and, below, the temperature course of
the second joined to the value of the first, so that nothing jumps.  A row with ``henry`` alone
is refused below ``henry_from``.  A row with ``solubility`` alone takes it as it is, in mol per
kg of solution and atmosphere of fugacity at 1 atm.
"""

from dataclasses import dataclass


@dataclass(frozen=True)
class Species:
    """What the formulas need to know of one gas."""

    molar_mass: float  # kg/mol
    molar_volume: float  # m3/mol, partial, at infinite dilution in water
    critical_temperature: float  # K
    critical_pressure: float  # Pa
    acentric_factor: float
    water_interaction: float  # k_ij with water vapour [Soreide & Whitson 1992]
    diffusivity: tuple[float, float]  # m2/s, J/mol: D = D0 exp(-Ea / RT)
    diffusivity_source: str
    salting_out: tuple[float, float]  # m3/kmol, m3/kmol/K [Weisenberger & Schumpe 1996]
    salting_out_generic: float = 0.1  # log10 of the activity coefficient per mol/kg of ions
    henry: tuple[float, float, float] | None = None
    henry_from: float = 0.0  # degC, lowest temperature at which ``henry`` stands
    solubility: tuple[float, float, float] | None = None
    henry_source: str = "IAPWS G7-04"
    schmidt: tuple[float, float, float, float] | None = None  # fresh water [Wanninkhof 1992]


_JAEHNE = "Jaehne, Heinz & Dietrich 1987"
_ENGINE_TABLE = "Parkhurst & Appelo 2013, fitted over 5-30 degC"

SPECIES: dict[str, Species] = {
    "CH4": Species(
        molar_mass=16.0425e-3,
        molar_volume=35.3e-6,
        critical_temperature=190.56,
        critical_pressure=4.599e6,
        acentric_factor=0.011,
        water_interaction=0.485,
        diffusivity=(3.047e-6, 18360.0),
        diffusivity_source=_JAEHNE,
        salting_out=(0.0022, -0.524e-3),
        henry=(-10.44708, 4.66491, 12.12986),
        henry_from=2.31,
        solubility=(-68.8862, 101.4956, 28.7314),
        henry_source="IAPWS G7-04; below 2.31 degC the course of Wiesenburg & Guinasso 1979",
        schmidt=(1897.8, -114.28, 3.2902, -0.039061),
    ),
    "CO2": Species(
        molar_mass=44.0095e-3,
        molar_volume=33.0e-6,
        critical_temperature=304.13,
        critical_pressure=7.3773e6,
        acentric_factor=0.2239,
        water_interaction=0.1896,
        diffusivity=(5.019e-6, 19510.0),
        diffusivity_source=_JAEHNE,
        salting_out=(-0.0172, -0.338e-3),
        salting_out_generic=0.066,
        solubility=(-60.2409, 93.4517, 23.3585),
        henry_source="Weiss 1974",
        schmidt=(1911.1, -118.11, 3.4527, -0.041320),
    ),
    "N2": Species(
        molar_mass=28.0134e-3,
        molar_volume=33.0e-6,
        critical_temperature=126.19,
        critical_pressure=3.3958e6,
        acentric_factor=0.0372,
        water_interaction=0.4778,
        diffusivity=(4.442e-6, 19150.0),
        diffusivity_source=_ENGINE_TABLE,
        salting_out=(-0.0010, -0.605e-3),
        henry=(-9.67578, 4.72162, 11.70585),
        henry_from=4.97,
        solubility=(-59.6274, 85.7661, 24.3696),
        henry_source="IAPWS G7-04; below 4.97 degC the course of Weiss 1970",
        schmidt=(1970.7, -131.45, 4.1390, -0.052106),
    ),
    "Ar": Species(
        molar_mass=39.948e-3,
        molar_volume=32.0e-6,
        critical_temperature=150.69,
        critical_pressure=4.863e6,
        acentric_factor=-0.0022,
        water_interaction=0.4778,  # of nitrogen
        diffusivity=(3.3565e-6, 18410.0),
        diffusivity_source="2.0e-9 m2/s at 25 degC, activation energy of oxygen",
        salting_out=(0.0057, -0.485e-3),
        henry=(-8.40954, 4.29587, 10.52779),
        henry_from=0.04,
        solubility=(-55.6578, 82.0262, 22.5929),
        henry_source="IAPWS G7-04; below 0.04 degC the course of Weiss 1970",
    ),
    "O2": Species(
        molar_mass=31.9988e-3,
        molar_volume=31.7e-6,
        critical_temperature=154.58,
        critical_pressure=5.043e6,
        acentric_factor=0.0222,
        water_interaction=0.4778,  # of nitrogen
        diffusivity=(3.9439e-6, 18410.0),
        diffusivity_source=_ENGINE_TABLE,
        salting_out=(0.0, -0.334e-3),
        henry=(-9.44833, 4.43822, 11.42005),
        henry_from=1.0,
        solubility=(-58.3877, 85.8079, 23.8439),
        henry_source="IAPWS G7-04; below 1 degC the course of Weiss 1970",
        schmidt=(1800.6, -120.10, 3.7818, -0.047608),
    ),
    "H2S": Species(
        molar_mass=34.081e-3,
        molar_volume=34.9e-6,
        critical_temperature=373.1,
        critical_pressure=9.0e6,
        acentric_factor=0.1005,
        water_interaction=0.19,
        diffusivity=(3.5243e-6, 18410.0),
        diffusivity_source=_ENGINE_TABLE,
        salting_out=(-0.0333, 0.0),
        henry=(-4.51499, 5.23538, 4.42126),
        henry_from=0.0,
        henry_source="IAPWS G7-04",
    ),
}

#: Columns in which compiled rows carry the gases of a lake.
LAKE_GASES = ("CH4", "CO2", "N2", "Ar", "O2", "H2S")

#: Water as a component of the gas phase: critical temperature K, pressure Pa, acentric factor.
WATER_CRITICAL = (647.096, 22.064e6, 0.3443)

#: k_ij of the pair CH4-CO2, which is a law that the user can switch.
METHANE_CARBON_DIOXIDE = 0.0919  # Knapp et al. 1982

#: The name under which water vapour appears in compositions.
VAPOUR = "H2O"
