"""Documents: every fault at its line and column, in plain words, with a remedy."""

# ruff: noqa: E501 (one case per line reads better than wrapped ones)

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Annotated, Literal

import pytest
from pydantic import BeforeValidator, Field, ValidationError, field_validator, model_validator

from socibrain.documents import Document, Entry, nearest, read_document
from socibrain.errors import DocumentRefused, Fault


class Lamp(Entry):
    """A lamp of a lighthouse."""

    colour: Literal["red", "green", "white"]
    watts: float = Field(default=60.0, gt=0, le=1000)
    spares: int | Literal["none", "plenty"] = 0
    lit: bool = True

    @model_validator(mode="after")
    def _red_is_weak(self) -> Lamp:
        if self.colour == "red" and self.watts > 100:
            raise ValueError("give red lamps at most 100 watts")
        return self


class Keeper(Entry):
    """A keeper."""

    name: str
    boats: tuple[str, ...] = ()
    shift: tuple[int, int] | None = None


class House(Entry):
    """A lighthouse."""

    house: str = Field(pattern=r"^[A-Za-z0-9_-]+$")
    lamps: dict[str, Lamp] = Field(default_factory=dict)
    keepers: tuple[Keeper, ...] = Field(default=(), max_length=3)
    main: Lamp | None = None
    code: Annotated[str, BeforeValidator(str)] | None = None
    floors: int | None = Field(default=None, ge=1)

    @field_validator("floors")
    @classmethod
    def _no_thirteen(cls, value: int | None) -> int | None:
        if value == 13:
            raise ValueError("count again")
        return value


Refused = Callable[[str], list[Fault]]


@pytest.fixture
def refused(tmp_path: Path) -> Refused:
    def reader(text: str) -> list[Fault]:
        path = tmp_path / "house.yaml"
        path.write_text(text, encoding="utf-8", newline="")
        with pytest.raises(DocumentRefused) as caught:
            read_document(path, House)
        assert caught.value.exit_code == 3
        return list(caught.value.faults)

    return reader


def accepted(tmp_path: Path, text: str) -> Document[House]:
    path = tmp_path / "house.yaml"
    path.write_text(text, encoding="utf-8")
    return read_document(path, House)


def one(faults: list[Fault]) -> tuple[str, str, str, str]:
    assert len(faults) == 1, faults
    return faults[0].place, faults[0].kind, faults[0].found, faults[0].mend


def test_a_whole_document(tmp_path: Path) -> None:
    document = accepted(
        tmp_path,
        """
house: north
lamps:
  top: {colour: red, watts: 40, spares: plenty}
  low:
    colour: green
    spares: 3
keepers:
  - name: Ada
    boats: [gull, tern]
    shift: [6, 18]
""",
    )
    says = document.content
    assert says.lamps["top"].spares == "plenty"
    assert says.lamps["low"].spares == 3
    assert says.keepers[0].boats == ("gull", "tern")
    assert says.keepers[0].shift == (6, 18)
    with pytest.raises(ValidationError, match="frozen"):
        says.house = "south"  # type: ignore[misc]


def test_faults_of_later_checks_find_their_place(tmp_path: Path) -> None:
    document = accepted(tmp_path, "house: north\nlamps:\n  top:\n    colour: red\nkeepers:\n  - name: Ada\n")
    assert document.fault(("lamps", "top", "colour"), "k", "f", "m").place == "4:5"
    assert document.fault(("lamps", "top", "watts"), "k", "f", "m").place == "3:3", "nearest that is written"
    fault = document.fault(("keepers", 0, "name"), "k", "is asleep", "wake them")
    assert (fault.place, fault.found) == ("6:5", "keepers[0].name: is asleep")


@pytest.mark.parametrize("written", ["007", "1.50", "2031-05-06", "0x1F", "1e3", "12", "1_000", "no", "n/a"])
def test_bare_values_can_be_read_as_they_are_written(tmp_path: Path, written: str) -> None:
    assert accepted(tmp_path, f"house: n\ncode: {written}\n").content.code == written


def test_numbers_are_numbers_all_the_same(tmp_path: Path) -> None:
    lamp = accepted(tmp_path, "house: n\nmain: {colour: white, watts: 5.50e1, spares: 010}\n").content.main
    assert lamp is not None
    assert (lamp.watts, lamp.spares) == (55.0, 10)
    assert type(lamp.watts) is float


