"""Write ``docs/validation/properties.md``: every property against its source of truth.

Run from the top of the checkout: ``python scripts/validate_properties.py``.
"""

import sys
from pathlib import Path

import numpy as np

TOP = Path(__file__).resolve().parent.parent
sys.path[:0] = [str(TOP), str(TOP / "tests")]

import property_checks  # noqa: E402

HEAD = """\
# Water and gas properties: what was compared, and what came out

Written by `scripts/validate_properties.py` in one run; the comparisons are those of
`tests/property_checks.py`, which the tests hold to the tolerances below.  Errors are ours
minus theirs, or relative where the unit is %.  "IPhreeqc" is an independent
aqueous-geochemistry engine; its CH4 constant was refitted to IAPWS G7-04, because the one in
its database makes CH4 8 to 28 % too soluble.
"""

TAIL = """\
## Where it falls short

- **CO2 dimer.** The engine lets dissolved CO2 pair up; this model does not. At 0.12 mol/kg
  that is 0.4 % of the CO2, at 1 mol/kg 3 %; comparisons count a dimer as two of CO2.
- **Cold CH4.** IAPWS G7-04 and Wiesenburg & Guinasso 1979 are 2.9 % apart at 5 degC. G7-04
  governs to its foot (2.31 degC, where it is the less soluble of the two, which is the safe
  side); below, the course of the other is joined to it.
- **Cold lapse rate.** Near the temperature of largest density the thermal expansion passes
  through nil; the lapse rate is then good to 6e-6 K/bar, up to 2 % of itself.
- **CO2 in the gas above 20 bar.** Peng-Robinson is up to 3.2 % off in the fugacity of CH4
  with CO2 between 20 and 50 bar.
- **Near the onset of degassing** the share released magnifies any error of Henry's
  constant: 2 % where 4 % is released.
- **Volume of CO2 in water.** The literature spans 31.4 to 35.9 cm3/mol. It is a key of the
  site; 100 mol/m3 of CO2 make 0.45 kg/m3 of difference between the extremes.
- **Lime above pH 12** lies outside Davies' activities, and magnesium would form brucite
  above pH 10, which is not computed.
"""


COLUMNS = (
    "function", "source of truth", "range", "n", "largest", "rms", "tolerance", "unit", "note"
)  # fmt: skip


def cell(value: float) -> str:
    """Return a number with three digits."""
    return f"{value:.2g}" if value else "0"


def rows(checks):
    """Yield one line of the table per check."""
    yield "| " + " | ".join(COLUMNS) + " |"
    yield "| --- | --- | --- | ---: | ---: | ---: | ---: | --- | --- |"
    for check in checks:
        errors = np.abs(np.asarray(check.errors()))
        numbers = (errors.max(), np.sqrt(np.mean(errors**2)), check.tolerance)
        cells = " | ".join(cell(float(number)) for number in numbers)
        mark = "" if errors.max() <= check.tolerance else " **beyond tolerance**"
        yield (
            f"| {check.function} | {check.source} | {check.span} | {errors.size} | {cells} "
            f"| {check.unit} | {check.note}{mark} |"
        )


def main() -> None:
    """Write the page."""
    page = TOP / "docs" / "validation" / "properties.md"
    page.parent.mkdir(parents=True, exist_ok=True)
    parts = [
        HEAD,
        "## Water\n",
        "\n".join(rows(property_checks.WATER)) + "\n",
        "## Gas\n",
        "\n".join(rows(property_checks.GAS)) + "\n",
        TAIL,
    ]
    page.write_text("\n".join(parts))
    print(page.relative_to(TOP))


if __name__ == "__main__":
    main()
