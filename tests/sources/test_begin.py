"""A first study file: from a folder, through a human's decisions, to a study that reads."""

from __future__ import annotations

from pathlib import Path

import pytest

from socibrain.errors import DataRefused, DocumentRefused, Faults
from socibrain.sources.answered import read_answered
from socibrain.sources.answers import read_answers
from socibrain.sources.begin import begin
from socibrain.sources.found_matrices import file_patterns
from socibrain.sources.matrices import read_matrix
from socibrain.sources.matrix_files import find_matrices
from socibrain.sources.people import read_people, scanned
from socibrain.sources.regions import read_regions
from socibrain.sources.study import read_study
from tests.sources.made_folder import IDS, NAMES, study_of, write, write_matrix, write_people


def write_answers(folder: Path) -> None:
    write(folder, "roster.tsv", [("participant_id", "full_name", "harbour"),
                                 *((i, n, "north") for i, n in zip(IDS, NAMES, strict=True))])  # fmt: skip
    write(folder, "survey/status.csv", [("participant_id", "answered"), *((i, "yes") for i in IDS)], ",")
    write(folder, "survey/advice.tsv",
          [("who", "turns_to"), *((a, b) for a in IDS[:3] for b in NAMES[:2]), ("31", "n/a")])  # fmt: skip
    write(folder, "survey/free time.tsv",
          [("participant_id", "friend_1", "friend_2", "friend_10"),
           *((i, NAMES[0], NAMES[3], "n/a") for i in IDS)])  # fmt: skip


def write_regions(folder: Path, size: int = 6) -> None:
    rows = [(n, f"zone{n}", "sea" if n % 2 else "land") for n in range(1, size + 1)]
    write(folder, "regions.tsv", [("index", "name", "system"), *rows])


def test_a_whole_study(tmp_path: Path) -> None:
    write_people(tmp_path)
    write_answers(tmp_path)
    write_regions(tmp_path)
    write(
        tmp_path,
        "motion.tsv",
        [("participant_id", "visit", "moved"), *((i, v, 0.1) for i in IDS for v in "12")],
    )
    for person in IDS:
        for visit in "12":
            write_matrix(tmp_path, f"scans/{person}/rest_visit{visit}.npy", low=-1)
    study = study_of(tmp_path)
    says, faults = study.says, Faults()
    people = read_people(study, faults)
    assert people is not None
    assert (says.people.site, says.people.role, says.people.numbers) == ("harbour", "duty", ("age",))
    assert scanned(study, people) == set(IDS)
    assert says.roster is not None
    assert (says.roster.name, says.roster.site) == ("full_name", "harbour")
    assert says.questionnaire is not None
    assert set(says.questionnaire.questions) == {"advice", "free_time"}
    advice, leisure = (says.questionnaire.questions[name] for name in ("advice", "free_time"))
    assert (advice.layout, advice.chooser, advice.chosen) == ("long", "who", "turns_to")
    assert (leisure.layout, leisure.chooser, leisure.chosen) == ("wide", "participant_id", "friend_*")
    written = read_answers(study, "free_time", faults)
    assert written is not None
    assert len(written.nominations) == 8
    assert read_answered(study, faults) == set(IDS)
    assert says.brain["rest"].files == "scans/{person}/rest_visit{visit}.npy"
    assert says.visits == ("1", "2")
    assert len(find_matrices(study, "rest", people.ids, faults)) == 8
    regions = read_regions(study, faults)
    assert regions is not None
    assert regions.systems[:2] == ("sea", "land")
    assert list(faults) == []


def test_what_nobody_can_guess_is_refused_until_it_is_decided(tmp_path: Path) -> None:
    write_people(tmp_path)
    write_answers(tmp_path)
    for person in IDS:
        write_matrix(tmp_path, f"{person}.tsv", low=-1)
    (tmp_path / "study.yaml").write_text(begin(tmp_path))
    with pytest.raises(DocumentRefused) as caught:
        read_study(tmp_path / "study.yaml")
    missing = [fault.found.removesuffix(": this entry is missing") for fault in caught.value.faults]
    questions = "questionnaire.questions"
    assert missing == [
        f"{questions}.advice.asks", f"{questions}.advice.ties",
        f"{questions}.free_time.asks", f"{questions}.free_time.ties",
        "brain.brain.edges", "brain.brain.negative",
    ]  # fmt: skip


def test_social_only(tmp_path: Path) -> None:
    write_people(tmp_path)
    write_answers(tmp_path)
    study = study_of(tmp_path)
    assert study.says.questionnaire is not None
    assert not study.says.brain
    assert "no `brain:`" in (tmp_path / "study.yaml").read_text()


