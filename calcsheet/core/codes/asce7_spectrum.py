"""The two-period spectrum of ASCE/SEI 7 worked out at one period."""

from __future__ import annotations

from calcsheet.core.codes.edition import Relation, Value


def two_period_relation(
    s_ds: float, s_d1: float, t_l: float, period: float, ordinate: float, clause: str
) -> tuple[Relation, ...]:
    """T_S and the branch of the spectrum that holds at a period.

    Parameters
    ----------
    s_ds, s_d1 : float
        S_DS and S_D1 over g.
    t_l : float
        T_L [s].
    period : float
        Period [s].
    ordinate : float
        S_a over g there.
    clause : str
        Its source.
    """
    short, long, corner = Value(s_ds, "ratio"), Value(s_d1, "ratio"), Value(s_d1 / s_ds, "period")
    t, far = Value(period, "period"), Value(t_l, "period")
    values: tuple[Value, ...]
    if period < 0.2 * corner.value:
        relation = "S_a = S_DS (0.4 + 0.6 T/(0.2 T_S)), for T < 0.2 T_S"
        how, values = "{0} × (0.4 + 0.6 × {1} / (0.2 × {2})), for {1} < 0.2 × {2}", (short, t, corner)
    elif period <= corner.value:
        relation, how = "S_a = S_DS, for 0.2 T_S ≤ T ≤ T_S", "{0}, for 0.2 × {1} ≤ {2} ≤ {1}"
        values = (short, corner, t)
    elif period <= t_l:
        relation, how = "S_a = S_D1/T, for T_S < T ≤ T_L", "{0} / {1}, for {2} < {1} ≤ {3}"
        values = (long, t, corner, far)
    else:
        relation, how, values = "S_a = S_D1 T_L/T², for T > T_L", "{0} × {1} / ({2})², for {2} > {1}", (long, far, t)
    return (
        Relation("Corner period", "T_S = S_D1/S_DS", "{0} / {1}", (long, short), corner, clause),
        Relation("Spectral ordinate over g at T₁", relation, how, values, Value(ordinate, "ratio"), clause),
    )
