"""Blocks in cells: live views, static twins, cells run again."""

from __future__ import annotations

import re
import threading

import pytest

from calcsheet.blocks import JobCard, ModePlot, ModeSolver, ParticipationSummary, StoreyTable
from calcsheet.blocks.twin import MIME
from calcsheet.render import figure, plot
from calcsheet.steps.replay import replay
from calcsheet.steps.serial import fingerprint

PATIENCE = 30  # s
NAMES = ("imports", "card", "storeys", "modes", "plot", "participation")
VIEW = "application/vnd.jupyter.widget-view+json"


@pytest.fixture
def sheet(shell, in_folder, cells):
    """A whole calculation, each cell run under the name of its block."""
    for name, source in zip(NAMES, cells, strict=True):
        shell.run(source, name)
    return shell


def words(html):
    return " ".join(re.sub(r"<[^>]*>", " ", html).split())


def period(sheet):
    """First period as the twin of the modes shows it."""
    return re.search(
        r'<data value="/modes/result/models/0/modes/period/0"[^>]*>([^<]*)', sheet.twin("modes")["text/html"]
    )[1]


def test_every_block_shows_a_live_view_and_a_twin(sheet, cells):
    for name, source in zip(NAMES[1:], cells[1:], strict=True):
        kinds = [{*output["data"]} for output in sheet.outputs[name]]
        assert len(kinds) == 2
        assert VIEW in kinds[0]
        assert kinds[1] == {"text/html", "text/plain", MIME}
        assert sheet.twin(name)[MIME]["source"] == fingerprint(source)
        assert sheet.link(name).state["block"] == sheet.twin(name)[MIME]["view"]


def test_a_live_view_and_its_twin_show_the_same(sheet):
    for name in ("card", "modes", "participation"):
        assert sheet.link(name).state["html"] in sheet.twin(name)["text/html"]
    (figure,) = sheet.link("participation").state["figures"]
    assert figure["svg"].startswith("<svg ")
    assert "mode" in figure["alt"]


def test_payloads_are_stored_once(sheet):
    carriers = [name for name in NAMES[1:] if "payloads" in sheet.twin(name)[MIME]]
    assert carriers == ["card"]
    stored = sheet.twin("card")[MIME]["payloads"]
    assert list(stored) == ["card", "storeys", "modes", "participation"]
    assert replay(stored) == []
    for name in NAMES[1:]:
        twin = sheet.twin(name)[MIME]
        assert twin["fingerprint"] == fingerprint(stored[twin["step"]])


def test_an_edit_by_the_api_reaches_every_view_and_twin(sheet):
    before, revision = period(sheet), sheet.link("modes").state["revision"]
    sheet.run('storeys.set("Roof", "mass", 320)', "edit")
    assert sheet.outputs["edit"] == []  # nothing is added: the twins in their own cells are replaced
    assert period(sheet) > before
    assert "320" in words(sheet.twin("storeys")["text/html"])
    stored = sheet.twin("card")[MIME]["payloads"]
    assert stored["storeys"]["inputs"]["mass"][-1] == 320.0
    assert replay(stored) == []
    for name in NAMES[1:]:
        assert sheet.link(name).state["revision"] == revision + 1
        assert f'data-revision="{revision + 1}"' in sheet.twin(name)["text/html"]
        assert len(sheet.outputs[name]) == 2
        assert sheet.twin(name)[MIME]["fingerprint"] == fingerprint(stored[sheet.twin(name)[MIME]["step"]])
    assert f">{period(sheet)}<" in sheet.link("modes").state["html"]


