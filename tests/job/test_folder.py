from __future__ import annotations

import pytest

from calcsheet.job import edits
from calcsheet.job.errors import ConflictError, InputError
from calcsheet.job.floorfile import FILES as FLOOR_FILES
from calcsheet.job.folder import JobFolder
from calcsheet.job.rewrite import with_value


@pytest.fixture
def folder(tmp_path, card_text, storeys_text):
    (tmp_path / "job.toml").write_text(card_text)
    (tmp_path / "storeys.csv").write_text(storeys_text)
    return JobFolder(tmp_path)


def refusal(folder) -> str:
    with pytest.raises(InputError) as caught:
        folder.load()
    return str(caught.value)


ALWAYS = {*FLOOR_FILES, "members.csv", "sections.csv", "materials.csv"}


def watched(files) -> list[str]:
    """Files watched, but for those of the take-offs, which are always."""
    assert files.stamps.keys() >= ALWAYS
    return sorted(files.stamps.keys() - ALWAYS)


def test_a_folder_is_read(folder, card_text):
    files = folder.load()
    assert files.card.job.number == "C-014"
    assert files.card_text == card_text
    assert files.reading.storeys.level == ("1", "2", "3, upper", "Roof")
    assert files.problems == ()
    assert watched(files) == ["job.toml", "storeys.csv"]
    assert folder.changed_on_disk(files) == ()


def test_files_that_are_missing(folder):
    (folder.path / "storeys.csv").unlink()
    assert refusal(folder) == f"no storeys.csv in {folder.path}; must have a row for each level"
    (folder.path / "job.toml").unlink()
    assert refusal(folder) == f"no job.toml in {folder.path}; `calcsheet new {folder.path}` makes one"


def test_a_matrix_that_is_missing(folder, card_text):
    text = card_text.replace('"storey chain"', '"stiffness matrix"\nx = "kx.csv"\ny = "ky.csv"')
    (folder.path / "job.toml").write_text(text)
    assert refusal(folder) == f"no kx.csv in {folder.path}; must be there, since job.toml names it in model.x"


def test_matrices_are_read(folder, card_text):
    text = card_text.replace('"storey chain"', '"stiffness matrix"\nx = "kx.csv"\ny = "kx.csv"')
    (folder.path / "job.toml").write_text(text)
    names = "Roof", '"3, upper"', "2", "1"
    rows = [",".join([name, *("2" if i == j else "0" for j in range(4))]) for i, name in enumerate(names)]
    (folder.path / "kx.csv").write_text("\n".join(["[MN/m]," + ",".join(names), *rows]))
    files = folder.load()
    assert files.reading.storeys.stiffness[0].lateral["y"].matrix[0, 0] == 2000.0
    assert "kx.csv" in files.stamps


def test_edits_are_written_through(folder, storeys_text):
    files = folder.load()
    after = folder.save_storeys(files, edits.set_number(files.reading, "Roof", "mass", 199.5))
    assert (folder.path / "storeys.csv").read_text() == storeys_text.replace("212.5", "199.5")
    assert after.reading.storeys.mass[-1] == 199.5
    assert folder.changed_on_disk(after) == ()
    again = folder.save_storeys(after, edits.set_number(after.reading, "Roof", "mass", 198.0))
    assert folder.load().reading.storeys.mass[-1] == again.reading.storeys.mass[-1] == 198.0


def test_a_wrong_cell_is_kept_on_disk_and_gives_no_storeys(folder):
    files = folder.load()
    after = folder.save_storeys(files, edits.set_text(files.reading, "Roof", "mass", "2o0"))
    assert after.problems == ('storeys.csv, level "Roof": mass "2o0"; must be a number in t',)
    assert after.reading.storeys is None
    assert ",2o0," in (folder.path / "storeys.csv").read_text()


def test_a_change_by_others_is_noticed_and_not_overwritten(folder, storeys_text):
    files = folder.load()
    theirs = storeys_text.replace("212.5", "1")
    (folder.path / "storeys.csv").write_text(theirs)
    assert folder.changed_on_disk(files) == ("storeys.csv",)
    mine = edits.set_number(files.reading, "Roof", "mass", 199.5)
    with pytest.raises(ConflictError, match=r"^storeys\.csv: not saved, changed on disk since it was read"):
        folder.save_storeys(files, mine)
    assert (folder.path / "storeys.csv").read_text() == theirs
    after = folder.save_storeys(files, mine, overwrite=True)
    assert ",199.5," in (folder.path / "storeys.csv").read_text()
    assert folder.changed_on_disk(after) == ()


def test_a_removed_file_is_noticed(folder):
    files = folder.load()
    (folder.path / "job.toml").unlink()
    assert folder.changed_on_disk(files) == ("job.toml",)


def test_the_card_is_saved_and_read_anew(folder):
    files = folder.load()
    after = folder.save_card(files, with_value(files.card_text, "levels.effective_base", "1"))
    assert after.reading.storeys.base == "1"
    assert folder.load().card == after.card
    assert folder.changed_on_disk(after) == ()


def test_a_wrong_card_is_not_saved(folder, card_text):
    files = folder.load()
    with pytest.raises(InputError, match=r"units\.system"):
        folder.save_card(files, with_value(files.card_text, "units.system", "metric"))
    assert (folder.path / "job.toml").read_text() == card_text


