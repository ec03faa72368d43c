"""README shows what the commands really print, and names no command or file that is not there."""

from __future__ import annotations

import re
import shutil
from pathlib import Path
from typing import Any, get_args

import pytest
from pydantic import BaseModel

import socibrain
from socibrain.cli import entry, main
from socibrain.plan.planfile import read_plan
from socibrain.sources.study import StudyFile, read_study

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


@pytest.fixture(scope="module")
def shown() -> dict[str, str]:
    """What README says each command prints."""
    found = {}
    for block in re.findall(r"^```\n(\$ .*?)^```", README, re.MULTILINE | re.DOTALL):
        for part in re.split(r"^\$ ", block, flags=re.MULTILINE)[1:]:
            command, _, output = part.partition("\n")
            found[command] = output
    return found


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder where the commands run, with the demo cohort and one broken study file."""
    folder = tmp_path_factory.mktemp("tour")
    for name in ("demo_cohort", "analyses"):
        shutil.copytree(ROOT / name, folder / name, ignore=shutil.ignore_patterns("private"))
    study = (ROOT / "demo_cohort" / "study.yaml").read_text(encoding="utf-8")
    (folder / "study.yaml").write_text(
        study.replace("seed: 4127", "sede: 4127").replace("ties: both", "ties: mutual")
    )
    return folder


def printed(
    command: str, folder: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> str:
    monkeypatch.chdir(folder)
    monkeypatch.setenv("COLUMNS", "100")
    with pytest.raises(SystemExit):
        main(command.split()[1:])
    result = capsys.readouterr()
    return result.out or result.err


@pytest.mark.parametrize("command", re.findall(r"^\$ (socibrain .*)$", README, re.MULTILINE))
def test_readme_shows_what_is_printed(
    command: str,
    shown: dict[str, str],
    folder: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    out = printed(command, folder, monkeypatch, capsys)
    assert [line.rstrip() for line in out.splitlines() if line.strip()] == [
        line.rstrip() for line in shown[command].splitlines() if line.strip()
    ]


def test_the_tour_has_its_commands(shown: dict[str, str]) -> None:
    assert {command.split()[1] for command in shown} >= {"audit", "catalogue", "link", "report", "measure"}


def test_every_command_named_is_there() -> None:
    assert set(re.findall(r"socibrain (begin|audit|measure|link|report|catalogue)\b", README)) == set(
        entry.commands
    )


def test_the_front_door_is_as_readme_says() -> None:
    """These names outlive refactors."""
    assert socibrain.__all__ == ["audit", "begin", "catalogue", "link", "measure", "read_study", "report"]
    for name in set(re.findall(r"socibrain\.(\w+)\(", README)):
        assert callable(getattr(socibrain, name))


def test_every_file_named_is_there() -> None:
    for name in re.findall(r"\((demo_cohort/[\w.]+)\)|`((?:demo_cohort|analyses)/[\w./]+)`", README):
        assert (ROOT / "".join(name)).exists(), name


def test_the_plan_of_the_readme_is_a_plan(folder: Path) -> None:
    (text,) = re.findall(r"^```yaml\n(socibrain: 1\nplan: .*?)^```", README, re.MULTILINE | re.DOTALL)
    (folder / "plan.yaml").write_text(text, encoding="utf-8")
    (hypothesis,) = read_plan(folder / "plan.yaml").says.hypotheses
    assert hypothesis.predictor == "advice.constraint"


def written_out(entry: type[BaseModel]) -> set[str]:
    """Every entry that a document may hold, at any depth."""
    names = set(entry.model_fields)
    for field in entry.model_fields.values():
        for kind in parts(field.annotation):
            names |= written_out(kind)
    return names


def parts(annotation: object) -> list[type[BaseModel]]:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return [annotation]
    return [kind for each in get_args(annotation) for kind in parts(each)]


def test_the_study_file_of_the_readme_is_one_and_is_whole(tmp_path: Path) -> None:
    (text,) = re.findall(r"^```yaml\n(socibrain: 1\nstudy: .*?)^```", README, re.MULTILINE | re.DOTALL)
    (tmp_path / "study.yaml").write_text(text, encoding="utf-8")
    assert read_study(tmp_path / "study.yaml").says.study == "coast"
    missing = {name for name in written_out(StudyFile) if not re.search(rf"\b{name}:", text)}
    assert missing == set()


def test_the_python_of_the_readme_runs(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """With fewer restarts than the demo declares, to be quick."""
    for name in ("demo_cohort", "analyses"):
        shutil.copytree(ROOT / name, tmp_path / name)
    study = tmp_path / "demo_cohort" / "study.yaml"
    study.write_text(study.read_text(encoding="utf-8").replace("restarts: 50", "restarts: 2"))
    (code,) = re.findall(r"^```python\n(.*?)^```", README, re.MULTILINE | re.DOTALL)
    monkeypatch.chdir(tmp_path)
    names: dict[str, Any] = {}
    exec(code, names)
    assert names["findings"].table["id"].iloc[0] == "constraint_participation"
    assert (tmp_path / "report.html").read_text(encoding="utf-8").count("<svg") >= 6
