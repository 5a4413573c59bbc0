"""Twins as an untrusted notebook shows them: without style sheet, script or SVG."""

from __future__ import annotations

import base64
import re

import pytest

from calcsheet.blocks.twin import MIME

STRIPPED = re.compile(r"<(style|script|svg|math)\b.*?</\1>", re.DOTALL)


@pytest.fixture
def twins(static, in_folder, cells):
    for i, source in enumerate(cells):
        static.run(source, str(i))
    return [static.twin(str(i)) for i in range(1, len(cells))]


def test_they_read_without_style_script_and_svg(twins, document):
    for twin in twins:
        html = STRIPPED.sub("", twin["text/html"])
        seen = document(html)
        tags = {tag for tag, _ in seen.tags}
        assert not tags & {"style", "script", "svg", "math", "link", "iframe"}
        assert not any(name.startswith("on") for _, attributes in seen.tags for name in attributes)
        assert "style" not in {name for _, attributes in seen.tags for name in attributes}


def test_numbers_are_plain_text_in_tables(twins, document):
    _, storeys, modes, plot, participation = (document(STRIPPED.sub("", t["text/html"])) for t in twins)
    for seen, pointer in (
        (storeys, "/storeys/inputs/mass/0"),
        (modes, "/modes/result/models/0/modes/period/0"),
        (plot, "/modes/result/models/1/modes/psi/4/0"),
        (participation, "/participation/result/directions/1/share/0"),
    ):
        shown = dict(seen.numbers)[pointer]
        assert re.fullmatch(r"\u2212?\d[\d\s]*(\.\d+)?", shown), pointer


def test_figures_are_images_with_words(twins, document):
    for twin, count in zip(twins, (0, 0, 0, 2, 1), strict=True):
        images = [attributes for tag, attributes in document(twin["text/html"]).tags if tag == "img"]
        assert len(images) == count
        for image in images:
            assert len(image["alt"]) > 40
            kind, data = image["src"].split(",", 1)
            assert kind == "data:image/svg+xml;base64"
            assert base64.b64decode(data).startswith(b"<svg ")
        assert "<svg" not in twin["text/html"]


def test_only_the_first_carries_a_style_sheet(twins):
    assert ["<style>" in twin["text/html"] for twin in twins] == [True, False, False, False, False]


def test_their_plain_text_says_what_they_are(twins):
    assert [twin["text/plain"].endswith(" (ok)") for twin in twins] == [True] * 5
    assert [twin[MIME]["view"] for twin in twins] == ["card", "storeys", "modes", "mode plot", "participation"]


def test_hostile_names_stay_text(static, job_folder, monkeypatch, cells, document):
    name = "<b>\"'{0}{} & $x_$"
    folder = job_folder(storeys=[("Roof,", '"' + name.replace('"', '""') + '",')])
    monkeypatch.chdir(folder)
    for i, source in enumerate(cells):
        static.run(source, str(i))
    for i in range(1, len(cells)):
        seen = document(static.twin(str(i))["text/html"])
        assert not any(tag == "b" for tag, _ in seen.tags)
        assert static.twin(str(i))["text/plain"].endswith(" (ok)")
    assert name in document(static.twin("2")["text/html"]).words
    static.run(f'storeys.set({name!r}, "mass", -1)', "edit")
    seen = document(static.twin("5")["text/html"])
    assert f'level "{name}": mass -1 t' in seen.words
