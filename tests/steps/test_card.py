"""The job card step: cautions that always hold, and what the card leaves open."""

from __future__ import annotations

import pytest

from calcsheet.steps.card import GENERAL, run


def raised(card) -> list[str]:
    """Keys of the cautions beyond the general ones."""
    general = [*(c.key for c in GENERAL), "no-demand"]  # none of these cards has a basis
    found = [c.key for c in run(card).cautions]
    assert found[: len(general)] == general
    return found[len(general) :]


def test_a_card_that_leaves_nothing_open(card_with):
    assert raised(card_with()) == []
    assert run(card_with()).result.to_confirm == ()


def test_general_cautions_ask_for_no_answer_and_hold_no_numbers():
    assert len({c.key for c in GENERAL}) == len(GENERAL)
    assert not any(c.answer or c.numbers for c in GENERAL)
    assert all(c.text.format() == c.text for c in GENERAL)


def test_an_assumption_to_be_confirmed(card_with):
    text = 'text = "Fixed at the raft"'
    card = card_with((text, f'{text}\nconfirm_by = "the {{ground}} engineer"'))
    assert raised(card) == ["to-confirm-1"]
    assert run(card).result.to_confirm == (1,)
    assert "the {ground} engineer" in run(card).cautions[-1].text.format()


@pytest.mark.parametrize(
    "origin", ["", '"storeys.csv" = { source = " ", revision = "B" }', '"masses.csv" = { source = "a" }']
)
def test_a_table_of_unstated_origin_asks_for_an_answer(card_with, origin):
    card = card_with(('"storeys.csv" = { source = "mass take-off" }', origin))
    assert raised(card) == ["no-origin-storeys.csv"]
    assert run(card).cautions[-1].answer


def test_a_matrix_of_unstated_origin(card_with):
    kind = 'kind = "storey chain"'
    card = card_with((kind, 'kind = "stiffness matrix"\nx = "k_x.csv"\ny = "k_y.csv"'))
    assert raised(card) == ["no-origin-k_x.csv", "no-origin-k_y.csv"]


def test_a_stiffness_set_without_a_ground_asks_for_an_answer(card_with):
    card = card_with(('ground = "steel sections as drawn"', 'ground = " "'))
    assert raised(card) == ["no-ground-gross", "uncracked-gross"]  # all that is known of it is its name
    assert all(c.answer for c in run(card).cautions[-2:])


def test_braces_in_a_set_name_are_words(card_with):
    card = card_with(
        ("[stiffness.gross]", '[stiffness."{0}"]'),
        ('ground = "steel sections as drawn"', 'ground = ""'),
        ('forces = "gross"', 'forces = "{0}"'),
        ('drifts = "gross"', 'drifts = "{0}"'),
    )
    assert raised(card) == ["no-ground-{0}"]
    assert 'set "{0}"' in run(card).cautions[-1].text.format()


def texts(card) -> dict[str, str]:
    return {c.key: c.text for c in run(card).cautions}


def test_general_cautions_fit_the_model(card_with):
    planar, floors = card_with(), card_with(('kind = "storey chain"', 'kind = "rigid floors"'))
    assert "without torsion" in texts(planar)["rigid-floors"]
    assert "analysed together" in texts(floors)["rigid-floors"]
    assert "torsion of the plan" not in texts(floors)["left-out"]
    assert {"no-origin-lines.csv", "no-origin-plan.csv"} <= texts(floors).keys()
    assert list(texts(floors))[: len(GENERAL)] == [c.key for c in GENERAL]


def test_a_base_on_springs_is_not_called_fixed(card_with):
    one = card_with(("[model]", "[base]\nrocking_x = 1e6\n[model]"))
    assert texts(one)["fixed-base"].startswith(
        "In y the effective base is taken as fixed. Springs at the base are linear"
    )
    both = card_with(("[model]", "[base]\nrocking_x = 1e6\ntranslation_y = 1e5\n[model]"))
    assert texts(both)["fixed-base"].startswith("Springs at the base are linear")


@pytest.mark.parametrize(
    ("name", "given", "key"),
    [
        ("gross", 'factor = 1.0\nground = "concrete, as drawn"', "uncracked-gross"),
        ("frames", 'factor = 1.0\nground = "Uncracked sections"', "uncracked-frames"),
        ("frames", 'factor = 1.0\nground = "walls not cracked under service wind"', "uncracked-frames"),
        ("frames", 'own = true\nground = "gross concrete sections"', "uncracked-frames"),
        ("frames", 'factor_x = 0.5\nfactor_y = 1.0\nground = "gross concrete sections"', "uncracked-frames"),
        ("frames", 'factor = 1.0\nground = "concrete, as drawn"', "cracking-unstated-frames"),
        ("frames", 'factor = 1.0\nground = "reinforcing steel and concrete, transformed"', "cracking-unstated-frames"),
        ("frames", 'factor = 1.0\nground = "concrete, cracked by two cycles to yield"', None),
        ("frames", 'factor = 0.5\nground = "half of the gross stiffness"', None),
        ("frames", 'own = true\nground = "analysis of the frames"', None),
        ("gross", 'factor = 1.0\nground = "bare steel"', None),
    ],
)
def test_what_a_set_says_of_cracking(card_with, name, given, key):
    card = card_with(
        ('[stiffness.gross]\nfactor = 1.0\nground = "steel sections as drawn"', f"[stiffness.{name}]\n{given}"),
        ('forces = "gross"', f'forces = "{name}"'),
        ('drifts = "gross"', f'drifts = "{name}"'),
    )
    assert raised(card) == ([] if key is None else [key])
    if key:
        caution = run(card).cautions[-1]
        assert caution.answer is key.startswith("uncracked")  # where nothing is said it may well be cracked
        assert f'set "{name}" serves forces and drifts' in caution.text


def test_a_set_that_serves_nothing_may_be_uncracked(card_with):
    unused = '[stiffness.wind]\nfactor = 1.0\nground = "uncracked concrete"\n'
    assert raised(card_with(("[serves]", f"{unused}[serves]"))) == []
    assert raised(card_with(("[serves]", f"{unused}[serves]"), ('drifts = "gross"', 'drifts = "wind"'))) == [
        "uncracked-wind"
    ]
