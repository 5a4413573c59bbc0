"""Views: their options, and what their tables hold."""

from __future__ import annotations

import re

import pytest

from calcsheet.render.registry import VIEWS
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.registry import STEPS


@pytest.fixture
def payloads(job_folder):
    def of(*card, keep=None, share=0.9, **how):
        job = Job(job_folder(card, **how))
        job.attach("modes", ModesOptions(keep=keep, share=share))
        job.attach("participation", ParticipationOptions())
        return job.payloads()

    return of


def html(payloads, name, **options):
    view = VIEWS[name]
    return view.render(payloads, view.step, view.chosen(options)).html


def test_every_view_shows_a_step_under_its_own_name():
    assert all(view.name == name and view.step in STEPS for name, view in VIEWS.items())


def test_options_are_chosen_by_name():
    view = VIEWS["mode plot"]
    assert view.chosen({}) == {"normalise": "largest", "values": "shown"}
    assert view.chosen({"values": "hidden"}) == {"normalise": "largest", "values": "hidden"}
    with pytest.raises(ValueError, match=re.escape("Mode shapes: no option 'scale'; it has normalise, values")):
        view.chosen({"scale": "roof"})
    with pytest.raises(ValueError, match=re.escape("Job card: no option 'scale'; it has none")):
        VIEWS["card"].chosen({"scale": "roof"})


def test_storeys_stand_roof_first(payloads, document):
    seen = document(html(payloads(), "storeys"))
    order = [int(at.rpartition("/")[2]) for at, _ in seen.numbers if at.startswith("/storeys/inputs/mass/")]
    assert order == [4, 3, 2, 1, 0]
    assert "stiffness x, cracked [kN/m]" in seen.words
    assert "serves forces; cracked beams" in seen.words
    assert "serves drifts; steel, gross sections" in seen.words


def test_what_lies_below_the_effective_base_is_listed_apart(payloads, document):
    seen = document(html(payloads(us=True), "storeys"))
    assert "Not in the model: at or below the effective base" in seen.words
    assert float(dict(seen.numbers)["/storeys/inputs/below/0/elevation"]) == 0.0


def test_modes_show_energy_when_asked(payloads, document):
    found = payloads()
    assert "Kinetic energy" not in html(found, "modes")
    seen = document(html(found, "modes", energy="shown"))
    shares = [float(t) for at, t in seen.numbers if re.fullmatch(r"/modes/result/models/0/modes/kinetic/\d/0", at)]
    assert len(shares) == 5
    assert sum(shares) == pytest.approx(100.0, abs=0.3)


def test_the_mode_that_reaches_the_target_is_marked(payloads, document):
    seen = document(html(payloads(), "participation"))
    rows = [attributes.get("class") for tag, attributes in seen.tags if tag == "tr"]
    assert rows.count("marked") == 2  # x and y
    needed = [int(text) for at, text in seen.numbers if at.endswith("/needed")]
    assert all(n == 2 for n in needed)
    assert "Modes 1 to 2 reach the target of 90.0" in " ".join(seen.words.split())


def test_a_target_that_is_not_reached_is_said(payloads, document):
    seen = document(html(payloads(keep=1, share=0.99), "participation"))
    assert "The modes kept do not reach 99.0" in " ".join(seen.words.split())
    assert not any(attributes.get("class") == "marked" for _, attributes in seen.tags)


def test_mode_one_alone(payloads, document):
    seen = document(html(payloads(share=0.5), "participation"))
    assert "Mode 1 alone reaches the target of 50.0" in " ".join(seen.words.split())


def test_evidence_in_short(payloads):
    found = payloads()
    assert '<span class="passes">passes</span>' in html(found, "modes")
    found["modes"]["evidence"][0] |= {"within": False}
    assert '<span class="exceeds">exceeds</span>' in html(found, "modes")


def test_the_card_leaves_out_what_is_blank(payloads, document):
    seen = document(html(payloads(('purpose = "Periods and shares of the frames."', 'purpose = ""')), "card"))
    assert "purpose" not in seen.words
    assert "prepared by" in seen.words
    assert "kN, m, t" in seen.words
