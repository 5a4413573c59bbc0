"""The stiffness take-off: storey stiffnesses from members, with its method."""

from __future__ import annotations

from calcsheet.core.stiffnesstakeoff import StoreyStiffness, Takeoff, take_off
from calcsheet.steps.step import Outcome, Step
from calcsheet.steps.stiffnesscautions import cautions_of
from calcsheet.steps.stiffnesslines import line_of_sum, lines_of_row


def run(given: Takeoff) -> Outcome:
    result = take_off(given)
    lines = [line for i in range(len(given.members)) for line in lines_of_row(given, result, i)]
    lines += [line_of_sum(given, result, d, item) for d, item in enumerate(result.directions)]
    return Outcome(result, tuple(lines), cautions_of(given, result))


METHOD = r"""
A storey's stiffness in a direction is the sum over its members, each with its stiffness factor $c$ (cracking, joints),
their number $n$ and the angle $\gamma$ of the direction in which they act:

$$k_x = \sum n\, k \cos^{2}\gamma , \qquad k_y = \sum n\, k \sin^{2}\gamma .$$

Columns and walls bend and, where said, shear; $\beta = 12$ with both ends held against rotation, $3$ with one end (a wall
as a cantilever over one storey, a column pinned at one end):

$$k = \left( \frac{h^{3}}{\beta\, c\, E I} + \frac{h}{c_s\, G A_s} \right)^{-1} .$$

A column held by beams has the D-value (Muto, Aseismic Design Analysis of Buildings, 1974, from memory)

$$D = a\, \frac{12\, c\, E I}{h^{3}} , \qquad a = \frac{\bar{k}}{2 + \bar{k}} , \qquad
\bar{k} = \frac{B_a + B_b}{2\, c\, E I / h} , \qquad B = \sum \frac{c_b\, E I_b}{L} ,$$

from the beams that meet it above and below. On the base, with $\bar{k}$ from the beams above alone and $c\, E I / h$ counted
once, $a = (0.5 + \bar{k})/(2 + \bar{k})$ where it is fixed and $a = 0.5\, \bar{k}/(1 + 2 \bar{k})$ where it is pinned.
D-values take the joints of neighbouring storeys to turn alike. The joint rotation index of a storey (Blume 1968; Chopra,
Dynamics of Structures, from memory)

$$\rho = \frac{\sum E I_b / L}{\sum E I_c / h}$$

says how far this holds: a frame with a large index moves like a shear beam, one with an index near zero like cantilevers.

A diagonal between pinned ends, brace or infill strut of a given width, with the horizontal length $b$ and
$L^{2} = b^{2} + h^{2}$, has

$$k = \frac{c\, E A \cos^{2}\alpha}{L} = \frac{c\, E A\, b^{2}}{L^{3}} ;$$

of a pair both act, or one at a time where they take tension only. Stretching of columns, turning of foundations and
slip of joints are left out. Where walls bend over several storeys no stiffness of one storey describes them well.
"""

STIFFNESSES = Step("stiffness take-off", 1, "Stiffness take-off", Takeoff, StoreyStiffness, (), run, METHOD)
