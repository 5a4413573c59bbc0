"""Records of invented jobs: their order, their numbers, nothing from outside."""

from __future__ import annotations

import json
import re
from hashlib import sha256

import pytest

from calcsheet.record.collect import collect
from calcsheet.record.document import page_of, record_of
from calcsheet.record.errors import RecordError
from calcsheet.record.files import html_of
from calcsheet.record.page import render_page
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.replay import replay

KIP, FOOT = 4.4482216152605, 0.3048  # kN and m, exact by definition
# What each field of a payload holds, by its name.
QUANTITY = {
    "mass": "mass mass_above total_mass effective_mass first_mass first_excitation",
    "length": "elevation base_elevation storey_height height effective_height",
    "weight": "weight weight_above weight_of_level",
    "stiffness": "storey",
    "period": "period",
    "frequency": "frequency",
    "circular frequency": "omega rayleigh dunkerley",
    "modal energy": "strain_energy",
    "share": "kinetic strain share cumulative target energy",
    "ratio": "gamma_roof",
    "normalised shape": "psi",
    "inertia": "inertia",
    "work": "work",
}
FIELD = {name: quantity for quantity, names in QUANTITY.items() for name in names.split()}
# Core units (m, kN, t, s) in one unit shown.
ONE = {
    "SI": {"share": 0.01},
    "US": {
        "share": 0.01,
        "mass": KIP / FOOT,
        "length": FOOT,
        "weight": KIP,
        "stiffness": KIP / FOOT * 12,
        "normalised shape": (KIP / FOOT) ** -0.5,
        "inertia": KIP * FOOT,
        "work": KIP * FOOT,
    },
}


def resolve(payloads, pointer):
    found = payloads
    for part in pointer.removeprefix("/").split("/"):
        found = found[int(part)] if isinstance(found, list) else found[part.replace("~1", "/").replace("~0", "~")]
    return found


def parsed(shown):
    """A printed number: its value and the value of one in its last place."""
    shown = re.sub(r"[\s\u2009\u202f]", "", shown).replace("\u2212", "-")
    mantissa, _, power = shown.partition("·10^")
    scale = 10.0 ** int(power or 0)
    return float(mantissa) * scale, 10.0 ** -len(mantissa.partition(".")[2]) * scale


def assert_numbers_hold(seen, payloads, system):
    for pointer, shown in seen.numbers:
        core = resolve(payloads, pointer)
        field = next(part for part in reversed(pointer.split("/")) if not part.isdigit())
        number, last = parsed(shown)
        if field in ("value", "limit"):  # evidence: two digits
            assert number == pytest.approx(core, abs=0.5 * last * 1.001), pointer
        elif field == "needed":
            assert number == core
        elif field == "matrix":
            one = 0.001 if resolve(payloads, pointer.split("/matrix")[0])["kind"] == "flexibility matrix" else 1.0
            assert abs(core / one - number) <= 0.5 * last * (1 + 1e-9), pointer
        else:
            one = ONE[system].get(FIELD[field], 1.0)
            # half of one in the last place, and a rounding error of the tie
            assert abs(core / one - number) <= 0.5 * last * (1 + 1e-9), (pointer, shown, core / one)


@pytest.fixture
def record(static, job_folder, monkeypatch, calculation):
    """Content, HTML and payloads of a job's record."""

    def make(*card, us=False, storeys=(), sources=calculation, paper="a4", files=None):
        folder = job_folder(card, storeys, us=us, files=files)
        monkeypatch.chdir(folder)
        content = collect(static.executed(sources))
        return content, html_of(record_of(content, paper))

    return make


