"""Figures: the same bytes on every run, text that stays text, words for who can't see."""

from __future__ import annotations

import threading
from xml.etree import ElementTree

import matplotlib
import pytest

from calcsheet.render.registry import VIEWS
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions

SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture
def payloads(job_folder):
    def of(**how):
        job = Job(job_folder(**how))
        job.attach("modes", ModesOptions())
        job.attach("participation", ParticipationOptions())
        return job.payloads()

    return of


def drawn(payloads, name="mode plot", key="modes", **options):
    view = VIEWS[name]
    return view.render(payloads, key, view.chosen(options)).draw()


def texts(drawing):
    return ["".join(e.itertext()) for e in ElementTree.fromstring(drawing.svg).iter(f"{SVG}text")]


def test_drawn_twice_they_are_the_same(payloads):
    found = payloads()
    for name, key in (("mode plot", "modes"), ("participation", "participation")):
        assert drawn(found, name, key) == drawn(found, name, key)


def test_their_text_stays_text(payloads):
    found = payloads()
    x, y = drawn(found)
    assert [d.name for d in (x, y)] == ["shapes-x", "shapes-y"]
    assert any(text.startswith("mode 1") for text in texts(x))
    (shares,) = drawn(found, "participation", "participation")
    assert "share of the mass [%]" in texts(shares)
    assert "target 90 %" in texts(shares)


def test_shapes_are_labelled_with_their_periods(payloads):
    found = payloads()
    period = found["modes"]["result"]["models"][0]["modes"]["period"]
    drawing = drawn(found)[0]
    assert 1.0 < period[0] < 10.0
    assert f"T = {period[0]:.2f} s" in "\n".join(texts(drawing))
    assert f"mode 1, {period[0]:.2f} s" in drawing.alt


def test_they_have_a_title_and_words(payloads):
    found = payloads()
    for drawing in (*drawn(found), *drawn(found, "participation", "participation")):
        root = ElementTree.fromstring(drawing.svg)
        assert root.attrib["role"] == "img"
        assert root[0].tag == f"{SVG}title"
        assert root[0].text == drawing.caption
        assert len(drawing.alt) > len(drawing.caption)
        assert not list(root.iter(f"{SVG}script"))


def test_hostile_level_names_are_drawn_as_they_are(payloads):
    name = '<b>"$\\frac$'
    found = payloads(storeys=[("Roof,", '"' + name.replace('"', '""') + '",')])
    assert any(name in text for text in texts(drawn(found)[0]))


def test_elevations_in_the_jobs_units(payloads):
    labels = texts(drawn(payloads(us=True))[0])
    assert "level, elevation [ft]" in labels
    assert any(text.startswith("Plaza") for text in labels)
    assert any(text.startswith("Roof") and text.endswith("62.50") for text in labels)


@pytest.mark.parametrize("normalise", ["largest", "roof", "mass"])
def test_every_scale_draws(payloads, normalise):
    drawings = drawn(payloads(), normalise=normalise)
    assert len(drawings) == 2


def test_drawing_leaves_the_style_of_others_alone(payloads):
    found = payloads()
    with matplotlib.rc_context({"font.size": 17.0, "svg.fonttype": "path"}):
        here = drawn(found, "participation", "participation")
        assert matplotlib.rcParams["font.size"] == 17.0
        assert matplotlib.rcParams["svg.fonttype"] == "path"
    assert here == drawn(found, "participation", "participation")


def test_threads_draw_the_same(payloads):
    found = payloads()
    alone, together = drawn(found), []
    threads = [threading.Thread(target=lambda: together.append(drawn(found)), daemon=True) for _ in range(3)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join(60)
    assert together == [alone] * 3
