"""Refusals have one shape and carry all faults."""

from __future__ import annotations

import dataclasses

import pytest

from socibrain.errors import DataRefused, DocumentRefused, Fault, Faults, Refusal

GRAVE = Fault("people.tsv", "line 3", "duplicate-id", "id '007' stands twice", "keep one row")
LIGHT = Fault("people.tsv", "", "no-value", "no age", "write it", grave=False)


def test_a_fault_says_where_what_and_how_to_mend() -> None:
    assert str(GRAVE) == "people.tsv:line 3  id '007' stands twice\n  to mend: keep one row"
    assert LIGHT.where == "people.tsv"
    with pytest.raises(dataclasses.FrozenInstanceError):
        GRAVE.grave = False  # type: ignore[misc]


def test_a_refusal_tells_all_its_faults() -> None:
    told = str(DocumentRefused(GRAVE, LIGHT))
    assert told == f"{GRAVE}\n{LIGHT}"


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
