"""YAML with positions; unknown keys are refused with the nearest valid one."""

from __future__ import annotations

import difflib
import types
import typing
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Generic, TypeVar

from pydantic import BaseModel, ConfigDict, ValidationError
from ruamel.yaml import YAML
from ruamel.yaml.error import MarkedYAMLError, YAMLError

from socibrain.errors import DocumentRefused, Fault


class Entry(BaseModel):
    """A part of a document: frozen, and refusing what it does not know."""

    model_config = ConfigDict(extra="forbid", frozen=True)


M = TypeVar("M", bound=Entry)
Keys = tuple[str | int, ...]


@dataclass(frozen=True)
class Document(Generic[M]):
    """A checked document that still knows where each of its entries stands."""

    path: Path
    content: M
    _tree: Any

    def fault(self, keys: Keys, kind: str, found: str, mend: str) -> Fault:
        """A fault at the entry reached by ``keys``, with line and column."""
        return Fault(str(self.path), _place(self._tree, keys), kind, f"{_spell(keys)}: {found}", mend)


def read_document(path: Path, model: type[M]) -> Document[M]:
    """Read one YAML document into ``model``.

    Raises `DocumentRefused` with every fault, each with line and column and, where an entry is
    unknown, the nearest valid name.
    """
    tree = _parse(path)
    try:
        content = model.model_validate(_plain(tree))
    except ValidationError as error:
        faults = [_fault(path, tree, model, found) for found in error.errors()]
        raise DocumentRefused(*faults) from None
    return Document(path, content, tree)


def nearest(word: str, valid: typing.Iterable[str]) -> str:
    """How to mend a name that is not valid: the nearest valid one, or the whole list.

    >>> nearest("outcom", ["outcome", "predictor"])
    "did you mean 'outcome'?"
    """
    choices = sorted(valid)
    close = difflib.get_close_matches(word, choices, n=1, cutoff=0.6)
    return f"did you mean '{close[0]}'?" if close else "valid here: " + ", ".join(choices)


def _parse(path: Path) -> Any:
    reader = YAML(typ="rt")
    try:
        text = path.read_text(encoding="utf-8-sig")
    except OSError as error:
        raise DocumentRefused(
            Fault(str(path), "", "unreadable", f"cannot be read ({error.strerror})", "check the path")
        ) from None
    except UnicodeDecodeError as error:
        raise DocumentRefused(
            Fault(str(path), f"byte {error.start}", "encoding", "is not UTF-8 text", "save it as UTF-8")
        ) from None
    try:
        tree = reader.load(text)
    except MarkedYAMLError as error:
        mark = error.problem_mark
        place = f"{mark.line + 1}:{mark.column + 1}" if mark else ""
        found = f"is not valid YAML: {error.problem or 'unreadable'}"
        raise DocumentRefused(
            Fault(str(path), place, "yaml", found, "correct the line; indent with spaces only")
        ) from None
    except YAMLError:
        raise DocumentRefused(
            Fault(str(path), "", "yaml", "is not valid YAML", "save it as plain YAML text")
        ) from None
    if not isinstance(tree, dict):
        raise DocumentRefused(
            Fault(str(path), "1:1", "empty", "holds no entries", "write `name: value` lines into it")
        )
    return tree


def _plain(node: Any) -> Any:
    if isinstance(node, dict):
        return {str(key): _plain(value) for key, value in node.items()}
    if isinstance(node, list):
        return [_plain(value) for value in node]
    for kind in (bool, int, float, str):
        if isinstance(node, kind):
            return kind(node)
    return node


def _fault(path: Path, tree: Any, model: type[BaseModel], found: Any) -> Fault:
    keys = tuple(key for key in found["loc"] if _exists_or_last(tree, found["loc"], key))
    if found["type"] == "extra_forbidden":
        owner = _owner(model, keys[:-1])
        valid = list(owner.model_fields) if owner else []
        mend = nearest(str(keys[-1]), valid) if valid else "remove it"
        return Fault(str(path), _place(tree, keys), "unknown-entry", f"{_spell(keys)}: unknown entry", mend)
    if found["type"] == "missing":
        place = _place(tree, keys[:-1])
        return Fault(
            str(path), place, "missing-entry", f"{_spell(keys)}: this entry is missing", f"add '{keys[-1]}:'"
        )
    message = found["msg"].removeprefix("Value error, ").removeprefix("Assertion failed, ")
    shown = found.get("input")
    given = "" if isinstance(shown, dict | list) else f" (found {shown!r})"
    return Fault(
        str(path), _place(tree, keys), "bad-value", f"{_spell(keys)}{given}", message[0].lower() + message[1:]
    )


def _exists_or_last(tree: Any, loc: tuple[Any, ...], key: Any) -> bool:
    """Drop the tags a validator adds to a location (union members), keep real keys."""
    if key == loc[-1]:
        return True
    return isinstance(key, int) or _mentions(tree, str(key))


def _mentions(node: Any, key: str) -> bool:
    if isinstance(node, dict):
        return any(str(name) == key or _mentions(value, key) for name, value in node.items())
    if isinstance(node, list):
        return any(_mentions(value, key) for value in node)
    return False


def _owner(model: type[BaseModel], keys: Keys) -> type[BaseModel] | None:
    """The model that owns the entry reached by ``keys``."""
    here: Any = model
    for key in keys:
        if isinstance(here, type) and issubclass(here, BaseModel):
            field = here.model_fields.get(str(key))
            here = field.annotation if field else None
        else:
            here = _inside(here)
        here = _single(here)
    return here if isinstance(here, type) and issubclass(here, BaseModel) else None


def _single(annotation: Any) -> Any:
    """The one member of ``X | None`` that is not None."""
    if typing.get_origin(annotation) in (typing.Union, types.UnionType):
        members = [arg for arg in typing.get_args(annotation) if arg is not type(None)]
        return members[0] if len(members) == 1 else annotation
    return annotation


def _inside(annotation: Any) -> Any:
    arguments = [arg for arg in typing.get_args(annotation) if arg is not Ellipsis]
    return _single(arguments[-1]) if arguments else None


def _place(tree: Any, keys: Keys) -> str:
    """Line and column (from 1) of the entry, or of the nearest enclosing one that is written."""
    line, column = 0, 0
    node = tree
    for key in keys:
        marks = getattr(node, "lc", None)
        try:
            if isinstance(node, dict):
                real = next(name for name in node if str(name) == str(key))
                line, column = marks.key(real) if marks else (line, column)
                node = node[real]
            else:
                line, column = marks.item(key) if marks else (line, column)
                node = node[key]
        except (StopIteration, KeyError, IndexError, TypeError):
            break
    return f"{line + 1}:{column + 1}"


def _spell(keys: Keys) -> str:
    """Keys as they read in the file: ``hypotheses[0].outcome``."""
    text = ""
    for key in keys:
        text += f"[{key}]" if isinstance(key, int) else f"{'.' if text else ''}{key}"
    return text