@pytest.mark.parametrize("us", [False, True], ids=["SI", "US"])
def test_every_number_is_the_right_rounding_of_its_payload(record, document, us):
    content, html = record(us=us)
    seen = document(html)
    assert_numbers_hold(seen, content.payloads, "US" if us else "SI")
    # and the numbers that matter are there
    printed = {re.sub(r"\d+", "#", pointer) for pointer, _ in seen.numbers}
    for pointer in (
        "/storeys/inputs/mass/#" if not us else "/storeys/result/mass",
        "/storeys/inputs/stiffness/#/lateral/x/storey/#",
        "/modes/result/models/#/modes/period/#",
        "/modes/result/models/#/modes/psi/#/#",
        "/modes/result/models/#/bounds/rayleigh",
        "/modes/evidence/#/value",
        "/participation/result/directions/#/effective_mass/#",
        "/participation/result/directions/#/cumulative/#",
        "/participation/result/directions/#/needed",
        "/participation/result/directions/#/first_excitation",
    ):
        assert pointer in printed, pointer


def test_units_stand_in_the_headings(record, document):
    si = document(record()[1]).words
    assert "mass [t]" in si
    assert "stiffness x, gross [kN/m]" in si
    assert "period T [s]" in si
    for word in ("kip", "[ft]"):
        assert word not in si


def test_a_us_job_in_us_units_on_letter(record, document):
    _, html = record(us=True, paper="letter")
    seen = document(html).words
    assert "size: letter" in html
    assert "kip/in]" in seen
    assert "elevation [ft]" in seen
    assert "Plaza" in seen
    for word in ("[t]", "kN", "[m]"):
        assert word not in seen


def test_sections_stand_in_order(record, document):
    seen = document(record()[1])
    expected = [
        "Modes of the frames",  # cover
        "Headline results",
        "Contents",
        "Purpose",  # the engineer's own words, where they stood
        "Limits",
        "Job card",
        "Storey table",
        "Conclusions",
        "Evidence",
        "Assumptions",
        "Cautions",
        "Complete inputs",
        "Versions and fingerprints",
    ]
    places = [seen.headings.index(heading) for heading in expected]
    assert places == sorted(places)
    assert [h for h in seen.headings if h.startswith("Method")] == ["Method: natural modes", "Method: participation"]
    assert [h for h in seen.headings if h.startswith("Worked lines")] == [
        "Worked lines: natural modes",
        "Worked lines: participation",
    ]


def test_the_cover_names_who_and_what(record, document):
    seen = document(record()[1])
    for words in ("Heron Row", "HR/S 21", "9 March 2026", "First issue", "Odile Quist", "Remy Aalto", "FOR CHECKING"):
        assert words in seen.words
    assert "DRAFT" not in seen.words
    assert "not assessed" in seen.words


def test_nothing_outside_is_referred_to_and_the_only_script_is_data(record, document):
    hostile = (
        'from IPython.display import HTML\nHTML(\'<script src="https://example.org/x.js"></script>'
        '<img src="https://example.org/x.png" onerror="x()"><p style="background:url(//example.org/y)">said</p>\')'
    )
    words = (
        '# More\n\n<script>alert(1)</script>\n\n![plan](https://example.org/plan.png)\n\n<img src="x" onerror="x()">'
    )
    _, html = record(sources=(*calculation_cells(keep=2), hostile, words))
    seen = document(html)
    scripts = [attributes for tag, attributes in seen.tags if tag == "script"]
    assert scripts == [{"type": "application/json", "id": "calcsheet-data"}]
    assert not any(name.startswith("on") for _, attributes in seen.tags for name in attributes)
    for tag, attributes in seen.tags:
        assert tag not in ("link", "iframe", "object", "embed", "base", "form")
        for name in ("src", "href", "xlink:href", "action"):
            assert (attributes.get(name) or "#").startswith(("#", "data:")), attributes
    styles = re.findall(r"<style[^>]*>(.*?)</style>", html, re.DOTALL) + [a.get("style") or "" for _, a in seen.tags]
    for style in styles:
        assert "@import" not in style
        assert all(url.startswith(("data:", "#")) for url in re.findall(r"url\([\"']?([^)\"']+)", style))
    assert "said" in seen.words
    assert "not replayed" in seen.words
    assert "is not part of this document: https://example.org/plan.png" in seen.words


