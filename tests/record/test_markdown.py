import re

import pytest

from calcsheet.record.equations import EquationError, to_mathml
from calcsheet.record.markdown import to_html


def marked(latex: str, display: bool) -> str:
    return f"<i>{'block' if display else 'inline'} {latex}</i>"


def test_equations_are_handed_over_as_typed() -> None:
    html = to_html("Where $k_i$ and\n\n$$\nK_{a}*b*\n$$\n\n\\begin{align}\na&=b\n\\end{align}\n", marked)
    assert "<i>inline k_i</i>" in html
    assert "<i>block \nK_{a}*b*\n</i>" in html
    assert "<i>block \\begin{align}\na&=b\n\\end{align}</i>" in html


def test_code_and_escaped_dollars_hold_no_equation() -> None:
    html = to_html("`$a$` costs \\$5\n\n```\n$b$\n```\n", marked)
    assert "inline" not in html
    assert "<code>$a$</code>" in html
    assert "$5" in html


def test_a_wrong_equation_is_refused() -> None:
    with pytest.raises(EquationError, match="wrongcommand"):
        to_html(r"see $\wrongcommand$", to_mathml)


def test_headings_are_shifted_and_numbered() -> None:
    html = to_html("# One\n\n### Deep\n\n<h2 id='mine' onclick='x()'>Raw</h2>\n", marked, top=3, prefix="cell-4")
    assert re.findall(r"<h\d[^>]*>", html) == [
        '<h3 id="cell-4-1">',
        '<h5 id="cell-4-2">',
        '<h4 id="cell-4-3">',
    ]
    assert "<h6 " in to_html("###### Six", marked, top=3)


def test_tables_and_lists() -> None:
    html = to_html("| a | b |\n|---|--:|\n| 1 | $x$ |\n\n3. three\n4. four\n", marked)
    assert '<td align="right"><i>inline x</i></td>' in html
    assert '<ol start="3">' in html


@pytest.mark.parametrize(
    "text",
    [
        "<script>alert(1)</script>",
        "<p onclick='alert(1)'>x</p>",
        "<a href='javascript:alert(1)'>x</a>",
        "[x](javascript:alert(1))",
        "[x](data:text/html;base64,AAAA)",
        "<svg onload='alert(1)'></svg>",
        "<iframe src='https://example.org'></iframe>",
        "<style>p { background: url(https://example.org/a.png) }</style>",
        "<p style='background: url(https://example.org/a.png)'>x</p>",
        "<link rel=stylesheet href='https://example.org/a.css'>",
        "<img src='data:text/html,<script>' alt=''>",
    ],
)
def test_nothing_that_runs_or_fetches_stays(text: str) -> None:
    html = to_html(f"before\n\n{text}\n\nafter", marked)
    assert "before" in html
    assert "after" in html
    for word in (
        "<script",
        "alert(1)'",
        "javascript:",
        " onclick",
        " onload",
        "<iframe",
        "<style",
        "<link",
        "style=",
        "data:",
    ):
        assert word not in re.sub(r"<span class=\"missing-image\">.*?</span>", "", html)


def test_images_stay_when_their_data_are_at_hand() -> None:
    attachments = {"plan.png": {"image/png": "QUJD\nREVG"}}
    html = to_html("![plan](attachment:plan.png) ![dot](data:image/png;base64,AAAA)", marked, attachments=attachments)
    assert '<img src="data:image/png;base64,QUJDREVG" alt="plan">' in html
    assert '<img src="data:image/png;base64,AAAA" alt="dot">' in html


@pytest.mark.parametrize("source", ["https://example.org/a.png", "plan.png", "attachment:none.png", "//host/a.png"])
def test_any_other_image_is_replaced_by_a_note(source: str) -> None:
    html = to_html(f"![the plan]({source})", marked)
    assert "<img" not in html
    assert f'<span class="missing-image">[image “the plan” is not part of this document: {source}]</span>' in html


def test_an_equation_cannot_be_forged_or_put_into_an_attribute() -> None:
    html = to_html(
        "$a$ <calcsheet-equation n='7'></calcsheet-equation>"
        " <a title='<calcsheet-equation n=\"0\"></calcsheet-equation>'>x</a>"
        " ![see $b$](data:image/png;base64,AA)",
        marked,
    )
    assert html.count("<i>inline a</i>") == 1
    assert "calcsheet-equation n=" not in html.replace("&lt;calcsheet-equation", "")


def test_plain_characters_are_escaped() -> None:
    assert "a &lt; b &amp; c" in to_html("a < b & c", marked)