def test_brain_only_and_no_negative_weights(tmp_path: Path) -> None:
    write_people(tmp_path)
    for person in IDS:
        write_matrix(tmp_path, f"nets/net-{person}.tsv")
    study = study_of(tmp_path, {"edges": "streamlines"})
    assert study.says.questionnaire is None
    assert study.says.brain["net"].files == "nets/net-{person}.tsv"
    assert study.says.brain["net"].negative == "refuse"
    assert study.says.visits == ()


def test_one_negative_weight_among_the_files_looked_at_is_left_to_decide(tmp_path: Path) -> None:
    ids = [f"p{k:02d}" for k in range(1, 23)]
    write_people(tmp_path, ids)
    for person in ids:
        write_matrix(tmp_path, f"nets/{person}.tsv")
    text = begin(tmp_path)
    assert "in 8 of 22 files weights are 0." in text
    assert "    negative: refuse  " in text
    for looked_at in ("p04", "p22"):  # of 22 files 1, 4, 7, 10, 13, 16, 19 and 22 are looked at
        write_matrix(tmp_path, f"nets/{looked_at}.tsv", low=-1)
        text = begin(tmp_path)
        assert "    negative: refuse  " not in text
        assert "    # decide: what becomes of negative weights?" in text
        assert "files weights are -0." in text
        write_matrix(tmp_path, f"nets/{looked_at}.tsv")


def test_only_files_like_the_first_count_among_those_looked_at(tmp_path: Path) -> None:
    write_people(tmp_path)
    for person in IDS:
        write_matrix(tmp_path, f"nets/{person}.tsv")
    write(tmp_path, "nets/31.tsv", [(-1, "x")])
    assert "in 3 of 4 files weights are 0." in begin(tmp_path)


def test_edge_lists_with_their_first_number(tmp_path: Path) -> None:
    write_people(tmp_path)
    for person in IDS:
        write_matrix(tmp_path, f"{person}_ties.edges")
    study = study_of(tmp_path)
    says, faults = study.says.brain["ties"], Faults()
    assert (says.layout, says.first_index) == ("edge_list", 1)
    (first, *_) = find_matrices(study, "ties", IDS, faults)
    record = read_matrix(study, first, None, faults)
    assert record is not None
    assert record.weights.shape == (6, 6)


def test_matlab_files_with_several_arrays(tmp_path: Path) -> None:
    write_people(tmp_path)
    for person in IDS:
        write_matrix(tmp_path, f"{person}.mat")
    assert "'conn' (6, 6), 'other' (6, 6)" in begin(tmp_path)
    study = study_of(tmp_path)
    assert study.says.brain["brain"].variable == "conn"


def test_draft_relation_matrices_in_any_order_without_a_people_table(tmp_path: Path) -> None:
    names = [
        "sub-01_ses-a_atlas-X_relmat.tsv",
        "sub-01_atlas-X_ses-b_relmat.tsv",
        "ses-a_sub-02_seg-X_relmat.tsv",
    ]
    for name in names:
        write_matrix(tmp_path, f"brain/{name}")
    text = begin(tmp_path)
    assert "# people:" in text
    write(tmp_path, "participants.tsv", [("participant_id", "age"), ("sub-01", 3), ("sub-02", 4)])
    study = study_of(tmp_path)
    (name,) = study.says.brain
    assert study.says.visits == ("a", "b")
    assert len(find_matrices(study, name, ("sub-01", "sub-02"), Faults())) == 3


def test_two_inputs_and_one_without_visits(tmp_path: Path) -> None:
    write_people(tmp_path)
    for person in IDS:
        for visit in ("pre", "post"):
            for kind in ("rest", "story"):
                write_matrix(tmp_path, f"{kind}/{person}_{visit}.tsv")
        write_matrix(tmp_path, f"fibres/{person}.tsv")
    study = study_of(tmp_path)
    assert {name: each.files for name, each in study.says.brain.items()} == {
        "rest": "rest/{person}_{visit}.tsv",
        "story": "story/{person}_{visit}.tsv",
    }
    assert study.says.visits == ("post", "pre")
    assert '#     files: "fibres/{person}.tsv"' in (tmp_path / "study.yaml").read_text()


