"""Comments as a record prints them."""

from __future__ import annotations

from bs4 import BeautifulSoup

from calcsheet.render.comments import comments

OPEN = {
    "number": 3,
    "revision": "A",
    "by": "<b>Remy",
    "date": "2026-04-02",
    "where": "Demand & drift",
    "comment": "<script>alert(1)</script>\nWhich edition?",
    "reply": "",
    "replied_by": "",
    "replied_on": "",
    "closed_by": "",
    "closed_on": "",
}
DONE = OPEN | {
    "number": 4,
    "reply": "That of 2016",
    "replied_by": "Odile",
    "replied_on": "2026-04-03",
    "closed_by": "Ana",
    "closed_on": "2026-04-04",
}


def test_a_row_each_with_reply_and_who_closed_it():
    html = comments([OPEN, DONE])
    table = BeautifulSoup(html, "html.parser")
    assert [th.get_text() for th in table.find_all("th")] == ["", "revision", "comment", "reply", "closed by"]
    first, second = (
        [td.get_text("|").replace(", |", ", ") for td in row.find_all("td")] for row in table.tbody.find_all("tr")
    )
    asked = "Demand & drift:| <script>alert(1)</script>|Which edition?|<b>Remy, 2026-04-02"
    assert first == ["3", "A", asked, "–", "open"]
    assert second == ["4", "A", asked, "That of 2016|Odile, 2026-04-03", "Ana|2026-04-04"]
    assert table.find("script") is None


def test_open_ones_are_marked_in_words_and_by_a_rule():
    rows = BeautifulSoup(comments([DONE, OPEN]), "html.parser").tbody.find_all("tr")
    assert [row.get("class") for row in rows] == [None, ["marked"]]


def test_no_comments():
    assert comments([]) == "<p>None.</p>"
