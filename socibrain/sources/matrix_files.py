"""Which matrix files lie where the study says, each with its person."""

from __future__ import annotations

import glob
import re
from collections import defaultdict
from collections.abc import Sequence

from socibrain.errors import Faults
from socibrain.sources.records import MatrixFile
from socibrain.sources.study import Study
from socibrain.sources.tables import loose_form

RELATION = "_relmat.tsv"
"""Ending of a relation matrix in the BIDS draft: its entities may stand in any order."""

ANYTHING = r"[^/]+"


def find_matrices(
    study: Study, source_name: str, ids: Sequence[str], faults: Faults, *, expected: bool = True
) -> tuple[MatrixFile, ...]:
    """The files of one brain input, in the order of ``ids`` and then of the declared visits.

    The declared pattern is filled with every known id (exactly as written) and every declared
    visit.  A person without a file is not a fault.  A file that fits the pattern for nobody known is
    a grave fault that names the id probably meant, unless it is another input's or a table of the
    study; one of no declared visit is put on record.  Finding no file at all is grave when some are
    ``expected``.  Where the pattern ends in ``_relmat.tsv`` the entities of a file's name may stand
    in any order, and ``seg-`` is the same as ``atlas-``.
    """
    declared = study.says.brain[source_name].files
    visits = study.says.visits or ("",)
    found, strays = _sorted_out(study, source_name, ids, faults)
    others = {*study.tables}
    for other in study.says.brain:
        if other != source_name:
            others |= {matrix.file for matrix in _sorted_out(study, other, ids, Faults())[0]}
    strays = {arranged: file for arranged, file in strays.items() if file not in others}
    _report_strays(strays, _pattern(study, source_name), ids, visits, faults)
    if not found:
        wanted = _filled(declared, ids[0] if ids else "ID", visits[0])
        faults.add(declared, "", "no-matrices", f"no file of brain input '{source_name}' was found",
                   f"put them where the pattern says, for example {wanted}, or correct `files:`",
                   grave=expected)  # fmt: skip
    return found


def _sorted_out(
    study: Study, source_name: str, ids: Sequence[str], faults: Faults
) -> tuple[tuple[MatrixFile, ...], dict[str, str]]:
    """Files of known people and visits, and the others that fit the pattern (arranged -> path)."""
    pattern = _pattern(study, source_name)
    lying = _lying(study, pattern, faults)
    found = []
    for person in ids:
        for visit in study.says.visits or ("",):
            file = lying.pop(_filled(pattern, person, visit), None)
            if file is not None:
                found.append(MatrixFile(source_name, person, visit, file))
    return tuple(found), lying


def _pattern(study: Study, source_name: str) -> str:
    declared = study.says.brain[source_name].files
    return _one_spelling(declared) if declared.endswith(RELATION) else declared


def _filled(pattern: str, person: str, visit: str) -> str:
    return pattern.replace("{person}", person).replace("{visit}", visit)


def _lying(study: Study, pattern: str, faults: Faults) -> dict[str, str]:
    """Every file that fits the pattern for anybody: its path arranged as the pattern is -> its path."""
    folder, slash, name = pattern.rpartition("/")
    in_any_order = name.endswith(RELATION)
    search = _filled(glob.escape(folder), "*", "*") + slash
    search += "*" + RELATION if in_any_order else _filled(glob.escape(name), "*", "*")
    shape = _shape(pattern, ANYTHING, ANYTHING)
    places = defaultdict(list)
    for file in sorted(glob.glob(search, root_dir=study.folder)):
        head, _, tail = file.rpartition("/")
        arranged = head + slash + _arranged(tail, name) if in_any_order else file
        if shape.fullmatch(arranged):
            places[arranged].append(file)
    for first, *others in places.values():
        if others:
            faults.add(first, "", "same-entities", f"names the same matrix as {', '.join(others)}",
                       "keep one of them")  # fmt: skip
    return {arranged: files[0] for arranged, files in places.items()}


def _one_spelling(name: str) -> str:
    """Earlier drafts wrote ``atlas-`` where later ones write ``seg-``."""
    return re.sub(r"(^|_|/)seg-", r"\1atlas-", name)


def _arranged(name: str, pattern: str) -> str:
    """The name with its entities in the order of the pattern; as it is when the entities differ.

    >>> _arranged("seg-Coast_ses-2_sub-7_relmat.tsv", "sub-{person}_ses-{visit}_atlas-Coast_relmat.tsv")
    'sub-7_ses-2_atlas-Coast_relmat.tsv'
    """
    entities = _one_spelling(name).removesuffix(RELATION).split("_")
    order = [_says(entity) for entity in pattern.removesuffix(RELATION).split("_")]
    if sorted(order) != sorted(map(_says, entities)):
        return _one_spelling(name)
    return "_".join(sorted(entities, key=lambda entity: order.index(_says(entity)))) + RELATION


def _says(entity: str) -> str:
    """The part of an entity before its hyphen; a bare placeholder stands for its usual entity."""
    return {"{person}": "sub", "{visit}": "ses"}.get(entity, entity.partition("-")[0])


def _shape(pattern: str, person: str, visit: str) -> re.Pattern[str]:
    """The pattern as a regular expression; a placeholder means the same text wherever it stands."""
    shape = re.escape(pattern)
    for placeholder, values in (("person", person), ("visit", visit)):
        hole = re.escape("{" + placeholder + "}")
        shape = shape.replace(hole, f"(?P<{placeholder}>{values})", 1)
        shape = shape.replace(hole, f"(?P={placeholder})")
    return re.compile(shape)


def _report_strays(
    lying: dict[str, str], pattern: str, ids: Sequence[str], visits: Sequence[str], faults: Faults
) -> None:
    """Say of each file that fits the pattern, and was not taken, why it belongs to nobody."""
    of_known_person = _shape(pattern, "|".join(map(re.escape, ids)), ANYTHING)
    at_known_visit = _shape(pattern, ANYTHING, "|".join(map(re.escape, visits)))
    of_anybody = _shape(pattern, ANYTHING, ANYTHING)
    for arranged, file in lying.items():
        if known := of_known_person.fullmatch(arranged):
            faults.add(file, "", "unknown-visit", f"visit '{known['visit']}' is not declared",
                       "add it to `visits:`, or take the file away", grave=False)  # fmt: skip
        elif stranger := at_known_visit.fullmatch(arranged) or of_anybody.fullmatch(arranged):
            person = stranger["person"]
            meant = " or ".join(f"'{known_id}'" for known_id in ids if _bare(known_id) == _bare(person))
            mend = (
                f"is it {meant}? write the id the same way in the people table, the pattern and the file"
                if meant
                else "add the person to the people table (an exclusion rule can leave them out), "
                "or take the file away"
            )
            faults.add(file, "", "unknown-person", f"the people table has no '{person}'", mend)


def _bare(person: str) -> str:
    """An id without what people write differently: case, leading zeros, the prefix ``sub-``.

    >>> _bare("sub-007") == _bare("7"), _bare("A07b") == _bare("a7b"), _bare("70") == _bare("7")
    (True, True, False)
    """
    return loose_form(person.casefold().removeprefix("sub-"))
