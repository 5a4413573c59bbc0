"""The view of what changed: tables against hand figures, numbers against their places, hostile texts as texts."""

from __future__ import annotations

import json
import re
from dataclasses import replace

import pytest

from calcsheet.render.registry import VIEWS
from calcsheet.steps.earlier import NOTHING, earlier_of

ONE = {
    "": 1.0, "t": 1.0, "kN": 1.0, "kN/m": 1.0, "kN·m": 1.0, "m": 1.0, "mm": 1e-3, "s": 1.0, "Hz": 1.0, "%": 0.01,
    "m/s²": 1.0, "kip": 4.4482216152605, "ft": 0.3048, "in": 0.0254, "kip/in": 4.4482216152605 / 0.0254,
    "kip·ft": 4.4482216152605 * 0.3048, "kip·s²/ft": 4.4482216152605 / 0.3048, "ft/s²": 0.3048,
}  # fmt: skip
"""What one unit shown is in core units."""
TABLE = """\
level,storey height [m],mass [t],stiffness x [kN/m],stiffness y [kN/m],gravity load [kN]
Roof,3,{roof},50000,80000,950
2,3.5,{second},{k},120000,1500
1,4,200,100000,160000,1950
"""


def table(roof=100, second=150, k=75000):
    return TABLE.format(roof=roof, second=second, k=k)


@pytest.fixture
def shown(demand_job, plain_record):
    """HTML and payloads of a job held against an earlier record."""

    def render(now, before, status="FOR CHECKING", **parts):
        now.attach("earlier", earlier_of(plain_record(before, status, **parts)))
        payloads = json.loads(json.dumps(now.payloads()))
        return VIEWS["what changed"].render(payloads, "earlier", {}).html, payloads

    return render


def rows(html, caption):
    """Cells of the table under a caption, row by row."""
    body = next(t for t in re.findall(r"<table.*?</table>", html, re.DOTALL) if f"<caption>{caption}" in t)
    found = re.findall(r"<tr[^>]*>(.*?)</tr>", body)
    return [
        [re.sub(r"<[^>]*>", "", c).replace("\xa0", " ") for c in re.findall(r"<t[hd][^>]*>(.*?)</t[hd]>", row)]
        for row in found
    ]


def assert_numbers_hold(html, payloads):
    found = re.findall(r'<data value="([^"]*)"(?: data-unit="([^"]*)")?>([^<]*)</data>', html)
    assert found
    for pointer, unit, text in found:
        value = payloads
        for part in pointer.removeprefix("/").split("/"):
            value = value[int(part)] if isinstance(value, list) else value[part]
        plain = re.sub(r"\s", "", text).replace("\u2212", "-")
        half = 0.5 * 10.0 ** -len(plain.partition(".")[2])
        assert abs(value / ONE[unit] - float(plain)) <= half * (1 + 1e-9), (pointer, text, value)
    return [pointer for pointer, _, _ in found]


def test_revised_masses(demand_job, shown):
    before = demand_job("EN", storeys=table(), name="before")
    html, payloads = shown(demand_job("EN", storeys=table(roof=110.25, second=160)), before)
    heads, *levels = rows(html, "Storeys that changed")
    assert heads == ["level", "mass [t]"]
    assert levels == [["Roof", "100.00 → 110.25"], ["2", "150.00 → 160.00"]]
    results = {row[0]: row[1:] for row in rows(html, "Headline results")}
    assert results["Mass above the effective base"] == ["450.0 t", "470.2 t", "+4.5 %"]  # 20.25/450
    assert results["Height above the effective base"] == ["10.50 m", "10.50 m", "none"]
    assert results["Modes for the target share in x"][2] == "none"
    pointers = assert_numbers_hold(html, payloads)
    assert "/storeys/inputs/mass/2" in pointers
    assert sum(p.startswith("/earlier/inputs/facts/inputs/") for p in pointers) == 2
    assert sum(p.startswith("/earlier/inputs/facts/headlines/") for p in pointers) > 20
    assert "Against revision A of 2026-03-09, FOR CHECKING; its fingerprints: inputs <code>abababababab</code>" in html


