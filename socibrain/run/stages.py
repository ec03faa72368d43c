"""The stages of the work in order, each leaving its outputs in the run folder."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from pathlib import Path

import pandas as pd
from joblib import cpu_count

from socibrain.cohort.assemble import measure_study
from socibrain.cohort.audit import Audit, audit_study
from socibrain.cohort.columns import numeric_columns
from socibrain.cohort.gather import Gathered, gather
from socibrain.cohort.table import Cohort
from socibrain.documents import nearest
from socibrain.errors import DataRefused, DocumentRefused, Fault, Faults
from socibrain.link.answer import link as answer_hypotheses
from socibrain.link.finding import Findings
from socibrain.measures.catalogue import all_measures
from socibrain.plan.planfile import Plan, check_columns, read_plan
from socibrain.report.material import ReportInput
from socibrain.report.page import render_report
from socibrain.run import outputs
from socibrain.run.again import read_record, refuse_other_inputs, unchanged_plan
from socibrain.run.folder import RunFolder
from socibrain.run.record import VERSION, Clock, make_record
from socibrain.sources.begin import begin as first_study_file
from socibrain.sources.decisions import DECISIONS, write_suggestions
from socibrain.sources.study import Study, read_study

Tell = Callable[[str], None]


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


def study_folder(study: Path) -> Path:
    """Where a study's results go unless told: runs/<study id>."""
    return Path("runs") / read_study(study).says.study


def plan_folder(plan: Path) -> Path:
    """Where a plan's results go unless told: runs/<plan id>."""
    return Path("runs") / read_plan(plan).says.plan


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
    faults = Faults()
    try:
        gathered = gather(study, faults)
    except DataRefused:
        if folder:
            folder.write(outputs.of_problems(faults))
        raise
    found = audit_study(gathered, faults, version=VERSION, workers=workers or cpu_count(), done=_teller(tell))
    if folder:
        folder.write(outputs.of_audit(found))
        unwritable = Faults()
        added = write_suggestions(study, gathered.open_names, unwritable)
        unwritable.refuse_if_grave()
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
    folder, clock, faults = _opened(out, study), Clock(), Faults()
    gathered = gather(study, faults)
    cohort = _measured(gathered, faults, folder=folder, workers=workers, tell=tell, clock=clock)
    if folder:
        record = make_record(gathered, None, clock, folder)
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
    folder = _opened(out, study)
    answer = _answer(plan_read, study, folder, workers=workers, tell=tell)
    if folder:
        files = outputs.of_cohort(answer.cohort, answer.findings) | outputs.of_findings(answer.findings)
        folder.write(outputs.with_record(files, answer.record))
    return answer


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

    Measures are recalled and the hypotheses tested again, which gives the same numbers; nothing but
    the page is written.  Raises `RunChanged` when the version, the study, the plan or any input is
    no longer what the run was made from, or when there are inputs more or less.
    """
    run = Path(run)
    record = read_record(run)
    plan = read_plan(unchanged_plan(run, record))
    answer = _answer(plan, _study_of(plan), RunFolder(run), workers=workers, tell=tell)
    refuse_other_inputs(run, record, answer.record)
    return report(replace(answer, record=record), run / "report.html")


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


def _answer(plan: Plan, study: Study, folder: RunFolder | None, *, workers: int | None, tell: Tell) -> Answer:
    """The plan's hypotheses tested on the measured study; nothing is written but finished work."""
    clock, faults = Clock(), Faults()
    options = plan.options(study.says.visits)
    gathered = gather(study, faults)
    check_columns(plan, numeric_columns(gathered))
    cohort = _measured(gathered, faults, folder=folder, workers=workers, tell=tell, clock=clock)
    with clock.stage("link"):
        findings = answer_hypotheses(cohort, plan.says.hypotheses, options)
    return Answer(plan, cohort, findings, make_record(gathered, plan, clock, folder))


def _opened(out: str | Path | None, study: Study) -> RunFolder | None:
    """The run folder, shown to be writable and to hold no table of the study that could be overwritten."""
    if out is None:
        return None
    tables = [study.document.path, *(study.path(file) for file in study.tables)]
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
    gathered: Gathered,
    faults: Faults,
    *,
    folder: RunFolder | None,
    workers: int | None,
    tell: Tell,
    clock: Clock,
) -> Cohort:
    with clock.stage("measure"):
        return measure_study(
            gathered,
            faults,
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
