"""The stages of the work in order, each leaving its outputs in the run folder."""

from __future__ import annotations

import json
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path

import pandas as pd
from joblib import cpu_count

from socibrain.cohort.assemble import measure_study
from socibrain.cohort.audit import Audit, audit_study
from socibrain.cohort.columns import numeric_columns
from socibrain.cohort.gather import gather, input_files, named_tables
from socibrain.cohort.table import Cohort
from socibrain.documents import nearest
from socibrain.errors import DataRefused, DocumentRefused, Fault, Faults, Refusal
from socibrain.link.answer import link as answer_hypotheses
from socibrain.link.finding import Findings
from socibrain.measures.catalogue import all_measures
from socibrain.plan.planfile import Plan, check_columns, read_plan
from socibrain.report.material import ReportInput
from socibrain.report.page import render_report
from socibrain.run import outputs
from socibrain.run.folder import RunFolder
from socibrain.run.record import VERSION, Clock, digests, packages
from socibrain.sources.begin import begin as first_study_file
from socibrain.sources.decisions import DECISIONS, write_suggestions
from socibrain.sources.study import Study, read_study
from socibrain.tasks.finished import file_digest

Tell = Callable[[str], None]


class RunChanged(Refusal):
    """What a run was made from is no longer what lies there."""

    exit_code = 6


@dataclass(frozen=True)
class Answer:
    """A plan answered: its findings, the cohort they are about, and the record of the run."""

    plan: Plan
    cohort: Cohort
    findings: Findings
    record: Mapping[str, object]

    @property
    def table(self) -> pd.DataFrame:
        """One row per hypothesis."""
        return self.findings.table

    @property
    def refusals(self) -> tuple[Fault, ...]:
        """Hypotheses that this study cannot answer: where the plan asks them, and why not."""
        return tuple(
            self.plan.document.fault(
                ("hypotheses", number),
                "unanswerable",
                f"'{finding.hypothesis.id}' cannot be answered: {finding.reason}",
                "take it out, or change plan or study so that it can be; ledger.csv tells who lacks what",
            )
            for number, finding in enumerate(self.findings.findings)
            if finding.status == "refused"
        )


def silent(_: str) -> None:
    """Tell nobody."""


def default_folder(document: Path) -> Path:
    """runs/<id> for a study or plan file, by the name it gives itself."""
    text = document.read_text(encoding="utf-8-sig", errors="replace") if document.is_file() else ""
    for line in text.splitlines():
        key, _, value = line.partition(":")
        if key in ("plan", "study") and value.strip():
            name = value.split("#")[0].strip().strip("\"'")
            if name.replace("-", "").replace("_", "").isalnum():
                return Path("runs") / name
    return Path("runs") / document.stem


def begin(folder: str | Path) -> Path:
    """Write a first study file, with comments, for what lies in a folder.

    Returns its path.  Raises `DataRefused` when there is one already or nothing is found.
    """
    path = Path(folder) / "study.yaml"
    if path.exists():
        raise DataRefused(
            Fault(str(path), "", "exists", "there is a study file already", "edit it, or move it away first")
        )
    text = first_study_file(Path(folder))
    RunFolder(Path(folder)).write({"study.yaml": text.encode()})
    return path


def audit(
    study: Study | str | Path,
    *,
    out: str | Path | None = None,
    workers: int | None = None,
    tell: Tell = silent,
) -> Audit:
    """What a study holds, what was left out of it and why; written to ``out`` when given."""
    study = study if isinstance(study, Study) else read_study(study)
    folder = _opened(out, study)
    found, gathered = audit_study(study, version=VERSION, workers=workers or cpu_count(), done=_teller(tell))
    if folder:
        folder.write(outputs.of_audit(found))
        faults = Faults()
        added = write_suggestions(study, gathered.open_names, faults)
        faults.refuse_if_grave()
        if names := len(gathered.open_names):
            tell(f"{names} names wait for a decision in {study.path(DECISIONS)} ({added} new)")
    return found


def measure(
    study: Study | str | Path,
    *,
    out: str | Path | None = None,
    workers: int | None = None,
    tell: Tell = silent,
) -> Cohort:
    """Networks to numbers for everyone in a study; tables written to ``out`` when given."""
    study = study if isinstance(study, Study) else read_study(study)
    folder, clock = _opened(out, study), Clock()
    cohort = _measured(study, folder, workers, tell, clock)
    if folder:
        record = _record(study, None, clock)
        folder.write(outputs.with_record(outputs.of_cohort(cohort), record))
    return cohort


def link(
    plan: str | Path,
    *,
    out: str | Path | None = None,
    workers: int | None = None,
    tell: Tell = silent,
) -> Answer:
    """Answer the hypotheses of a plan; everything written to ``out`` when given."""
    plan_read = read_plan(plan)
    study = _study_of(plan_read)
    folder, clock = _opened(out, study), Clock()
    options = plan_read.options(study.says.visits)
    check_columns(plan_read, numeric_columns(gather(study, Faults())))
    cohort = _measured(study, folder, workers, tell, clock)
    tell(f"testing {len(plan_read.says.hypotheses)} hypotheses with {options.shuffles} shuffles")
    with clock.stage("link"):
        findings = answer_hypotheses(cohort, plan_read.says.hypotheses, options)
    record = _record(study, plan_read, clock)
    if folder:
        files = outputs.of_cohort(cohort, findings) | outputs.of_findings(findings)
        folder.write(outputs.with_record(files, record))
    return Answer(plan_read, cohort, findings, record)


