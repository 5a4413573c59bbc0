import dataclasses
import datetime
import json
import re
import time
from collections.abc import Callable
from html.parser import HTMLParser

import pytest

from calcsheet.record.figures import settle_figures
from calcsheet.record.fonts import font_faces, missing_characters
from calcsheet.record.page import Page, Person, Section, css_string, escape_json, render_page, shortened, spoken

Sample = Callable[..., Page]


class Document(HTMLParser):
    def __init__(self, html: str) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.scripts: list[str] = []
        self.inside = ""
        self.feed(html)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.inside = tag
        self.tags.append((tag, dict(attrs)))
        if tag == "script":
            self.scripts.append("")

    def handle_endtag(self, tag: str) -> None:
        self.inside = ""

    def handle_data(self, data: str) -> None:
        if self.inside == "script":
            self.scripts[-1] += data


@pytest.fixture(scope="module")
def html(sample: Sample) -> str:
    return render_page(sample("html"), "html", "a4")


def test_nothing_outside_the_document_is_referred_to(html: str) -> None:
    document = Document(html)
    for tag, attributes in document.tags:
        assert tag not in ("link", "iframe", "object", "embed", "base")
        assert not any(name.startswith("on") for name in attributes)
        for name in ("src", "href", "xlink:href", "data", "poster"):
            assert (attributes.get(name) or "#").startswith(("#", "data:")), (tag, attributes)
    assert all(url.startswith(("data:", "#")) for url in re.findall(r"url\([\"']?([^)\"']+)", html))
    assert "@import" not in html


def test_policy_forbids_scripts_and_the_only_one_is_data(html: str, sample: Sample) -> None:
    document = Document(html)
    policy = next(a["content"] for t, a in document.tags if a.get("http-equiv") == "Content-Security-Policy")
    assert policy
    assert policy.startswith("default-src 'none'")
    assert "script-src" not in policy
    scripts = [attributes for tag, attributes in document.tags if tag == "script"]
    assert scripts == [{"type": "application/json", "id": "calcsheet-data"}]
    assert json.loads(document.scripts[0]) == json.loads(sample("html").data)


def test_data_are_attached_to_the_pdf_and_not_in_its_pages(sample: Sample) -> None:
    assert "<script" not in render_page(sample("pdf"), "pdf", "a4")


def test_ids_are_unique_and_every_link_arrives(html: str) -> None:
    document = Document(html)
    ids = [attributes["id"] for _, attributes in document.tags if attributes.get("id")]
    assert len(ids) == len(set(ids))
    links = [href for _, attributes in document.tags if (href := attributes.get("href"))]
    assert links
    assert {link.removeprefix("#") for link in links} <= set(ids)


def test_contents_hold_sections_and_the_engineers_headings_in_order(html: str) -> None:
    contents = re.search(r'<nav class="contents".*?</nav>', html, re.DOTALL)
    assert contents
    assert re.findall(r'<li class="level-(\d)"><a href="#([^"]+)">([^<]+)</a>', contents[0]) == [
        ("2", "basis", "Basis and criteria"),
        ("2", "words-1", "Scope and model"),
        ("3", "words-2", "What the model leaves out"),
        ("2", "storeys", "Storeys"),
        ("2", "modes", "Modes"),
        ("2", "shapes", "Mode shapes in full"),
        ("3", "own", "Check by hand"),
        ("2", "evidence", "Evidence"),
        ("2", "cautions", "Cautions"),
        ("2", "versions", "Versions"),
    ]


def test_text_is_escaped_and_numbers_keep_their_value(html: str, sample: Sample) -> None:
    page = sample("html")
    cover = dataclasses.replace(page.cover, project='<b>"A" & B</b></style>', title="x < y")
    changed = render_page(dataclasses.replace(page, cover=cover), "html", "a4")
    assert "<b>&#34;A&#34; &amp; B</b>" not in changed
    assert "&lt;b&gt;&#34;A&#34; &amp; B&lt;/b&gt;" in changed
    assert changed.count("</style>") == html.count("</style>")
    assert '<data value="4.3097">4.310 s</data>' in html


def test_status_stands_on_the_cover_only(html: str, sample: Sample) -> None:
    words = re.sub(r"<style.*?</style>", "", html, flags=re.DOTALL)
    assert len(re.findall(r"\bDRAFT\b", words)) == 1
    assert 'class="watermark"' in words
    assert 'class="watermark"' not in render_page(sample("html", draft=False), "html", "a4")


