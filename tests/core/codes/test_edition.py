"""Every edition answers the whole checklist, with a clause or by saying that it has none."""

from __future__ import annotations

import inspect
import re

import numpy as np
import pytest

from calcsheet.core.codes.edition import CHECKLIST, NOT_HERE, Edition
from calcsheet.core.codes.registry import EDITIONS
from calcsheet.core.errors import ModelError

SHARED = {
    "s_ds": 0.9, "s_d1": 0.45, "s_1": 0.4, "t_l": 6.0, "site_class": "C", "risk_category": "III", "r_x": 6.0, "r_y": 5.0,
    "c_d_x": 5.0, "c_d_y": 4.5, "system_x": "steel moment frame", "system_y": "other",
}  # fmt: skip
GIVEN = {
    "EN 1998-1:2004": {
        "ground_acceleration": 0.2, "spectrum": 1, "ground": "C", "importance_class": "III", "q_x": 3.9, "q_y": 3.0,
        "system_x": "concrete moment frame", "system_y": "other", "elements": "ductile",
    },
    "ASCE/SEI 7-16": SHARED,
    "ASCE/SEI 7-22": SHARED | {"points": ((0.0, 0.3), (0.1, 0.8), (0.3, 0.9), (1.0, 0.45), (10.0, 0.03))},
    "IS 1893 (Part 1):2016": {
        "zone": "V", "soil": "soft", "importance_value": 1.5, "r_x": 5.0, "r_y": 4.0,
        "system_x": "steel moment frame", "system_y": "other", "base_y": 18.0,
    },
    "given points": {"points": ((0.0, 0.1), (0.5, 0.25), (4.0, 0.05))},
}  # fmt: skip
CLAUSE = re.compile(r"\d|as given")


@pytest.fixture(params=sorted(GIVEN))
def edition(request) -> Edition:
    return EDITIONS[request.param](**GIVEN[request.param])


def with_clause(text: str) -> bool:
    return text == NOT_HERE or bool(CLAUSE.search(text))


def test_the_checklist_is_what_an_edition_must_answer():
    assert set(CHECKLIST) == Edition.__abstractmethods__
    assert len(set(CHECKLIST)) == len(CHECKLIST)


def test_every_registered_edition_is_tried_here():
    assert sorted(GIVEN) == sorted(EDITIONS)
    assert all(name == cls.name for name, cls in EDITIONS.items())


@pytest.mark.parametrize("name", sorted(GIVEN))
@pytest.mark.parametrize("item", CHECKLIST)
def test_an_item_is_answered_by_the_edition_itself(name, item):
    answered_in = next(cls for cls in EDITIONS[name].__mro__ if item in vars(cls))
    assert answered_in is not Edition
    assert not getattr(vars(answered_in)[item], "__isabstractmethod__", False)
    taken = [list(inspect.signature(vars(cls)[item]).parameters) for cls in (answered_in, Edition)]
    assert taken[0] == taken[1]


def test_answers_come_with_a_clause(edition, building):
    facts = building(period=0.7)
    period = np.array([0.7, 0.25, 0.1])
    drift, shear, gravity = np.array([0.02, 0.015, 0.01]), np.array([900.0, 700.0, 400.0]), np.array([6e3, 4e3, 1.5e3])
    stiffness = np.array([9e4, 8e4, 7e4])
    static = edition.static(facts)
    clauses = [
        edition.permitted(facts).clause,
        edition.importance().clause,
        edition.damping().clause,
        edition.modes().clause,
        edition.combination()[1],
        edition.independent(period).clause,
        edition.scaling(facts, 500.0, static).clause,
        edition.torsion("x")[1].clause,
        edition.drift("x").clause,
        edition.drift_limit(facts)[1].clause,
        edition.separation(0.1)[1],
        *(screen.clause for screen in edition.irregularities(facts, stiffness, drift)),
    ]
    if static is not None:  # None says that the edition has none, as it does for second order and the elastic cap
        clauses += [static.clause, edition.distribution(facts, static)[1], *(r.clause for r in static.relations)]
    second = edition.second_order(facts, gravity, shear, drift)
    if second is not None:
        clauses.append(second.clause)
    assert [c for c in clauses if not with_clause(c)] == []
    for ordinates in (edition.ordinates("y", period), edition.elastic_ordinates("y", period)):
        assert ordinates is None or (ordinates.shape == (3,) and (ordinates > 0.0).all())
    assert edition.level.strip()


def test_the_force_of_the_levels_adds_up_to_the_static_base_shear(edition, building):
    facts = building()
    static = edition.static(facts)
    if static is None:
        assert edition.name == "given points"
        return
    force, _ = edition.distribution(facts, static)
    assert force.sum() == pytest.approx(static.shear, rel=1e-12)
    assert (np.diff(force / facts.weight) > 0.0).all()
    assert static.coefficient == pytest.approx(static.shear / 5000.0, rel=1e-12)


@pytest.mark.parametrize("direction", ["x", "y"])
def test_relations_say_what_they_give(edition, building, worked, direction):
    facts = building(direction, period=0.7)
    static = edition.static(facts)
    relations = [edition.drift_limit(facts)[1]]
    if static is not None:
        relations += [*static.relations, *edition.distribution_relation(facts, static)]
    for relation in relations:
        assert worked(relation) == pytest.approx(relation.result.value, rel=1e-12), relation


def test_screens_stand_in_four_words_and_say_what_follows(edition, building):
    stiffness, drift = np.array([3e4, 9e4, 9e4]), np.array([0.06, 0.015, 0.01])
    screens = edition.irregularities(building(weight=(2000.0, 4000.0, 1000.0)), stiffness, drift)
    assert {s.verdict for s in screens} <= {"passes", "exceeds", "judgement", "not assessed"}
    for screen in screens:
        assert screen.text
        assert bool(screen.consequence) or screen.verdict in ("passes", "not assessed")


@pytest.mark.parametrize("period", [0.0, 0.01, 0.05, 0.1, 0.13, 0.3, 0.5, 0.67, 0.7, 1.2, 2.0, 3.5, 4.0, 5.0, 9.5])
@pytest.mark.parametrize("direction", ["x", "y"])
def test_the_ordinate_follows_from_its_relations(edition, worked, direction, period):
    points = getattr(edition, "points", ())
    if points and period > points[-1][0]:
        with pytest.raises(ModelError):
            edition.ordinate_relation(direction, period)
        return
    relations = edition.ordinate_relation(direction, period)
    for relation in relations:
        assert worked(relation) == pytest.approx(relation.result.value, rel=1e-12), relation
        assert with_clause(relation.clause)
    assert relations[-1].result.quantity == "acceleration"
    assert relations[-1].result.value == pytest.approx(edition.ordinates(direction, np.array([period]))[0], rel=1e-15)


def test_the_force_at_the_top_level_is_the_one_of_the_distribution(edition, building):
    facts = building(period=0.7)
    static = edition.static(facts)
    if static is None:
        with pytest.raises(ModelError, match="need a code edition"):
            edition.distribution_relation(facts, None)
        return
    assert edition.distribution_relation(facts, static)[-1].result.value == edition.distribution(facts, static)[0][-1]
