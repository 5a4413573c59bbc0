"""Two calculations compared, on cases made by hand."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from calcsheet.steps.compare import Changes, Facts, compared, facts_of, placed
from calcsheet.steps.graph import Job
from calcsheet.steps.serial import from_json, to_json

INSERTED = ("3,3.3,244.25,152000,141000", "3,3.3,244.25,152000,141000\n2M,3.1,198.5,149000,137500")


@pytest.fixture
def facts(job_folder, chain):
    """Facts of the five-storey job, pieces of its card and table replaced."""
    made = []

    def build(card=(), storeys=(), keep=None):
        made.append(Job(job_folder(card, storeys, name=f"job {len(made)}")))
        return facts_of(chain(made[-1], keep).payloads())

    return build


def flips(changes):
    return {c.one.key: (c.before and c.before.word, c.now and c.now.word) for c in changes.conclusions}


def change(changes, key):
    return next(h for h in changes.headlines if h.one.key == key).change


def whole(value):
    """Plain JSON as a program writes it that knows no difference between 1.0 and 1."""
    if isinstance(value, dict):
        return {k: whole(v) for k, v in value.items()}
    if isinstance(value, list):
        return [whole(v) for v in value]
    return int(value) if isinstance(value, float) and value.is_integer() else value


def test_the_same_is_the_same(facts):
    changes = compared(facts(), facts())
    assert changes.same
    assert changes.same_inputs
    assert changes.conclusions == ()
    assert all(h.same and h.change == 0.0 for h in changes.headlines)


def test_one_and_one_point_nought_are_one(job_folder, chain):
    payloads = chain(Job(job_folder())).payloads()
    plain = whole(payloads)
    assert isinstance(plain["storeys"]["inputs"]["mass"][4], float)  # 141.5
    assert isinstance(plain["storeys"]["inputs"]["mass"][3], int)  # 236
    assert compared(facts_of(payloads), facts_of(plain)).same
    assert compared(facts_of(plain), facts_of(payloads)).same


def test_twelve_digits_count(job_folder, chain):
    payloads = chain(Job(job_folder())).payloads()

    def with_mass(factor):
        storeys = payloads["storeys"]
        mass = [m * factor for m in storeys["inputs"]["mass"]]
        return facts_of({**payloads, "storeys": {**storeys, "inputs": {**storeys["inputs"], "mass": mass}}})

    before = facts_of(payloads)
    assert compared(before, with_mass(1.0 + 1e-13)).same_inputs
    assert len(compared(before, with_mass(1.0 + 1e-11)).inputs) == 5


def test_revised_masses_on_three_storeys(facts):
    revised = [("4,3.3,236,", "4,3.3,250,"), ("3,3.3,244.25,", "3,3.3,254.25,"), ("2,3.65,251,", "2,3.65,260,")]
    changes = compared(facts(), facts(storeys=revised))
    found = {(c.one.level, c.one.key): (c.before.number, c.now.number) for c in changes.inputs}
    assert found == {
        ("4", "mass"): (236.0, 250.0),
        ("3", "mass"): (244.25, 254.25),
        ("2", "mass"): (251.0, 260.0),
    }
    assert (changes.added, changes.removed, changes.reordered) == ((), (), False)
    before = 141.5 + 236 + 244.25 + 251 + 268.75
    assert change(changes, "storeys/mass") == pytest.approx((14 + 10 + 9) / before, rel=1e-12)
    assert change(changes, "storeys/weight") == pytest.approx((14 + 10 + 9) / before, rel=1e-12)
    assert 0.0 < change(changes, "modes/first period/x") < (14 + 10 + 9) / before  # T goes with √m
    assert change(changes, "storeys/height") == 0.0


def test_all_masses_by_a_factor(demand_job):
    """K φ = ω² M φ: with all masses by 1.21 periods are by 1.1, shares as they were."""
    table = (
        "level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]\n"
        "Roof,3,{},50000,80000,950\n1,4,{},100000,160000,1950\n"
    )
    before = facts_of(demand_job("EN", storeys=table.format(100, 200)).payloads())
    now = facts_of(demand_job("EN", storeys=table.format(121, 242), name="heavier").payloads())
    changes = compared(before, now)
    assert change(changes, "modes/first period/x") == pytest.approx(0.1, rel=1e-9)
    assert change(changes, "modes/first frequency/x") == pytest.approx(1 / 1.1 - 1, rel=1e-9)
    shares = [h for h in changes.headlines if "share" in h.one.key and "participation" in h.one.key]
    assert len(shares) == 4
    assert all(h.same for h in shares)


def test_a_share_beyond_what_can_be_calculated_is_none(demand_job):
    before = facts_of(demand_job("EN").payloads())
    tiny, huge = (replace(before, headlines=(replace(before.headlines[0], value=value),)) for value in (1e-200, 1e200))
    (found,) = compared(tiny, huge).headlines
    assert (found.change, found.same) == (None, False)


def test_a_limit_newly_exceeded(demand_job):
    before = facts_of(demand_job("EN").payloads())
    now = facts_of(demand_job("EN", ("ground_acceleration = 0.2", "ground_acceleration = 0.7"), name="more").payloads())
    changes = compared(before, now)
    assert flips(changes)["drift/limit/x"] == ("passes", "exceeds")
    (given,) = changes.inputs
    assert (given.one.key, given.before.number, given.now.number) == ("basis.ground_acceleration", 0.2, 0.7)
    assert change(changes, "demand/ordinate/x") == pytest.approx(2.5, rel=1e-9)  # both on the plateau: goes with a_g


def test_more_modes_needed(demand_job):
    """Masses 2m, m on 2k, k have 8/9 of the mass in mode 1; below a target of 0.88, not of 0.9."""
    from calcsheet.steps.modes import ModesOptions

    job = demand_job("EN")
    job.attach("modes", ModesOptions(share=0.88))
    before = facts_of(job.payloads())
    job.attach("modes", ModesOptions(share=0.9))
    changes = compared(before, facts_of(job.payloads()))
    found = flips(changes)
    for direction in "xy":
        assert found[f"participation/modes needed/{direction}"] == ("1", "2")
    assert {c.one.key for c in changes.inputs} == {"modes.share"}
    needed = next(h for h in changes.headlines if h.one.key == "participation/modes needed/x")
    assert (needed.before.value, needed.now.value) == (1, 2)


def test_a_target_no_longer_reached(demand_job):
    job = demand_job("EN")
    before = facts_of(job.payloads())
    now = facts_of(demand_job("EN", keep=1, name="one").payloads())
    assert flips(compared(before, now))["participation/target/x"] == ("reached", "not reached")


def test_another_bound_governs(demand_job):
    """Height 7 m, concrete frame: T_a = 0.0466 · 7^0.9 = 0.2685 s, C_u T_a = 0.3759 s, below T₁ = 0.3974 s. C_s = S_D1/(T R):
    0.6/(0.3759 · 8) = 0.200 above S_DS/R = 0.125, which governs; 0.3/(0.3759 · 8) = 0.0998 below it, and governs itself
    (ASCE/SEI 7-16, 12.8.1.1, 12.8.2.1; C_u = 1.4 at both, Table 12.8-1; from memory)."""
    before = facts_of(demand_job("7-16").payloads())
    now = facts_of(demand_job("7-16", ("s_d1 = 0.6", "s_d1 = 0.3"), name="less").payloads())
    changes = compared(before, now)
    was, is_now = flips(changes)["demand/static governed/x"]
    assert was != is_now
    assert is_now == "S_D1/(T R/I_e)"
    period = 1.4 * 0.0466 * 7.0**0.9
    assert period < 2 * math.pi / math.sqrt(250.0)
    assert change(changes, "actions/static/x") == pytest.approx(0.3 / (period * 8.0) / 0.125 - 1.0, rel=1e-9)


def test_an_inserted_level_is_one_level_inserted(facts):
    changes = compared(facts(), facts(storeys=[INSERTED]))
    assert changes.added == ("2M",)
    assert changes.removed == ()
    assert not changes.reordered
    assert {c.one.level for c in changes.inputs} == {"2M"}
    assert all(c.before is None for c in changes.inputs)
    assert changes.levels == ("1", "2", "2M", "3", "4", "Roof")
    back = compared(facts(storeys=[INSERTED]), facts())
    assert back.removed == ("2M",)
    assert back.levels == ("1", "2", "2M", "3", "4", "Roof")
    assert all(c.now is None and c.one.level == "2M" for c in back.inputs)


def test_a_renamed_level_is_removed_and_added(facts):
    changes = compared(facts(), facts(storeys=[("\n3,", "\nThird,")]))
    assert (changes.added, changes.removed) == (("Third",), ("3",))
    assert changes.levels in [("1", "2", "3", "Third", "4", "Roof"), ("1", "2", "Third", "3", "4", "Roof")]


def test_levels_in_another_order_are_a_change(facts):
    rows = "4,3.3,236,139500,128000", "3,3.3,244.25,152000,141000"
    swapped = compared(facts(), facts(storeys=[("\n".join(rows), "\n".join(rows[::-1]))]))
    assert swapped.reordered
    assert swapped.inputs == ()
    assert not swapped.same_inputs
    assert not swapped.same


def test_texts_added_changed_and_removed(facts):
    card = [
        ('ground = "cracked beams"', 'ground = "beams cracked by test"'),
        ('text = "Floors are rigid."', 'text = "Floors are stiff."'),
    ]
    found = {
        c.one.key: (c.before and c.before.text, c.now and c.now.text) for c in compared(facts(), facts(card)).inputs
    }
    assert found == {
        "stiffness.cracked.ground": ("cracked beams", "beams cracked by test"),
        'assumptions."Floors are stiff."': (None, "stated"),
        'assumptions."Floors are stiff.".ground': (None, "solid slabs"),
        'assumptions."Floors are rigid."': ("stated", None),
        'assumptions."Floors are rigid.".ground': ("solid slabs", None),
    }


def test_revision_date_people_and_answers_are_no_inputs(facts):
    card = [
        ('revision = "A"', 'revision = "B"'),
        ("date = 2026-03-09", "date = 2026-04-01"),
        ('reason = "First issue"', 'reason = "Masses revised"'),
        ('name = "Remy Aalto"', 'name = "Ada Voss"'),
    ]
    assert compared(facts(), facts(card)).same


def test_steps_that_came_and_went(demand_job):
    payloads = demand_job("EN").payloads()
    fewer = {k: p for k, p in payloads.items() if k not in ("drift", "actions")}
    changes = compared(facts_of(fewer), facts_of(payloads))
    assert flips(changes)["drift/limit/x"] == (None, "passes")
    assert change(changes, "actions/design/x") is None
    assert flips(compared(facts_of(payloads), facts_of(fewer)))["drift/limit/x"] == ("passes", None)


def test_results_of_another_machine_are_the_same_results(facts):
    before = facts()
    headlines = [{**to_json(h), "value": h.value * (1 + 1e-11)} for h in before.headlines]
    now = from_json(Facts, to_json(before) | {"headlines": headlines})
    assert compared(before, now).same


def test_facts_and_changes_are_plain_json(facts):
    before, now = facts(), facts(storeys=[INSERTED])
    assert from_json(Facts, to_json(now)) == now
    changes = compared(before, now)
    assert from_json(Changes, to_json(changes)) == changes


def test_the_earlier_revision_is_no_fact(demand_job):
    from calcsheet.steps.earlier import NOTHING

    job = demand_job("EN")
    before = facts_of(job.payloads())
    job.attach("earlier", NOTHING)
    assert facts_of(job.payloads()) == before


def test_stored_facts_point_to_themselves(facts):
    kept = placed(facts(), "/earlier/inputs/facts")
    data = to_json(kept)
    for name, place in (("inputs", "inputs"), ("headlines", "headlines")):
        for fact in getattr(kept, name):
            *_, i, leaf = fact.at.split("/")
            assert fact.at == f"/earlier/inputs/facts/{place}/{i}/{leaf}"
            value = data[place][int(i)][leaf]
            assert value == (fact.value if name == "headlines" else fact.text if fact.number is None else fact.number)