def test_nothing_changed_is_said(demand_job, shown):
    html, _ = shown(demand_job("EN", name="now"), demand_job("EN"))
    for sentence in ("No conclusion flipped.", "No headline result changed.", "No input changed."):
        assert f"<p>{sentence}</p>" in html
    assert "<table" not in html


def test_flips_come_first_and_in_words(demand_job, shown):
    more = demand_job("EN", ("ground_acceleration = 0.2", "ground_acceleration = 0.7"), name="more")
    html, payloads = shown(
        more, demand_job("EN"), "CHECKED", signatures=[{"role": "checked", "name": "R. Aalto", "date": "x"}]
    )
    assert html.index("Conclusions that flipped") < html.index("Headline results") < html.index("Other inputs")
    flips = {row[0]: row[1:] for row in rows(html, "Conclusions that flipped")}
    assert flips["Drift limit, x"] == ["passes", "exceeds"]
    assert '<span class="exceeds">exceeds</span>' in html
    assert rows(html, "Other inputs")[1][1:] == ["0.2", "0.7"]
    assert "CHECKED (checked by R. Aalto, x)" in html
    assert_numbers_hold(html, payloads)


def test_an_inserted_and_a_removed_level(demand_job, shown):
    without = re.sub(r"2,3\.5.*\n", "", table())
    html, payloads = shown(demand_job("EN", storeys=table(), name="now"), demand_job("EN", storeys=without))
    assert "<p>Level added: 2.</p>" in html
    assert "Storeys that changed" not in html
    heads, level = rows(html, "Levels added or removed")
    assert heads[:3] == ["level", "storey height [m]", "mass [t]"]
    assert level[:3] == ["2 (added)", "3.5", "150"]
    assert_numbers_hold(html, payloads)
    back, _ = shown(demand_job("EN", storeys=without, name="back"), demand_job("EN", storeys=table(), name="then"))
    assert "<p>Level removed: 2.</p>" in back
    assert rows(back, "Levels added or removed")[1][0] == "2 (removed)"


def test_many_columns_are_split_over_tables(demand_job, shown):
    changed = table(k=76000).replace("2,3.5,150", "2,3.6,151").replace("120000,1500", "121000,1501")
    now = demand_job("EN", storeys=changed, name="now")
    html, payloads = shown(now, demand_job("EN", storeys=table()))
    heads = [t for t in re.findall(r"<caption>Storeys that changed.*?</thead>", html)]
    assert len(heads) == 2  # storey height, mass, gravity, x and y of two stiffness sets
    assert_numbers_hold(html, payloads)


def test_a_change_too_small_for_the_usual_decimals_is_seen(demand_job, shown):
    now = demand_job("EN", storeys=table(second="150.000000001"), name="now")
    html, _ = shown(now, demand_job("EN", storeys=table()))
    assert rows(html, "Storeys that changed")[1] == ["2", "150.000000000 → 150.000000001"]
    assert "<p>No headline result changed.</p>" in html


def test_us_units(demand_job, shown, us):
    heavier = {**us, "storeys": us["storeys"].replace("455", "470"), "name": "now"}
    html, payloads = shown(demand_job("7-16", **heavier), demand_job("7-16", **us))
    assert rows(html, "Storeys that changed") == [["level", "weight [kip]"], ["2", "455 → 470"]]
    assert_numbers_hold(html, payloads)


def test_a_matrix_that_changed_in_many_columns_is_summed_up(job_folder, plain_record):
    from calcsheet.steps.graph import Job

    levels = [str(i) for i in range(12, 0, -1)]

    def job(name, factor):
        lines = [",".join(["stiffness [kN/m]", *levels])]
        for i in range(12):
            near = {i: 2e5, i - 1: -1e5, i + 1: -1e5}
            lines.append(",".join([levels[i], *(repr(factor * near.get(j, 0.0)) for j in range(12))]))
        table = "level,storey height [m],mass [t]\n" + "".join(f"{level},3,100\n" for level in levels)
        card = [('kind = "storey chain"', 'kind = "stiffness matrix"\nx = "k.csv"\ny = "k.csv"')]
        return Job(job_folder(card, files={"storeys.csv": table, "k.csv": "\n".join(lines)}, name=name))

    now = job("now", 1.25)
    now.attach("earlier", earlier_of(plain_record(job("then", 1.0))))
    assert now.payload("storeys")["state"] == "ok", now.payload("storeys")["why"]
    html = VIEWS["what changed"].render(now.payloads(), "earlier", {}).html
    assert "<p>Stiffness matrix x, gross: 34 entries changed, by +25.0 %.</p>" in html  # 12 + 2 · 11 not zero
    assert "Storeys that changed" not in html


