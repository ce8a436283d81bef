"""Columns of the table of gases and places in the vector of laws.

Functions compiled by ``strata.compiled`` read them as constants; naming it here puts this file
into the digest that names their cache.
"""

# Columns of one gas
IAPWS = 0  # A, B, C
WEISS = 3  # A1, A2, A3
JOIN_AT = 6  # degC; below it the second form counts
JOIN = 7  # what ties the second form to the first; nan where it stands alone
VOLUME = 8
SALTING = 9
SALTING_SLOPE = 10
SALTING_GENERIC = 11
ROOT_A = 12  # sqrt(a) of Peng-Robinson at the critical point
ALPHA = 13  # kappa of its temperature function
CRITICAL = 14  # K
CO_VOLUME = 15  # b, m3/mol
WIDTH = 16

# Places in the vector of laws
SALTING_MODE = 0  # 0 none, 1 Weisenberger & Schumpe, 2 generic
SALTING_PART = 1
ION_NUMBER = 2
ION_MASS = 3
ION_STRENGTH = 4
PRESSURE_TERM = 5
REAL_GAS = 6
WATER_VAPOUR = 7
LAWS = 8