def test_an_error_upstream_shows_in_place_and_no_last_good_number_stays(sheet):
    good = period(sheet)
    sheet.run('storeys.set("3", "mass", -12)', "edit")
    sentence = 'storeys.csv, level "3": mass -12 t; must be above 0'
    assert sheet.link("modes").state["note"] == {"kind": "waiting", "text": f"waits for storeys: {sentence}"}
    assert sheet.link("participation").state["note"]["text"] == f"waits for storeys: {sentence}"
    for name in ("modes", "plot", "participation"):
        html = sheet.twin(name)["text/html"]
        assert "<b>Waits:</b>" in html
        assert "level &quot;3&quot;: mass -12 t; must be above 0" in html
        assert "<table" not in html
        assert "<img" not in html
        assert good not in words(html)
    assert "<b>Refused:</b>" in sheet.twin("storeys")["text/html"]
    assert sheet.twin("card")[MIME]["payloads"]["modes"]["result"] is None
    sheet.run('storeys.set("3", "mass", 244.25)', "edit")
    assert period(sheet) == good
    assert sheet.link("modes").state["note"] == {}


def test_a_live_choice_never_alters_the_twin(sheet):
    twins = {name: sheet.twin(name) for name in NAMES[1:]}
    published = sheet.published
    plot, modes = sheet.link("plot"), sheet.link("modes")
    before = plot.state["figures"]
    assert plot.say(op="choose", key="normalise", value="roof") == {"op": "ack", "seq": 0, "ok": True, "message": ""}
    assert plot.state["figures"] != before
    assert "top level = 1" in plot.state["figures"][0]["svg"]
    assert next(c for c in plot.state["choices"] if c["key"] == "normalise")["value"] == "roof"
    assert modes.say(op="choose", key="energy", value="hidden")["ok"]
    assert "Kinetic energy" not in modes.state["html"]
    assert {name: sheet.twin(name) for name in NAMES[1:]} == twins
    assert sheet.published == published
    sheet.run('storeys.set("1", "mass", 300)', "edit")  # the choice holds, and so do the twin's own options
    assert "top level = 1" in plot.state["figures"][0]["svg"]
    assert sheet.twin("plot")[MIME]["options"] == {"normalise": "largest", "values": "shown"}
    assert "Kinetic energy" in sheet.twin("modes")["text/html"]
    assert "Kinetic energy" not in modes.state["html"]


def test_figures_are_drawn_only_where_what_they_show_has_changed(sheet, monkeypatch):
    drawn = []
    draw = figure.svg
    monkeypatch.setattr(plot, "svg", lambda *args: drawn.append(args) or draw(*args))
    sheet.run("ParticipationSummary(modes, share=0.5)", "participation")
    assert drawn == []  # the modes are what they were
    sheet.run('storeys.set("Roof", "mass", 300)', "edit")
    assert len(drawn) == 2  # x and y, once for view and twin
    sheet.link("plot").say(op="choose", key="normalise", value="roof")
    sheet.link("plot").say(op="choose", key="normalise", value="largest")
    assert len(drawn) == 4
    sheet.run('storeys.set("Roof", "mass", "?")', "edit")
    sheet.run('storeys.set("Roof", "mass", 301)', "edit")
    assert len(drawn) == 6


def test_a_choice_that_a_view_has_not_is_answered_in_words(sheet):
    reply = sheet.link("plot").say(op="choose", key="normalise", value="top")
    assert reply["message"] == "Mode shapes, normalise: 'top'; must be 'largest' or 'roof' or 'mass'"
    assert not reply["ok"]
    assert (
        sheet.link("plot")
        .say(op="choose", key="colour", value="red")["message"]
        .startswith("Mode shapes: no option 'colour'")
    )
    assert sheet.link("plot").say(op="paint")["message"] == "paint: not known to this block"
    assert sheet.link("plot").say(op="ping", n=7) == {"op": "pong", "n": 7}


def test_a_choice_while_the_block_waits(sheet):
    sheet.run('storeys.set("3", "mass", "heavy")', "edit")
    assert sheet.link("plot").say(op="choose", key="normalise", value="mass")["ok"]
    sheet.run('storeys.set("3", "mass", 244.25)', "edit")
    assert "ψᵀMψ = 1" in sheet.link("plot").state["figures"][0]["alt"]


