"""CSV for spreadsheets: read back by Python's own reader, and no cell that begins a formula."""

from __future__ import annotations

import csv
import io

import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from calcsheet.job.csvfile import as_meant, csv_bytes, harmless


def test_a_file_has_mark_quotes_and_line_ends():
    content = csv_bytes([("level", 'note "a"'), ("Roof", "one\ntwo"), ("ψ", "a,b")])
    assert content == b'\xef\xbb\xbflevel,"note ""a"""\r\nRoof,"one\ntwo"\r\n\xcf\x88,"a,b"\r\n'
    assert list(csv.reader(io.StringIO(content.decode("utf-8-sig"), newline=""))) == [
        ["level", 'note "a"'],
        ["Roof", "one\ntwo"],
        ["ψ", "a,b"],
    ]


@pytest.mark.parametrize(
    "text", ["=1+1", "+cmd", "-2+3", "@sum", "\t=1", "\r=1", "\n=1", "＝1", "－1", "'=1", "-", "--1"]
)
def test_what_begins_a_formula_gets_an_apostrophe(text):
    assert harmless(text) == f"'{text}"
    assert csv_bytes([[text]]).decode("utf-8-sig").lstrip('"').startswith("'")


@pytest.mark.parametrize("text", ["", "mass", "-12.5", "+3", "1e-05", "-1.5E+10", "a=b", "'t Hooft", "−3", "3-4"])
def test_numbers_and_words_stay(text):
    assert harmless(text) == as_meant(text) == text


@given(st.text(alphabet="'=+-@\t\nab1.", max_size=6) | st.text())
@example("''=")
def test_a_text_comes_back(text):
    assert as_meant(harmless(text)) == text
