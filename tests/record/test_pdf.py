import os
import re
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from matplotlib.image import imread
from pypdf import PdfReader

from calcsheet.record import pdf
from calcsheet.record.page import Page, Paper, render_page

REQUIRED = os.environ.get("CALCSHEET_REQUIRE_TOOLS") == "1"
Make = Callable[..., Path]
DATA = b'{"note": "data"}'


def need(present: bool, what: str) -> None:
    if not present and REQUIRED:
        pytest.fail(f"{what} is missing and CALCSHEET_REQUIRE_TOOLS is 1")
    if not present:
        pytest.skip(f"{what} is missing")


def tool(name: str, *arguments: str) -> str:
    need(shutil.which(name) is not None, name)
    return subprocess.run([name, *arguments], capture_output=True, text=True, check=True).stdout


@pytest.fixture(scope="session")
def make(sample: Callable[..., Page]) -> Make:
    """Writes the sample by an engine into a folder."""

    def write(engine: str, folder: Path, paper: Paper = "a4", draft: bool = True) -> Path:
        available = {info.name: info for info in pdf.engines()}
        need(engine in available, engine)
        html = render_page(sample("pdf", draft=draft, engine=str(available[engine])), "pdf", paper)
        path = folder / f"{engine}-{paper}.pdf"
        path.write_bytes(pdf.pdf_of(html, attachments=[("record.json", DATA)], engine=engine))
        return path

    return write


@pytest.fixture(scope="module", params=pdf.ENGINES)
def path(request: pytest.FixtureRequest, make: Make, tmp_path_factory: pytest.TempPathFactory) -> Path:
    return make(request.param, tmp_path_factory.mktemp("pdf"))


