"""Provenance: every file a run left is there, and every input by its digest.

RO-Crate 1.1 (its rules from memory): a descriptor about "./", a root Dataset with name,
description, datePublished, license; every @id that is referred to exists once.
"""

from __future__ import annotations

import json

from socibrain.run.crate import crate

RECORD = {
    "socibrain": "9.9",
    "study": "toy",
    "study_title": "A toy",
    "started": "2026-12-01T00:00:00+00:00",
    "inputs": {"people.tsv": "ab" * 32, "brain/a b.tsv": "cd" * 32},
}


def references(node: object) -> list[str]:
    if isinstance(node, dict):
        if set(node) == {"@id"}:
            return [node["@id"]]
        return [found for value in node.values() for found in references(value)]
    if isinstance(node, list):
        return [found for value in node for found in references(value)]
    return []


def test_every_reference_is_met_once() -> None:
    document = json.loads(json.dumps(crate(RECORD, ["persons.csv", "findings.csv"])))
    ids = [entity["@id"] for entity in document["@graph"]]
    assert len(ids) == len(set(ids))
    assert set(references(document["@graph"])) - set(ids) == {"https://w3id.org/ro/crate/1.1"}


def test_inputs_outputs_and_action() -> None:
    graph = {entity["@id"]: entity for entity in crate(RECORD, ["persons.csv"])["@graph"]}  # type: ignore[attr-defined]
    action = graph["#run"]
    assert action["@type"] == "CreateAction"
    assert [graph[each["@id"]]["name"] for each in action["object"]] == ["people.tsv", "brain/a b.tsv"]
    assert action["result"] == [{"@id": "persons.csv"}]
    assert graph["ro-crate-metadata.json"]["about"] == {"@id": "./"}
    assert {"name", "description", "datePublished", "license"} <= set(graph["./"])