@pytest.mark.parametrize(
    ("text", "place", "found", "mend"),
    [
        ("house: n\nlampz: {}\n", "2:1", "lampz: unknown entry", "did you mean 'lamps'?"),
        ("house: n\nmain:\n  colour: red\n  wats: 4\n", "4:3", "main.wats: unknown entry", "did you mean 'watts'?"),
        ("house: n\nlamps:\n  a: {colour: red, Watts: 4}\n", "3:20", "lamps.a.Watts: unknown entry", "did you mean 'watts'?"),
        ("house: n\nkeepers:\n- name: A\n- {name: B, bots: [x]}\n", "4:13", "keepers[1].bots: unknown entry", "did you mean 'boats'?"),
        ("house: n\nqqq: 1\n", "2:1", "qqq: unknown entry", "valid here: code, floors, house, keepers, lamps, main"),
    ],
)  # fmt: skip
def test_unknown_entries_offer_the_nearest(
    refused: Refused, text: str, place: str, found: str, mend: str
) -> None:
    assert one(refused(text)) == (place, "unknown-entry", found, mend)


def test_a_misspelt_entry_is_told_once(refused: Refused) -> None:
    place, kind, _, mend = one(refused("hose: n\n"))
    assert (place, kind, mend) == ("1:1", "unknown-entry", "did you mean 'house'?")


def test_a_misspelt_twin_does_not_hide_what_is_wrong_with_the_entry(refused: Refused) -> None:
    assert [fault.place for fault in refused("house: n\nfloors: 0\nflors: 3\n")] == ["2:1", "3:1"]


def test_missing_entries_say_what_may_stand_there(refused: Refused) -> None:
    assert one(refused("house: n\nmain:\n  watts: 3\n")) == (
        "2:1",
        "missing-entry",
        "main.colour: this entry is missing",
        "add `colour: ...`, one of 'red', 'green', 'white'",
    )


@pytest.mark.parametrize(
    ("entry", "found", "mend"),
    [
        ("main: {colour: rad}", "main.colour: found 'rad', expected one of 'red', 'green', 'white'", "did you mean 'red'?"),
        ("main: {colour: 3}", "main.colour: found 3", "write one of 'red', 'green', 'white'"),
        ("main: {colour: }", "main.colour: found nothing", "write one of 'red', 'green', 'white'"),
        ("main: {colour: white, watts: much}", "main.watts: found 'much'", "write a number"),
        ("main: {colour: white, watts: .nan}", "main.watts: found .nan", "write a number"),
        ("main: {colour: white, watts: true}", "main.watts: found true", "write a number"),
        ("main: {colour: white, watts: 0}", "main.watts: found 0", "write a number above 0.0"),
        ("main: {colour: white, watts: 2e3}", "main.watts: found 2e3", "write a number of at most 1000.0"),
        ("main: {colour: white, lit: perhaps}", "main.lit: found 'perhaps'", "write true or false"),
        ("main: {colour: white, spares: plentty}", "main.spares: found 'plentty', expected one of 'none', 'plenty' or a whole number", "did you mean 'plenty'?"),
        ("main: {colour: white, spares: 1.5}", "main.spares: found 1.5", "write one of 'none', 'plenty' or a whole number"),
        ("main: {colour: red, watts: 200}", "main: these do not go together", "give red lamps at most 100 watts"),
        ("main: lamp", "main: found 'lamp'", "write entries (colour, watts, spares, lit)"),
        ("main: []", "main: found an empty list", "write entries (colour, watts, spares, lit)"),
        ("lamps: [a]", "lamps: found a list", "write `name: ...` entries"),
        ("keepers: {name: a}", "keepers: found entries", "write a list: [...]"),
        ("floors: 0", "floors: found 0", "write a number of at least 1"),
        ("floors: 2.5", "floors: found 2.5", "write a whole number"),
        ("floors: 13", "floors: found 13", "count again"),
        ("floors: !storeys 3", "floors: found a value with a tag", "write a whole number"),
        ("keepers: [{name: a}, {name: b}, {name: c}, {name: d}]", "keepers: found a list", "write at most 3 of them"),
        ("keepers: [{name: 7}]", "keepers[0].name: found 7, expected text", "put it in quotes: '7'"),
        ("keepers: [{name: TRUE}]", "keepers[0].name: found true, expected text", "put it in quotes: 'true'"),
        ("keepers: [{name: a, boats: [x, [y]]}]", "keepers[0].boats[1]: found a list", "write text"),
        ("keepers: [{name: a, boats: x}]", "keepers[0].boats: found 'x'", "write a list: [...]"),
        ("keepers: [{name: a, shift: [6, late]}]", "keepers[0].shift[1]: found 'late'", "write a whole number"),
        ("keepers: [{name: a, shift: [6]}]", "keepers[0].shift[1]: this entry is missing", "add it to the list, a whole number"),
    ],
)  # fmt: skip
def test_bad_values_are_told_in_plain_words(refused: Refused, entry: str, found: str, mend: str) -> None:
    _, kind, told, remedy = one(refused(f"house: n\n{entry}\n"))
    assert (told, remedy) == (found, mend)
    assert kind in ("bad-value", "missing-entry")


def test_names_with_spaces_are_refused(refused: Refused) -> None:
    _, _, found, mend = one(refused("house: north point\n"))
    assert (found, mend) == ("house: found 'north point'", "use letters, digits, _ and - only")


