"""ASCE/SEI 7-22: multi-period points, with S_DS, S_D1, S_1 and T_L for the static part. Clauses from memory.

Against 7-16: site classes between B and E; a study of the site for class F alone, as the multi-period values hold what 7-16
asked one for; no irregularity of weight. To be confirmed: numbers of clauses within 11.4.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import ClassVar

import numpy as np

from calcsheet.core.arrays import Array
from calcsheet.core.codes.asce7 import ASCE7
from calcsheet.core.codes.edition import Relation, key
from calcsheet.core.codes.points import between_points, interpolated

SITES = ("A", "B", "BC", "C", "CD", "D", "DE", "E", "F")


@dataclass(frozen=True)
class ASCE722(ASCE7):
    """Parameters of ASCE/SEI 7-22.

    Parameters
    ----------
    s_ds, s_d1, s_1, t_l, site_class, risk_category, r_x, r_y, c_d_x, c_d_y, system_x, system_y : float or str
        As in `ASCE7`; site classes BC, CD and DE too.
    structure, rho, shear_ratio, height_unit : float or str
        As in `ASCE7`.
    points : tuple of (float, float)
        Period [s] and S_a over g of the multi-period spectrum, ascending; the two-period spectrum where empty.
    """

    site_class: str = field(metadata=key(choices=SITES, help="site class"))
    points: tuple[tuple[float, float], ...] = field(default=(), metadata=key(file=True, help="multi-period points"))

    name: ClassVar[str] = "ASCE/SEI 7-22"
    kind: ClassVar[str] = name
    mass_irregularity: ClassVar[bool] = False
    equations: ClassVar[bool] = False

    def _site(self) -> tuple[str, str]:
        if self.site_class == "F":
            return "a site response analysis is required", "11.4.7"
        if not self.points:
            return "the two-period spectrum is for sites without multi-period values", "11.4.5"
        return "", "11.4.5, 11.4.7"

    @property
    def reach(self) -> float:
        return self.points[-1][0] if self.points else super().reach

    def spectrum(self, period: Array) -> Array:
        if not self.points:
            return self.two_period(period)
        return interpolated(self.points, np.asarray(period, dtype=float), "linear", hold_below=False)

    def spectrum_relation(self, period: float) -> tuple[Relation, ...]:
        if not self.points:
            return super().spectrum_relation(period)
        return between_points(self.points, period, "linear", "Spectral ordinate over g at T₁", "11.4.5.1")
