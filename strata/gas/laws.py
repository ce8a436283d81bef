"""Which corrections are in force: each has a name and can be switched off."""

from collections.abc import Mapping
from dataclasses import asdict, dataclass, fields
from typing import Any, TypeAlias

from strata import ranges
from strata.errors import OutOfRangeError
from strata.species import METHANE_CARBON_DIOXIDE

WEISENBERGER_SCHUMPE = "weisenberger-schumpe"
GENERIC = "generic"
NO_SALTING_OUT = "none"
PENG_ROBINSON = "peng-robinson"
IDEAL = "ideal"

_SALTING_OUT = {
    WEISENBERGER_SCHUMPE: WEISENBERGER_SCHUMPE,
    GENERIC: GENERIC,
    NO_SALTING_OUT: NO_SALTING_OUT,
}
_GAS_PHASE = {PENG_ROBINSON: PENG_ROBINSON, IDEAL: IDEAL}


#: What a public function takes as ``laws``.
LawsLike: TypeAlias = "Laws | Mapping[str, Any] | None"


@dataclass(frozen=True)
class Laws:
    """Corrections to Henry's law and the ideal gas.

    Parameters
    ----------
    salting_out : {"weisenberger-schumpe", "generic", "none"}
        By ions after [Weisenberger & Schumpe 1996], which governs; by 0.1 x ionic strength,
        the weaker rule of thumb; or not at all (also ``False``).
    pressure_term : bool
        The partial molar volumes: Henry's constants rise with pressure, the dissolved gases
        take their own room in the water, and the vapour pressure has its Poynting factor.
    gas_phase : {"peng-robinson", "ideal"}
        Fugacity coefficients of the gas mixture.
    k_ij : float
        Peng-Robinson interaction of CH4 with CO2.
    water_vapour : bool
        Water vapour is part of the gas.
    magnesium_share, calcium_share : float
        Of the cation equivalents; the rest is sodium, the anion bicarbonate.
    """

    salting_out: str = WEISENBERGER_SCHUMPE
    pressure_term: bool = True
    gas_phase: str = PENG_ROBINSON
    k_ij: float = METHANE_CARBON_DIOXIDE
    water_vapour: bool = True
    magnesium_share: float = 0.0
    calcium_share: float = 0.0

    def __post_init__(self) -> None:
        """Refuse what is not a law."""
        ranges.named("law salting_out", self.salting_out, _SALTING_OUT)
        ranges.named("law gas_phase", self.gas_phase, _GAS_PHASE)
        for name in ("pressure_term", "water_vapour"):
            if not isinstance(getattr(self, name), bool):
                raise OutOfRangeError(
                    f"law {name} is {getattr(self, name)!r}; true or false is allowed"
                )
        ranges.within("law k_ij", self.k_ij, (-0.5, 0.5), "", "Peng & Robinson 1976")
        both = self.magnesium_share + self.calcium_share
        for name in ("magnesium_share", "calcium_share"):
            ranges.within(
                f"law {name}", getattr(self, name), (0.0, 1.0), "", "share of cations"
            )
        ranges.within(
            "magnesium_share + calcium_share", both, (0.0, 1.0), "", "share of cations"
        )

    @classmethod
    def of(cls, laws: LawsLike) -> "Laws":
        """Return laws from a mapping of names, with the defaults for what it leaves out.

        ``False`` stands for "none" and "ideal", ``True`` for the default of a law.
        """
        if laws is None:
            return cls()
        if isinstance(laws, Laws):
            return laws
        known = {field.name: field for field in fields(cls)}
        off = {"salting_out": NO_SALTING_OUT, "gas_phase": IDEAL}
        given: dict[str, Any] = {}
        for name, value in laws.items():
            field = ranges.named("law", name, known)
            if name in off and isinstance(value, bool):
                value = field.default if value else off[name]
            given[name] = value
        return cls(**given)

    def as_mapping(self) -> dict[str, Any]:
        """Return the laws by name, as :meth:`of` takes them."""
        return asdict(self)


#: Plain Henry's law under a dry ideal gas.
PLAIN = Laws(
    salting_out=NO_SALTING_OUT,
    pressure_term=False,
    gas_phase=IDEAL,
    k_ij=0.0,
    water_vapour=False,
)