@pytest.mark.parametrize(
    ("files", "ids", "expected"),
    [
        (["1_1.npy", "1_2.npy", "2_1.npy", "2_2.npy"], ["1", "2"], [("{person}_{visit}.npy", ("1", "2"))]),
        (["sub-1/ses-1/sub-1_ses-1.npy", "sub-2/ses-1/sub-2_ses-1.npy"], ["1", "2"],
         [("sub-{person}/ses-{visit}/sub-{person}_ses-{visit}.npy", ("1",))]),
        (["5_rest_80.tsv", "80_rest_80.tsv", "6_rest_80.tsv"], ["5", "6", "80"],
         [("{person}_rest_80.tsv", ())]),
        (["ab_T1_net.npy", "cd_T1_net.npy"], ["ab", "cd"], [("{person}_T1_net.npy", ())]),
        (["ab_T1.npy", "ab_T2.npy"], ["ab"], [("{person}_T{visit}.npy", ("1", "2"))]),
        (["a.b(c)+1.npy"], ["a.b(c)"], [("{person}+1.npy", ())]),
        (["xab.npy", "abx.npy", "ab2.npy"], ["ab"], []),
        (["ab.pdf", "ab.docx"], ["ab"], []),
        (["ab.npy"], [], []),
    ],
)  # fmt: skip
def test_patterns_from_names(
    files: list[str], ids: list[str], expected: list[tuple[str, tuple[str, ...]]]
) -> None:
    assert [(each.pattern, each.visits) for each in file_patterns(files, ids)] == expected
    assert file_patterns(files[::-1], ids) == file_patterns(files, ids)


def test_other_people_tables_and_awkward_names(tmp_path: Path) -> None:
    folder = tmp_path / "2031: the “coast”"
    folder.mkdir()
    write(folder, "our people.csv", [("code", "no", "is seen: #"), ("007", "yes", 3), ("8", "no", 4)], ",")
    for person in ("007", "8"):
        write_matrix(folder, f"a #1 {{x}}/{person}.npy")
    (folder / "a #1 {x}").rename(folder / "a #1")
    study = study_of(folder)
    assert study.says.title == folder.name
    assert (study.says.people.file, study.says.people.id) == ("our people.csv", "code")
    assert study.says.people.numbers == ("is seen: #",)


def test_cells_cannot_break_out_of_remarks(tmp_path: Path) -> None:
    write(tmp_path, "participants.tsv", [("participant_id", "scanned"), ("a", '"no\nseed: 5"'), ("b", "no")])
    write_matrix(tmp_path, "a.npy")
    assert study_of(tmp_path).says.seed == 1


def test_files_that_are_no_networks_are_named(tmp_path: Path) -> None:
    write_people(tmp_path)
    write(tmp_path, "notes.tsv", [("topic", "text"), ("weather", "wet")])
    for person in IDS:
        write(tmp_path, f"series/{person}.tsv", [(1.5, 2.5)] * 5)
        write_matrix(tmp_path, f"series/{person}.npy")
        short = (tmp_path / f"series/{person}.npy").read_bytes()[:200]
        (tmp_path / f"series/{person}.npy").write_bytes(short)
    text = begin(tmp_path)
    assert "# not used: notes.tsv" in text
    assert "# not used: series/{person}.tsv: is 5 × 2, not square" in text
    assert "# not used: series/{person}.npy: is cut short" in text
    assert "brain:\n" not in text


def test_our_own_and_hidden_folders_are_passed_over(tmp_path: Path) -> None:
    write_people(tmp_path)
    for folder in ("runs/demo", "private", ".cache"):
        write_matrix(tmp_path, f"{folder}/007.npy")
    assert "files:" not in begin(tmp_path)


def test_an_existing_study_file_is_never_touched(tmp_path: Path) -> None:
    write_people(tmp_path)
    (tmp_path / "study.yaml").write_text("mine")
    with pytest.raises(DataRefused) as caught:
        begin(tmp_path)
    assert [fault.kind for fault in caught.value.faults] == ["exists"]
    assert (tmp_path / "study.yaml").read_text() == "mine"


def test_begin_writes_nothing(tmp_path: Path) -> None:
    write_people(tmp_path)
    begin(tmp_path)
    assert [path.name for path in tmp_path.iterdir()] == ["participants.tsv"]


@pytest.mark.parametrize(
    ("folder", "files", "kind"),
    [
        ("none", {}, "missing-folder"),
        ("", {}, "nothing-found"),
        ("", {"notes.txt": "hello"}, "nothing-found"),
        ("", {"participants.tsv": "participant_id\tage\n1\n"}, "ragged"),
    ],
)
def test_folders_without_a_study_are_refused(
    tmp_path: Path, folder: str, files: dict[str, str], kind: str
) -> None:
    for name, content in files.items():
        (tmp_path / name).write_text(content)
    with pytest.raises(DataRefused) as caught:
        begin(tmp_path / folder)
    assert [fault.kind for fault in caught.value.faults] == [kind]
