"""``python -m strata``: the command line."""

from strata.cli import main

main()