def test_the_data_are_the_record(record, document):
    content, html = record()
    embedded = json.loads(document(html).script)
    assert embedded == record_of(content)
    assert replay(embedded["payloads"]) == []
    assert [next(iter(part)) for part in embedded["notebook"]] == ["words", *["view"] * 5, "words"]
    assert embedded["status"] == "FOR CHECKING"
    assert {"calcsheet", "Python", "numpy", "scipy"} <= set(embedded["versions"])


def test_a_draft_says_why_and_is_marked_on_every_page(record, document):
    _, html = record(('initials = "OQ"\ndate = 2026-03-09', 'initials = "OQ"'), ('source = "take-off"', 'source = ""'))
    seen = document(html)
    assert "DRAFT" in seen.words
    assert "not signed by who prepared it: people.prepared has no date" in seen.words
    assert "cautions that need an answer: no-origin-storeys.csv" in seen.words
    assert ("div", {"class": "watermark"}) in seen.tags


def test_who_checks_and_approves_signs_the_issued_record(record, document):
    _, html = record(('initials = "RA"', 'initials = "RA"\ndate = 2026-03-10'))
    assert "10 March 2026" not in document(html).words


def test_cautions_with_their_answers_are_shown(record, document):
    no_ground = 'Stiffness set "cracked": the ground of its values is not stated.'
    content, html = record(
        ('ground = "cracked beams"', 'ground = ""'),
        (
            "[answers]",
            '[answers."no-ground-cracked"]\ntext = "From the <tests> of 2025."\nby = "O. Quist"\ndate = 2026-03-09\n'
            f'finding = "{sha256(no_ground.encode()).hexdigest()[:8]}"',
        ),
        sources=("# W", *calculation_cells(keep=1)),
    )
    seen = document(html).words
    for payload in content.payloads.values():
        for caution in payload["cautions"]:
            start = caution["text"].split("{")[0].replace("{{", "{")
            assert " ".join(start.split()) in " ".join(seen.split()), caution["kind"]
    assert "Answer: From the <tests> of 2025. (O. Quist, 2026-03-09)" in seen
    assert seen.count("Needs an answer. In ") == seen.count("Checker: \u2013") - 1 == 2
    assert "To be answered under answers.target-not-reached-x, finding " in seen
    assert "qualified engineer" in seen


def calculation_cells(keep):
    return (
        "from calcsheet import *",
        'job = JobCard(".")\njob',
        "storeys = StoreyTable(job)\nstoreys",
        f"modes = ModeSolver(storeys, keep={keep})\nmodes",
        "ParticipationSummary(modes)",
    )


def test_inputs_are_complete(record, document):
    seen = document(record()[1])
    pointers = {pointer for pointer, _ in seen.numbers}
    for i in range(5):
        assert f"/storeys/inputs/mass/{i}" in pointers
        assert f"/storeys/inputs/storey_height/{i}" in pointers
        for s in (0, 1):
            for d in "xy":
                assert f"/storeys/inputs/stiffness/{s}/lateral/{d}/storey/{i}" in pointers
    shown = {re.sub(r"\s", "", text) for pointer, text in seen.numbers if "/inputs/mass/" in pointer}
    assert shown >= {"141.50", "236.00", "244.25"}  # every digit that was given
    for words in ("gross sections", "cracked beams", "take-off", "Floors are rigid.", "solid slabs"):
        assert words in seen.words


def test_hostile_names_stay_text(record, document):
    name = "<b>\"'{0}{} & $x_$ $\\frac$"
    content, html = record(
        ('text = "Floors are rigid."', "text = '<i>{1}</i>'"),
        ('project = "Heron Row"', "project = '</style><b>Row'"),
        storeys=[("Roof,", '"' + name.replace('"', '""') + '",')],
    )
    seen = document(html)
    assert not any(tag in ("b", "i") and not attributes for tag, attributes in seen.tags if tag == "i")
    assert name in seen.words
    assert "<i>{1}</i>" in seen.words
    assert "</style><b>Row" in seen.words
    assert_numbers_hold(seen, content.payloads, "SI")
    assert json.loads(seen.script) == record_of(content)


