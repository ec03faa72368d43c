"""Provenance of a run in the open RO-Crate 1.1 form."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

CONTEXT = "https://w3id.org/ro/crate/1.1/context"
PROFILE = "https://w3id.org/ro/crate/1.1"
LICENCE_NOTE = "Data of people: as the study's ethics board and its data agreement say."


def crate(record: Mapping[str, object], outputs: Iterable[str]) -> dict[str, object]:
    """The metadata document: one CreateAction from input files to output files.

    ``record`` is run.json's content; ``outputs`` are file names inside the run folder.  Inputs are
    outside the crate and named by their SHA-256.
    """
    made = sorted(outputs)
    inputs = record["inputs"]
    digests = dict(inputs) if isinstance(inputs, Mapping) else {}
    used = [
        {
            "@id": f"#input-{number}",
            "@type": "CreativeWork",
            "name": name,
            "identifier": f"sha256:{digest}",
        }
        for number, (name, digest) in enumerate(digests.items(), start=1)
    ]
    software = {
        "@id": "#socibrain",
        "@type": "SoftwareApplication",
        "name": "socibrain",
        "version": record["socibrain"],
    }
    action = {
        "@id": "#run",
        "@type": "CreateAction",
        "name": f"socibrain run of study {record['study']}",
        "startTime": record["started"],
        "instrument": {"@id": "#socibrain"},
        "object": [{"@id": entry["@id"]} for entry in used],
        "result": [{"@id": name} for name in made],
    }
    root = {
        "@id": "./",
        "@type": "Dataset",
        "name": f"{record['study_title']}",
        "description": f"Tables and findings of study {record['study']}, made by socibrain",
        "datePublished": record["started"],
        "license": LICENCE_NOTE,
        "hasPart": [{"@id": name} for name in made],
        "mentions": {"@id": "#run"},
    }
    descriptor = {
        "@id": "ro-crate-metadata.json",
        "@type": "CreativeWork",
        "conformsTo": {"@id": PROFILE},
        "about": {"@id": "./"},
    }
    files = [{"@id": name, "@type": "File", "name": name} for name in made]
    return {"@context": CONTEXT, "@graph": [descriptor, root, action, software, *files, *used]}
