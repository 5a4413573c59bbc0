"""comments.csv: read strictly, by row and column, and written back with only what changed."""

from __future__ import annotations

import contextlib

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcsheet.job import comments as module
from calcsheet.job.comment import Comment, raised, replied
from calcsheet.job.comments import COLUMNS, comments_of, edited, file_of, read_comments
from calcsheet.job.errors import ConflictError, InputError

HEAD = ",".join(COLUMNS)
ROW = "1,A,Remy Aalto,2026-04-02,Demand,Which edition?,,,,,"
DONE = "2,A,Remy Aalto,2026-04-02,,Masses?,Of March,Odile Quist,2026-04-03,Remy Aalto,2026-04-04"


@pytest.fixture
def path(tmp_path):
    return tmp_path / "comments.csv"


def refusal(path, *rows, head=HEAD, originator=""):
    path.write_text("\n".join((head, *rows)), encoding="utf-8")
    with pytest.raises(InputError) as caught:
        read_comments(path, originator)
    return str(caught.value)


def test_what_is_in_the_file(path):
    path.write_text(f"{HEAD}\n{ROW}\n,,,,,,,,,,\n{DONE}\n", encoding="utf-8")
    assert read_comments(path) == (
        Comment(1, "A", "Remy Aalto", "2026-04-02", "Demand", "Which edition?"),
        Comment(
            2,
            "A",
            "Remy Aalto",
            "2026-04-02",
            "",
            "Masses?",
            "Of March",
            "Odile Quist",
            "2026-04-03",
            "Remy Aalto",
            "2026-04-04",
        ),
    )
    assert read_comments(path.with_name("other.csv")) == ()


def test_delimiters_marks_and_order_are_those_of_the_file(path):
    heads = [*COLUMNS[::-1], "our ref"]
    cells = ["", "", "", "", "", "=now?", "", "2026-04-02", "Rémy", "A", "1", "x"]
    path.write_bytes(b"\xff\xfe" + f"{';'.join(heads)}\r\n{';'.join(cells)}\r\n".encode("utf-16-le"))
    assert read_comments(path) == (Comment(1, "A", "Rémy", "2026-04-02", "", "=now?"),)
    edited(path, lambda now: replied(now, 1, "later", "Odile", "2026-04-05"))
    text = path.read_bytes().decode("utf-16")
    assert text.splitlines()[1] == ";;2026-04-05;Odile;later;=now?;;2026-04-02;Rémy;A;1;x"


@pytest.mark.parametrize(
    ("rows", "sentence"),
    [
        (["x,A,R,2026-04-02,,q,,,,,"], 'row 2, column "number": got "x"; must be a whole number from 1 to 999999'),
        (["0,A,R,2026-04-02,,q,,,,,"], 'row 2, column "number": got "0"; must be a whole number from 1 to 999999'),
        ([ROW, ROW], 'row 3, column "number": 1 stands there twice; must be a number of its own'),
        (["1,A,,2026-04-02,,q,,,,,"], 'row 2, column "by": is blank; must be filled in'),
        (["1,A,R,2026-04-02,,,,,,,"], 'row 2, column "comment": is blank; must be filled in'),
        (["1,A,R,02/04/2026,,q,,,,,"], 'row 2, column "date": got "02/04/2026"; must be a date such as 2026-01-31'),
        (["1,A,R,2026-02-30,,q,,,,,"], 'row 2, column "date": got "2026-02-30"; must be a date such as 2026-01-31'),
        (["1,A,R,20260402,,q,,,,,"], 'row 2, column "date": got "20260402"; must be a date such as 2026-01-31'),
        (["1,A,R,2026-04-02,,q,yes,,,,"], 'row 2, column "replied by": is blank; must be filled in, as "reply" is'),
        (
            ["1,A,R,2026-04-02,,q,,,,,2026-04-02"],
            'row 2, column "closed by": is blank; must be filled in, as "closed on" is',
        ),
        (["1,A,R,2026-04-02,,q\x07,,,,,"], 'row 2, column "comment": a character that can\'t be printed; must be text'),
        (["1,A,R,2026-04-02,,q,,,,,,more"], "row 2: 12 cells under 11 headings; must have a cell for each heading"),
    ],
)
def test_a_wrong_cell_is_named_by_row_and_column(path, rows, sentence):
    assert refusal(path, *rows) == f"comments.csv, {sentence}"


@pytest.mark.parametrize(("column", "count"), [("by", "no"), ("reply", "more than one")])
def test_each_column_stands_there_once(path, column, count):
    names = [c for c in COLUMNS if c != column] if count == "no" else [*COLUMNS, column]
    assert refusal(path, head=",".join(names)) == (
        f'comments.csv: {count} column "{column}"; must have one each of: {", ".join(COLUMNS)}'
    )


