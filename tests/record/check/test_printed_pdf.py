"""The print of a PDF record: what was changed in a page by hand is found and named with its page."""

from __future__ import annotations

import io
import re

import pytest
from pypdf import PdfReader, PdfWriter
from pypdf.annotations import FreeText
from pypdf.generic import ArrayObject, DecodedStreamObject, DictionaryObject, NameObject, NumberObject, TextStringObject

from calcsheet.record.check import printed_pdf
from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED
from calcsheet.record.recordfile import record_in

GLYPHS = re.compile(rb"<([0-9a-fA-F]{4,})>\s*Tj|\[\s*<([0-9a-fA-F]{4,})>")


@pytest.fixture(scope="module")
def made(pdf):
    return pdf


@pytest.fixture
def print_of(paged_record, made, monkeypatch):
    """Findings on a PDF; the pages are made again once for all tests."""
    monkeypatch.setattr(printed_pdf, "paged", lambda *_: made)

    def findings(source, **changes):
        return list(printed_pdf.pdf_findings(record_in(source, "LY-07.pdf"), {**paged_record, **changes}))

    return findings


def rewritten(source, change):
    writer = PdfWriter(clone_from=PdfReader(io.BytesIO(source)))
    change(writer)
    out = io.BytesIO()
    writer.write(out)
    return out.getvalue()


def appended(source, change):
    writer = PdfWriter(io.BytesIO(source), incremental=True)
    change(writer)
    out = io.BytesIO()
    writer.write(out)
    assert out.getvalue().startswith(source)
    return out.getvalue()


