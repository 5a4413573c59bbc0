"""A record read from a file of unknown origin."""

from __future__ import annotations

import io
import json
import os
import zlib

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pypdf import PdfReader, PdfWriter
from pypdf.generic import ArrayObject, NameObject, StreamObject

from calcsheet.record import recordfile
from calcsheet.record.errors import RecordError
from calcsheet.record.recordfile import MOST_ATTACHMENTS, read_record, record_in

RECORD = {"format": 2, "payloads": {"card": {}}}
TEXT = json.dumps(RECORD).encode()
PAGE = f'<!DOCTYPE html><html><body>@here@<script id="calcsheet-data">{TEXT.decode()}</script></body></html>'


def pdf_with(*files, change=lambda writer: None):
    writer = PdfWriter()
    writer.add_blank_page(100, 100)
    for name, content, *relationship in files:
        attached = writer.add_attachment(name, content)
        if relationship:
            attached.associated_file_relationship = NameObject(relationship[0])
    change(writer)
    out = io.BytesIO()
    writer.write(out)
    return out.getvalue()


def refused(source, called="a.bin"):
    with pytest.raises(RecordError) as caught:
        record_in(source, called)
    said = str(caught.value)
    assert said.startswith(f"{called}: ")
    assert "\n" not in said
    return said


@pytest.mark.parametrize("name", ["a.html", "a.pdf", "a.json", "record"])
def test_a_record_is_known_by_its_content(tmp_path, name):
    for kind, source in (("html", PAGE.encode()), ("json", TEXT), ("pdf", pdf_with(("r.json", TEXT)))):
        path = tmp_path / name
        path.write_bytes(source)
        found = read_record(path)
        assert (found.kind, found.record, found.source) == (kind, RECORD, source)


def test_a_byte_order_mark_is_passed_over():
    assert record_in(b"\xef\xbb\xbf" + TEXT, "a").record == RECORD
    assert record_in(b"\xef\xbb\xbf" + PAGE.encode(), "a").record == RECORD


def test_the_data_of_html_stand_in_one_element():
    assert "no element" in refused(b"<p>no record</p>")
    assert "2 elements" in refused((PAGE + PAGE).encode())
    assert "no element" in refused(b"<!-- " + PAGE.encode() + b" -->")
    assert "no element" in refused(PAGE.replace("calcsheet-data", "calcsheet-dat").encode())
    assert "not UTF-8" in refused(b"<p>\xff</p>")


def test_text_that_looks_like_data_is_none():
    inside = PAGE.replace("@here@", '<style>p { content: "<script id=calcsheet-data>{}</script>" }</style>')
    assert record_in(inside.encode(), "a").record == RECORD


def test_the_data_of_a_pdf_are_its_one_attachment_of_data():
    assert "no JSON files" in refused(pdf_with())
    assert "no JSON files" in refused(pdf_with(("r.txt", TEXT)))
    two = (("r.json", TEXT), ("s.json", b"{}"))
    assert "no JSON files attached as data" in refused(pdf_with(*two))
    found = record_in(pdf_with(("r.json", TEXT, "/Data"), ("s.json", b"{}", "/Supplement")), "a")
    assert (found.record, found.name) == (RECORD, "r.json")
    assert "2 JSON files" in refused(pdf_with(("r.json", TEXT, "/Data"), ("s.json", TEXT, "/Data")))


def test_the_name_of_an_attachment_is_no_path(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    found = record_in(pdf_with(("../../escaped.json", TEXT)), "a")
    assert found.record == RECORD
    assert list(tmp_path.iterdir()) == []


def test_attachments_are_counted():
    many = [(f"{i}.txt", b"x") for i in range(MOST_ATTACHMENTS + 1)]
    assert f"more than {MOST_ATTACHMENTS} files" in refused(pdf_with(*many))


def test_an_attachment_that_unpacks_to_more_than_a_record_is_refused():
    """200 MB of blanks in 200 kB, and the same packed twice."""
    for layers in (1, 2):
        packed = b"{" + b" " * (200 * 1024 * 1024)
        for _ in range(layers):
            packed = zlib.compress(packed, 9)

        def bomb(writer, packed=packed, layers=layers):
            stream = StreamObject()
            stream._data = packed
            stream[NameObject("/Filter")] = ArrayObject([NameObject("/FlateDecode")] * layers)
            file = next(iter(writer.attachment_list))
            file.pdf_object["/EF"][NameObject("/F")] = writer._add_object(stream)

        source = pdf_with(("r.json", TEXT), change=bomb)
        assert len(source) < 1_000_000
        assert "a PDF that can't be read" in refused(source)


def test_a_file_beyond_the_limit_is_refused(tmp_path, monkeypatch):
    monkeypatch.setattr(recordfile, "LARGEST_FILE", 100)
    path = tmp_path / "a.html"
    path.write_bytes(b"<" * 101)
    with pytest.raises(RecordError, match=r"a\.html: more than"):
        read_record(path)


def test_tags_are_counted(monkeypatch):
    monkeypatch.setattr(recordfile, "MOST_TOKENS", 5)
    assert "more than 5 tags" in refused(PAGE.encode())


def test_what_is_no_file_is_refused(tmp_path):
    with pytest.raises(RecordError, match="no record "):
        read_record(tmp_path)
    with pytest.raises(RecordError, match="no record "):
        read_record(tmp_path / "none.html")
    if hasattr(os, "mkfifo"):
        os.mkfifo(tmp_path / "pipe")
        with pytest.raises(RecordError, match="no record "):
            read_record(tmp_path / "pipe")


@pytest.mark.parametrize(
    "source", [b"", b"   ", b"PK\x03\x04", b"\x00" * 100, b"[1, 2]", b"%PD", "Ärger".encode("latin-1")]
)
def test_other_files_are_refused(source):
    assert "neither HTML, PDF nor JSON" in refused(source)


@pytest.mark.parametrize("text", [b"{}", b'{"payload": 1}', b'{"format": 2}'])
def test_other_json_is_refused(text):
    assert "no record" in refused(text)


@given(st.data())
@settings(max_examples=60, deadline=None)
def test_a_pdf_cut_or_scrambled_is_read_or_refused(data):
    source = bytearray(pdf_with(("r.json", TEXT)))
    if data.draw(st.booleans()):
        del source[data.draw(st.integers(5, len(source))) :]
    for _ in range(data.draw(st.integers(0, 8))):
        at = data.draw(st.integers(5, max(5, len(source) - 1)))
        source[at : at + 1] = bytes([data.draw(st.integers(0, 255))])
    said = "a.pdf: "
    try:
        record_in(bytes(source), "a.pdf")
    except RecordError as error:
        said = str(error)
    assert said.startswith("a.pdf: ")


def test_the_reader_leaves_the_library_as_it_was():
    import logging

    from pypdf import get_configuration

    before = get_configuration(), logging.getLogger("pypdf").level
    record_in(pdf_with(("r.json", TEXT)), "a")
    assert (get_configuration(), logging.getLogger("pypdf").level) == before
    assert len(PdfReader(io.BytesIO(pdf_with())).pages) == 1
