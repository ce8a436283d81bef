"""What ``demo`` and ``compare`` share: run, write, print."""

import re
import shlex
from collections.abc import Sequence
from pathlib import Path

from strata import results
from strata.cli import numbers, output, terminal
from strata.inputs import load_all
from strata.report import tables
from strata.report.dossier import dossier
from strata.results import NO_PLAN
from strata.studies.compare import Comparison, compare
from strata.studies.today import accounts_today, separator_today

DOSSIER = "dossier.html"


def run(
    lake: Path,
    plans: Sequence[Path],
    limits: Path,
    out: Path | None,
    years: float,
    step_days: float,
    as_json: bool,
    seed: int = 0,
) -> bool:
    """Compare plans, write what was asked for, print the verdicts.

    Returns
    -------
    bool
        Whether a plan breaches a limit.
    """
    terminal.show_warnings()
    terminal.announce_compilation()
    site, operators, rules = load_all(lake, plans, limits)
    names = [NO_PLAN, *(plan.name for plan in operators)]
    files = {name: out / f"{_file_name(name)}.nc" for name in names} if out else {}
    if out:
        output.writable_folder(out)
        for path in (*files.values(), out / DOSSIER):
            output.writable_file(path)
    with terminal.progress(f"{len(names)} projections of {years:g} years") as progress:
        found = compare(
            site,
            operators,
            rules,
            years=years,
            step_days=step_days,
            seed=seed,
            progress=progress,
        )
    for name, path in files.items():
        results.write(found.results[name], path)
    if out and rules is not None:
        words = ["strata", "compare", str(lake), *map(str, plans), "--limits", str(limits)]
        words += ["--years", f"{years:g}", "--step-days", f"{step_days:g}"]
        words += ["--seed", str(seed), "-o", str(out)]
        dossier(
            found.results,
            found.verdicts,
            rules,
            out / DOSSIER,
            lake=site,
            plans={plan.name: plan for plan in operators},
            separate=separator_today(site, operators),
            accounts=accounts_today(site, operators),
            command=shlex.join(words),
        )
    if as_json:
        terminal.report_json(_as_numbers(found, out))
    else:
        terminal.report(_as_text(site.site.name, found, out))
    return found.breached


def _file_name(plan: str) -> str:
    """Return the name of a plan as a file can bear it."""
    return re.sub(r"[^a-z0-9]+", "-", plan.lower()).strip("-") or "plan"


def _as_text(lake: str, found: Comparison, out: Path | None) -> str:
    """Return the comparison for a reader."""
    ledgers = "\n".join(tables.ledger_line(result) for result in found.results.values())
    where = f"dossier: {out / DOSSIER}" if out else "-o FOLDER writes a dossier with figures"
    return (
        f"{lake}, {tables.comparison(found.results, found.verdicts)}\n\n{ledgers}\n\n{where}"
    )


def _as_numbers(found: Comparison, out: Path | None) -> dict[str, object]:
    """Return the comparison for a script."""
    plans = {
        name: numbers.outcome(result) | {"verdict": found.verdicts[name].as_dicts()}
        for name, result in found.results.items()
    }
    return {"plans": plans, "dossier": str(out / DOSSIER) if out else None}
