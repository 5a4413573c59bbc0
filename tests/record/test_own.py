"""The engineer's own cells: cleaned, and marked as not replayed."""

from __future__ import annotations

import nbformat
import pytest

from calcsheet.record.own import own_cell, printable
from calcsheet.record.parts import Own


def shown(*outputs, source="x = 1"):
    return own_cell(Own(source, tuple(printable(output) for output in outputs)))


def data(**kinds):
    return nbformat.v4.new_output("display_data", data={k.replace("_", "/", 1): v for k, v in kinds.items()})


def test_it_is_marked_and_its_source_is_text(document):
    html = shown(source='print("<script>alert(1)</script>")')
    assert 'class="not-replayed"' in html
    assert "not replayed" in document(html).words
    assert 'print("<script>alert(1)</script>")' in document(html).words
    assert "<script" not in html


@pytest.mark.parametrize(
    "hostile",
    [
        "<script>alert('gone')</script>",
        "<SCRIPT\n>alert('gone')</SCRIPT >",
        "<style>body{display:none}/* gone */</style>",
        '<img src="https://example.org/gone.png">',
        '<img src="x" onerror="gone()">',
        '<p onclick="gone()">kept</p>',
        '<a href="javascript:gone()">kept</a>',
        '<a href="https://example.org/gone">kept</a>',
        '<iframe src="https://example.org/gone"></iframe>',
        '<svg onload="gone()"><use href="https://example.org/gone"/></svg>',
        '<p style="background:url(https://example.org/gone)">kept</p>',
        '<link rel="stylesheet" href="https://example.org/gone.css">',
        '<form action="https://example.org/gone"><input name="q"></form>',
        '<object data="https://example.org/gone"></object>',
        "<math><mtext><img src=x onerror=gone()></mtext></math>",
        '<td background="https://example.org/gone">kept</td>',
    ],
)
def test_nothing_hostile_or_remote_stays(hostile, document):
    html = shown(data(text_html=f"<p>before</p>{hostile}<p>after</p>"))
    seen = document(html)
    assert "gone" not in html
    assert {tag for tag, _ in seen.tags} <= {"div", "span", "pre", "code", "p", "a", "td"}
    for _, attributes in seen.tags:
        assert set(attributes) <= {"class"}
    assert "before" in seen.words
    assert "after" in seen.words
    if "kept" in hostile:
        assert "kept" in seen.words


def test_a_table_keeps_its_shape():
    html = shown(data(text_html='<table><tr><th colspan="2">m</th></tr><tr><td>1</td><td>2</td></tr></table>'))
    assert '<th colspan="2">m</th>' in html
    assert "<td>1</td><td>2</td>" in html


def test_pictures_are_embedded_with_their_words():
    html = shown(data(image_png="iVBORw0K\nGgo=", text_plain='<Figure "1">'))
    assert '<img alt="&lt;Figure &quot;1&quot;&gt;" src="data:image/png;base64,iVBORw0KGgo=">' in html


def test_drawings_and_scripts_are_not_run(document):
    html = shown(data(image_svg="<svg onload='x'/>", application_javascript="x()", text_plain="a drawing"))
    assert "<svg" not in html
    assert "x()" not in html
    assert "a drawing" in document(html).words


def test_printed_text_is_text_without_colour_codes(document):
    stream = nbformat.v4.new_output("stream", text="\x1b[31mred\x1b[0m <b>& 2 < 3\n")
    assert "red <b>& 2 < 3" in document(shown(stream)).words
    assert "\x1b" not in shown(stream)


def test_what_has_no_words_is_named():
    assert "[an output that can’t be printed]" in shown(data(application_pdf="JVBERi0="))


def test_a_picture_from_elsewhere_can_hold_nothing_but_its_data():
    html = own_cell(Own("x", ({"image/png": 'aGk="><script>gone()</script>', "text/plain": '"><b>'},)))
    assert "<script" not in html
    assert "<b>" not in html
