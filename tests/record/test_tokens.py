"""HTML cut into tags and text."""

from __future__ import annotations

import time
from html.parser import HTMLParser

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcsheet.record.tokens import attributes, name_of, tokens, without_scripts

PIECES = [
    "<p>",
    "</p>",
    "<",
    ">",
    "<!--",
    "-->",
    "<script>",
    "</script>",
    "<style",
    '"',
    "'",
    " a=",
    "x",
    "&lt;",
    "<![CDATA[",
    "<?",
]


@given(st.lists(st.sampled_from(PIECES), max_size=30).map("".join) | st.text(max_size=60))
@settings(max_examples=400, deadline=None)
def test_the_tokens_are_the_document(html):
    assert "".join(tokens(html)) == html


def test_tags_text_comments_and_raw_text():
    html = '<!DOCTYPE html><p class="a b">1 < 2<br/>&amp;</p><!-- <b> --><SCRIPT>if (a < b) "</p>"</SCRIPT >.'
    assert list(tokens(html)) == [
        "<!DOCTYPE html>", '<p class="a b">', "1 ", "< 2", "<br/>", "&amp;", "</p>", "<!-- <b> -->", "<SCRIPT>",
        'if (a < b) "</p>"', "</SCRIPT >", ".",
    ]  # fmt: skip


def test_names_and_attributes():
    assert [name_of(t) for t in ("<Data x>", "</DATA>", "text", "<!-- a -->", "<!DOCTYPE html>", "< b>")] == [
        "data", "/data", "", "", "", "",
    ]  # fmt: skip
    tag = '<Data Value=\'/a"b\' data-unit="kN&#183;m" hidden value="/c" n=5>'
    assert attributes(tag) == {"value": '/a"b', "data-unit": "kN·m", "hidden": "", "n": "5"}
    assert attributes("text a=b") == {}


def test_scripts_and_styles_are_left_out_with_what_they_hold():
    assert without_scripts("a<script x>1 < 2</b></SCRIPT >b<STYLE>p {}</style><b>c</b>") == "ab<b>c</b>"
    assert without_scripts("a<script>b") == "a"
    assert without_scripts("a</script>b<scripture>c</scripture>") == "a</script>b<scripture>c</scripture>"


class Parsed(HTMLParser):
    def __init__(self, html):
        super().__init__()
        self.tags = []
        self.feed(html)

    def handle_starttag(self, tag, attrs):
        self.tags.append((tag, {name: value or "" for name, value in attrs}))


def test_it_reads_our_pages_as_an_independent_parser_does(sample):
    from calcsheet.record.page import render_page

    html = render_page(sample("html"), "html", "a4")
    ours = [(name_of(t), dict(attributes(t))) for t in tokens(html) if name_of(t) and not name_of(t).startswith("/")]
    theirs = Parsed(html).tags
    assert [name for name, _ in ours] == [name for name, _ in theirs]
    short = [i for i, (name, _) in enumerate(theirs) if name not in ("path", "use")]
    assert [ours[i] for i in short] == [theirs[i] for i in short]


@pytest.mark.parametrize("piece", ["<!--", "<a ", "<script>", "<a b='", "</", "<![CDATA[", '<a x="', "<style><", "&"])
def test_time_grows_with_length_alone(piece):
    html = piece * (2_000_000 // len(piece))
    start = time.perf_counter()
    for token in tokens(html):
        attributes(token)
    assert time.perf_counter() - start < 20.0
