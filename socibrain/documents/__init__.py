"""YAML with positions; unknown keys are refused with the nearest valid one."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any, Generic, TypeVar

from pydantic import BaseModel, ConfigDict, ValidationError, ValidationInfo, field_validator
from pydantic_core import PydanticCustomError

from socibrain.documents.tree import Keys, Tree, read_tree
from socibrain.documents.wording import members, model_faults, nearest
from socibrain.errors import DocumentRefused, Fault

__all__ = ["Document", "Entry", "Keys", "OtherKind", "nearest", "read_document"]


class Entry(BaseModel):
    """A part of a document: frozen, and refusing what it does not know."""

    model_config = ConfigDict(extra="forbid", frozen=True, allow_inf_nan=False)

    @field_validator("*", mode="before")
    @classmethod
    def _truth_is_no_number(cls, value: Any, info: ValidationInfo) -> Any:
        field = cls.model_fields[info.field_name or ""]
        if isinstance(value, bool) and bool not in members(field.annotation):
            raise PydanticCustomError("truth_value", "a truth value")
        return value


M = TypeVar("M", bound=Entry)


@dataclass(frozen=True)
class Document(Generic[M]):
    """A checked document that still knows where each of its entries stands."""

    path: Path
    content: M
    _tree: Tree

    def fault(self, keys: Keys, kind: str, found: str, mend: str) -> Fault:
        """A fault at the entry reached by ``keys``, with line and column."""
        return self._tree.fault(keys, kind, found, mend)


@dataclass(frozen=True)
class OtherKind:
    """Documents that may be given by mistake: those with an entry ``has`` and none called ``lacks``."""

    has: str
    lacks: str
    found: str
    mend: str


def read_document(path: Path, model: type[M], *, mistaken: OtherKind | None = None) -> Document[M]:
    """Read one YAML document into ``model``.

    A document that is ``mistaken`` for one is refused with one fault for the whole.

    Numbers remember how they are written: ``str`` of 007 is ``"007"``.  Raises `DocumentRefused`
    with every fault, in the order of the file, each with line and column and, where an entry is
    unknown, the nearest valid name.
    """
    tree = read_tree(path)
    if mistaken and mistaken.has in tree.plain and mistaken.lacks not in tree.plain:
        raise DocumentRefused(Fault(str(path), "", "other-kind", mistaken.found, mistaken.mend))
    try:
        content = model.model_validate(tree.plain)
    except ValidationError as error:
        raise DocumentRefused(*model_faults(tree, model, error)) from None
    return Document(path, content, tree)
