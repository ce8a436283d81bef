"""Constants of nature and conventions that more than one room uses."""

GAS_CONSTANT = 8.314462618  # J mol-1 K-1, CODATA 2018 (exact)
ZERO_CELSIUS = 273.15  # K
ATMOSPHERE = 101325.0  # Pa, the standard atmosphere (exact)

# Molar masses in kg/mol, IUPAC 2021 (conventional values)
WATER_MASS = 18.01528e-3
SODIUM_MASS = 22.990e-3
POTASSIUM_MASS = 39.098e-3
MAGNESIUM_MASS = 24.305e-3
CALCIUM_MASS = 40.078e-3
CHLORIDE_MASS = 35.453e-3
SULFATE_MASS = 96.06e-3
BICARBONATE_MASS = 61.017e-3
CALCITE_MASS = 100.087e-3
LIME_MASS = 74.093e-3  # Ca(OH)2

# Dry air by mole fraction: N2, O2 and Ar of the 1976 standard atmosphere, CO2 of 2024
DRY_AIR = {"N2": 0.78084, "O2": 0.20946, "Ar": 0.00934, "CO2": 0.00042}
