"""Where a token stands."""

from __future__ import annotations

from calcsheet.record.check.places import located
from calcsheet.record.tokens import tokens

HTML = (
    "<h2>Storeys &amp; masses</h2><table><caption>By level</caption>"
    "<thead><tr><th>level</th><th>mass <b>[t]</b></th></tr></thead>"
    '<tbody><tr><th>Roof</th><td><data value="/a/0" data-unit="t">2</data></td></tr>'
    '<tr><th>1</th><td><data value="/a/1">3</data></td></tr></tbody></table>'
    "<p>4<svg><text>5</text></svg></p><script>6</script>7"
)


def test_heading_row_column_pointer_and_unit():
    found = {at.token: at for at in located(tokens(HTML)) if at.token in {*"234567"}}
    at = found["2"]
    assert (at.heading, at.row, at.column, at.pointer, at.unit) == ("By level", "Roof", "mass [t]", "/a/0", "t")
    assert at.place == "By level, row Roof, mass [t], /a/0"
    assert found["3"].place == "By level, row 1, mass [t], /a/1"
    assert found["3"].unit == ""
    assert (found["4"].row, found["4"].pointer) == ("", "")
    assert [found[n].inside for n in "4567"] == ["", "svg", "script", ""]


def test_every_token_is_there_once():
    assert "".join(at.token for at in located(tokens(HTML))) == HTML


def test_long_headings_are_cut():
    (at,) = (at for at in located(tokens(f"<h3>{'long ' * 40}</h3>x")) if at.token == "x")
    assert len(at.heading) == 60