def other_glyph(page):
    """Draw a page's last glyph that is a digit as another digit; the words before and after."""

    def change(writer):
        content = writer.pages[page]["/Contents"].get_object()
        data = content.get_data()
        found = list(re.finditer(rb"<([0-9a-f]{4})((?:[0-9a-f]{4})+)>", data))
        strings = [f for f in found if f[1] != f[2][:4]]
        at = strings[len(strings) // 2]
        new = DecodedStreamObject()
        new.set_data(data[: at.start()] + b"<" + at[2][:4] + at[2] + b">" + data[at.end() :])
        writer.pages[page][NameObject("/Contents")] = writer._add_object(new)

    return change


def test_a_record_made_again_is_the_same_byte_by_byte(paged_record, pdf):
    (finding,) = printed_pdf.pdf_findings(record_in(pdf, "LY-07.pdf"), paged_record)
    assert finding.verdict == AGREES
    assert "byte by byte" in finding.text


def test_the_same_pages_packed_otherwise_agree(print_of, pdf):
    (finding,) = print_of(rewritten(pdf, lambda writer: [page.compress_content_streams() for page in writer.pages]))
    assert (finding.verdict, finding.place) == (AGREES, "")
    assert "packed otherwise" in finding.text


@pytest.mark.parametrize("page", [0, 2])
def test_a_glyph_drawn_as_another_is_named_with_its_page_and_word(print_of, pdf, page):
    forged = rewritten(pdf, other_glyph(page))
    findings = print_of(forged)
    assert {f.verdict for f in findings} == {DIFFERS}
    assert {f.place for f in findings} == {f"page {page + 1}"}
    said = re.search(r'printed "(.*)", should be "(.*)"', findings[0].text)
    assert said
    assert said[1] != said[2]


def test_a_table_of_characters_that_says_another_digit_is_found(print_of, pdf):
    """The glyph stays: what is copied from the page, or read aloud, becomes another number."""

    def change(writer):
        done = False
        for ref in writer.pages[2]["/Resources"]["/Font"].values():
            table = ref.get_object()["/ToUnicode"].get_object()
            data = table.get_data()
            for line in re.findall(rb"<[0-9a-fA-F]{4}> <0035>", data):
                table.set_data(data.replace(line, line.replace(b"<0035>", b"<0038>")))
                done = True
        assert done

    findings = print_of(rewritten(pdf, change))
    assert {f.verdict for f in findings} == {DIFFERS}
    assert all(f.place.startswith("page ") for f in findings)
    assert any("8" in f.text and "5" in f.text for f in findings)


def test_a_note_laid_over_a_page_is_found(print_of, pdf):
    note = FreeText(text="V = 1", rect=(100, 100, 200, 140))
    for way in (rewritten, appended):
        findings = print_of(way(pdf, lambda writer: writer.add_annotation(page_number=1, annotation=note)))
        assert [(f.verdict, f.place) for f in findings if f.place.startswith("page")] == [(DIFFERS, "page 2")]
        assert "annotations" in findings[0].text


def test_pages_taken_away_or_added_are_counted(print_of, pdf):
    findings = print_of(rewritten(pdf, lambda writer: writer.add_blank_page()))
    assert findings[0].verdict == DIFFERS
    count = len(PdfReader(io.BytesIO(pdf)).pages)
    assert str(findings[0]) == f"pages: {count + 1} pages, should be {count}"


def test_what_differs_outside_the_pages_is_said(print_of, pdf):
    def act(writer):
        action = {NameObject("/S"): NameObject("/JavaScript"), NameObject("/JS"): TextStringObject("app.alert(1)")}
        writer._root_object[NameObject("/OpenAction")] = DictionaryObject(action)

    findings = print_of(rewritten(pdf, act))
    assert {f.verdict for f in findings} == {DIFFERS}
    assert {f.place for f in findings} == {"outside the pages"}
    findings = print_of(appended(pdf, act))
    assert {f.verdict for f in findings} == {DIFFERS}
    assert "appended after the issue" in findings[0].text


def signature_field(writer, page=0):
    field = DictionaryObject(
        {
            NameObject("/Type"): NameObject("/Annot"),
            NameObject("/Subtype"): NameObject("/Widget"),
            NameObject("/FT"): NameObject("/Sig"),
            NameObject("/T"): TextStringObject("Checked"),
            NameObject("/Rect"): ArrayObject([NumberObject(n) for n in (400, 400, 500, 440)]),
            NameObject("/F"): NumberObject(132),
        }
    )
    reference = writer._add_object(field)
    writer.pages[page][NameObject("/Annots")] = ArrayObject([*writer.pages[page].get("/Annots", ()), reference])
    form = DictionaryObject({NameObject("/Fields"): ArrayObject([reference]), NameObject("/SigFlags"): NumberObject(3)})
    writer._root_object[NameObject("/AcroForm")] = form


def test_a_signing_program_appends_and_leaves_the_pages(print_of, pdf):
    (finding,) = print_of(appended(pdf, signature_field))
    assert finding.verdict == AGREES
    assert "goes on after the bytes as issued" in finding.text


def test_what_is_appended_may_not_change_a_page(print_of, pdf):
    def change(writer):
        signature_field(writer)
        other_glyph(2)(writer)

    findings = print_of(appended(pdf, change))
    assert {(f.verdict, f.place) for f in findings} == {(DIFFERS, "page 3")}
    assert all("appended after the issue" in f.text for f in findings)


def test_a_field_of_a_signature_belongs_on_the_cover(print_of, pdf):
    findings = print_of(appended(pdf, lambda writer: signature_field(writer, page=2)))
    assert (DIFFERS, "page 3") in {(f.verdict, f.place) for f in findings}


@pytest.mark.parametrize("layout", [{"engine": "WeasyPrint 1.0"}, {"code": "0" * 64}, {"engine": ""}])
def test_pages_of_another_engine_or_version_are_not_assessed(print_of, paged_record, pdf, layout):
    (finding,) = print_of(pdf, layout={**paged_record["layout"], **layout})
    assert finding.verdict == NOT_ASSESSED
    assert f"made by {paged_record['programme']}; install that version" in finding.text
    assert layout.get("engine", "") in finding.text