def test_all_faults_come_at_once_in_the_order_of_the_file(refused: Refused) -> None:
    faults = refused(
        """keepers:
  - name: 3
  - nam: b
    boats: 7
main:
  watts: -1
lamps:
  top: {colour: blue, spares: [1]}
house: n
flor: 2
"""
    )
    assert [(fault.place, fault.kind) for fault in faults] == [
        ("2:5", "bad-value"),
        ("3:5", "unknown-entry"),
        ("4:5", "bad-value"),
        ("5:1", "missing-entry"),
        ("6:3", "bad-value"),
        ("8:9", "bad-value"),
        ("8:23", "bad-value"),
        ("10:1", "unknown-entry"),
    ]
    assert "pydantic" not in " ".join(map(str, faults))


@pytest.mark.parametrize(
    ("text", "place", "kind", "part"),
    [
        ("", "1:1", "empty", "no entries"),
        ("\n# only a remark\n", "1:1", "empty", "no entries"),
        ("- a\n- b\n", "1:1", "not-entries", "a list"),
        ("lighthouse\n", "1:1", "not-entries", "a single value"),
        ("house: n\n\tmain: 3\n", "2:1", "yaml", "a tab"),
        ("main:\n  colour:\tred\n\twatts: 3\n", "2:10", "yaml", "a tab"),
        ("house: n\nhouse: m\n", "2:1", "duplicate-entry", "house: this entry stands twice"),
        ("main:\n  colour: red\n  watts: 1\n  colour: green\n", "4:3", "duplicate-entry", "colour"),
        ("house: a: b\n", "1:9", "yaml", "a colon"),
        ("house: 'n\n", "1:8", "yaml", "never closed"),
        ("house: n\nkeepers: [{name: a}\n", "2:10", "yaml", "never closed"),
        ("main:\n  colour: red\n watts: 3\n", "3:2", "yaml", "indented"),
        ("house: @n\n", "1:8", "yaml", "cannot begin with this sign"),
        ("house: n\nmain: {colour: red watts: 3}\n", "2:25", "yaml", "missing before this"),
        ("house: | n\n", "1:10", "yaml", "from here on"),
        ("house: *n\n", "1:8", "yaml", "points to"),
        ("house: n\n---\nhouse: m\n", "2:1", "yaml", "second document"),
        ("house: n\ncode: a\x07b\n", "2:8", "yaml", "a character"),
        ("house: " + "[" * 600 + "\n", "", "yaml", "too deeply"),
    ],
)
def test_what_is_no_yaml_is_refused_at_its_place(
    refused: Refused, text: str, place: str, kind: str, part: str
) -> None:
    where, what, found, mend = one(refused(text))
    assert (where, what) == (place, kind)
    assert part in found
    assert mend


def test_nothing_is_built_from_tags(refused: Refused) -> None:
    _, _, found, _ = one(refused("house: !!python/object/apply:os.getcwd []\n"))
    assert found == "house: found an empty list"


def test_values_that_hold_themselves_end(refused: Refused) -> None:
    assert refused("house: n\nmain: &m {colour: red, watts: 3, wats: *m}\n")


def test_other_encodings_are_refused_with_the_line(tmp_path: Path) -> None:
    path = tmp_path / "house.yaml"
    path.write_bytes("house: n\ncode: é\n".encode("latin-1"))
    with pytest.raises(DocumentRefused) as caught:
        read_document(path, House)
    assert one(list(caught.value.faults)) == ("line 2", "encoding", "is not UTF-8 text", "save it as UTF-8")


def test_a_byte_order_mark_and_windows_line_ends_are_fine(tmp_path: Path) -> None:
    path = tmp_path / "house.yaml"
    path.write_bytes(b"\xef\xbb\xbfhouse: n\r\ncode: x\r\n")
    assert read_document(path, House).content.code == "x"


def test_missing_files_and_folders_are_refused(tmp_path: Path) -> None:
    for path, kind in ((tmp_path / "none.yaml", "missing-file"), (tmp_path, "unreadable")):
        with pytest.raises(DocumentRefused) as caught:
            read_document(path, House)
        assert caught.value.faults[0].kind == kind
        assert caught.value.faults[0].file == str(path)


def test_shared_parts_may_be_written_once(tmp_path: Path) -> None:
    document = accepted(
        tmp_path,
        "house: n\nlamps:\n  a: &base {colour: red, watts: 20}\n  b: {<<: *base, watts: 30}\n  c: *base\n",
    )
    assert document.content.lamps["b"] == Lamp(colour="red", watts=30)
    assert document.content.lamps["c"] == document.content.lamps["a"]


def test_the_nearest_name_or_all_of_them() -> None:
    assert nearest("COLOR", ["colour", "watts"]) == "did you mean 'colour'?"
    assert nearest("x", ["b", "a"]) == "valid here: a, b"
    assert nearest("x", []) == "valid here: nothing"
