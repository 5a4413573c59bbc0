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
_CQC = "Der Kiureghian (1981), Wilson, Der Kiureghian and Bayo (1981), Earthq. Eng. Struct. Dyn. 9 (from memory)"
_ASCE = "ASCE/SEI 7-16, {} (from memory)"
_EN = "EN 1998-1:2004, {} (from memory)"
_MUTO = "Muto, Aseismic Design Analysis of Buildings (1974), D-values (from memory)"
_BEAMS = "Timoshenko and Gere, Mechanics of Materials, deflections of beams with shear (from memory)"
_BLUME = "Blume, J. Struct. Div. ASCE 94 (1968); Chopra, Dynamics of Structures, section 18.1 (from memory)"
_ROARK = "Roark's Formulas for Stress and Strain, properties of sections (from memory)"
_BATHE = "Bathe, Finite Element Procedures, chapter 11 (from memory)"

_GOLUB = "Golub and Van Loan, Matrix Computations (from memory)"
_BEAM = "Przemieniecki, Theory of Matrix Structural Analysis, beams with shear deformation (from memory)"
_STABILITY = "Timoshenko and Gere, Theory of Elastic Stability (from memory)"
_GUYAN = "Guyan, AIAA Journal 3 (1965), exact without mass (from memory)"
_FLOORS = "Chopra, Dynamics of Structures, section 9.5 (from memory)"

_EDITIONS = {
    "edition.Edition": "any edition",
    "asce7.ASCE7": "ASCE/SEI 7-16 and 7-22",
    "en1998_2004.EN1998": "EN 1998-1:2004",
    "is1893_2016.IS1893": "IS 1893 (Part 1):2016",
    "points.GivenPoints": "given points",
}
_ITEMS = {
    "permitted": "analysis permitted",
    "importance": "importance factor",
    "ordinates": "design ordinate S_a(T)",
    "ordinate_relation": "S_a(T) worked out",
    "elastic_ordinates": "elastic ordinate that caps displacements",
    "damping": "ξ of the ordinates",
    "static": "static base shear",
    "distribution": "static force at each level",
    "distribution_relation": "static force at the top level worked out",
    "modes": "modes asked for",
    "combination": "rules of combination",
    "independent": "modes independent for SRSS",
    "scaling": "factors on modal forces and drifts",
    "torsion": "multiplier for accidental torsion",
    "drift": "design drift over elastic drift",
    "drift_limit": "limit of the design drift",
    "second_order": "θ with its limits",
    "irregularities": "irregularities",
    "separation": "separation displacement",
}
"""What every edition answers, by the method that does."""

