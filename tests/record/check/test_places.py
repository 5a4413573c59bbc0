"""Where a token stands."""

from __future__ import annotations

from calcsheet.record.check.places import located
from calcsheet.record.tokens import tokens

HTML = (
    "<h2>Storeys &amp; masses</h2><table><caption>By level</caption><thead><tr><th>level</th><th>mass <b>[t]</b></th></tr></thead>"
    '<tbody><tr><th>Roof</th><td><data value="/a/0" data-unit="t">1</data></td></tr>'
    '<tr><th>1</th><td><data value="/a/1">2</data></td></tr></tbody></table>'
    "<p>3<svg><text>4</text></svg></p><script>5</script>6"
)


def test_heading_row_column_pointer_and_unit():
    found = {at.token: at for at in located(tokens(HTML)) if at.token in "123456"}
    assert found["1"][1:] == ("By level", "Roof", "mass [t]", "/a/0", "t", "")
    assert found["1"].place == "By level, row Roof, mass [t], /a/0"
    assert found["2"].place == "By level, row 1, mass [t], /a/1"
    assert found["2"].unit == ""
    assert (found["3"].row, found["3"].pointer) == ("", "")
    assert [found[n].inside for n in "3456"] == ["", "svg", "script", ""]


def test_every_token_is_there_once():
    assert "".join(at.token for at in located(tokens(HTML))) == HTML


def test_long_headings_are_cut():
    (at,) = (at for at in located(tokens(f"<h3>{'long ' * 40}</h3>x")) if at.token == "x")
    assert len(at.heading) == 60
