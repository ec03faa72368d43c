"""Questionnaire answers, one file per layout."""

from __future__ import annotations

from collections.abc import Callable

from socibrain.errors import Faults
from socibrain.sources.answers.long import from_long
from socibrain.sources.answers.wide import from_wide
from socibrain.sources.records import Answers
from socibrain.sources.study import Question, Study
from socibrain.sources.tables import TextTable, read_table

Layout = Callable[[str, Question, TextTable, Faults], Answers | None]
LAYOUTS: dict[str, Layout] = {"long": from_long, "wide": from_wide}


def read_answers(study: Study, question_name: str, faults: Faults) -> Answers | None:
    """Everything written in answer to one question of the study file.

    None when the file cannot be used; every reason is then in ``faults``.
    """
    asked = study.says.questionnaire
    if asked is None:
        raise ValueError("this study asks no questions")
    question = asked.questions[question_name]
    here = f"questionnaire.questions.{question_name}"
    needed = {question.chooser: f"{here}.chooser"}
    if question.layout == "long":
        needed |= {question.chosen: f"{here}.chosen"}
    table = read_table(study.path(question.file), question.file, needed, faults)
    return None if table is None else LAYOUTS[question.layout](question_name, question, table, faults)
