"""The terms of the ledger of every tracer, and which row of the books each has."""

#: Terms of the ledger, in the order of its rows; each signed, into the lake positive.
LEDGER_TERMS = (
    "surface",
    "rain",
    "evaporation",
    "outlet",
    "rivers",
    "springs",
    "bed",
    "reactions",
    "intake",
    "return",
    "sources",
)
SURFACE, RAIN, EVAPORATION, OUTLET, RIVERS, SPRINGS = range(6)
BED, REACTIONS, INTAKE, RETURN, SOURCES = range(6, len(LEDGER_TERMS))
