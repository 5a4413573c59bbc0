"""Worked lines and evidence."""

from __future__ import annotations

from calcsheet.render.words import evidence, filled, worked

NUMBER = {"value": 0.5, "quantity": "period", "at": "result/t"}


def test_places_are_filled_and_all_else_is_text():
    html = filled("T = {0} at level <b> {{0}} & more", [NUMBER], "SI", "/modes")
    assert (
        html == 'T = <data value="/modes/result/t" data-unit="s">0.5000</data>\u00a0s at level &lt;b&gt; {0} &amp; more'
    )


def test_a_worked_line_is_a_row(document):
    line = {
        "quantity": "First <period>",
        "relation": "T = 2π/ω",
        "substitution": "2π / {0}",
        "numbers": [{"value": 12.5664, "quantity": "circular frequency", "at": "result/omega"}],
        "result": NUMBER,
        "reference": "definition",
    }
    seen = document(worked([("/modes", line)], "SI"))
    assert seen.numbers == [("/modes/result/omega", "12.57"), ("/modes/result/t", "0.5000")]
    for text in ("First <period>", "T = 2π/ω", "rad/s", "definition"):
        assert text in seen.words


def test_evidence_says_passes_or_exceeds(document):
    rows = [
        ("/m/evidence/0", {"what": "a", "relation": "r", "value": 1e-15, "limit": 1e-10, "within": True}),
        ("/m/evidence/1", {"what": "b", "relation": "r", "value": 1e-5, "limit": 1e-10, "within": False}),
    ]
    html = evidence(rows)
    seen = document(html)
    assert seen.words.count("passes") == seen.words.count("exceeds") == 1
    assert [a.get("class") for tag, a in seen.tags if tag == "tr"][1:] == [None, "marked"]
    assert seen.numbers[0] == ("/m/evidence/0/value", "1.0·10^\u221215")
