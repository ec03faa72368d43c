"""Arguments to stages; faults to exit codes."""

from __future__ import annotations

import json
import math
import sys
import traceback
from collections.abc import Callable
from pathlib import Path
from typing import Any

import click
import pandas as pd
from rich import box
from rich.console import Console
from rich.table import Table

from socibrain.errors import Fault, Refusal, told
from socibrain.measures.catalogue import all_measures
from socibrain.run import stages
from socibrain.run.record import VERSION
from socibrain.run.telling import finding_lines

OUR_FAULT, DATA_REFUSED, SOME_FAILED, INTERRUPTED = 1, 4, 5, 130
LEAST_WIDTH = 96
"""Characters that the widest table needs; a narrower terminal breaks its lines instead of cutting cells."""
aloud = Console(stderr=True, highlight=False, markup=False, emoji=False, soft_wrap=True)

as_json = click.option("--json", "as_json", is_flag=True, help="Write results to stdout as JSON.")
out_folder = click.option(
    "--out", type=click.Path(path_type=Path), help="Run folder [runs/<study or plan id>]."
)
worker_count = click.option(
    "--workers", type=click.IntRange(min=1), default=None, help="Worker processes [all cores]."
)


@click.group(context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(VERSION, prog_name="socibrain")
def entry() -> None:
    """Does where people stand among others go with how their brains are organised?

    For group research only: never for diagnosing people, or for choosing or ranking them.
    """


@entry.command()
@click.argument("folder", type=click.Path(path_type=Path, exists=True, file_okay=False))
def begin(folder: Path) -> None:
    """Write a first study file for what lies in FOLDER."""
    click.echo(str(stages.begin(folder)))


@entry.command()
@click.argument("study", type=click.Path(path_type=Path))
@out_folder
@worker_count
@as_json
def audit(study: Path, out: Path | None, workers: int | None, as_json: bool) -> None:
    """Tell what was found, matched and left out, and why; works on half-collected data."""
    out = out or stages.study_folder(study)
    found = stages.audit(study, out=out, workers=workers, tell=_tell)
    if as_json:
        _json({"flow": found.flow, "sites": found.sites, "problems": found.problems, "ledger": found.ledger})
    else:
        _print("Flow", found.flow)
        _print("Sites", found.sites)
        click.echo(f"who is still to answer or to be scanned: {out / 'ledger.csv'}\n")
        if len(found.names):
            _print("What was written", found.names)
        if len(found.problems):
            kinds = found.problems.groupby(["kind", "grave"], sort=False).size().reset_index(name="times")
            _print("Problems", kinds)
    grave = [fault for fault in _faults(found.problems) if fault.grave]
    _tell_lesser(found.problems, out)
    if grave:
        _tell(told(grave))
        raise SystemExit(DATA_REFUSED)


@entry.command()
@click.argument("study", type=click.Path(path_type=Path))
@out_folder
@worker_count
@as_json
def measure(study: Path, out: Path | None, workers: int | None, as_json: bool) -> None:
    """Turn networks into tidy tables with data dictionaries."""
    out = out or stages.study_folder(study)
    cohort = stages.measure(study, out=out, workers=workers, tell=_tell)
    _tell_lesser(cohort.problems, out)
    if as_json:
        _json({"persons": cohort.persons, "sites": cohort.sites})
    else:
        _print("Flow", cohort.flow)
        click.echo(
            f"{out / 'persons.csv'}: {len(cohort.persons)} rows, {len(cohort.persons.columns)} columns"
        )


@entry.command()
@click.argument("plan", type=click.Path(path_type=Path))
@out_folder
@worker_count
@as_json
def link(plan: Path, out: Path | None, workers: int | None, as_json: bool) -> None:
    """Answer the hypotheses of PLAN."""
    out = out or stages.plan_folder(plan)
    answer = stages.link(plan, out=out, workers=workers, tell=_tell)
    _tell_lesser(answer.cohort.problems, out)
    if as_json:
        _json({"findings": answer.table})
    else:
        for finding in answer.findings.findings:
            click.echo("\n  ".join(finding_lines(finding, alpha=answer.findings.options.alpha)))
        click.echo(f"{out / 'findings.csv'}")
    if answer.refusals:
        _tell(told(answer.refusals, in_full=True))
        raise SystemExit(DATA_REFUSED)
    if (answer.table["status"] == "failed").any():
        raise SystemExit(SOME_FAILED)


@entry.command()
@click.argument("run", type=click.Path(path_type=Path))
@worker_count
def report(run: Path, workers: int | None) -> None:
    """Write the page of the run in folder RUN."""
    click.echo(str(stages.report_run(run, workers=workers, tell=_tell)))


@entry.command()
@click.argument("name", required=False)
@as_json
def catalogue(name: str | None, as_json: bool) -> None:
    """List every measure, or the passport of the measure called NAME."""
    table = stages.catalogue()
    if name is not None:
        if name not in all_measures():
            raise click.BadParameter(stages.no_such_measure(name), param_hint="NAME")
        table = table[table["name"] == name]
    if as_json:
        _json({"measures": table})
    elif name is None:
        for (side, scale), some in table.groupby(["side", "scale"], sort=False):
            _print(f"{side}, by {scale}", some[["name", "label"]])
        click.echo("socibrain catalogue NAME shows a measure's passport")
    else:
        for key, value in table.iloc[0].items():
            click.echo(f"{key:>10}  {value}")


def main(arguments: list[str] | None = None) -> None:
    """Run the command line; every fault becomes a message and an exit code."""
    sys.exit(_run(lambda: entry.main(args=arguments, standalone_mode=False)))


def _run(act: Callable[[], Any]) -> int:
    try:
        act()
    except Refusal as refusal:
        _tell(str(refusal))
        return refusal.exit_code
    except click.exceptions.Abort:
        aloud.print("stopped; run the same command again to go on: finished work is kept")
        return INTERRUPTED
    except click.ClickException as error:
        error.show()
        return error.exit_code
    except SystemExit as leaving:
        return int(leaving.code or 0)
    except Exception:  # our fault: say so, with what a maintainer needs
        aloud.print("this is a fault of socibrain itself; please report the lines below")
        aloud.print(traceback.format_exc())
        return OUR_FAULT
    return 0


def _tell(message: str) -> None:
    aloud.print(message)


def _json(tables: dict[str, pd.DataFrame]) -> None:
    content = {name: json.loads(table.to_json(orient="records")) for name, table in tables.items()}
    click.echo(json.dumps(content, indent=2, ensure_ascii=False))


def _print(title: str, table: pd.DataFrame) -> None:
    shown = Table(
        title=title, title_justify="left", title_style="bold", box=box.SIMPLE_HEAD, padding=(0, 1, 0, 0)
    )
    for name in table.columns:
        numeric = table[name].dtype.kind in "iuf"
        shown.add_column(str(name).replace("_", " "), justify="right" if numeric else "left", overflow="fold")
    for row in table.itertuples(index=False):
        shown.add_row(*(_cell(value) for value in row))
    width = max(LEAST_WIDTH, aloud.width)
    Console(markup=False, emoji=False, highlight=False, soft_wrap=True, width=width).print(shown)


def _cell(value: object) -> str:
    if isinstance(value, float):
        return "n/a" if math.isnan(value) else f"{value:.4g}"
    return str(value)


def _faults(problems: pd.DataFrame) -> list[Fault]:
    return [Fault(*row) for row in problems.itertuples(index=False, name=None)]


def _tell_lesser(problems: pd.DataFrame, out: Path) -> None:
    """What was found wrong and did not stop the run: each kind by its first case."""
    kinds: dict[str, list[Fault]] = {}
    for fault in _faults(problems):
        if not fault.grave:
            kinds.setdefault(fault.kind, []).append(fault)
    if not kinds:
        return
    _tell(f"problems that do not stop the run (all of them: {out / 'problems.csv'}):")
    for kind, (first, *others) in kinds.items():
        more = f" (and {len(others)} more of this kind)" if others else ""
        _tell(f"  {kind}: {first.where}  {first.found}{more}\n    to mend: {first.mend}")
