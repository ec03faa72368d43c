"""Kinds of fault in the inputs, as a reader of the page understands them."""

from __future__ import annotations

# Only faults that do not stop a run come to the page.  A kind's own words serve where none stand here.
FAULT_WORDS = {
    "named-duplicate": "Names given twice by the same person, counted once",
    "named-self": "People who named themselves, not counted",
    "named-outside-site": "Names of people of another site, not counted as ties",
    "named-off-roster": "Names that nobody on the roster has, not counted as ties",
    "named-ambiguous": "Names that may mean several people, not counted as ties until somebody decides",
    "named-unresolved": "Names that wait for a decision, not counted as ties until then",
    "answers-without-status": "Answers of people who did not answer by the status table, not used",
    "over-cap": "People who gave more names than allowed, all names kept",
    "gave-nothing": "People who answered and named nobody",
    "empty-rows": "Empty answers where nothing says whether the person answered, taken as naming nobody",
    "no-row": "People without a row for one of the questions, taken as not having answered it",
    "no-ties": "Sites without a usable tie for a question",
    "not-on-roster": "People who are not on the roster, so without a social position",
    "dead-region": "Brain networks with a region that has no weight at all, left out",
    "equal-weights": "Brain networks whose weights are all the same",
    "no-value": "Missing values",
    "unknown-column": "Columns described that the table does not have",
    "unknown-level": "Values that the description of their column does not list",
    "unknown-visit": "Visits that the study does not declare, not used",
    "unused-value": "Values that the study file names and no row holds",
}


def fault_in_words(kind: str) -> str:
    """What a kind of fault means, in words.

    >>> fault_in_words("named-self"), fault_in_words("odd-thing")
    ('People who named themselves, not counted', 'Odd thing')
    """
    return FAULT_WORDS.get(kind) or kind.replace("-", " ").capitalize()
