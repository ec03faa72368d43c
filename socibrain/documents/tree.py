"""YAML text to a tree whose entries know where they stand."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any, NoReturn

from ruamel.yaml import YAML
from ruamel.yaml.constructor import DuplicateKeyError, RoundTripConstructor
from ruamel.yaml.error import MarkedYAMLError, YAMLError
from ruamel.yaml.reader import ReaderError

from socibrain.errors import DocumentRefused, Fault

Keys = tuple[str | int, ...]


@dataclass(frozen=True)
class Tree:
    """What a YAML file holds.

    ``plain`` is made of dicts with text keys, lists, and values; ``marked`` is the same as the
    YAML reader gives it, with positions.
    """

    path: Path
    plain: dict[str, Any]
    marked: Any

    def fault(self, keys: Keys, kind: str, found: str, mend: str) -> Fault:
        """A fault at the entry reached by ``keys``."""
        line, column = self.position(keys)
        return Fault(str(self.path), f"{line}:{column}", kind, f"{spell(keys)}: {found}", mend)

    def position(self, keys: Keys) -> tuple[int, int]:
        """Line and column (from 1) of an entry, or of the nearest enclosing one that is written."""
        line, column = 0, 0
        node = self.marked
        for key in keys:
            try:
                if isinstance(node, dict):
                    real = next(name for name in node if str(name) == str(key))
                    line, column = node.lc.key(real)  # type: ignore[attr-defined]
                else:
                    real = key
                    line, column = node.lc.item(key)
            except (StopIteration, KeyError, IndexError, TypeError, AttributeError):
                break
            node = node[real]
        return line + 1, column + 1


def spell(keys: Keys) -> str:
    """Keys as they read in the file.

    >>> spell(("hypotheses", 0, "outcome"))
    'hypotheses[0].outcome'
    """
    text = ""
    for key in keys:
        text += f"[{key}]" if isinstance(key, int) else f"{'.' if text else ''}{key}"
    return text


def read_tree(path: Path) -> Tree:
    """Read one YAML file of entries.

    Raises `DocumentRefused` when it cannot be read, is no YAML, or holds anything but entries.
    """
    text = _text(path)
    reader = YAML(typ="rt")
    reader.Constructor = _Constructor
    try:
        marked = reader.load(text)
        plain = _plain(marked)
    except (YAMLError, ValueError) as error:
        raise DocumentRefused(_yaml_fault(str(path), text, error)) from None
    except RecursionError:
        _refuse(path, "", "yaml", "is nested too deeply, or holds itself", "write the values themselves")
    if marked is None:
        _refuse(path, "1:1", "empty", "holds no entries", "write `name: value` lines into it")
    if not isinstance(plain, dict):
        found = "a list" if isinstance(plain, list) else "a single value"
        _refuse(path, "1:1", "not-entries", f"holds {found} instead of entries", "write `name: value` lines")
    return Tree(path, plain, marked)


def _refuse(path: Path, place: str, kind: str, found: str, mend: str) -> NoReturn:
    raise DocumentRefused(Fault(str(path), place, kind, found, mend)) from None


def _text(path: Path) -> str:
    try:
        return path.read_text(encoding="utf-8-sig")
    except FileNotFoundError:
        _refuse(path, "", "missing-file", "there is no such file", "check the path")
    except OSError as error:
        _refuse(path, "", "unreadable", f"cannot be read ({error.strerror})", "check the path")
    except UnicodeDecodeError as error:
        line = path.read_bytes()[: error.start].count(b"\n") + 1
        _refuse(path, f"line {line}", "encoding", "is not UTF-8 text", "save it as UTF-8")


class _Whole(int):
    """A whole number that prints as it is written."""

    written: str

    def __str__(self) -> str:
        return self.written


class _Real(float):
    """A number that prints as it is written."""

    written: str

    def __str__(self) -> str:
        return self.written


class _Constructor(RoundTripConstructor):
    """Builds the marked tree; numbers remember how they are written, dates stay text."""

    def whole(self, node: Any) -> _Whole:
        number = _Whole(self.construct_yaml_int(node))
        number.written = node.value
        return number

    def real(self, node: Any) -> _Real:
        number = _Real(self.construct_yaml_float(node))
        number.written = node.value
        return number

    def date(self, node: Any) -> str:
        return str(node.value)


_Constructor.add_constructor("tag:yaml.org,2002:int", _Constructor.whole)
_Constructor.add_constructor("tag:yaml.org,2002:float", _Constructor.real)
_Constructor.add_constructor("tag:yaml.org,2002:timestamp", _Constructor.date)


def _plain(node: Any) -> Any:
    if isinstance(node, dict):
        return {str(key): _plain(value) for key, value in node.items()}
    if isinstance(node, list):
        return [_plain(value) for value in node]
    return str(node) if isinstance(node, str) else node


def _yaml_fault(shown: str, text: str, error: Exception) -> Fault:
    """Why a text is no YAML, in plain words."""
    if isinstance(error, ReaderError):
        before = text[: error.position]
        place = f"{before.count(chr(10)) + 1}:{len(before) - before.rfind(chr(10))}"
        return Fault(shown, place, "yaml", "holds a character that text cannot hold", "take it out")
    if not isinstance(error, MarkedYAMLError):
        return Fault(shown, "", "yaml", "is not valid YAML", "save it as plain YAML text")
    problem = error.problem or ""
    mark = error.problem_mark
    if "stream" in problem and error.context_mark:
        mark = error.context_mark
    place = f"{mark.line + 1}:{mark.column + 1}" if mark else ""
    if isinstance(error, DuplicateKeyError) and mark:
        key = text.splitlines()[mark.line][mark.column :].partition(":")[0].strip()
        return Fault(
            shown, place, "duplicate-entry", f"{key}: this entry stands twice", "keep one of the two"
        )
    for sign, found, mend in _YAML_PROBLEMS:
        if sign in problem:
            return Fault(shown, place, "yaml", f"is not valid YAML: {found}", mend)
    return Fault(shown, place, "yaml", "is not valid YAML from here on",
                 "correct the line; put text with signs such as : # & * ! | > % @ in quotes")  # fmt: skip


_YAML_PROBLEMS = (
    ("'\\t'", "a tab", "indent with spaces; put text with tabs in quotes"),
    ("mapping values are not allowed", "a colon where none can be",
     "put text that contains ': ' in quotes; indent entries of one level alike"),
    ("stream", "a quotation mark or bracket is never closed", "close it"),
    ("another document", "a second document begins", "keep one document, without `---` lines"),
    ("undefined alias", "* points to an & that is not there", "write the value itself, or put it in quotes"),
    ("block end", "this line is not indented as the lines above", "indent entries of one level alike"),
    ("could not find expected ':'", "an entry without a colon", "write `name: value`"),
    ("expected ','", "a comma, quotation mark or closing bracket is missing before this", "add it"),
    ("cannot start any token", "a value cannot begin with this sign", "put the value in quotes"),
)  # fmt: skip
"""What the YAML reader says, what it means, and how to mend it."""