def test_a_second_solver_has_its_own_numbers(record, document):
    content, html = record(
        sources=(
            *calculation_cells(keep=3),
            'stiff = ModeSolver(storeys, stiffness="gross", name="stiff.modes 2")\nstiff',
            "ParticipationSummary(stiff)",
        )
    )
    seen = document(html)
    assert_numbers_hold(seen, content.payloads, "SI")
    assert any(pointer.startswith("/stiff.modes 2/result") for pointer, _ in seen.numbers)
    assert any(pointer.startswith("/participation of stiff.modes 2/") for pointer, _ in seen.numbers)


def test_an_equation_that_cannot_be_set_names_its_cell(record):
    with pytest.raises(RecordError, match=r"\\nonsense.*in the markdown cell that begins \"# Bad\""):
        record(sources=("# Bad\n\n$\\nonsense{x}$", *calculation_cells(keep=2)))


def test_paper_and_screen_hold_the_same_numbers(record, document):
    content, html = record()
    paper = render_page(page_of(record_of(content, engine="Engine 1"), "pdf"), "pdf", "a4")
    assert document(paper).numbers == document(html).numbers
    assert document(paper).script == ""
    assert "<math" in html
    assert "<math" not in paper


# ---- given matrices ----------------------------------------------------------------------------------------------------


STIFFNESS = """\
[kN/m],Roof,4,3,2,1
Roof,88000,-88000,0,0,0
4,-88000,227500,-139500,0,0
3,0,-139500,291500,-152000,0
2,0,0,-152000,312500,-160500
1,0,0,0,-160500,331500
"""


def flexibility():
    """Flexibility [mm/kN] of the storeys' stiffnesses in x: base first."""
    springs = [171000, 160500, 152000, 139500, 88000]
    names = ["1", "2", "3", "4", "Roof"]
    sums = [sum(1000.0 / k for k in springs[: i + 1]) for i in range(5)]
    rows = [[names[i], *(repr(sums[min(i, j)]) for j in range(5))] for i in range(5)]
    return "\n".join(",".join(row) for row in [["[mm/kN]", *names], *rows]) + "\n"


@pytest.mark.parametrize(("kind", "text"), [("stiffness matrix", STIFFNESS), ("flexibility matrix", flexibility())])
def test_a_given_matrix_from_file_to_page(record, job_folder, document, kind, text):
    chain = Job(job_folder(name="chain"))
    chain.attach("modes", ModesOptions())
    content, html = record(
        ('kind = "storey chain"', f'kind = "{kind}"\nx = "given x.csv"'),
        ('y = "Along grids A to C."\n', ""),
        ("[origins]", '[origins]\n"given x.csv" = {{ source = "unit loads" }}'.replace("{{", "{").replace("}}", "}")),
        sources=calculation_cells(keep=None),
        files={"given x.csv": text},
    )
    assert content.payloads["storeys"]["inputs"]["stiffness"][0]["lateral"]["x"]["kind"] == kind
    found, expected = content.payloads["modes"], chain.payload("modes")
    omega = expected["result"]["models"][0]["modes"]["omega"]
    assert found["result"]["models"][0]["modes"]["omega"] == pytest.approx(omega, rel=1e-9)
    assert len(found["result"]["models"]) == 1
    assert replay(content.payloads) == []
    seen = document(html)
    assert_numbers_hold(seen, content.payloads, "SI")
    entries = {pointer for pointer, _ in seen.numbers if "/lateral/x/matrix/" in pointer}
    assert len(entries) == 2 * 25  # both sets
    assert f"{kind} x, gross" in seen.words
    assert all(e["within"] for p in content.payloads.values() for e in p["evidence"])
    assert record_of(content)["status"] == "FOR CHECKING"