def test_one_cell_run_again_leaves_the_others_attached(sheet, cells):
    job = sheet["job"].job
    listening = len(job._listeners)
    assert listening == 5
    for name, source in zip(NAMES[1:], cells[1:], strict=True):
        for _ in range(2):
            old = sheet.link(name)
            sheet.run(source, name)
            assert old.closed
            assert not sheet.link(name).closed
            assert len(job._listeners) == listening
    assert sheet["job"].job is job
    sheet.run('storeys.set("Roof", "mass", 200)', "edit")
    for name in NAMES[1:]:
        assert sheet.link(name).state["revision"] == job.revision
        assert f'data-revision="{job.revision}"' in sheet.twin(name)["text/html"]


def test_only_the_card_run_again_keeps_every_other_block_live(sheet, cells):
    others = {name: sheet.link(name) for name in NAMES[2:]}
    sheet.run(cells[1], "card")
    sheet.run('storeys.set("2", "mass", 199)', "edit")
    for name, link in others.items():
        assert not link.closed
        assert link.state["revision"] == sheet["job"].job.revision, name


def test_a_solver_run_again_with_other_options_reaches_the_blocks_below(sheet):
    sheet.run("modes = ModeSolver(storeys, share=0.99, keep=4)\nmodes", "modes")
    shown = words(sheet.twin("participation")["text/html"])
    assert "99.0" in shown
    assert len(sheet.twin("card")[MIME]["payloads"]["participation"]["result"]["directions"][0]["share"]) == 4


def test_two_views_of_one_kind_in_one_cell_both_live(sheet):
    both = 'from IPython.display import display\ndisplay(ModePlot(modes, normalise="roof"), ModePlot(modes, normalise="mass"))'
    for _ in range(2):
        sheet.run(both, "plots")
    views = [o["data"] for o in sheet.outputs["plots"] if VIEW in o["data"]]
    twins = [o["data"] for o in sheet.outputs["plots"] if MIME in o["data"]]
    assert len(views) == len(twins) == 2
    links = [next(k for k in sheet.links if k.comm_id == v[VIEW]["model_id"]) for v in views]
    assert not any(link.closed for link in links)
    assert len(sheet["job"].job._listeners) == 7
    sheet.run('storeys.set("1", "mass", 301)', "edit")
    assert all(link.state["revision"] == sheet["job"].job.revision for link in links)


def test_a_cell_that_shows_another_block_releases_the_old_one(sheet):
    old = sheet.link("plot")
    sheet.run("ParticipationSummary(modes, share=0.5)", "plot")
    assert old.closed
    assert len(sheet["job"].job._listeners) == 5


def test_the_twin_alone_where_a_record_is_made(static, in_folder, cells):
    for name, source in zip(NAMES, cells, strict=True):
        static.run(source, name)
    for name in NAMES[1:]:
        assert [{*o["data"]} for o in static.outputs[name]] == [{"text/html", "text/plain", MIME}]
    assert static.links == []
    static.run('storeys.set("Roof", "mass", 320)', "edit")
    assert static.twin("card")[MIME]["payloads"]["storeys"]["inputs"]["mass"][-1] == 320.0


def test_edits_between_showing_and_listening_are_not_missed(shell, in_folder, cells, monkeypatch):
    """An edit from a thread while a block is being shown waits for it, and is then shown by it too."""
    for name, source in zip(NAMES[:-1], cells[:-1], strict=True):
        shell.run(source, name)
    storeys, job = shell["storeys"], shell["job"].job
    typing = threading.Thread(target=storeys.set, args=("Roof", "mass", 333), daemon=True)
    listen = job.listen

    def late(listener):
        typing.start()
        while job.payload("storeys")["inputs"]["mass"][-1] != 333.0:
            assert typing.is_alive()
        listen(listener)

    monkeypatch.setattr(job, "listen", late)
    shell.run(cells[-1], "participation")
    typing.join(PATIENCE)
    assert not typing.is_alive()
    assert shell.link("participation").state["revision"] == job.revision
    assert f'data-revision="{job.revision}"' in shell.twin("participation")["text/html"]


