"""The formulas: pure functions on frozen records, in m, kN, t, s and rad.

`FORMULAS` finds each of them: symbol, function, source.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Formula:
    """An entry of the index.

    Parameters
    ----------
    symbol : str
        What is computed, in symbols.
    function : str
        Where: "module.function" or "module.Class.method" of this package.
    source : str
        Publication and place, or "definition".
    """

    symbol: str
    function: str
    source: str


_CHOPRA = "Chopra, Dynamics of Structures, section 13.2 (from memory)"
_CLOUGH = "Clough and Penzien, Dynamics of Structures, Rayleigh's method (from memory)"
_BLEVINS = "Blevins, Formulas for Natural Frequency and Mode Shape, Dunkerley's method (from memory)"
_PARLETT = "Parlett, The Symmetric Eigenvalue Problem (from memory)"
_DEMMEL = "Demmel and Kahan, SIAM J. Sci. Stat. Comput. 11 (1990) (from memory)"
_BATHE = "Bathe, Finite Element Procedures, chapter 11 (from memory)"

FORMULAS: tuple[Formula, ...] = (
    Formula("Σm, Σm·g, H", "totals.totals", "definition"),
    Formula("K, M, ι of a building", "model.models_of", "definition"),
    Formula("Σ over the degrees of freedom of a level", "model.Model.by_level", "definition"),
    Formula("ω, T = 2π/ω, f = ω/2π", "modes.modes_of", "definition"),
    Formula("ψ with ψᵀMψ = I", "modes.modes_of", _PARLETT),
    Formula("shares of ½ψᵀKψ by storey, of ½ω²ψᵀMψ by level", "modes.modes_of", "definition"),
    Formula("T_j > 0.9 T_i", "modes.groups", "EN 1998-1:2004, 4.3.3.3.2(1)"),
    Formula("φ scaled: ψᵀMψ = 1, largest 1, roof 1", "modes.scaled", "definition"),
    Formula("ω, ψ of K = BᵀkB: singular values of √k·B·M^(-1/2)", "chain.Chain.modes", _DEMMEL),
    Formula("Bu, storey drifts", "chain.Chain.drift", "definition"),
    Formula("Ku of a chain", "chain.Chain.force", "definition"),
    Formula("K⁻¹f of a chain", "chain.Chain.displacement", "definition"),
    Formula("uᵀKu of a chain", "chain.Chain.energy", "definition"),
    Formula("k·drift² by storey", "chain.Chain.storey_energy", "definition"),
    Formula("Sturm count of a chain", "chain.Chain.count_below", _DEMMEL),
    Formula("ω, ψ of a given K: M^(-1/2)KM^(-1/2)", "matrix.StiffnessMatrix.modes", _PARLETT),
    Formula("Ku of a given K", "matrix.StiffnessMatrix.force", "definition"),
    Formula("K⁻¹f of a given K", "matrix.StiffnessMatrix.displacement", "definition"),
    Formula("inertia of K − ω²M", "matrix.StiffnessMatrix.count_below", _PARLETT),
    Formula("ω, ψ of a given F: M^(1/2)FM^(1/2)", "matrix.FlexibilityMatrix.modes", _PARLETT),
    Formula("F⁻¹u of a given F", "matrix.FlexibilityMatrix.force", "definition"),
    Formula("Ff of a given F", "matrix.FlexibilityMatrix.displacement", "definition"),
    Formula("inertia of ω⁻²I − M^(1/2)FM^(1/2)", "matrix.FlexibilityMatrix.count_below", _PARLETT),
    Formula("uᵀKu of a given matrix", "matrix.StiffnessMatrix.energy", "definition"),
    Formula("storey shear × storey drift", "matrix.StiffnessMatrix.storey_energy", "definition"),
    Formula("Γ = ψᵀMι/ψᵀMψ", "participation.participation", _CHOPRA),
    Formula("M* = (ψᵀMι)²/ψᵀMψ", "participation.participation", _CHOPRA),
    Formula("h* = Σhmψ/ψᵀMι", "participation.participation", _CHOPRA),
    Formula("modes until ΣM*/Σm reaches the target", "participation.participation", "EN 1998-1:2004, 4.3.3.3.1(3)"),
    Formula("ω₁² ≤ Σfu/Σmu²", "bounds.bounds", _CLOUGH),
    Formula("ω₁² ≥ 1/tr(FM)", "bounds.bounds", _BLEVINS),
    Formula("φᵀKφ/φᵀMφ", "bounds.rayleigh_quotient", _CLOUGH),
    Formula("ω⁻² of FMψ = ω⁻²ψ", "alternate.first_frequencies", _BATHE),
    Formula("ψᵀMψ − I, ψᵢᵀKψⱼ/(ωᵢωⱼ) − I", "evidence.evidence_of_modes", _PARLETT),
    Formula("‖Kψ − ω²Mψ‖/ω²", "evidence.evidence_of_modes", _PARLETT),
    Formula("ΣM*/Σm − 1", "evidence.evidence_of_participation", _CHOPRA),
)
"""Every formula of the core."""