def test_paper_and_running_words(sample: Sample) -> None:
    html = render_page(sample("pdf"), "pdf", "letter")
    assert "size: letter;" in html
    assert "size: letter landscape;" in html
    assert '@top-right { content: "KQB-S-014 · revision B · 12 May 2026"; }' in html
    assert '@bottom-left { content: "Prepared\u00a0ZM · Checker\u00a0ΘΙ\u00a0(not\u00a0signed)"; }' in html
    with pytest.raises(ValueError, match='paper: got "a5"; must be "a4" or "letter"'):
        render_page(sample("pdf"), "pdf", "a5")  # type: ignore[arg-type]


def test_the_foot_says_who_has_not_signed(sample: Sample) -> None:
    page = sample("html")
    people = (dataclasses.replace(page.cover.people[0], date=None), Person("Checked"))
    html = render_page(dataclasses.replace(page, cover=dataclasses.replace(page.cover, people=people)), "html", "a4")
    assert '@bottom-left { content: "Preparer\u00a0ZM\u00a0(not\u00a0signed) · Checker\u00a0–"; }' in html


def test_long_names_are_cut_in_the_running_words_only(sample: Sample) -> None:
    page = sample("html")
    cover = dataclasses.replace(page.cover, project="Quay " * 40, title="Modes\n" * 40)
    html = render_page(dataclasses.replace(page, cover=cover), "html", "a4")
    assert f'@top-left {{ content: "{("Quay " * 12)[:59]}…"; }}' in html
    assert f'@bottom-center {{ content: "{("Modes " * 12)[:49]}…"' in html
    assert "Quay " * 40 in html
    assert shortened("a" * 60, 60) == "a" * 60


def test_a_long_purpose_is_cut_on_the_cover(sample: Sample) -> None:
    page = sample("html")
    for count, end in ((60, "word</td>"), (61, "word … (in full in the job card)</td>")):
        cover = dataclasses.replace(page.cover, purpose=" ".join(["word"] * count))
        html = render_page(dataclasses.replace(page, cover=cover), "html", "a4")
        shown = re.search(r'Purpose</th><td colspan="3">(.*)', html)
        assert shown
        assert shown[1].startswith(" ".join(["word"] * 60))
        assert shown[1].endswith(end + "</tr>")


def test_an_id_used_twice_is_refused(sample: Sample) -> None:
    page = sample("html")
    page = dataclasses.replace(page, sections=(*page.sections, Section("modes", "Again", "")))
    with pytest.raises(ValueError, match='section "modes": the id is used twice'):
        render_page(page, "html", "a4")


def test_a_part_that_does_not_exist_is_refused(sample: Sample) -> None:
    section = Section("a", "A", "", part="middle")  # type: ignore[arg-type]
    page = dataclasses.replace(sample("html"), sections=(section,))
    with pytest.raises(ValueError, match='part "middle"; must be one of front, body, back'):
        render_page(page, "html", "a4")


def test_strings_in_styles_cannot_break_out() -> None:
    assert css_string('a"b') == r'"a\22 b"'
    assert css_string("</style>\n\\") == r'"\3c /style\3e \a \5c "'
    assert escape_json('{"a": "</script>&"}') == r'{"a": "\u003c/script\u003e\u0026"}'
    assert spoken(datetime.date(2026, 3, 4)) == "4 March 2026"


def test_figures_get_ids_of_their_own_and_the_records_font() -> None:
    svg = (
        '<svg id="a" aria-labelledby="t"><title id="t">x</title><g id="axes"/>'
        '<path id="m" clip-path="url(#c)"/>'
        '<use href="#m"/><clipPath id="c"/><text style="font-family: \'DejaVu Sans\'">1</text></svg>'
    )
    html = settle_figures(svg + "<p id='axes'>words</p>" + svg)
    ids = re.findall(r' id="([^"]+)"', html)
    assert ids == [f"drawing-{n}-{name}" for n in (1, 2) for name in ("t", "m", "c")]
    assert html.count('href="#drawing-2-m"') == html.count("url(#drawing-2-c)") == 1
    assert html.count("'Calcsheet Sans', 'DejaVu Sans'") == 2
    assert "<p id='axes'>" in html


def test_a_fallback_font_comes_only_where_it_is_needed() -> None:
    assert "DejaVu Sans" not in font_faces("T₁ ≤ 2π Łódź Θάλεια Жук", packed=True)
    assert '"DejaVu Sans"' in font_faces("a ∝ b", packed=True)
    assert missing_characters("T₁ ∝ 地 \n") == "地"


def test_building_the_page_is_quick(sample: Sample) -> None:
    page = sample("html")
    render_page(page, "html", "a4")
    start = time.process_time()
    render_page(page, "html", "a4")
    assert time.process_time() - start < 0.3
