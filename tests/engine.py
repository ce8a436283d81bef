"""Run the independent aqueous-geochemistry engine for live cross-checks.

Only the tests know it.  Its constant of CH4 is refitted to IAPWS G7-04, since the one of its
database makes CH4 8 to 28 % too soluble.
"""

from importlib.resources import files

import numpy as np

# log10 K(mol/kg/atm) = A + B T + C/T + D log10 T, a fit of G7-04 to 4e-6
CORRECTED_METHANE = """
PHASES
Mtg(g)
    Mtg = Mtg
    -analytic -93.4510999 -6.73554929e-3 4160.58940 31.7883992
    -T_c 190.6; -P_c 45.40; -Omega 0.008
END
"""


def run(package, blocks, columns, punch, preamble="", gas_only=False):
    """Run blocks of input, each one solution (or one gas step), and return columns of numbers.

    Parameters
    ----------
    package : module
        The engine's Python package.
    blocks : list of str
        Input, one simulation each, ended by END.
    columns : list of str
        Names of what is punched.
    punch : str
        Body of USER_PUNCH.
    preamble : str, optional
        Phases to define first.
    gas_only : bool, optional
        Keep the row of the gas step, not that of the solution before it.
    """
    engine = package.Phreeqc()
    database = files(package.__name__) / "databases" / "phreeqc.dat"
    assert engine.LoadDatabase(str(database)) == 0
    output = "SELECTED_OUTPUT\n-reset false\n-state true\nUSER_PUNCH\n-headings "
    text = "\n".join([preamble, output + " ".join(columns), punch, *blocks, ""])
    assert engine.RunString(text) == 0, engine.GetErrorString()
    found = engine.GetSelectedOutput()
    state = "react" if gas_only else "i_soln"
    rows = [i for i, value in enumerate(found["state"]) if str(value).strip() == state]
    assert len(rows) == len(blocks)
    return {name: np.array([float(found[name][i]) for i in rows]) for name in columns}
