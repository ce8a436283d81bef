"""What salinity means for gas and carbonate: the ions of a bicarbonate lake.

The rule: the ions are bicarbonate with sodium, of whose place magnesium and calcium take the
shares that the site gives (of the cation equivalents).  Salinity is their mass, so it gives
the equivalents; where alkalinity says that there are more, alkalinity counts.
"""

from strata.compiled import compiled
from strata.constants import (
    BICARBONATE_MASS,
    CALCIUM_MASS,
    MAGNESIUM_MASS,
    SODIUM_MASS,
)

# m3/kmol [Weisenberger & Schumpe 1996]
_SODIUM = 0.1143
_MAGNESIUM = 0.1694
_CALCIUM = 0.1762
_BICARBONATE = 0.0967


@compiled
def mass_per_equivalent(mg_share, ca_share):
    """Return the mass of ions [kg] per mole of cation equivalents."""
    sodium = 1.0 - mg_share - ca_share
    cations = sodium * SODIUM_MASS + 0.5 * (
        mg_share * MAGNESIUM_MASS + ca_share * CALCIUM_MASS
    )
    return cations + BICARBONATE_MASS


@compiled
def equivalents_of(s, alk, mg_share, ca_share):
    """Return the cation equivalents [mol m-3] of water of salinity s [g/kg] and alkalinity."""
    of_salinity = s * (0.998 + 0.75e-3 * s) / mass_per_equivalent(mg_share, ca_share)
    return max(of_salinity, alk)


@compiled
def ionic_strength_of(s, alk, mg_share, ca_share):
    """Return the ionic strength [mol/L] by the rule of this module; see there."""
    per_equivalent = 1.0 + 0.5 * (mg_share + ca_share)
    return 1e-3 * equivalents_of(s, alk, mg_share, ca_share) * per_equivalent


@compiled
def salting_of_ions(mg_share, ca_share):
    """Return the ions' part of the salting-out [m3/kmol] and their number, per equivalent."""
    sodium = 1.0 - mg_share - ca_share
    part = (
        sodium * _SODIUM + 0.5 * (mg_share * _MAGNESIUM + ca_share * _CALCIUM) + _BICARBONATE
    )
    return part, 2.0 - 0.5 * (mg_share + ca_share)
