"""Answers in both layouts, with every nomination's line and column."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from socibrain.errors import Fault, Faults
from socibrain.sources.answers import LAYOUTS, read_answers
from socibrain.sources.answers.wide import matching_columns
from socibrain.sources.records import Answers
from socibrain.sources.study import Question, read_study

Reader = Callable[..., tuple[Answers | None, list[Fault]]]


@pytest.fixture
def read(tmp_path: Path) -> Reader:
    def reader(text: str, layout: str, chosen: str, *, name: str = "answers.tsv") -> object:
        (tmp_path / name).write_text(text, encoding="utf-8")
        (tmp_path / "study.yaml").write_text(
            "socibrain: 1\nstudy: s\ntitle: t\npeople: {file: people.tsv}\n"
            "questionnaire: {questions: {advice: {asks: whom?, file: "
            f"{name}, layout: {layout}, chooser: by, chosen: '{chosen}', ties: directed}}}}}}\n",
            encoding="utf-8",
        )
        faults = Faults()
        return read_answers(read_study(tmp_path / "study.yaml"), "advice", faults), list(faults)

    return reader  # type: ignore[return-value]


def rows(answers: Answers | None) -> list[tuple[str, str, int, str]]:
    assert answers is not None
    return [(n.chooser, n.written, n.line, n.column) for n in answers.nominations]


def test_every_layout_of_the_study_file_has_its_function() -> None:
    assert set(LAYOUTS) == set(Question.model_fields["layout"].annotation.__args__)  # type: ignore[union-attr]


def test_long_rows_keep_line_and_column(read: Reader) -> None:
    answers, faults = read("by\tnames\n007\tNA\n\n007\tKim Lee\nNA\t\n12\tn/a\n", "long", "names")
    assert faults == []
    assert rows(answers) == [("007", "NA", 2, "names"), ("007", "Kim Lee", 4, "names")]
    assert answers is not None
    assert answers.choosers == {"007", "NA", "12"}  # an empty cell: answered and named nobody
    assert answers.first_line == {"007": 2, "NA": 5, "12": 6}


def test_wide_columns_are_read_in_the_order_of_their_numbers(read: Reader) -> None:
    text = "friend_10\tby\tfriend_2\tfriend_1\tbest_friend\nx\t007\tNA\t12\tq\n\tNA\t\tn/a\tq\n"
    answers, faults = read(text, "wide", "friend_*")
    assert faults == []
    assert rows(answers) == [
        ("007", "12", 2, "friend_1"),
        ("007", "NA", 2, "friend_2"),
        ("007", "x", 2, "friend_10"),
    ]
    assert answers is not None
    assert answers.choosers == {"007", "NA"}


def test_comma_separated_names_may_hold_commas(read: Reader) -> None:
    answers, faults = read('by,names\n007,"Lee, Kim"\n', "long", "names", name="answers.csv")
    assert faults == []
    assert rows(answers) == [("007", "Lee, Kim", 2, "names")]


def test_a_pattern_means_what_it_says() -> None:
    columns = ("n[1]", "n[2]", "n1", "N[3]", "xn[4]")
    assert matching_columns("n[*]", columns) == ("n[1]", "n[2]")
    assert matching_columns("*", ("b2", "b10", "a")) == ("a", "b2", "b10")


def test_the_chooser_column_is_no_answer(read: Reader) -> None:
    answers, _ = read("by\tone\ttwo\n007\tNA\t12\n", "wide", "*")
    assert [row[1] for row in rows(answers)] == ["NA", "12"]


@pytest.mark.parametrize(
    ("text", "layout", "chosen", "expected"),
    [
        ("by\tnames\n\tKim Lee\n", "long", "names", ("missing-chooser", "line 2")),
        ("by\tf_1\tf_2\n\tKim Lee\t\n", "wide", "f_*", ("missing-chooser", "line 2")),
        ("by\tf_1\tf_2\n7\tKim Lee\t\n8\t\t\n7\t\t\n", "wide", "f_*", ("duplicate-chooser", "lines 2 and 4")),
        ("by\tfriend_1\n7\tKim Lee\n", "wide", "friend_*", ("missing-column", "line 1")),
        ("by\tfriend_1\tfriend_2\n7\tKim Lee\t\n", "wide", "freind_*", ("missing-column", "line 1")),
        ("by\tnames\n7\tKim Lee\n", "long", "name", ("missing-column", "line 1")),
        ("who\tnames\n7\tKim Lee\n", "long", "names", ("missing-column", "line 1")),
        ("by\tnames\n7\tKim Lee\t9\n", "long", "names", ("ragged", "line 2")),
    ],
)
def test_faults_are_grave_and_quote_nothing_written(
    read: Reader, text: str, layout: str, chosen: str, expected: tuple[str, str]
) -> None:
    _, faults = read(text, layout, chosen)
    assert [(fault.kind, fault.place) for fault in faults] == [expected]
    assert faults[0].grave
    assert faults[0].file == "answers.tsv"
    assert "Kim" not in str(faults[0])


def test_a_mistyped_pattern_gets_the_nearest_column(read: Reader) -> None:
    _, faults = read("by\tfriend_1\tfriend_2\n7\t\t\n", "wide", "freind_*")
    assert "did you mean 'friend_" in faults[0].mend
