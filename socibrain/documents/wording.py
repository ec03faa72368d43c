"""What a model says against a document, in plain words with a remedy."""

from __future__ import annotations

import difflib
import types
import typing
from collections.abc import Iterable
from typing import Any, Literal

from pydantic import BaseModel, ValidationError

from socibrain.documents.tree import Keys, Tree
from socibrain.errors import Fault

NAME_PATTERN = r"^[A-Za-z0-9_-]+$"
"""What the name of a study, plan or hypothesis may look like."""


def nearest(word: str, valid: Iterable[str]) -> str:
    """How to mend a name that is not valid: the nearest valid one, or the whole list.

    >>> nearest("outcom", ["outcome", "predictor"])
    "did you mean 'outcome'?"
    """
    choices = sorted(set(valid))
    close = _closest(word, choices)
    return f"did you mean '{close}'?" if close else "valid here: " + (", ".join(choices) or "nothing")


def _closest(word: str, choices: Iterable[str]) -> str | None:
    folded = {choice.casefold(): choice for choice in choices}
    close = difflib.get_close_matches(word.casefold(), folded, n=1, cutoff=0.6)
    return folded[close[0]] if close else None


def model_faults(tree: Tree, model: type[BaseModel], error: ValidationError) -> list[Fault]:
    """One fault for every entry that is wrong, in the order of the file."""
    said: dict[Keys, list[Any]] = {}
    for each in error.errors():
        said.setdefault(_written_keys(tree, each), []).append(each)
    meant = {
        (*keys[:-1], _closest(str(keys[-1]), _fields(_annotation(model, keys[:-1]))))
        for keys, errors in said.items()
        if errors[0]["type"] == "extra_forbidden"
    }
    # A list with a faulty entry is called too short as well: only sound entries are counted.
    around = {keys[:length] for keys in said for length in range(len(keys))}
    told = {
        keys: errors
        for keys, errors in said.items()
        if not (errors[0]["type"] == "missing" and keys in meant)
        and not (errors[0]["type"] == "too_short" and keys in around)
    }
    in_order = sorted(told, key=tree.position)
    return [tree.fault(keys, *_wording(model, keys, told[keys])) for keys in in_order]


def _written_keys(tree: Tree, error: Any) -> Keys:
    """The error's location without the names of union members, which are not in the file."""
    keys: list[str | int] = []
    node: Any = tree.plain
    for key in error["loc"]:
        if not isinstance(node, dict | list):
            break
        inside = key in node if isinstance(node, dict) else isinstance(key, int) and key < len(node)
        if inside:
            keys.append(key)
            node = node[key]
    return (*keys, error["loc"][-1]) if error["type"] == "missing" else tuple(keys)


def _wording(model: type[BaseModel], keys: Keys, errors: list[Any]) -> tuple[str, str, str]:
    """Kind, what was found, and how to mend it, for all that was said against one entry."""
    error = errors[0]
    if error["type"] == "extra_forbidden":
        valid = _fields(_annotation(model, keys[:-1]))
        return "unknown-entry", "unknown entry", nearest(str(keys[-1]), valid)
    wanted = _annotation(model, keys)
    if error["type"] == "missing":
        return "missing-entry", "this entry is missing", _add(keys[-1], wanted)
    found, limit = f"found {_shown(error['input'])}", _LIMITS.get(error["type"])
    if limit and len(errors) == 1:
        return "bad-value", found, "write " + limit.format(**error["ctx"])
    if error["type"] == "string_pattern_mismatch":
        pattern = error["ctx"]["pattern"]
        plain = "use letters, digits, _ and - only"
        return "bad-value", found, plain if pattern == NAME_PATTERN else f"write it to fit {pattern}"
    if error["type"] in ("value_error", "assertion_error"):
        together = isinstance(error["input"], dict)
        return "bad-value", "these do not go together" if together else found, str(error["ctx"]["error"])
    return "bad-value", *_wrong_kind(error["input"], wanted)


def _add(key: str | int, wanted: Any) -> str:
    """How to mend a missing entry."""
    choices = _choices(wanted)
    if isinstance(key, int):
        return f"add it to the list, {_expected(wanted)}"
    return f"add `{key}: {choices[0]}`" if len(choices) == 1 else f"add `{key}: ...`, {_expected(wanted)}"