def report(answer: Answer, path: str | Path) -> Path:
    """Write the page of an answered plan; returns its path."""
    path, says = Path(path), answer.plan.says
    material = ReportInput(
        title=str(answer.record["study_title"]),
        question=says.question,
        study_id=f"{answer.record['study']}, plan {says.plan}",
        cohort=answer.cohort,
        findings=answer.findings,
        record=answer.record,
    )
    RunFolder(path.parent).write({path.name: render_report(material).encode()})
    return path


def report_run(run: str | Path, *, workers: int | None = None, tell: Tell = silent) -> Path:
    """Write report.html into the folder of a finished run; returns its path.

    Finished work is recalled, not repeated.  Raises `RunChanged` when an input, the plan or the
    version is no longer what the run was made from.
    """
    run = Path(run)
    recorded = run / "run.json"
    if not recorded.is_file():
        raise DataRefused(
            Fault(
                str(run),
                "",
                "no-run",
                "there is no finished run here",
                "run `socibrain link PLAN --out` first",
            )
        )
    try:
        record = json.loads(recorded.read_text(encoding="utf-8"))
    except ValueError:
        record = None
    if not isinstance(record, dict) or not {"socibrain", "study_file", "study_digest"} <= record.keys():
        raise DataRefused(
            Fault(
                str(recorded),
                "",
                "no-record",
                "is not the record of a run",
                "answer the plan anew: socibrain link",
            )
        )
    if not record.get("plan_file"):
        raise DataRefused(
            Fault(
                str(recorded),
                "",
                "no-plan",
                "this run measured, but answered no plan",
                "run `socibrain link`",
            )
        )
    plan = Path(record["plan_file"])
    _refuse_changes(record, recorded, plan)
    answer = link(plan, workers=workers, tell=tell, out=run)
    return report(answer, run / "report.html")


def catalogue() -> pd.DataFrame:
    """Every measure with its passport, one row each."""
    rows = [
        {
            "name": each.name, "side": each.side, "scale": each.scale, "label": each.label,
            "says": each.says, "unit": each.unit, "low": each.low, "high": each.high,
            "reading": each.reading, "undefined": each.undefined,
            "needs": ", ".join(sorted(each.needs)), "source": each.source,
        }
        for each in all_measures().values()
    ]  # fmt: skip
    return pd.DataFrame(rows)


def no_such_measure(name: str) -> str:
    """What to say about a measure that does not exist."""
    return f"there is no measure '{name}'; {nearest(name, all_measures())}"


def _opened(out: str | Path | None, study: Study) -> RunFolder | None:
    """The run folder, shown to be writable and to hold no table of the study that could be overwritten."""
    if out is None:
        return None
    tables = [study.document.path, *(study.path(file) for file in named_tables(study))]
    if Path(out).resolve() in {table.resolve().parent for table in tables}:
        raise DataRefused(
            Fault(
                str(out),
                "",
                "holds-inputs",
                "holds what the study reads",
                "give results a folder of their own",
            )
        )
    folder = RunFolder(Path(out))
    folder.open()
    return folder


def _measured(
    study: Study, folder: RunFolder | None, workers: int | None, tell: Tell, clock: Clock
) -> Cohort:
    with clock.stage("measure"):
        return measure_study(
            study,
            version=VERSION,
            memory=folder.memory if folder else None,
            workers=workers or cpu_count(),
            done=_teller(tell),
        )


def _teller(tell: Tell) -> Callable[[int, int], None]:
    """Tell of every fiftieth network and of the last."""

    def done(count: int, of: int) -> None:
        if count % 50 == 0 or count == of:
            tell(f"{count} of {of} brain networks done")

    return done


def _study_of(plan: Plan) -> Study:
    if plan.study_path.resolve() == plan.document.path.resolve():
        raise DocumentRefused(
            plan.document.fault(("study",), "same-file", "is the plan itself", "name the study file")
        )
    if not plan.study_path.is_file():
        raise DocumentRefused(
            plan.document.fault(("study",), "missing-file", "there is no such study file", "correct the path")
        )
    return read_study(plan.study_path)


def _record(study: Study, plan: Plan | None, clock: Clock) -> dict[str, object]:
    record: dict[str, object] = {
        "socibrain": VERSION,
        "packages": packages(),
        "study": study.says.study,
        "study_title": study.says.title,
        "study_file": study.document.path.as_posix(),
        "study_digest": file_digest(study.document.path),
        "study_says": study.says.model_dump(mode="json"),
        "inputs": digests(study.folder, input_files(gather(study, Faults()))),
        "started": clock.started,
        "seconds": clock.seconds,
    }
    if plan:
        record |= {
            "plan": plan.says.plan,
            "plan_file": plan.document.path.as_posix(),
            "plan_digest": file_digest(plan.document.path),
            "plan_says": plan.says.model_dump(mode="json"),
        }
    return record


def _refuse_changes(record: dict[str, object], recorded: Path, plan: Path) -> None:
    """Refuse when anything the run was made from has changed since."""
    study_file = Path(str(record["study_file"]))
    now = {str(plan): record["plan_digest"], str(study_file): record["study_digest"]}
    inputs = record["inputs"]
    if isinstance(inputs, dict):
        now |= {str(study_file.parent / name): digest for name, digest in inputs.items()}
    changed = [
        name for name, was in now.items() if not Path(name).is_file() or file_digest(Path(name)) != was
    ]
    mend = "answer the plan anew: socibrain link"
    faults = [Fault(name, "", "changed", f"is not what {recorded} was made from", mend) for name in changed]
    if record["socibrain"] != VERSION:
        found = f"was made by version {record['socibrain']}, this is {VERSION}"
        faults.append(Fault(str(recorded), "", "version", found, mend))
    if faults:
        raise RunChanged(*faults)