def test_closed_by_hand_by_one_who_may_not(path):
    row = "4,A,Remy Aalto,2026-04-02,,q,a,Ana Sobol,2026-04-03,{},2026-04-04"
    allowed = "must be Remy Aalto, or a checker who did not reply"
    assert refusal(path, row.format("Odile Quist"), originator="odile quist") == (
        'comments.csv, row 2, column "closed by": Odile Quist, who prepared the calculation, may not close a comment '
        f"raised by Remy Aalto; {allowed}"
    )
    assert refusal(path, row.format("Ana Sobol")) == (
        'comments.csv, row 2, column "closed by": Ana Sobol, who replied to it, may not close a comment raised by '
        f"Remy Aalto; {allowed}"
    )


def test_a_jobs_comments_are_held_against_its_card(job_folder):
    folder = job_folder()
    assert comments_of(folder) == ()
    edited(folder / "comments.csv", lambda now: raised(now, "A", "Why?", "Remy Aalto", "2026-04-02"))
    assert comments_of(folder) == (Comment(1, "A", "Remy Aalto", "2026-04-02", "", "Why?"),)
    text = (folder / "comments.csv").read_text(encoding="utf-8-sig").replace(",,,,,\n", ",,,,Odile Quist,2026-04-03\n")
    (folder / "comments.csv").write_text(text, encoding="utf-8")
    with pytest.raises(InputError, match="who prepared the calculation"):
        comments_of(folder)


def test_a_records_comments_are_its_jobs_or_beside_it(job_folder, tmp_path):
    folder = job_folder()
    record = folder / "issued" / "A" / "r.json"
    record.parent.mkdir(parents=True)
    record.touch()
    alone = tmp_path / "desk" / "r.json"
    alone.parent.mkdir()
    alone.touch()
    assert file_of(record) == folder.resolve() / "comments.csv"
    assert file_of(folder) == folder / "comments.csv"
    assert file_of(alone) == alone.with_name("comments.csv")


def test_a_new_file_is_for_spreadsheets_and_safe(path):
    edited(path, lambda now: raised(now, "A", '=cmd|"x"', "+Remy", "2026-04-02", "@here"))
    assert path.read_bytes() == (
        b"\xef\xbb\xbf" + f'{HEAD}\r\n1,A,\'+Remy,2026-04-02,\'@here,"\'=cmd|""x""",,,,,\r\n'.encode()
    )
    assert read_comments(path)[0].comment == '=cmd|"x"'


def test_cells_that_stay_keep_their_bytes(path):
    rows = [HEAD, '"1",A , "Remy" ,2026-04-02,,"two\r\nlines",,,,,', ROW.replace("1", "2", 1)]
    path.write_bytes("\r\n".join(rows).encode())
    before = path.read_bytes()
    edited(path, lambda now: now)
    assert path.read_bytes() == before
    edited(path, lambda now: replied(now, 2, "2016", "Odile", "2026-04-05"))
    assert path.read_bytes() == before.replace(b"edition?,,,", b"edition?,2016,Odile,2026-04-05")
    assert read_comments(path)[0].comment == "two\nlines"


def test_a_file_that_others_write_meanwhile_is_read_again(path, monkeypatch):
    write, others = module.textfile.write, iter(range(3))

    def late(place, content, expected):
        if next(others, None) is not None:
            now = read_comments(path)
            edited_text = module._written(
                module._read(path)[0] if now else module._new(), raised(now, "A", "mine", "Zed", "2026-04-02")
            )
            path.write_bytes(edited_text.content())
        return write(place, content, expected)

    monkeypatch.setattr(module.textfile, "write", late)
    after = edited(path, lambda now: raised(now, "A", "ours", "Remy", "2026-04-02"))
    assert [(c.number, c.by) for c in after] == [(1, "Zed"), (2, "Zed"), (3, "Zed"), (4, "Remy")]
    assert read_comments(path) == after


def test_it_gives_up_in_one_sentence(path, monkeypatch):
    def never(*_):
        raise ConflictError("comments.csv", "", "not saved, changed on disk since it was read", "load it again")

    monkeypatch.setattr(module.textfile, "write", never)
    with pytest.raises(ConflictError, match="not saved"):
        edited(path, lambda now: raised(now, "A", "ours", "Remy", "2026-04-02"))


words = st.text(st.characters(codec="utf-8", exclude_categories=["Cc", "Cs"]), max_size=20).map(str.strip)
said = words.filter(bool)


@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60)
@given(st.lists(st.tuples(said, said, words, words), max_size=4))
def test_what_is_written_is_read(tmp_path, drawn):
    path = tmp_path / "comments.csv"
    path.unlink(missing_ok=True)
    made = ()
    for number, (text, by, where, reply) in enumerate(drawn, 1):
        made = raised(made, "A", text, by, "2026-04-02", where)
        if reply:
            made = replied(made, number, reply, "Odile", "2026-04-03")
    assert edited(path, lambda _: made) == read_comments(path) == made


@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=100)
@given(st.binary(max_size=60) | st.text(',;\t\n"1A=', max_size=40).map(lambda t: f"{HEAD}\n{t}".encode()))
def test_any_bytes_are_read_or_refused(tmp_path, content):
    path = tmp_path / "comments.csv"
    path.write_bytes(content)
    with contextlib.suppress(InputError):  # any other error is a defect
        assert all(isinstance(comment, Comment) for comment in read_comments(path))