def _wrong_kind(given: Any, wanted: Any) -> tuple[str, str]:
    """What was found, and how to mend it, for a value of a kind that is not expected."""
    found, expected = f"found {_shown(given)}", _expected(wanted)
    names = [choice for choice in _choices(wanted) if isinstance(choice, str)]
    if isinstance(given, str) and (close := _closest(given, names)):
        return f"{found}, expected {expected}", f"did you mean '{close}'?"
    if isinstance(given, bool | int | float) and str in members(wanted):
        return f"{found}, expected text", f"put it in quotes: '{_shown(given)}'"
    return found, f"write {expected}"


_LIMITS = {
    "greater_than": "a number above {gt}",
    "greater_than_equal": "a number of at least {ge}",
    "less_than": "a number below {lt}",
    "less_than_equal": "a number of at most {le}",
    "multiple_of": "a multiple of {multiple_of}",
    "too_short": "at least {min_length} of them",
    "too_long": "at most {max_length} of them",
    "string_too_short": "at least {min_length} characters",
    "string_too_long": "at most {max_length} characters",
}


def _shown(value: Any) -> str:
    if value is None:
        return "nothing"
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, list):
        return "a list" if value else "an empty list"
    if isinstance(value, dict):
        return "entries" if value else "no entries"
    if isinstance(value, str):
        return f"'{value}'"
    return str(value) if isinstance(value, int | float) else "a value with a tag"


def members(annotation: Any) -> list[Any]:
    """The kinds of value that an annotation allows, one by one, without None."""
    origin = typing.get_origin(annotation)
    if origin is typing.Annotated:
        return members(typing.get_args(annotation)[0])
    if origin in (typing.Union, types.UnionType):
        return [member for part in typing.get_args(annotation) for member in members(part)]
    return [] if annotation in (None, type(None)) else [annotation]


def _is_model(kind: Any) -> bool:
    return isinstance(kind, type) and issubclass(kind, BaseModel)


def _fields(annotation: Any) -> list[str]:
    """Names of all entries that may stand here."""
    models = [kind for kind in members(annotation) if _is_model(kind)]
    return [field.alias or name for kind in models for name, field in kind.model_fields.items()]


def _choices(annotation: Any) -> list[Any]:
    """All values that a choice allows."""
    return [
        choice
        for kind in members(annotation)
        if typing.get_origin(kind) is Literal
        for choice in typing.get_args(kind)
    ]


def _annotation(annotation: Any, keys: Keys) -> Any:
    """What the model expects at ``keys``; None where it expects nothing."""
    for key in keys:
        inner = [found for kind in members(annotation) if (found := _inside(kind, key)) is not None]
        annotation = inner[0] if inner else None
    return annotation


def _inside(kind: Any, key: str | int) -> Any:
    if _is_model(kind):
        named = {field.alias or name: field.annotation for name, field in kind.model_fields.items()}
        return named.get(str(key))
    arguments = typing.get_args(kind)
    if typing.get_origin(kind) is tuple and isinstance(key, int) and Ellipsis not in arguments:
        return arguments[key] if key < len(arguments) else None
    inner = [argument for argument in arguments if argument is not Ellipsis]
    return inner[-1] if inner and typing.get_origin(kind) is not Literal else None


_WORDS = {bool: "true or false", int: "a whole number", float: "a number", str: "text"}


def _expected(annotation: Any) -> str:
    """What may stand here, in words."""
    words = []
    choices = _choices(annotation)
    if choices:
        written = ", ".join(f"'{choice}'" if isinstance(choice, str) else str(choice) for choice in choices)
        words.append(f"one of {written}" if len(choices) > 1 else written)
    for kind in members(annotation):
        origin = typing.get_origin(kind)
        if _is_model(kind):
            words.append("entries (" + ", ".join(_fields(kind)) + ")")
        elif origin is dict:
            words.append("`name: ...` entries")
        elif origin in (list, tuple, set, frozenset):
            words.append("a list: [...]")
        elif origin is not Literal:
            words.append(_WORDS.get(kind, "a value"))
    return " or ".join(words) or "a value"
