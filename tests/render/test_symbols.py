"""Subscripts and superscripts of the program's own texts."""

from __future__ import annotations

import pytest

from calcsheet.render.symbols import symbols


@pytest.mark.parametrize(
    ("text", "html"),
    [
        ("S_D1", "S<sub>D1</sub>"),
        ("γ_I = 1.2", "γ<sub>I</sub> = 1.2"),
        ("V̄_B = A_h W", "V̄<sub>B</sub> = A<sub>h</sub> W"),
        ("C_t h_n^x", "C<sub>t</sub> h<sub>n</sub><sup>x</sup>"),
        ("h^0.75/√A_w", "h<sup>0.75</sup>/√A<sub>w</sub>"),
        ("T^2.", "T<sup>2</sup>."),
        ("√(k_θ / k_y)", "√(k<sub>θ</sub> / k<sub>y</sub>)"),
        ("ρ_ij V_i V_j", "ρ<sub>ij</sub> V<sub>i</sub> V<sub>j</sub>"),
        ("S_DS/(R/I_e)", "S<sub>DS</sub>/(R/I<sub>e</sub>)"),
        ("{0}^0.75", "{0}<sup>0.75</sup>"),
        ("no symbols, 3 _ 4", "no symbols, 3 _ 4"),
        ("a < b & c_d", "a &lt; b &amp; c<sub>d</sub>"),
        ("<script>x_1</script>", "&lt;script&gt;x<sub>1</sub>&lt;/script&gt;"),
    ],
)
def test_symbols(text, html):
    assert symbols(text) == html