def test_forty_storeys_are_forty_rows(demand_job, shown):
    head, *_ = TABLE.splitlines()
    storeys = "\n".join([head, *(f"{i},3,{{}},{5e5 + 1e4 * (40 - i):g},500000,950" for i in range(40, 0, -1))]) + "\n"
    now = demand_job("EN", storeys=storeys.replace("{}", "103.5"), name="now")
    html, payloads = shown(now, demand_job("EN", storeys=storeys.replace("{}", "100")))
    heads, *levels = rows(html, "Storeys that changed")
    assert heads == ["level", "mass [t]"]
    assert len(levels) == 40
    assert levels[0] == ["40", "100.0 → 103.5"]
    assert_numbers_hold(html, payloads)


def test_texts_stay_texts(demand_job, shown, document):
    hostile = table().replace("Roof", "<script>R_1</script>")
    card = [('ground = "cracked beams"', "ground = '<img src=x onerror=y> {0}'")]
    signed = [{"role": "checked", "name": "<b>R</b>", "date": "2026-01-01"}]
    before = demand_job("EN", storeys=table(), name="before")
    html, _ = shown(demand_job("EN", storeys=hostile, card=card), before, "<i>", signatures=signed)
    seen = document(html)
    assert {tag for tag, _ in seen.tags} <= set("p table caption thead tbody tr th td span data code sub sup".split())
    for text in ("<script>R_1</script> (added)", "<img src=x onerror=y> {0}", "checked by <b>R</b>", "<i>"):
        assert text in seen.words


@pytest.mark.parametrize(
    ("drafts", "said"),
    [
        ((), "FOR CHECKING; its fingerprints"),
        (("B",), "FOR CHECKING, passing over draft B issued after it; its fingerprints"),
        (("B", "<C>"), "FOR CHECKING, passing over drafts B, <C> issued after it; its fingerprints"),
    ],
)
def test_drafts_passed_over_are_named_in_the_first_sentence(demand_job, plain_record, document, drafts, said):
    job = demand_job("EN")
    job.attach("earlier", replace(earlier_of(plain_record(job)), drafts=drafts))
    html = VIEWS["what changed"].render(job.payloads(), "earlier", {}).html
    assert said in document(html[: html.index("</p>")]).words


def test_the_first_issue(demand_job):
    job = demand_job("EN")
    job.attach("earlier", NOTHING)
    assert VIEWS["what changed"].render(job.payloads(), "earlier", {}).html == "<p>First issue: nothing to compare.</p>"


def test_nothing_is_compared_while_a_step_is_refused(demand_job, shown):
    job = demand_job("EN", name="now")
    shown(job, demand_job("EN"))
    (job.folder.path / "storeys.csv").write_text(table().replace("150", "-150"), encoding="utf-8")
    job.load()
    html = VIEWS["what changed"].render(job.payloads(), "earlier", {}).html
    assert html.startswith("<p>Not compared: storeys is refused: storeys.csv, ")
    assert "<table" not in html


def test_what_the_view_covers_follows_every_step(demand_job, shown):
    view, job = VIEWS["what changed"], demand_job("EN", name="now")
    shown(job, demand_job("EN"))
    before = view.covers(job.payloads(), "earlier")
    assert before == view.covers(dict(reversed(job.payloads().items())), "earlier")
    (job.folder.path / "storeys.csv").write_text(table(), encoding="utf-8")
    job.load()
    assert view.covers(job.payloads(), "earlier") != before
