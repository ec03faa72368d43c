"""Coming back to a finished run: only when everything it was made from is still the same."""

from __future__ import annotations

import json
import os
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from socibrain.errors import DataRefused, Fault, Refusal
from socibrain.run.record import VERSION
from socibrain.sources.decisions import DECISIONS
from socibrain.tasks.finished import file_digest

ANEW = "answer the plan anew: socibrain link"


class RunChanged(Refusal):
    """What a run was made from is no longer what lies there."""

    exit_code = 6


def read_record(run: Path) -> dict[str, Any]:
    """The record of the finished run in a folder.

    Raises `DataRefused` where there is none, or where the run answered no plan.
    """
    recorded = run / "run.json"
    if not recorded.is_file():
        found, mend = "there is no finished run here", "run `socibrain link PLAN --out` first"
        raise DataRefused(Fault(str(run), "", "no-run", found, mend))
    try:
        record = json.loads(recorded.read_text(encoding="utf-8"))
    except ValueError:
        record = None
    measured = {"socibrain", "study_file", "study_digest", "inputs"}
    if not isinstance(record, dict) or not measured <= record.keys():
        raise DataRefused(Fault(str(recorded), "", "no-record", "is not the record of a run", ANEW))
    if not {"plan_file", "plan_digest"} <= record.keys():
        found = "this run measured, but answered no plan"
        raise DataRefused(Fault(str(recorded), "", "no-plan", found, ANEW))
    return record


def unchanged_plan(run: Path, record: Mapping[str, Any]) -> Path:
    """The plan file that the run answered, when everything it was made from is still the same.

    Raises `RunChanged` with every file that is not.
    """
    plan, study = (Path(os.path.normpath(run / str(record[name]))) for name in ("plan_file", "study_file"))
    was = {plan: record["plan_digest"], study: record["study_digest"]}
    was |= {study.parent / str(name): digest for name, digest in record["inputs"].items()}
    found = f"is not what {run / 'run.json'} was made from"
    faults = [
        Fault(str(path), "", "changed", found, ANEW)
        for path, digest in was.items()
        if not path.is_file() or file_digest(path) != digest
    ]
    if record["socibrain"] != VERSION:
        found = f"was made by version {record['socibrain']}, this is {VERSION}"
        faults.append(Fault(str(run / "run.json"), "", "version", found, ANEW))
    if faults:
        raise RunChanged(*faults)
    return plan


def refuse_other_inputs(run: Path, was: Mapping[str, Any], now: Mapping[str, Any]) -> None:
    """Raise `RunChanged` with every input that the run did not have or has no longer, or other decisions."""
    found = f"was not there when {run / 'run.json'} was made"
    added = sorted(now["inputs"].keys() - was["inputs"].keys())
    gone = sorted(was["inputs"].keys() - now["inputs"].keys())
    faults = [Fault(name, "", "added", found, ANEW) for name in added]
    if was.get("decisions_digest") != now["decisions_digest"]:
        found = f"holds other decisions than when {run / 'run.json'} was made"
        faults.append(Fault(DECISIONS, "", "changed", found, ANEW))
    faults += [Fault(name, "", "gone", "is no longer read by the study", ANEW) for name in gone]
    if faults:
        raise RunChanged(*faults)