FORMULAS: tuple[Formula, ...] = (
    Formula("Σm, Σm·g, H", "totals.totals", "definition"),
    Formula("z = z_0 + Σh", "alongside.elevations", "definition"),
    Formula("h = z_i − z_(i−1)", "alongside.heights", "definition"),
    Formula("Σ over a level and those above it", "alongside.at_and_above", "definition"),
    Formula("m_i/m_(i−1)", "alongside.to_level_below", "definition"),
    Formula("Σ share·q·A, ½Σ h·share·q·L, m = W/g of a level", "masstakeoff.take_off", "common practice"),
    Formula("half a storey to each level", "masstakeoff.by_row", "common practice"),
    Formula("r² = (a² + b²)/12", "masstakeoff.spread_radius", "handbook formula of a rectangle (from memory)"),
    Formula("r² = (a + b)²/12", "masstakeoff.edge_radius", "parallel axis theorem"),
    Formula("parts of a level: m, x, y, r", "masstakeoff.parts_of", "common practice"),
    Formula("Σmx/Σm, I = Σ(I_k + m_k d_k²)", "masstakeoff.gathered", "parallel axis theorem"),
    Formula(
        "I₀ − m(x² + y²), ΣW of levels against ΣW of loads", "masstakeoff.evidence_of_take_off", "parallel axis theorem"
    ),
    Formula("A, I, A_s of a section", "sections.properties_of", _ROARK),
    Formula("I, A_s about an axis", "sections.Properties.about", "definition"),
    Formula("βEI/h³", "memberstiffness.bending", _BEAMS),
    Formula("1/(1/k + h/(GA_s))", "memberstiffness.with_shear", _BEAMS),
    Formula("k̄ of beams and column", "memberstiffness.beam_ratio", _MUTO),
    Formula("a of D = a·12EI/h³", "memberstiffness.beam_restraint", _MUTO),
    Formula("ρ = Σ(EI_b/L)/Σ(EI_c/h)", "memberstiffness.joint_rotation_index", _BLUME),
    Formula("EA cos²α/L", "memberstiffness.diagonal", "definition"),
    Formula("storey stiffness from members", "stiffnesstakeoff.take_off", "definition"),
    Formula("K, M, ι of a building", "model.models_of", "definition"),
    Formula("K, M, ι of rigid floors", "model.spatial_model", "definition"),
    Formula("stiffness set of a name", "model.set_of", "definition"),
    Formula("k_x, k_θ at the base", "model.springs_of", "definition"),
    Formula("gravity load of a level", "model.gravity_of", "definition"),
    Formula("λ of a building", "model.critical_of", _STABILITY),
    Formula("P/h × drift", "model.Model.gravity_shear", _STABILITY),
    Formula("P/h × drift of rigid floors", "rigidfloors.Floors.gravity_shear", _STABILITY),
    Formula("rigid floors of a plan", "model.floors_of_plan", _FLOORS),
    Formula("e_0, r, l_s of a direction", "plan.plan_facts", _EN.format("4.2.3.2(6)")),
    Formula("values along a direction", "model.Model.along", "definition"),
    Formula("Σ over the degrees of freedom of a level", "model.Model.by_level", "definition"),
    Formula("ω, T = 2π/ω, f = ω/2π", "modes.modes_of", "definition"),
    Formula("ψ with ψᵀMψ = I", "modes.modes_of", _PARLETT),
    Formula("shares of ½ψᵀKψ by storey, of ½ω²ψᵀMψ by level", "modes.modes_of", "definition"),
    Formula("T_j > 0.9 T_i", "modes.groups", "EN 1998-1:2004, 4.3.3.3.2(1)"),
    Formula("φ scaled: ψᵀMψ = 1, largest 1, roof 1", "modes.scaled", "definition"),
    Formula("ω, ψ of K = BᵀkB: singular values of √k·B·M^(-1/2)", "chain.Chain.modes", _DEMMEL),
    Formula("Bu, storey drifts", "planar.drifts", "definition"),
    Formula("Bu of a chain", "chain.Chain.drift", "definition"),
    Formula("Bu of a planar model", "planar.Planar.drift", "definition"),
    Formula("Σ at and above", "planar.above", "definition"),
    Formula("Ku of a planar model", "planar.Planar.force", "definition"),
    Formula("storey shear × storey drift", "planar.Planar.storey_energy", "definition"),
    Formula("k × factor of a chain", "chain.Chain.times", "definition"),
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
    Formula("K × factor", "matrix.StiffnessMatrix.times", "definition"),
    Formula("F / factor", "matrix.FlexibilityMatrix.times", "definition"),
    Formula("R₂₂ᵀR₂₂ = K₂₂ − K₂₁K₁₁⁻¹K₁₂", "condense.condensed", _GUYAN),
    Formula("ω, ψ of K = CᵀC: singular values of C·M^(-1/2)", "rooted.Rooted.modes", _GOLUB),
    Formula("Cᵀ(Cu)", "rooted.Rooted.force", "definition"),
    Formula("C⁻¹C⁻ᵀf", "rooted.Rooted.displacement", "definition"),
    Formula("(Cu)ᵀ(Cu)", "rooted.Rooted.energy", "definition"),
    Formula("Sturm count of [0 A; Aᵀ 0], A = C·M^(-1/2)", "rooted.Rooted.count_below", _PARLETT),
    Formula("negative pivots of a tridiagonal matrix", "rooted.negatives", _PARLETT),
    Formula("F f of a stick: ∫∫M/EI + ∫V/GA_s", "stick.Stick.displacement", _BEAM),
    Formula("EI, GA_s × factor", "stick.Stick.times", "definition"),
    Formula("K − K_G = Cᵀ(I − XᵀX)C", "second_order.softened", _STABILITY),
    Formula("X = DC⁻¹", "second_order.over", "definition"),
    Formula("λ = 1/σ²(X)", "second_order.critical", _STABILITY),
    Formula("λ > 1", "second_order.refuse_buckled", _STABILITY),
    Formula("λ on base springs", "standing.Standing.critical", _STABILITY),
    Formula("(I − F K_G)⁻¹F f + u₀ + θ₀h", "standing.Standing.displacement", "definition"),
    Formula("Bu less the base's movement", "standing.Standing.drift", "definition"),
    Formula("K on base springs, less K_G", "standing.standing", _GUYAN),
    Formula("λ of a planar model", "standing.critical_load", _STABILITY),
    Formula("K = ΣTᵀK_line T", "rigidfloors.floors_of", _FLOORS),
    Formula("T of a line", "rigidfloors.Floors.reach", _FLOORS),
    Formula("x − θ(y_p − y_m), y + θ(x_p − x_m)", "rigidfloors.Floors.at", _FLOORS),
    Formula("m, m, mρ²", "rigidfloors.Floors.inertia", _FLOORS),
    Formula("Ku of rigid floors", "rigidfloors.Floors.force", "definition"),
    Formula("uᵀKu of rigid floors", "rigidfloors.Floors.energy", "definition"),
    Formula("Bu of rigid floors", "rigidfloors.Floors.drift", "definition"),
    Formula("storey shears and torque × storey drifts", "rigidfloors.Floors.storey_energy", "definition"),
    Formula("storey shears of a line", "rigidfloors.Floors.line_shear", "definition"),
    Formula("ω, ψ of many floors", "rigidfloors.SparseFloors.modes", _BATHE),
    Formula("K⁻¹f of many floors", "rigidfloors.SparseFloors.displacement", "definition"),
    Formula("inertia of K − ω²M of many floors", "rigidfloors.SparseFloors.count_below", _PARLETT),
    Formula("x_s, y_s, e, k_θ, r", "plan.centres", _EN.format("4.2.3.2(6)")),
    Formula("T of x, y and θ alone", "plan.uncoupled", _FLOORS),
    Formula("mψ_x², mψ_y², mρ²ψ_θ²", "plan.direction_shares", "definition"),
    Formula("masses shifted", "plan.shifted", "definition"),
    Formula("displacement of a point of a floor", "plan.displaced", "definition"),
    Formula("drift at a point of a floor", "plan.point_drifts", "definition"),
    Formula("u, drift at the edges", "edges.edges", "definition"),
    Formula("peaks of the shears of a line", "edges.line_shears", "definition"),
    Formula("max(E₁ + 0.3E₂, 0.3E₁ + E₂)", "edges.with_the_other", _EN.format("4.3.3.5.1(3)")),
    Formula("the same at the edges", "edges.both_directions", _EN.format("4.3.3.5.1(3)")),
    Formula("largest of several edges", "edges.larger_of", "definition"),
    Formula("edge drift over mean, A_x, F e_a", "edges.static_torsion", _ASCE.format("12.8.4, Table 12.3-1")),
    Formula("e_a = 0.05 L", "edges.accidental", _EN.format("4.3.2(1)")),
    Formula("masses shifted by e_a", "edges.shift", _EN.format("4.3.2(1)")),
    Formula("u, f of every degree of freedom", "peaks.responses", _CHOPRA),
    Formula("K⁻¹[F, F e_a]", "plan.static", _EN.format("4.3.3.3.3(1)")),
    Formula("A_x = (δ_max/1.2 δ_avg)²", "plan.amplification", _ASCE.format("12.8.4.3")),
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
    Formula("f = ΓMψSa, V, M, u = ΓψSa/ω², drift of each mode", "peaks.peaks", _CHOPRA),
    Formula("ρ of modes: SRSS, CQC, absolute, grouped", "combine.correlation", _CQC),
    Formula("√ΣΣρrr", "combine.combined", _CQC),
    Formula("ρ with the residual", "response.related", _CQC),
    Formula("peaks of all quantities combined", "response.combine", _CQC),
    Formula("T₁, h, w of a direction", "response.facts_of", "definition"),
    Formula("ordinate of what the modes leave out", "response.left_over", _CHOPRA),
    Formula("αm, βK of the whole model", "whatif.multiplied", "definition"),
    Formula("T, M*/Σm and modal base shear of a building", "whatif.answered", _CHOPRA),
    Formula("design drifts, θ, screens", "design.drifts", "the edition's clauses"),
    Formula("design storey actions", "design.actions", "the edition's clauses"),
    Formula("F = V wh^k/Σwh^k", "codes.common.by_height", _ASCE.format("12.8.3")),
    Formula("F_n = V w_n/Σw(h/h_n)^k", "codes.common.at_top", _ASCE.format("12.8.3")),
    Formula("max(1, V_static/V_modal)", "codes.common.up_to_static", _ASCE.format("12.9.1.4.1")),
    Formula("θ = PΔ/(Vh)", "codes.common.stability", _EN.format("4.4.2.2(2)")),
    Formula("1/(1 − θ)", "codes.common.amplified", _EN.format("4.4.2.2(3)")),
    Formula("largest T_j/T_i", "codes.common.closest", _EN.format("4.3.3.3.2(1)")),
    Formula("soft storeys", "codes.common.softer", _ASCE.format("Table 12.3-2")),
    Formula("heavy levels", "codes.common.heavier", _ASCE.format("Table 12.3-2")),
    Formula("soft storeys and heavy levels, with exceptions", "codes.asce7_screens.vertical", _ASCE.format("12.3.2.2")),
    Formula("two-period S_a(T)", "codes.asce7.ASCE7.two_period", _ASCE.format("11.4.6")),
    Formula("branch of the two-period S_a(T)", "codes.asce7_spectrum.two_period_relation", _ASCE.format("11.4.6")),
    Formula("S_a(T) worked out, 7-16", "codes.asce7.ASCE7.spectrum_relation", _ASCE.format("11.4.6")),
    Formula(
        "S_a(T) worked out, 7-22", "codes.asce7_22.ASCE722.spectrum_relation", "ASCE/SEI 7-22, 11.4.5 (from memory)"
    ),
    Formula("S_a(T), 7-16", "codes.asce7.ASCE7.spectrum", _ASCE.format("11.4.6")),
    Formula("S_a(T), 7-22", "codes.asce7_22.ASCE722.spectrum", "ASCE/SEI 7-22, 11.4.5 (from memory)"),
    Formula("C_u", "codes.asce7.ASCE7.limit_of_period", _ASCE.format("Table 12.8-1")),
    Formula("C_s", "codes.asce7.ASCE7.coefficient", _ASCE.format("12.8.1.1")),
    Formula("0.5S_1/(R/I_e)", "codes.asce7.ASCE7.near_fault", _ASCE.format("12.8.1.1")),
    Formula("k of the static forces", "codes.asce7.ASCE7.exponent", _ASCE.format("12.8.3")),
    Formula("η = √(10/(5 + ξ))", "codes.en1998_2004.damping_correction", _EN.format("3.2.2.2(3)")),
    Formula("S_e(T)", "codes.en1998_2004.EN1998.elastic", _EN.format("3.2.2.2")),
    Formula("k ≥ 3√n", "codes.en1998_2004.least_modes", _EN.format("4.3.3.3.1(5)")),
    Formula("S_a/g", "codes.is1893_2016.IS1893.curve", "IS 1893 (Part 1):2016, 6.4.2 (from memory)"),
    Formula("two points around T", "codes.points.between_points", "definition"),
    Formula("S_a at T from points", "codes.points.interpolated", "definition"),
    *(
        Formula(f"{what}: {edition}", f"codes.{where}.{item}", f"{edition} (from memory)")
        for where, edition in _EDITIONS.items()
        for item, what in _ITEMS.items()
    ),
)
"""Every formula of the core."""
