"""What a page is made from, gathered once."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from socibrain.cohort.table import Cohort, Column
from socibrain.link.finding import Findings


@dataclass(frozen=True)
class ReportInput:
    """Everything the page needs.

    ``findings`` is None when nothing was asked of the cohort yet.  ``record`` is the run record as
    it stands in run.json (``socibrain`` is the version; ``study_says`` and ``plan_says`` what the
    two files say).  ``plan_text`` is the plan file as written, '' to leave it out.
    """

    title: str
    question: str
    study_id: str
    cohort: Cohort
    findings: Findings | None
    record: Mapping[str, object] = field(default_factory=dict)
    plan_text: str = ""

    @property
    def questions(self) -> tuple[str, ...]:
        """Questions asked about others, in the study's order."""
        return tuple(dict.fromkeys(network.question for network in self.cohort.social))

    def side(self, column: Column) -> str:
        """Where a measure comes from: 'social', 'brain', or '' for what is no measure of ours."""
        if not column.measure:
            return ""
        return "social" if column.origin in self.questions else "brain"

    def brain_columns(self) -> list[Column]:
        """Measures of brains that the person table holds."""
        known = self.cohort.columns
        return [
            known[name]
            for name in self.cohort.persons.columns
            if name in known and self.side(known[name]) == "brain"
        ]
