"""Coming back to a finished run: only when everything it was made from is still the same."""

from __future__ import annotations

import json
import os
from pathlib import Path
from typing import Any

from socibrain.errors import DataRefused, Fault, Refusal
from socibrain.run.record import VERSION
from socibrain.tasks.finished import file_digest

ANEW = "answer the plan anew: socibrain link"


class RunChanged(Refusal):
    """What a run was made from is no longer what lies there."""

    exit_code = 6


def plan_of(run: Path) -> Path:
    """The plan file that the run in folder ``run`` answered.

    Raises `DataRefused` where there is no such run, `RunChanged` when study, plan, an input or the
    version is no longer what the run was made from.
    """
    recorded = run / "run.json"
    record = _read(run, recorded)
    plan, study = (Path(os.path.normpath(run / str(record[name]))) for name in ("plan_file", "study_file"))
    was = {plan: record["plan_digest"], study: record["study_digest"]}
    was |= {study.parent / str(name): digest for name, digest in record["inputs"].items()}
    found = f"is not what {recorded} was made from"
    faults = [
        Fault(str(path), "", "changed", found, ANEW)
        for path, digest in was.items()
        if not path.is_file() or file_digest(path) != digest
    ]
    if record["socibrain"] != VERSION:
        found = f"was made by version {record['socibrain']}, this is {VERSION}"
        faults.append(Fault(str(recorded), "", "version", found, ANEW))
    if faults:
        raise RunChanged(*faults)
    return plan


def _read(run: Path, recorded: Path) -> dict[str, Any]:
    """The record, whole."""
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