def test_edits_and_choices_from_threads_end_on_one_state(sheet):
    job, plot = sheet["job"].job, sheet.link("plot")
    failed = []

    def act(doing, values):
        try:
            for value in values:
                doing(value)
        except BaseException as error:
            failed.append(error)

    def choose(value):
        assert plot.say(op="choose", key="normalise", value=value)["ok"]

    def type_in(level):
        return lambda text: sheet["storeys"].set(level, "mass", text)

    acts = [(choose, ["roof", "mass", "largest", "roof"])]
    acts += [(type_in(level), ["250", "no mass", "251.5"]) for level in ("1", "2", "3")]
    threads = [threading.Thread(target=act, args=a, daemon=True) for a in acts]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join(2 * PATIENCE)
    assert not any(thread.is_alive() for thread in threads)
    assert failed == []
    assert job.payload("storeys")["inputs"]["mass"][:3] == [251.5] * 3
    for name in NAMES[1:]:
        assert f'data-revision="{job.revision}"' in sheet.twin(name)["text/html"]
        assert sheet.link(name).state["revision"] == job.revision
    assert "top level = 1" in plot.state["figures"][0]["svg"]
    assert replay(sheet.twin("card")[MIME]["payloads"]) == []


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda s, m: ModeSolver(s, share=1.5), "share: got 1.5; must be a number above 0 and at most 1"),
        (lambda s, m: ModeSolver(s, share="0.9"), "share: got '0.9'; must be a number above 0 and at most 1"),
        (lambda s, m: ModeSolver(s, share=float("nan")), "share: got nan; must be a number above 0 and at most 1"),
        (lambda s, m: ModeSolver(s, keep=2.5), "keep: got 2.5; must be a number of modes, or None for all"),
        (lambda s, m: ModeSolver(s, keep=0), "keep: got 0; must be a number of modes, or None for all"),
        (lambda s, m: ModeSolver(s, energy="yes"), ", energy: 'yes'; must be 'hidden' or 'shown'"),
        (lambda s, m: ModeSolver(s, name="a/b"), 'name of a step: got "a/b"; must be of letters'),
        (lambda s, m: ModePlot(m, normalise="top"), "normalise: 'top'; must be 'largest' or 'roof' or 'mass'"),
        (lambda s, m: ParticipationSummary(m, share=0), "share: got 0; must be a number above 0 and at most 1"),
    ],
)
def test_a_wrong_option_is_named_and_changes_nothing(job_folder, make, sentence):
    storeys = StoreyTable(JobCard(job_folder()))
    modes = ModeSolver(storeys)
    before = storeys.job.payloads()["modes"]
    with pytest.raises(ValueError, match=re.escape(sentence)):
        make(storeys, modes)
    storeys.set("1", "mass", 300)
    assert storeys.payload["state"] == modes.payload["state"] == "ok"
    assert modes.payload["inputs"] == before["inputs"]


def test_a_block_says_its_state_in_words(job_folder):
    job = JobCard(job_folder())
    storeys = StoreyTable(job)
    modes = ModeSolver(storeys, stiffness="cracks")
    assert repr(job) == "JobCard(ok)"
    assert repr(modes) == 'ModeSolver(refused: stiffness set: got "cracks"; must be "gross" or "cracked")'
    assert repr(ModePlot(modes)) == repr(modes).replace("ModeSolver", "ModePlot")
    assert repr(ParticipationSummary(modes)).startswith("ParticipationSummary(waiting: waits for natural modes: ")


def test_a_folder_without_a_job_shows_why(shell, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    shell.run('from calcsheet import *\njob = JobCard(".")\njob', "card")
    shell.run("storeys = StoreyTable(job)\nstoreys", "storeys")
    assert "no job.toml in" in shell.twin("card")["text/html"]
    assert shell.link("card").state["note"]["kind"] == "refused"
    assert shell.link("storeys").state["status"]["kind"] == "error"
    assert "no job.toml in" in shell.twin("storeys")["text/html"]
    assert "edit" not in shell.outputs
    assert shell.link("storeys").say(op="set", row="row-1", key="mass", text="1")["ok"] is False