@pytest.fixture(scope="module")
def paged(make: Make, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """By the engine that can do everything."""
    return make("WeasyPrint", tmp_path_factory.mktemp("paged"))


def words(path: Path) -> list[str]:
    return tool("pdftotext", "-layout", str(path), "-").split("\f")[:-1]


def pictures(path: Path, stem: Path) -> list[np.ndarray]:
    tool("pdftoppm", "-r", "30", "-png", str(path), str(stem))
    return [imread(name) for name in sorted(stem.parent.glob(f"{stem.name}-*.png"))]


def fonts(path: Path) -> set[str]:
    """Names of the fonts in the file, each checked to be embedded, reduced, and readable as text."""
    lines = tool("pdffonts", str(path)).splitlines()[2:]
    assert all(re.search(r" yes +yes +yes +\d+ +\d+$", line) for line in lines)
    return {line.split()[0].partition("+")[2].replace("-", "") for line in lines}


def test_every_sheet_says_what_it_belongs_to(path: Path) -> None:
    sheets = words(path)
    assert len(sheets) >= 8
    for number, sheet in enumerate(sheets, start=1):
        assert f"sheet {number} of {len(sheets)}" in sheet
        for running in (
            "Kestrel Quay",
            "KQB-S-014",
            "revision B",
            "12 May 2026",
            "Prepared ZM",
            "Checker ΘΙ",
        ):
            assert running in sheet, (number, running)


def test_the_watermark_is_drawn_and_not_written(path: Path, tmp_path: Path, make: Make) -> None:
    text = "".join(words(path))
    assert text.count("DRAFT") == 1  # the status on the cover
    engine = path.name.partition("-")[0]
    plain = PdfReader(make(engine, tmp_path, draft=False))
    assert "DRAFT" not in "".join(page.extract_text() for page in plain.pages)
    drawn, clean = pictures(path, tmp_path / "drawn"), pictures(tmp_path / path.name, tmp_path / "clean")
    assert len(drawn) == len(clean) == len(plain.pages)
    for number, (marked, unmarked) in enumerate(zip(drawn, clean, strict=True), start=1):
        assert 0.01 < np.mean(np.any(marked != unmarked, axis=-1)) < 0.3, number


def test_numbers_come_out_as_printed(path: Path) -> None:
    text = re.sub("[\u00a0\u2007\u2009\u202f]", " ", "".join(words(path)))
    for number in ("198.00", "25 078.9", "746 667", "4.310 s", "20 390 t"):
        assert number in text
    assert "-0.1736" in text
    assert "0.6428" in text


def test_a_long_table_repeats_its_heading_and_splits_no_row(path: Path) -> None:
    sheets = [sheet for sheet in words(path) if "stiffness x [kN/m]" in sheet]
    assert len(sheets) >= 2
    rows = re.findall(r"^\s*(Roof|\d+)\s+[\d.]+\s+[34]\.\d0\s+4\d\d\.\d", "\n".join(sheets), re.MULTILINE)
    assert rows == ["Roof", *map(str, range(57, 0, -1))]


def test_the_records_fonts_are_used_and_every_font_is_embedded(path: Path) -> None:
    names = fonts(path)
    assert any(name.startswith("CalcsheetSerif") for name in names)
    assert any(name.startswith("CalcsheetSans") for name in names)


def test_data_are_attached(path: Path) -> None:
    (attachment,) = PdfReader(path).attachment_list
    assert (attachment.name, attachment.content) == ("record.json", DATA)
    assert attachment.pdf_object["/AFRelationship"] == "/Data"


def test_the_same_input_gives_the_same_bytes(path: Path, tmp_path: Path, make: Make) -> None:
    assert make(path.name.partition("-")[0], tmp_path).read_bytes() == path.read_bytes()


def test_contents_give_the_right_sheets(paged: Path) -> None:
    sheets = words(paged)
    contents = next(sheet for sheet in sheets if re.search(r"^\s*Contents$", sheet, re.MULTILINE))
    entries = re.findall(r"^\s*(\S.*?)\s*[.…]{2,}[. …]*\s*(\d+)$", contents, re.MULTILINE)
    assert [title for title, _ in entries] == [
        "Basis and criteria", "Scope and model", "What the model leaves out", "Storeys", "Modes",
        "Mode shapes in full", "Check by hand", "Evidence", "Cautions", "Versions",
    ]  # fmt: skip
    for title, number in entries:
        assert re.search(rf"^\s*{title}$", sheets[int(number) - 1], re.MULTILINE), (title, number)


def test_bookmarks_tags_language_and_standard(paged: Path) -> None:
    reader = PdfReader(paged)
    title, parts = reader.outline
    assert title["/Title"] == "Lateral modes of the tower"  # type: ignore[call-overload,index]
    assert "Storeys" in [part["/Title"] for part in parts if not isinstance(part, list)]  # type: ignore[union-attr]
    root = reader.root_object
    assert root["/MarkInfo"]["/Marked"] == True  # type: ignore[index]  # noqa: E712
    assert root["/Lang"] == "en-GB"
    metadata = root["/Metadata"].get_object().get_data().decode()  # type: ignore[union-attr]
    assert re.search(r"pdfaid:part(=\"|>)3", metadata)
    assert reader.metadata
    assert reader.metadata.title == "KQB-S-014 revision B: Lateral modes of the tower"
    assert str(reader.metadata.creation_date).startswith("2026-05-12")


def test_a_wide_table_stands_on_a_turned_sheet(paged: Path) -> None:
    turned = [page for page in PdfReader(paged).pages if page.mediabox.width > page.mediabox.height]
    assert len(turned) == 1
    assert "mode 14" in turned[0].extract_text()


@pytest.mark.parametrize("engine", pdf.ENGINES)
def test_letter_paper(engine: str, tmp_path: Path, make: Make) -> None:
    box = PdfReader(make(engine, tmp_path, "letter")).pages[0].mediabox
    assert (round(box.width), round(box.height)) == (612, 792)


@pytest.mark.parametrize("engine", pdf.ENGINES)
@pytest.mark.parametrize(
    "reference",
    [
        '<img src="https://example.org/a.png" alt="">',
        '<img src="plan.png" alt="">',
        '<div style="background: url(https://example.org/a.png)">x</div>',
    ],
)
def test_a_reference_outside_the_document_is_refused(engine: str, reference: str, tmp_path: Path) -> None:
    need(engine in {info.name for info in pdf.engines()}, engine)
    path = tmp_path / "a.pdf"
    with pytest.raises(pdf.OutsideReferenceError, match="a record may hold embedded data only"):
        pdf.pdf_of(f"<!DOCTYPE html><html lang=en><title>t</title><p>x</p>{reference}</html>", engine=engine)
    assert not path.exists()


@pytest.mark.parametrize("engine", pdf.ENGINES)
def test_a_machine_without_fonts_gives_the_records_fonts(
    engine: str, tmp_path: Path, sample: Callable[..., Page]
) -> None:
    need(engine in {info.name for info in pdf.engines()}, engine)
    (tmp_path / "fonts.conf").write_text(
        f'<?xml version="1.0"?><!DOCTYPE fontconfig SYSTEM "fonts.dtd">'
        f"<fontconfig><cachedir>{tmp_path}/cache</cachedir></fontconfig>"
    )
    source, target = tmp_path / "a.html", tmp_path / "a.pdf"
    source.write_text(render_page(sample("pdf"), "pdf", "a4"), encoding="utf-8")
    code = (
        "import sys; from pathlib import Path; from calcsheet.record.pdf import pdf_of; "
        "Path(sys.argv[2]).write_bytes(pdf_of(Path(sys.argv[1]).read_text('utf-8'), engine=sys.argv[3]))"
    )
    environment = os.environ | {
        "FONTCONFIG_FILE": str(tmp_path / "fonts.conf"),
        "PYTHONPATH": os.pathsep.join(sys.path),
    }
    command = [sys.executable, "-c", code, source, target, engine]
    subprocess.run(command, env=environment, check=True, capture_output=True)
    names = fonts(target)
    assert names
    assert all(name.startswith(("Calcsheet", "DejaVuSans")) for name in names)


def test_an_engine_can_be_forced(monkeypatch: pytest.MonkeyPatch) -> None:
    for info in pdf.engines():
        monkeypatch.setenv(pdf.CHOICE, info.name.lower())
        assert pdf.choose_engine() == info
    monkeypatch.setenv(pdf.CHOICE, "typewriter")
    with pytest.raises(pdf.NoEngine, match='got "typewriter"; must be one of WeasyPrint, PlutoPrint'):
        pdf.choose_engine()


def test_without_an_engine_the_remedy_is_said(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.delenv(pdf.CHOICE, raising=False)

    def broken(name: str) -> None:
        raise OSError("cannot load library 'libpango'")

    monkeypatch.setattr(pdf.importlib, "import_module", broken)
    assert pdf.engines() == ()
    with pytest.raises(pdf.NoEngine, match="install Pango"):
        pdf.pdf_of("<p>x</p>")
    with pytest.raises(pdf.NoEngine, match="PDF engine PlutoPrint doesn't load here; no PDF engine"):
        pdf.choose_engine("PlutoPrint")


def test_the_next_engine_serves_where_the_preferred_does_not_load(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv(pdf.CHOICE, raising=False)
    need("PlutoPrint" in {info.name for info in pdf.engines()}, "PlutoPrint")
    monkeypatch.setattr(pdf, "_loads", lambda name: name == "PlutoPrint")
    assert pdf.choose_engine().name == "PlutoPrint"
