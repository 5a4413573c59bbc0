"""The print of an HTML record: whatever differs from what its data print is found and named."""

from __future__ import annotations

import json
import re
from dataclasses import replace

import pytest

from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED
from calcsheet.record.check.places import located
from calcsheet.record.check.printed_html import compared, html_findings
from calcsheet.record.files import html_of
from calcsheet.record.recordfile import record_in
from calcsheet.record.tokens import tokens


@pytest.fixture(scope="module")
def made(html):
    return list(located(tokens(html)))


@pytest.fixture
def print_of(record):
    def findings(html, **changes):
        given = record_in(html.encode(), "LY-07.html")
        assert given.record == record
        return list(html_findings(given, {**record, **changes}))

    return findings


def one_digit(text):
    """The text with its last digit another."""
    at = max(i for i, c in enumerate(text) if c.isdigit())
    return f"{text[:at]}{(int(text[at]) + 1) % 10}{text[at + 1 :]}"


def test_a_record_as_issued_agrees(html, print_of):
    (finding,) = print_of(html)
    assert finding.verdict == AGREES
    assert "character by character" in finding.text


def test_line_ends_of_another_system_are_no_difference(html, print_of):
    assert [f.verdict for f in print_of(html.replace("\n", "\r\n"))] == [AGREES]


def test_each_printed_number_changed_in_turn_is_named_by_its_pointer(made):
    changed = 0
    for i, at in enumerate(made):
        if at.pointer and re.search(r"\d", at.token) and not at.token.startswith("<"):
            wrong, _ = compared([*made[:i], replace(at, token=one_digit(at.token)), *made[i + 1 :]], made)
            assert len(wrong) == 1
            place, text = wrong[0]
            assert place.endswith(at.pointer)
            assert text == f'printed "{one_digit(at.token)}", should be "{at.token}"'.replace("\u202f", " ")
            changed += 1
    assert changed > 500


def test_a_digit_changed_by_hand_is_named_with_its_section_and_row(html, print_of):
    (cell,) = re.findall(r'<data value="/storeys/inputs/mass/0"[^>]*>([^<]*)</data>', html)[:1]
    start = html.rindex('<data value="/storeys/inputs/mass/0"')
    forged = html[:start] + html[start:].replace(f">{cell}<", f">{one_digit(cell)}<", 1)
    (finding,) = print_of(forged)
    assert finding.verdict == DIFFERS
    assert finding.place == "Storeys, row 1, mass [t], /storeys/inputs/mass/0"
    assert finding.text == f'printed "{one_digit(cell)}", should be "{cell}"'


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ("Maud Ferreira", "Maud Ferreiro", "Ferreiro"),
        ("<h2>Cautions</h2>", "<h2>Praise</h2>", "Praise"),
        ('<td class="text">', '<td class="text" hidden>', "hidden"),
        ("</main>", "<p>Approved by all.</p></main>", "Approved by all."),
        ("</main>", '<script src="https://example.org/a.js"></script></main>', "script"),
        ("font-weight:", "font-weigth:", "font-weigth"),
        ('class="passes"', 'class="exceeds"', "exceeds"),
    ],
)
def test_words_tags_and_styles_changed_by_hand_are_found(html, print_of, old, new, said):
    if old not in html:
        pytest.fail(f"nothing to change: {old}")
    findings = print_of(html.replace(old, new, 1))
    assert {f.verdict for f in findings} == {DIFFERS}
    assert any(said in str(f) for f in findings)


def test_a_row_taken_away_is_named(html, print_of):
    start = html.index("<tr", html.index("Worked lines"))
    start = html.index("<tr", start + 1)
    end = html.index("</tr>", start) + len("</tr>")
    findings = print_of(html[:start] + html[end:])
    assert {f.verdict for f in findings} == {DIFFERS}
    assert "not printed" in " ".join(map(str, findings))


def test_drawings_may_differ_by_what_cannot_be_seen(made):
    i, path = next((i, at) for i, at in enumerate(made) if at.token.startswith("<path") and ' d="M ' in at.token)
    number = re.search(r"(?<= d=\"M )-?\d+(\.\d+)?", path.token)[0]

    def moved(by):
        token = path.token.replace(f' d="M {number}', f' d="M {float(number) + by:.6f}', 1)
        return compared([*made[:i], replace(path, token=token), *made[i + 1 :]], made)

    wrong, by = moved(0.01)
    assert wrong == []
    assert by == pytest.approx(0.01)
    wrong, _ = moved(0.5)
    assert len(wrong) == 1
    assert wrong[0][1].startswith("drawn ")


def test_text_in_a_drawing_has_no_tolerance(made):
    i, at = next(
        (i, at) for i, at in enumerate(made) if at.inside == "svg" and re.fullmatch(r"\s*\d\.\d+\s*", at.token)
    )
    wrong, _ = compared([*made[:i], replace(at, token=one_digit(at.token)), *made[i + 1 :]], made)
    assert len(wrong) == 1


def test_print_of_another_version_is_held_against_the_data_number_by_number(html, record, print_of):
    other = {"layout": {**record["layout"], "code": "0" * 64}}
    counted, rest = print_of(html, **other)
    assert counted.verdict == AGREES
    assert re.match(r"5\d\d printed numbers", counted.text)
    assert rest.verdict == NOT_ASSESSED
    assert f"made by {record['programme']}; install that version" in rest.text
    start = html.rindex('<data value="/storeys/inputs/mass/0"')
    wrong, _ = print_of(html[:start] + re.sub(r">203\.75<", ">203.76<", html[start:], count=1), **other)
    assert wrong.verdict == DIFFERS
    assert wrong.place.endswith("/storeys/inputs/mass/0")
    assert wrong.text == 'printed "203.76", should be 203.75'


def test_another_library_is_another_layout(html, record, print_of):
    libraries = {**record["layout"]["libraries"], "matplotlib": "0.1"}
    findings = print_of(html, layout={**record["layout"], "libraries": libraries})
    assert NOT_ASSESSED in {f.verdict for f in findings}
    assert "matplotlib 0.1" in " ".join(f.text for f in findings)


def test_a_script_in_print_of_another_version_is_a_difference(html, record, print_of):
    other = {"layout": {**record["layout"], "code": "0" * 64}}
    for forged in (
        html.replace("</main>", "<svg><style><SCRIPT>alert(1)</SCRIPT></style></svg></main>"),
        html.replace("<main>", '<main onclick="alert(1)">'),
    ):
        assert DIFFERS in {f.verdict for f in print_of(forged, **other)}


def test_what_is_long_and_all_different_stays_short(made):
    """Nothing of the one document in the other: one finding, at once."""
    other = list(located(tokens("<p>x</p>" * 5000)))
    wrong, _ = compared(other, made)
    assert 1 <= len(wrong) <= 3


def test_a_level_called_script_stays_text(html, record, document):
    seen = document(html)
    assert [dict(a) for name, a in seen.tags if name == "script"] == [
        {"type": "application/json", "id": "calcsheet-data"}
    ]
    assert "<script>alert(2)</script>" in seen.words
    assert json.loads(seen.script) == record


def test_the_print_is_made_from_the_data_alone(html, record):
    assert html_of(json.loads(json.dumps(record))) == html
    assert record_in(html.encode(), "x").record == record
