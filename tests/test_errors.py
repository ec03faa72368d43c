"""Refusals have one shape and carry all faults."""

from __future__ import annotations

import dataclasses

import pytest

from socibrain.errors import THE_REST, DataRefused, DocumentRefused, Fault, Faults, Refusal, told

GRAVE = Fault("people.tsv", "line 3", "duplicate-id", "id '007' stands twice", "keep one row")
LIGHT = Fault("people.tsv", "", "no-value", "no age", "write it", grave=False)


def test_a_fault_says_where_what_and_how_to_mend() -> None:
    assert str(GRAVE) == "people.tsv:line 3  id '007' stands twice\n  to mend: keep one row"
    assert LIGHT.where == "people.tsv"
    with pytest.raises(dataclasses.FrozenInstanceError):
        GRAVE.grave = False  # type: ignore[misc]


def test_a_refusal_tells_all_its_faults() -> None:
    assert str(DocumentRefused(GRAVE, LIGHT)) == f"{GRAVE}\n{LIGHT}"


def test_many_faults_of_one_kind_that_differ_in_numbers_only_are_counted_after_five() -> None:
    many = [
        Fault(f"{k}.tsv", "", "negative-weight", f"the weight is -0.{k}", "say what becomes of it")
        for k in range(1, 9)
    ]
    again = Fault("9.tsv", "", "negative-weight", "the weight is -0.8", "say what becomes of it")
    expected = [str(fault) for fault in many[:5]] + [f"and 4 more of this kind: {THE_REST}", str(GRAVE)]
    assert str(DataRefused(*many, GRAVE, again)).split("\n") == "\n".join(expected).split("\n")
    assert "more of this kind" not in told(many[:5])


def test_what_a_document_says_wrong_is_told_in_full() -> None:
    many = [Fault("plan.yaml", f"{k}:1", "unknown-entry", f"e{k}: no such entry", "drop") for k in range(9)]
    assert str(DocumentRefused(*many)) == told(many, in_full=True) == "\n".join(map(str, many))


@pytest.mark.parametrize(("kind", "code"), [(DocumentRefused, 3), (DataRefused, 4)])
def test_refusals_end_in_their_exit_code(kind: type[Refusal], code: int) -> None:
    assert kind(GRAVE).exit_code == code
    assert kind(GRAVE).faults == (GRAVE,)
    assert issubclass(kind, Refusal)


def test_only_grave_faults_stop_the_run() -> None:
    faults = Faults()
    faults.refuse_if_grave()
    faults.add("a.tsv", "", "k", "light", "mend", grave=False)
    assert not faults.any_grave
    faults.refuse_if_grave()
    faults.add("b.tsv", "line 2", "k", "grave", "mend")
    faults.add("c.tsv", "line 4", "k", "grave too", "mend")
    assert faults.any_grave
    with pytest.raises(DataRefused) as caught:
        faults.refuse_if_grave()
    assert [fault.file for fault in caught.value.faults] == ["b.tsv", "c.tsv"]
    assert [fault.file for fault in faults] == ["a.tsv", "b.tsv", "c.tsv"]
