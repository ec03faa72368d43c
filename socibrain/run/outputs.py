"""The files that a run leaves behind, as bytes by name."""

from __future__ import annotations

from collections.abc import Mapping

import pandas as pd

from socibrain.cohort.audit import Audit
from socibrain.cohort.table import Cohort, Column
from socibrain.link.finding import Findings
from socibrain.measures.catalogue import all_measures
from socibrain.run.crate import crate
from socibrain.run.folder import arrays_bytes, csv_bytes, json_bytes, parquet_bytes

Files = dict[str, bytes]

LEDGER_SAYS = {
    "stage": "step of the flow that is not reached, or the measure or family that has no value",
    "side": "social, brain or link",
    "person": "person's id, empty when a whole site is meant",
    "site": "site",
    "visit": "visit, empty when the person as a whole is meant",
    "reason": "why",
}
FINDINGS_SAY = {
    "id": "hypothesis", "scale": "what a unit is", "outcome": "column of persons.csv",
    "predictor": "column of persons.csv", "adjust": "adjustments", "n": "people analysed",
    "n_sites": "sites analysed",
    "estimate": "standardised within-site slope: within-site SDs of outcome per within-site SD of predictor",
    "raw_estimate": "within-site slope in the units of the columns",
    "se": "standard error of estimate", "ci_low": "lower end of the interval of estimate (1 - alpha)",
    "ci_high": "upper end of the same", "statistic": "Wald t of the within-site slope",
    "df": "Satterthwaite degrees of freedom",
    "contextual": "slope of the site mean, standardised by the same SDs",
    "contextual_se": "standard error of contextual",
    "variance_ratio": "site variance over residual variance",
    "p_permutation": "p by shuffles within sites", "p_family": "the same, step-down max-|t| over the family",
    "shuffles": "shuffles run", "exhaustive": "whether every distinct arrangement was enumerated",
    "smallest_p": "smallest p that was attainable",
    "status": "ok, boundary (site variance 0), refused or failed", "reason": "why, where refused or failed",
    "notes": "what was coded, dropped or advised on the way",
    "role": "confirmatory or exploratory", "family": "hypotheses corrected together",
    "check_difference": "largest difference from the same fit by statsmodels",
}  # fmt: skip


def of_audit(audit: Audit) -> Files:
    """Files of an audit."""
    return {
        "ledger.csv": csv_bytes(audit.ledger),
        "ledger.json": _said(LEDGER_SAYS),
        "problems.csv": csv_bytes(audit.problems),
        "flow.csv": csv_bytes(audit.flow),
    }


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
    return {
        "ledger.csv": csv_bytes(ledger),
        "ledger.json": _said(LEDGER_SAYS),
        "problems.csv": csv_bytes(cohort.problems),
        "flow.csv": csv_bytes(cohort.flow),
        "persons.csv": csv_bytes(cohort.persons),
        "persons.json": json_bytes({name: _entry(column) for name, column in cohort.columns.items()}),
        "sites.csv": csv_bytes(cohort.sites),
        "sites.json": _dictionary(cohort.sites),
        "regions.parquet": parquet_bytes(cohort.regions),
        "regions.json": _dictionary(cohort.regions),
        "partitions.parquet": parquet_bytes(cohort.partitions),
        "partitions.json": _said({"community": "consensus community of the region, from 1 within a person"}),
    }


def of_findings(findings: Findings) -> Files:
    """Findings, what their columns mean, and the null behind every p."""
    return {
        "findings.csv": csv_bytes(findings.table),
        "findings.json": _said({n: FINDINGS_SAY[n] for n in map(str, findings.table.columns)}),
        "nulls.npz": arrays_bytes({each.hypothesis.id: each.null for each in findings.findings}),
    }


def with_record(files: Files, record: Mapping[str, object]) -> Files:
    """The files with the record of the run, and its provenance in the open RO-Crate form."""
    files = files | {"run.json": json_bytes(record)}
    return files | {"ro-crate-metadata.json": json_bytes(crate(record, files))}


def _entry(column: Column) -> dict[str, object]:
    said: dict[str, object] = {"LongName": column.label, "Description": column.description}
    extra = {
        "Units": column.unit, "Reading": column.reading, "Undefined": column.undefined,
        "Source": column.source, "Lowest": column.low, "Highest": column.high,
    }  # fmt: skip
    return said | {name: value for name, value in extra.items() if value not in ("", None)}


def _dictionary(table: pd.DataFrame) -> bytes:
    """Data dictionary of a table whose measure columns are ``origin.measure``."""
    said: dict[str, object] = {}
    for name in map(str, table.columns):
        each = all_measures().get(name.split(".")[-1])
        if each and "." in name:
            said[name] = {
                "LongName": each.label, "Description": each.says, "Units": each.unit,
                "Reading": each.reading, "Undefined": each.undefined, "Source": each.source,
                "Lowest": each.low, "Highest": each.high,
            }  # fmt: skip
        else:
            said[name] = {"Description": name.replace("_", " ")}
    return json_bytes(said)


def _said(says: dict[str, str]) -> bytes:
    return json_bytes({name: {"Description": text} for name, text in says.items()})
