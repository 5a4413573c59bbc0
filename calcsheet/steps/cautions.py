"""Kinds of caution: why each matters and what is usually done about it (common practice)."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any


@dataclass(frozen=True)
class Why:
    """What is said of every caution of a kind.

    Parameters
    ----------
    why : str
        Why it matters.
    usual : str
        What is usually done.
    """

    why: str
    usual: str


CAUTIONS: Mapping[str, Why] = {
    # ---- always
    "qualified-engineer": Why(
        "A program works out numbers; whether they describe the building is a judgement.",
        "A qualified engineer who knows the building reviews model, inputs and conclusions, and signs for them.",
    ),
    "local-code": Why(
        "National choices and the authority's requirements change loads, factors and the analyses that are accepted.",
        "The governing documents are agreed with the authority and listed in the basis of design.",
    ),
    "linear-elastic": Why(
        "A structure that cracks, yields or slips is softer and distributes its forces in another way.",
        "Stiffnesses are reduced for cracking, and ductility enters through the code's factors or a non-linear analysis.",
    ),
    "rigid-floors": Why(
        "Floors that are flexible, narrow or full of openings do not carry shear to the lines of resistance as assumed.",
        "The diaphragms are checked for stiffness and strength, and torsion is studied with a model of the plan.",
    ),
    "fixed-base": Why(
        "Rocking or sliding of the foundation lengthens periods and adds to drifts.",
        "The base is shown to be stiff beside the storeys above, or the analysis is repeated with soil springs.",
    ),
    "left-out": Why(
        "Effects that are not modelled are covered by none of these results.",
        "Each is treated in a calculation of its own, or is noted as not governing.",
    ),
    # ---- job card
    "no-demand": Why(
        "Periods and shares alone say nothing about strength or drift.",
        "A basis is added to the job, or the record is issued for its modes alone.",
    ),
    "to-confirm": Why(
        "If the assumption does not hold, whatever rests on it must be worked out again.",
        "The confirmation is obtained before the record is approved, and its source is written beside the assumption.",
    ),
    "no-origin": Why(
        "A checker can't compare values with their source, nor see that the source has been revised.",
        "Drawing, take-off or calculation is named with its revision and date.",
    ),
    "no-ground": Why(
        "Stiffness governs periods and drifts, and can't be judged without knowing what it includes.",
        "The ground names the sections, the allowance for cracking, and the flexibility of joints and foundations.",
    ),
    "uncracked": Why(
        "Uncracked sections of concrete or masonry are too stiff in a strong earthquake: periods and drifts come out short.",
        "Flexural stiffnesses are reduced as the code asks, or the members are shown to stay uncracked.",
    ),
    "cracking-unstated": Why(
        "Cracking commonly takes away a third to a half or more of the stiffness of concrete and masonry members.",
        "The ground says which reductions the values hold, or that the structure has no members that crack.",
    ),
    # ---- storey table
    "order-of-levels": Why(
        "A table read upside down puts heavy, stiff storeys at the top, and every result is that of another building.",
        "The order is compared with a section of the building.",
    ),
    "storey-heights": Why(
        "A slip of unit or of a digit in a height changes moments, drift limits and second-order effects.",
        "The heights are compared with the drawings.",
    ),
    "unsymmetric": Why(
        "An elastic structure has a symmetric stiffness: what is not symmetric is an error of rounding, of units or of order.",
        "The matrix is taken again with more digits and the order of its rows is compared with that of its columns.",
    ),
    "jump": Why(
        "Neighbouring levels seldom differ so much; a slip of unit or of a digit is more likely.",
        "Value and unit are compared with their source; a true jump is named and its effect on the modes looked at.",
    ),
    "weight-per-area": Why(
        "Weight over floor area is the quickest test for loads left out, counted twice or given in another unit.",
        "The take-off is compared with the build-up of a typical floor; light roofs and plant floors are explained.",
    ),
    # ---- mass take-off
    "unused-columns": Why(
        "A column that is not read adds nothing, however carefully it was filled in.",
        "Its heading is corrected, or it is kept as a remark.",
    ),
    "no-mass-share": Why(
        "A variable load that is left out makes the building lighter, its periods shorter and its forces smaller.",
        "The share is stated with its clause, 0 where the code asks for none.",
    ),
    "centre-outside-plan": Why(
        "A centre of mass outside its floor comes from a position measured from elsewhere, or a weight in another unit.",
        "Positions are measured from one origin for floors and other masses alike.",
    ),
    "covers-more": Why(
        "An area larger than its floor counts a load twice or belongs to another level.",
        "The areas are compared with the plans.",
    ),
    "masses-differ": Why(
        "Two sets of masses in one record leave it open which of them the results stand for.",
        "The storey table takes over the take-off's masses, or the difference is explained.",
    ),
    # ---- stiffness take-off
    "walls-by-storey": Why(
        "A wall that bends over its whole height has no stiffness of one storey alone: the sum of storey stiffnesses misleads.",
        "Such walls are modelled as cantilever sticks, or the lateral stiffness matrix of the frame is given.",
    ),
    "flexible-beams": Why(
        "With flexible beams a storey's stiffness depends on the storeys around it.",
        "The lateral stiffness matrix or the flexibility of the whole frame is taken from a frame analysis.",
    ),
    "rigid-beams": Why(
        "Joints that turn make columns softer than their stiffness between fixed ends.",
        "Beam sections and spans are given, so that the restraint is counted, or the upper bound is justified.",
    ),
    "d-values-one-storey": Why(
        "The formula counts on columns above that share the beams' restraint.",
        "A single storey is worked out as a portal frame, or from a frame analysis.",
    ),
    "reduced-twice": Why(
        "Factors that multiply may soften sections for cracking twice, which lowers demand and raises drift.",
        "Cracking is put either into the members or into the stiffness set, and the other is kept at 1.",
    ),
    "no-ground-of-members": Why(
        "A reduction of stiffness changes demand and drift, and rests on a clause or a section analysis.",
        "The clause or calculation behind each factor is written in the row.",
    ),
    "skew-members": Why(
        "Members at an angle turn a push in x into a force in y.",
        "The coupling is shown to be small, or rigid floors with lines of resistance are used.",
    ),
    # ---- cantilever sticks, springs at the base, rigid floors
    "deformation-neglected": Why(
        "A wall that is short beside its height shears as well as it bends, and periods and drifts come out short without it.",
        "The missing stiffness is given, or shown by hand to add little to the displacement of the top.",
    ),
    "critical-load": Why(
        "Near its elastic critical load a building is softer than its first-order stiffness says, and sways further.",
        "Gravity loads are taken into the stiffness, or sways and forces are amplified as the edition asks.",
    ),
    "base-springs": Why(
        "Stiffnesses of the ground are known within a factor of two or so, and they move periods, forces and drifts.",
        "The analysis is repeated with a soft and a stiff bound, and both are kept for design.",
    ),
    "lines-along-one-another": Why(
        "Two lines in one place are often one element entered twice, which doubles its stiffness and moves the centre.",
        "The lines are compared with the plan, and equal ones are made one or their difference is noted.",
    ),
    "centre-of-mass-outside": Why(
        "A centre of mass outside the plan points to another origin or unit, and its eccentricity twists every result.",
        "Coordinates of masses, lines and edges are brought to one origin and compared with the drawings.",
    ),
    "slender-floor": Why(
        "Long narrow floors bend in their plane and share forces by tributary area more than by stiffness.",
        "The floor's own flexibility is compared with that of the lines, or both distributions are designed for.",
    ),
    "no-centres-of-stiffness": Why(
        "Eccentricities and torsional radii by storey, which codes ask for, are defined by storey stiffnesses alone.",
        "They are judged from the static edge ratios or from an equivalent storey stiffness under lateral load.",
    ),
    "coupled-modes": Why(
        "Modes that translate and twist together load the edges beyond what either direction alone shows.",
        "Both directions are combined with correlated modes, and stiff lines are moved towards the edges where possible.",
    ),
    "edge-drift-exceeds": Why(
        "Partitions, façades and columns at the edge meet the drift there, however small it is at the centre of mass.",
        "Lines at the edges are stiffened, or the eccentricity is reduced.",
    ),
    "torsional-irregularity": Why(
        "Where one edge moves much further than the other, elements there yield first and the twist grows.",
        "The edition's consequences, such as a larger accidental eccentricity, are followed, or the plan is balanced.",
    ),
    # ---- modes and participation
    "repeated-modes": Why(
        "Single shapes of a repeated frequency are arbitrary, so values of one of them alone mean nothing.",
        "Results are read for the group as a whole.",
    ),
    "close-modes": Why(
        "Modes that are close in period peak almost together, and the root of the sum of squares misses that.",
        "Peaks are combined with correlation, such as by CQC.",
    ),
    "local-mode": Why(
        "A light part may resonate with the building, and its own force is far above what the base shear shows.",
        "The part is checked as a component, and its share is kept apart when modes are counted.",
    ),
    "unusual-period": Why(
        "A first period far from that of similar buildings points to a slip in mass, stiffness or unit.",
        "Period, mass and stiffness are compared with a hand calculation or a second model.",
    ),
    "target-not-reached": Why(
        "Mass that no mode carries adds nothing to the shears found.",
        "More modes are kept, or a residual stands for the rest.",
    ),
    "significant-beyond-target": Why(
        "A mode with a large share still matters for upper storeys after the sum has reached its target.",
        "All modes above that share are used.",
    ),
    "modes-left-out": Why(
        "High modes matter for shears and drifts near the top more than for those at the base.",
        "All modes are kept where that costs nothing, or a residual is added.",
    ),
    # ---- basis and demand
    "local-adoption": Why(
        "An edition is law only where and as it was adopted.",
        "The national annex or the local amendment is named in the basis.",
    ),
    "force-level": Why(
        "Forces of different levels must not be added or compared.",
        "Load factors, redundancy and overstrength are applied where the actions are combined.",
    ),
    "ground-acceleration": Why(
        "A value typed in another unit scales every force.",
        "It is compared with the hazard map, as a part of g.",
    ),
    "no-mass-basis": Why(
        "The share of variable load held by the masses moves periods and forces together.",
        "Each load is listed with its share and the clause that asks for it.",
    ),
    "mass-basis": Why(
        "Without its clause a checker can't tell whether the share is the one asked for.",
        "The clause is written beside the share.",
    ),
    "torsion": Why(
        "A planar model shows nothing of a twisting plan, which adds to forces and drifts at its edges.",
        "The edition's allowance is applied to the elements, or a model with rotations is made.",
    ),
    "long-period": Why(
        "Spectra are least certain at long periods, and displacements there depend on the ordinate most.",
        "A site-specific or displacement spectrum is used for the first mode, or the edition's lower bound is applied.",
    ),
    "permitted": Why(
        "Forces from an analysis that the edition does not admit can't be relied on for compliance.",
        "The analysis that is asked for is made, or the exception that applies is stated with its clause.",
    ),
    "srss-with-close-modes": Why(
        "SRSS leaves out the products of close modes and may err to either side.",
        "Modes are combined by CQC.",
    ),
    "no-residual": Why(
        "What the modes left out would carry is missing from the shears, mostly at stiff or low storeys.",
        "All modes are kept, or the residual is added at the last or at the zero-period ordinate.",
    ),
    "residual-reduced": Why(
        "Rigid modes do not dissipate as the reduction supposes, so their force may come out low.",
        "The effect is compared with that of an unreduced ordinate, or all modes are kept.",
    ),
    # ---- drift, second order, irregularities, actions
    "drift-exceeds": Why(
        "Beyond the limit partitions, façade and second-order effects are no longer kept in hand.",
        "The storey is stiffened, or the limit that goes with other non-structural elements is justified.",
    ),
    "no-second-order": Why(
        "Gravity loads on a swayed structure add to drifts and forces, and none of that is in these results.",
        "Gravity loads are added to the storey table.",
    ),
    "second-order": Why(
        "Above its threshold the effect grows quickly as storeys soften.",
        "Results are amplified, the effect is modelled explicitly, or the storey is stiffened, as the edition asks by range.",
    ),
    "screen": Why(
        "Irregular buildings concentrate damage in a few storeys, which an elastic analysis does not show.",
        "The edition's consequence is followed, or the irregularity is designed out.",
    ),
    "screens-open": Why(
        "An irregularity that nobody has looked at may rule out this analysis or ask for other factors.",
        "Each is assessed by hand from drawings and member strengths, and the finding noted.",
    ),
    "unscaled-base-shear": Why(
        "A model softer than the empirical period supposes, or one with little mass in its first mode, gives low forces.",
        "Masses, stiffnesses and the modes kept are looked at again; many engineers design for the larger of both.",
    ),
    "second-model-differs": Why(
        "Two models of one building that disagree cannot both be right, and the difference may be an error in either.",
        "Masses, stiffnesses and supports of both are compared until the difference is explained, or either is corrected.",
    ),
    # ---- earlier issue
    "lapsed-signatures": Why(
        "A signature speaks for the numbers that were signed, not for those that replaced them.",
        "The revision is checked and signed anew; its list of changes shows where to look.",
    ),
}
"""By kind, what is said of each caution that a step may raise."""


def migrated_caution(old: Mapping[str, Any]) -> dict[str, Any]:
    """A caution as records of format 2 hold it, from one of format 1, which has a key in the place of kind and subject.

    Parameters
    ----------
    old : mapping
        Plain JSON: key, text, numbers, answer.

    Raises
    ------
    ValueError
        A key that begins with no known kind.
    """
    key = str(old["key"])
    kinds = [kind for kind in CAUTIONS if key == kind or key.startswith(f"{kind}-")]
    if not kinds:
        raise ValueError(f'caution "{key}": of no known kind')
    kind = max(kinds, key=len)
    rest = {name: old[name] for name in ("text", "numbers", "answer")}
    return {"kind": kind, "subject": key[len(kind) + 1 :], **rest}


def migrated_answer(old: str) -> dict[str, Any]:
    """An answer as job cards hold it now, from the bare text of earlier ones: nobody's, of no date, to no finding."""
    return {"text": old, "by": "", "date": None, "finding": ""}
