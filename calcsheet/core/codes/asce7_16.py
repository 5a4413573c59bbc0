"""ASCE/SEI 7-16: two-period spectrum with its gate by site class. Clauses from memory."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import ClassVar

from calcsheet.core.codes.asce7 import ASCE7
from calcsheet.core.codes.edition import key
from calcsheet.core.errors import ModelError

STUDY, INCREASED_CS, INCREASED_SD1 = "site-specific study", "C_s increased", "S_D1 increased"
MOTIONS = ("code tables", STUDY, INCREASED_CS, INCREASED_SD1)


@dataclass(frozen=True)
class ASCE716(ASCE7):
    """Parameters of ASCE/SEI 7-16.

    Parameters
    ----------
    s_ds, s_d1, s_1, t_l, site_class, risk_category, r_x, r_y, c_d_x, c_d_y, system_x, system_y : float or str
        As in `ASCE7`.
    structure, rho, shear_ratio, height_unit : float or str
        As in `ASCE7`.
    ground_motion : {"code tables", "site-specific study", "C_s increased", "S_D1 increased"}
        Where S_DS and S_D1 come from: the coefficients of 11.4.4, a study by chapter 21, or the coefficients with an
        exception for site class D: falling branches of C_s times 1.5 (11.4.8, exception 2), or S_D1 already given times 1.5
        (Supplement 3).
    """

    ground_motion: str = field(default=MOTIONS[0], metadata=key(choices=MOTIONS, help="where S_DS and S_D1 come from"))

    name: ClassVar[str] = "ASCE/SEI 7-16"
    kind: ClassVar[str] = name

    def __post_init__(self) -> None:
        super().__post_init__()
        if self.ground_motion in (INCREASED_CS, INCREASED_SD1) and self.site_class != "D":
            raise ModelError(
                "ground_motion",
                f'got "{self.ground_motion}" with site class "{self.site_class}"',
                "goes with site class D",
            )

    def _site(self) -> tuple[str, str]:
        clause = "11.4.8"
        if self.ground_motion == STUDY:
            return "", f"{clause}, chapter 21"
        if self.site_class == "F":
            return "a site response analysis is required", clause
        if self.site_class == "E":
            if self.s_1 >= 0.2:
                return (
                    "with S_1 ≥ 0.2 a ground motion hazard analysis is required; its exception is static alone",
                    clause,
                )
            return "with S_S ≥ 1.0 a ground motion hazard analysis is required unless F_a is that of class C", clause
        if self.site_class == "D" and self.s_1 >= 0.2 and self.ground_motion == MOTIONS[0]:
            return "with S_1 ≥ 0.2 a ground motion hazard analysis is required unless an exception is taken", clause
        return "", clause

    def _beyond_plateau(self) -> float:
        return 1.5 if self.ground_motion == INCREASED_CS and self.s_1 >= 0.2 else 1.0
