"""The files that a run leaves behind, as bytes by name."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

import pandas as pd

from socibrain.cohort.assemble import problem_table
from socibrain.cohort.audit import Audit
from socibrain.cohort.table import Cohort
from socibrain.errors import Fault
from socibrain.link.finding import Findings
from socibrain.run import dictionary
from socibrain.run.crate import crate
from socibrain.run.folder import arrays_bytes, csv_bytes, json_bytes, parquet_bytes

Files = dict[str, bytes]


def of_audit(audit: Audit) -> Files:
    """Files of an audit."""
    return _accounts(audit.ledger, audit.problems, audit.flow)


def of_problems(faults: Iterable[Fault]) -> Files:
    """All that can be told of a study whose people cannot be read."""
    return _problems(problem_table(faults))


def of_cohort(cohort: Cohort, findings: Findings | None = None) -> Files:
    """Tables of a measured cohort; the ledger with those whom a family of hypotheses leaves out."""
    ledger = cohort.ledger
    if findings is not None and len(findings.left_out):
        gone = findings.left_out
        more = pd.DataFrame(
            {
                "stage": "family " + gone["family"],
                "side": "link",
                "person": gone["person"],
                "site": gone["site"],
                "visit": findings.options.visit,
                "reason": gone["reason"],
            }
        )
        ledger = pd.concat([ledger, more], ignore_index=True)
    return _accounts(ledger, cohort.problems, cohort.flow) | {
        "persons.csv": csv_bytes(cohort.persons),
        "persons.json": json_bytes(dictionary.of_columns(cohort.columns)),
        "sites.csv": csv_bytes(cohort.sites),
        "sites.json": json_bytes(dictionary.of_table(cohort.sites)),
        "regions.parquet": parquet_bytes(cohort.regions),
        "regions.json": json_bytes(dictionary.of_table(cohort.regions)),
        "partitions.parquet": parquet_bytes(cohort.partitions),
        "partitions.json": json_bytes(dictionary.of_table(cohort.partitions)),
    }


def of_findings(findings: Findings) -> Files:
    """Findings, what their columns mean, and the null behind every p."""
    return {
        "findings.csv": csv_bytes(findings.table),
        "findings.json": json_bytes(dictionary.in_words(dictionary.FINDINGS_SAY, findings.table)),
        "nulls.npz": arrays_bytes({each.hypothesis.id: each.null for each in findings.findings}),
    }


def with_record(files: Files, record: Mapping[str, object]) -> Files:
    """The files with the record of the run, and its provenance in the open RO-Crate form."""
    files = files | {"run.json": json_bytes(record)}
    return files | {"ro-crate-metadata.json": json_bytes(crate(record, files))}


def _accounts(ledger: pd.DataFrame, problems: pd.DataFrame, flow: pd.DataFrame) -> Files:
    """Who is left out, what is wrong, and how it adds up."""
    return _problems(problems) | {
        "ledger.csv": csv_bytes(ledger),
        "ledger.json": json_bytes(dictionary.in_words(dictionary.LEDGER_SAYS, ledger)),
        "flow.csv": csv_bytes(flow),
        "flow.json": json_bytes(dictionary.in_words(dictionary.FLOW_SAYS, flow)),
    }


def _problems(problems: pd.DataFrame) -> Files:
    return {
        "problems.csv": csv_bytes(problems),
        "problems.json": json_bytes(dictionary.in_words(dictionary.PROBLEMS_SAY, problems)),
    }