def test_byte_order_mark_and_encoding_are_kept(folder, card_text):
    path = folder.path / "job.toml"
    path.write_bytes(b"\xef\xbb\xbf" + card_text.replace("\n", "\r\n").encode())
    files = folder.load()
    folder.save_card(files, with_value(files.card_text, "job.title", "Höhe ψ"))
    expected = card_text.replace("Lateral modes", "Höhe ψ").replace("\n", "\r\n")
    assert path.read_bytes() == b"\xef\xbb\xbf" + expected.encode()


NO_BASIS = "job.toml, basis: missing; must be a table [basis] where a design demand is asked for"
BASIS = '[basis]\nedition = "given points"\npoints = "sa.csv"\n\n[answers]'
SPECTRUM = "period [s],ordinate [g]\n0,0.3\n4,0.1\n"


@pytest.fixture
def with_basis(folder, card_text):
    (folder.path / "job.toml").write_text(card_text.replace("[answers]", BASIS))
    (folder.path / "sa.csv").write_text(SPECTRUM)
    return folder


def test_a_folder_without_a_basis(folder):
    files = folder.load()
    assert (files.basis, files.basis_problem) == (None, NO_BASIS)


def test_a_basis_is_read_with_its_spectrum(with_basis):
    files = with_basis.load()
    assert files.basis_problem == ""
    assert files.basis.edition.points == ((0.0, 0.3), (4.0, 0.1))
    assert watched(files) == ["job.toml", "sa.csv", "storeys.csv"]
    assert with_basis.changed_on_disk(files) == ()
    (with_basis.path / "sa.csv").write_text(SPECTRUM.replace("0.3", "0.4"))
    assert with_basis.changed_on_disk(files) == ("sa.csv",)


@pytest.mark.parametrize(
    ("text", "problem"),
    [
        (None, "no sa.csv in {folder}; must be there, since job.toml names it in basis.points"),
        ("", "sa.csv: the file is empty; must have a line of headings"),
        (SPECTRUM.replace("0.3", "-0.3"), "sa.csv, row 2: ordinate -0.3 g; must be 0 or above"),
    ],
)
def test_a_wrong_spectrum_keeps_only_the_basis_from_being_read(with_basis, text, problem):
    path = with_basis.path / "sa.csv"
    path.unlink() if text is None else path.write_text(text)
    files = with_basis.load()
    assert (files.basis, files.basis_problem) == (None, problem.format(folder=with_basis.path))
    assert files.problems == ()
    assert files.reading.storeys is not None
    assert with_basis.changed_on_disk(files) == ()
    path.write_text(SPECTRUM)
    assert with_basis.changed_on_disk(files) == ("sa.csv",)
    assert with_basis.load().basis_problem == ""


def test_a_wrong_basis_keeps_only_the_basis_from_being_read(folder, card_text):
    (folder.path / "job.toml").write_text(card_text.replace("[answers]", "[basis]\nedition = 1998\n[answers]"))
    files = folder.load()
    assert files.basis is None
    assert files.basis_problem.startswith("job.toml, basis.edition: got 1998; must be")
    assert files.reading.storeys is not None


def test_the_basis_follows_the_card_that_is_saved(with_basis):
    files = with_basis.load()
    after = with_basis.save_card(files, with_value(files.card_text, "basis.points", "other.csv"))
    assert after.basis is None
    assert watched(after) == ["job.toml", "other.csv", "storeys.csv"]
    assert with_basis.changed_on_disk(after) == ()
    back = with_basis.save_card(after, with_value(after.card_text, "basis.points", "sa.csv"))
    assert back.basis == files.basis
    again = with_basis.save_card(back, with_value(back.card_text, "basis.combination", "SRSS"))
    assert again.basis.combination == "SRSS"
    assert watched(again) == ["job.toml", "sa.csv", "storeys.csv"]


def test_table_and_card_are_saved_together(folder, card_text):
    files = folder.load()
    table = edits.set_number(files.reading, "Roof", "mass", 199.5)
    after = folder.save_both(files, table, with_value(card_text, "stiffness.cracked.factor", 0.45))
    again = folder.load()
    assert again.reading.storeys.mass[-1] == after.reading.storeys.mass[-1] == 199.5
    assert again.card.stiffness["cracked"].factor == after.card.stiffness["cracked"].factor == 0.45
    assert folder.changed_on_disk(after) == ()


def test_neither_is_saved_where_one_can_not_be(folder, card_text, storeys_text):
    files = folder.load()
    table = edits.set_number(files.reading, "Roof", "mass", 199.5)
    with pytest.raises(InputError, match=r"stiffness\.cracked\.factor: got -1"):
        folder.save_both(files, table, with_value(card_text, "stiffness.cracked.factor", -1))
    (folder.path / "job.toml").write_text(card_text + "# by hand\n")
    with pytest.raises(ConflictError, match=r"^job\.toml: not saved, changed on disk"):
        folder.save_both(files, table, with_value(card_text, "stiffness.cracked.factor", 0.45))
    assert (folder.path / "storeys.csv").read_text() == storeys_text
    assert (folder.path / "job.toml").read_text() == card_text + "# by hand\n"
