"""The flow: counted by hand, and refusing to run when it does not add up."""

from __future__ import annotations

import pytest

from socibrain.cohort.ledger import Branch, Leaving, flow_table, ledger_table


def gone(person: str, stage: str, side: str, reason: str, visit: str = "") -> Leaving:
    return Leaving(stage, side, person, "north", visit, reason)


SOCIAL = Branch(
    "social",
    (
        ("on the roster", frozenset("abcde")),
        ("answered", frozenset("abcd")),
        ("with usable ties", frozenset("abc")),
    ),
)
BRAIN = Branch("brain", (("invited", frozenset("abcf")), ("scanned", frozenset("abf"))))
LEAVINGS = [
    gone("e", "answered", "social", "did not answer"),
    gone("d", "with usable ties", "social", "no tie"),
    gone("c", "scanned", "brain", "not scanned"),
    gone("a", "scanned", "brain", "moved", visit="2"),
]


def test_two_branches_by_hand() -> None:
    flow = flow_table([SOCIAL, BRAIN], LEAVINGS)
    assert flow["people"].tolist() == [5, 4, 3, 4, 3, 2]
    assert flow["left_out"].tolist() == [0, 1, 1, 0, 1, 2]
    assert flow["reasons"].iloc[-1] == "only in the social branch: 1; only in the brain branch: 1"


def test_a_lost_visit_is_in_the_ledger_and_not_in_the_flow() -> None:
    ledger = ledger_table(LEAVINGS)
    assert ledger[ledger["visit"] == "2"]["person"].tolist() == ["a"]
    assert flow_table([BRAIN], LEAVINGS)["left_out"].tolist() == [0, 1]


@pytest.mark.parametrize(
    "leavings",
    [
        LEAVINGS[1:],
        [*LEAVINGS, gone("a", "answered", "social", "did not answer")],
        [gone("a", "answered", "social", "did not answer"), *LEAVINGS[1:]],
    ],
    ids=["one missing", "one too many", "another person"],
)
def test_a_flow_that_does_not_add_up_fails(leavings: list[Leaving]) -> None:
    with pytest.raises(AssertionError, match="the ledger names"):
        flow_table([SOCIAL], leavings)


def test_nobody_appears_in_the_middle() -> None:
    with pytest.raises(AssertionError, match="not there before"):
        flow_table([Branch("brain", (("invited", frozenset("a")), ("scanned", frozenset("ab"))))], [])
