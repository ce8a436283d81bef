"""Salinity from conductivity and from ions."""

import numpy as np
import pytest
from property_checks import MIXES

from strata import OutOfRangeError, water


def test_conductivity_at_25_degrees_stays():
    assert float(water.conductivity_at_25(5.3, 25.0)) == 5.3


def test_warm_water_conducts_more_than_the_same_water_at_25_degrees():
    # ISO 7888: 1.91 % per kelvin
    assert float(water.conductivity_at_25(5.0, 35.0)) == pytest.approx(5.0 / 1.191)
    assert float(water.salinity_from_conductivity(5.0, 35.0, 0.8)) == pytest.approx(
        4.0 / 1.191
    )


def test_ions_add_up_to_their_mass():
    # 40 mmol per kg of water of sodium bicarbonate, 84.007 g/mol
    salt = water.salt_from_ions({"Na": 0.04, "HCO3": 0.04})
    assert float(salt.salinity) == pytest.approx(1e3 * 3.36028 / 1003.36028, rel=1e-5)
    assert float(salt.ionic_strength) == pytest.approx(0.04)
    assert float(salt.charge_balance) == 0.0


@pytest.mark.parametrize(
    ("kind", "literature"),
    # haline contraction per g/kg of ions at 20 degC, from the densities of the engine
    [("NaHCO3", 0.73e-3), ("Mg(HCO3)2", 0.81e-3), ("NaMgKCa", 0.755e-3), ("NaCl", 0.72e-3)],
)
def test_the_contraction_depends_on_the_ions(kind, literature):
    salt = water.salt_from_ions({ion: 0.04 * n for ion, n in MIXES[kind].items()})
    assert float(salt.haline_contraction) == pytest.approx(literature, rel=0.01)


def test_the_contraction_of_sea_salt_is_that_of_teos_10():
    # composition of standard sea water [Millero et al. 2008], diluted to about 5 g/kg
    sea = {"Na": 0.4861, "Mg": 0.0548, "Ca": 0.0107, "K": 0.0106, "Cl": 0.5658, "SO4": 0.0293}
    salt = water.salt_from_ions({ion: amount / 7.0 for ion, amount in sea.items()})
    assert float(salt.haline_contraction) == pytest.approx(0.7587e-3, rel=0.01)


def test_salinity_and_contraction_broadcast():
    salt = water.salt_from_ions({"Na": np.array([0.01, 0.05]), "HCO3": np.array([0.01, 0.05])})
    assert salt.salinity.shape == (2,)


@pytest.mark.parametrize(
    ("ions", "words"),
    [
        ({}, "empty"),
        ({"Na": 0.0, "HCO3": 0.0}, "no salt"),
        ({"Na": 0.04, "HCO3": 0.03}, "differ by +14 %; 10 % is allowed"),
        ({"Na": 0.04, "HCO": 0.04}, "did you mean HCO3?"),
        ({"Na": -0.04, "HCO3": 0.04}, "amount of Na is -0.04 mol/kg"),
    ],
)
def test_a_list_of_ions_that_cannot_be_is_refused(ions, words):
    with pytest.raises(OutOfRangeError) as refusal:
        water.salt_from_ions(ions)
    assert words in str(refusal.value)


def test_a_conductivity_factor_in_the_wrong_unit_is_refused():
    with pytest.raises(OutOfRangeError, match="conductivity factor is 8 g/kg per mS/cm"):
        water.salinity_from_conductivity(5.0, 25.0, 8.0)
