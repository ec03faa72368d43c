"""The walls of the house: who may import whom, read from the code itself."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

HOUSE = Path(__file__).parents[1] / "socibrain"
GROUND = {"errors", "streams", "documents"}
CATALOGUE = "measures.catalogue"
MAY: dict[str, set[str]] = {
    "tasks": GROUND,
    "sources": GROUND,
    "networks": {"sources"} | GROUND,
    "measures": {"networks"} | GROUND,
    "cohort": {"sources", "networks", "measures", "tasks"} | GROUND,
    "plan": {CATALOGUE, "link.hypothesis", "link.options"} | GROUND,
    "link": {"cohort", "tasks"} | GROUND,
    "report": {CATALOGUE, "cohort", "link", "plan"} | GROUND,
    "run": {"tasks", "sources", "networks", "measures", "cohort", "plan", "link", "report"} | GROUND,
    "cli": {"run", "plan", CATALOGUE} | GROUND,
    "__main__": {"cli"},
    "__init__": {"run", "plan", "cohort", "link", "sources", "report", CATALOGUE} | GROUND,
}
FILES = sorted(HOUSE.rglob("*.py"))


def imports(path: Path) -> list[str]:
    """Modules of ours that the file imports, without the leading package name."""
    found = []
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        names = []
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: write imports out in full"
            names = [f"{node.module}.{alias.name}" for alias in node.names]
        found += [name.removeprefix("socibrain.") for name in names if name.startswith("socibrain")]
    return found


def room(path: Path) -> str:
    return path.relative_to(HOUSE).with_suffix("").parts[0]


@pytest.mark.parametrize("path", FILES, ids=lambda path: str(path.relative_to(HOUSE)))
def test_imports_stay_inside_the_walls(path: Path) -> None:
    here = room(path)
    allowed = set() if here in GROUND else MAY[here]
    if here == "documents":
        allowed = {"errors"}
    for target in imports(path):
        if target.split(".")[0] == here:
            continue
        assert any(target == door or target.startswith(door + ".") for door in allowed), (
            f"{path.relative_to(HOUSE)} may not import {target}"
        )


@pytest.mark.parametrize(("one", "other"), [("social", "brain"), ("brain", "social")])
def test_the_two_sides_of_measures_never_meet(one: str, other: str) -> None:
    for path in (HOUSE / "measures" / one).glob("*.py"):
        assert not any(target.startswith(f"measures.{other}") for target in imports(path)), path


def test_sources_are_read_only_where_formats_are_known() -> None:
    readers = {"read_csv", "read_table", "loadtxt", "genfromtxt", "loadmat", "read_excel", "load"}
    for path in FILES:
        if room(path) in {"sources", "documents", "tasks"}:
            continue
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and isinstance(node.func, ast.Attribute):
                assert node.func.attr not in readers, f"{path.relative_to(HOUSE)} reads {node.func.attr}"


def test_plotting_only_in_report() -> None:
    for path in FILES:
        tree = ast.parse(path.read_text(encoding="utf-8"))
        named = [
            alias.name for node in ast.walk(tree) if isinstance(node, ast.Import) for alias in node.names
        ]
        named += [node.module or "" for node in ast.walk(tree) if isinstance(node, ast.ImportFrom)]
        assert room(path) == "report" or not any(name.startswith("matplotlib") for name in named), path


@pytest.mark.parametrize("path", FILES, ids=lambda path: str(path.relative_to(HOUSE)))
def test_every_file_opens_with_its_sentence_and_stays_small(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert ast.get_docstring(ast.parse(text)), path
    assert len(text.splitlines()) <= 400, path


@pytest.mark.parametrize("path", FILES, ids=lambda path: str(path.relative_to(HOUSE)))
def test_no_import_hides_inside_a_function(path: Path) -> None:
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.FunctionDef):
            inner = [step for step in ast.walk(node) if isinstance(step, ast.Import | ast.ImportFrom)]
            assert not inner, f"{path.relative_to(HOUSE)}: {node.name}"
