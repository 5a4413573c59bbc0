"""The job as one object: files, steps, listeners."""

from __future__ import annotations

import dataclasses
import threading
import time

import pytest

from calcsheet.job import edits, textfile
from calcsheet.job.errors import InputError
from calcsheet.steps import graph
from calcsheet.steps.graph import Job
from calcsheet.steps.modes import ModesOptions
from calcsheet.steps.participation import ParticipationOptions
from calcsheet.steps.replay import replay

PATIENCE = 30  # s


@pytest.fixture
def counted(monkeypatch):
    """Runs of each step by its kind."""
    runs = dict.fromkeys(("card", "storeys", "modes", "participation"), 0)

    def counting(step):
        def run(*args):
            runs[step.kind] += 1
            return step.run(*args)

        return dataclasses.replace(step, run=run)

    monkeypatch.setattr(graph, "STEPS", {kind: counting(step) for kind, step in graph.STEPS.items()})
    return runs


@pytest.fixture
def folder(job_folder):
    return job_folder()


@pytest.fixture
def job(folder):
    """The job with its modes and their participation."""
    opened = Job(folder)
    opened.attach("modes", ModesOptions())
    opened.attach("participation", ParticipationOptions())
    return opened


def set_mass(level, value):
    return lambda reading: edits.set_number(reading, level, "mass", value)


def states(job):
    return {key: payload["state"] for key, payload in job.payloads().items()}


def first_period(job):
    return job.payload("modes")["result"]["models"][0]["modes"]["period"][0]


def test_a_folder_opened_twice_is_one_job(folder, monkeypatch):
    monkeypatch.chdir(folder)
    assert Job.open(folder) is Job.open(".") is Job.open(folder / ".." / folder.name)


def test_opened_again_it_reads_what_changed_on_disk(folder):
    job = Job.open(folder)
    file = folder / "storeys.csv"
    file.write_text(file.read_text().replace("Roof,2.95,141.5", "Roof,2.95,150"))
    assert Job.open(folder).payload("storeys")["inputs"]["mass"][-1] == 150.0
    revision = job.revision
    assert Job.open(folder).revision == revision  # nothing changed: nothing is read


def test_opened_again_it_keeps_what_is_not_saved(folder, monkeypatch):
    job = Job.open(folder)
    monkeypatch.setattr(textfile.os, "access", lambda *_: False)
    job.edit(set_mass("Roof", 99.5))
    (folder / "storeys.csv").write_text("level\n")
    assert Job.open(folder).files.reading.rows[0][2] == "99.5"


def test_an_edit_is_written_through_and_reaches_every_step(job, folder):
    before = first_period(job)
    job.edit(set_mass("Roof", 283))
    assert "Roof,2.95,283,88000,97000" in (folder / "storeys.csv").read_text()
    assert set(states(job).values()) == {"ok"}
    assert first_period(job) > before
    assert job.payload("participation")["result"]["directions"][0]["total_mass"] == 141.5 + 1141.5
    assert replay(job.payloads()) == []
    assert Job(folder).payload("storeys")["inputs"] == job.payload("storeys")["inputs"]


def test_an_edit_runs_each_step_once(counted, folder):
    job = Job(folder)
    job.attach("modes", ModesOptions())
    job.attach("participation", ParticipationOptions())
    assert counted == {"card": 1, "storeys": 1, "modes": 1, "participation": 1}
    job.edit(set_mass("2", 260))
    assert counted == {"card": 1, "storeys": 2, "modes": 2, "participation": 2}


def test_steps_that_nothing_changed_keep_their_payloads(counted, folder):
    job = Job(folder)
    job.attach("modes", ModesOptions())
    job.attach("participation", ParticipationOptions())
    before = job.payloads()
    job.attach("participation", ParticipationOptions(0.8))
    after = job.payloads()
    assert all(after[key] is before[key] for key in ("card", "storeys", "modes"))
    assert after["participation"]["result"]["directions"][0]["target"] == 0.8
    job.load()  # the same files once more
    job.attach("modes", ModesOptions())  # the same cell once more
    assert all(job.payload(key) is payload for key, payload in after.items())
    assert counted == {"card": 1, "storeys": 1, "modes": 1, "participation": 2}


def test_a_second_solver_stands_beside_the_first(job):
    job.attach("modes", ModesOptions(stiffness="gross"), key="stiff modes")
    job.attach("participation", ParticipationOptions(), {"modes": "stiff modes"}, "stiff participation")
    job.edit(set_mass("1", 300))
    payloads = job.payloads()
    assert payloads["stiff participation"]["needs"] == {"storeys": "storeys", "modes": "stiff modes"}
    direct, scaled = (payloads[k]["result"]["models"][0]["modes"]["period"][0] for k in ("stiff modes", "modes"))
    assert scaled == pytest.approx(direct / 0.6**0.5, rel=1e-12)
    assert replay(payloads) == []


def test_a_wrong_cell_is_saved_and_stands_in_the_way(job, folder):
    job.edit(lambda reading: edits.set_text(reading, "3", "mass", "-12"))
    assert "3,3.3,-12,152000,141000" in (folder / "storeys.csv").read_text()
    assert states(job) == {"card": "ok", "storeys": "refused", "modes": "waiting", "participation": "waiting"}
    sentence = 'storeys.csv, level "3": mass -12 t; must be above 0'
    assert job.payload("storeys")["why"] == sentence
    assert job.payload("modes")["why"] == job.payload("participation")["why"] == f"waits for storeys: {sentence}"
    for key in ("storeys", "modes", "participation"):  # the last good numbers are gone
        payload = job.payload(key)
        assert payload["result"] is None
        assert payload["lines"] == payload["cautions"] == payload["evidence"] == []
    job.edit(set_mass("3", 244.25))
    assert set(states(job).values()) == {"ok"}


def test_a_refused_step_makes_those_below_it_wait(job):
    job.attach("modes", ModesOptions(stiffness="cracks"))
    assert states(job) == {"card": "ok", "storeys": "ok", "modes": "refused", "participation": "waiting"}
    assert job.payload("modes")["why"] == 'stiffness set: got "cracks"; must be "gross" or "cracked"'
    assert job.payload("participation")["why"] == f"waits for natural modes: {job.payload('modes')['why']}"
    assert job.payload("modes")["result"] is None


def test_problems_beyond_three_are_counted(job):
    job.edit(lambda reading: edits.paste(reading, 0, "mass", "a\nb\nc\nd\ne"))
    why = job.payload("storeys")["why"]
    assert why.count("storeys.csv, level") == 3
    assert why.endswith(" (and 2 more)")


def test_numbers_out_of_the_machines_range_are_refused_and_not_left_as_they_were(job):
    job.edit(lambda reading: edits.paste(reading, 0, "mass", "\n".join(["1e-320"] * 5)))
    payload = job.payload("modes")
    print(payload["state"], payload["why"])
    assert payload["state"] in ("refused", "waiting")
    assert payload["result"] is None
    assert payload["why"]


@pytest.mark.parametrize("name", ["a/b", " ", "~", "{0}", "x\n"])
def test_a_steps_name_must_fit_a_pointer(job, name):
    with pytest.raises(ValueError, match="name of a step: got"):
        job.attach("modes", ModesOptions(), key=name)


def test_inputs_that_cannot_be_kept_change_nothing(job):
    before = job.payloads()
    with pytest.raises(ValueError, match="not finite"):
        job.attach("modes", ModesOptions(share=float("nan")))
    job.edit(set_mass("Roof", 142))
    assert set(states(job).values()) == {"ok"}
    assert job.payload("modes") is not before["modes"]


def test_what_a_step_needs_must_be_there(folder):
    with pytest.raises(ValueError, match="Participation needs modes, which this job has not yet"):
        Job(folder).attach("participation", ParticipationOptions())
    with pytest.raises(ValueError, match='"storeys" is another step of this job: Storeys'):
        Job(folder).attach("modes", ModesOptions(), key="storeys")


def test_a_folder_without_its_files_is_refused_in_words(tmp_path):
    job = Job(tmp_path)
    assert states(job) == {"card": "refused", "storeys": "waiting"}
    assert job.payload("card")["why"].startswith(f"no job.toml in {tmp_path}; `calcsheet new")
    with pytest.raises(InputError, match=r"no job\.toml"):
        job.edit(set_mass("Roof", 1))


def test_a_card_that_breaks_leaves_no_numbers(job, folder):
    card = folder / "job.toml"
    text = card.read_text()
    card.write_text(text.replace('"SI"', '"metric"'))
    job.load()
    sentence = 'job.toml, units.system: got "metric"; must be "SI" or "US"'
    assert job.payload("card")["why"] == sentence
    assert states(job) == {"card": "refused", "storeys": "waiting", "modes": "waiting", "participation": "waiting"}
    assert all(sentence in payload["why"] and payload["result"] is None for payload in job.payloads().values())
    card.write_text(text)
    job.load()
    assert set(states(job).values()) == {"ok"}


# ---- conflicts ---------------------------------------------------------------------------------------------------------


def elsewhere(folder, old="Roof,2.95,141.5", new="Roof,2.95,190"):
    """Another program edits the storey table."""
    file = folder / "storeys.csv"
    assert old in file.read_text()
    file.write_text(file.read_text().replace(old, new))


def test_an_edit_never_overwrites_another_on_disk(job, folder):
    elsewhere(folder)
    job.edit(set_mass("4", 240))
    assert job.status.kind == "conflict"
    assert "storeys.csv: not saved, changed on disk since it was read" in job.status.text
    assert "190" in (folder / "storeys.csv").read_text()
    assert "4,3.3,236" in (folder / "storeys.csv").read_text()
    assert job.payload("storeys")["state"] == "refused"
    assert job.payload("storeys")["why"] == job.status.text
    assert job.payload("modes")["state"] == "waiting"
    assert job.files.reading.rows[1][2] == "240"  # the typed value is kept


def test_a_conflict_ends_with_what_is_on_disk(job, folder):
    elsewhere(folder)
    job.edit(set_mass("4", 240))
    job.load()
    assert job.status.kind == "saved"
    assert job.payload("storeys")["inputs"]["mass"][-2:] == [236.0, 190.0]


def test_a_conflict_ends_with_what_was_typed(job, folder):
    elsewhere(folder)
    job.edit(set_mass("4", 240))
    job.edit(set_mass("1", 270))  # more typing before the answer
    job.keep()
    assert job.status.kind == "saved"
    assert job.payload("storeys")["inputs"]["mass"] == [270.0, 251.0, 244.25, 240.0, 141.5]
    assert "190" not in (folder / "storeys.csv").read_text()
    job.look()
    assert job.status.kind == "saved"


def test_a_change_on_disk_is_seen_by_looking(job, folder):
    job.look()
    assert job.status.kind == "saved"
    elsewhere(folder)
    job.look()
    assert job.status.kind == "conflict"
    assert job.status.text == "storeys.csv: changed on disk since read here"
    assert job.payload("participation")["state"] == "waiting"


def test_keeping_the_table_reads_a_card_that_changed(job, folder):
    card = folder / "job.toml"
    card.write_text(card.read_text().replace("factor_x = 0.6", "factor_x = 0.55"))
    before = first_period(job)
    job.look()
    assert job.status.text == "job.toml: changed on disk since read here"
    job.keep()
    assert job.status.kind == "saved"
    assert first_period(job) == pytest.approx(before * (0.6 / 0.55) ** 0.5, rel=1e-12)
    job.look()
    assert job.status.kind == "saved"


def test_a_table_that_cannot_be_written_keeps_what_was_typed(job, folder, monkeypatch):
    before = (folder / "storeys.csv").read_text()
    with monkeypatch.context() as patch:
        # asked of os.access, since a superuser may write to anything
        patch.setattr(textfile.os, "access", lambda *_: False)
        job.edit(set_mass("2", 255))
    assert job.status.kind == "error"
    assert "storeys.csv: not saved, the file is read-only or held open by another program" in job.status.text
    assert (folder / "storeys.csv").read_text() == before
    assert job.files.reading.rows[3][2] == "255"
    assert job.payload("storeys")["state"] == "refused"
    job.edit(set_mass("1", 269))  # the file was let go: both edits are saved
    assert job.status.kind == "saved"
    assert job.payload("storeys")["inputs"]["mass"][:2] == [269.0, 255.0]


def test_an_edit_that_is_refused_changes_nothing(job):
    revision, payloads = job.now()
    with pytest.raises(InputError, match='no level "9"'):
        job.edit(set_mass("9", 1))
    assert job.now() == (revision, payloads)


# ---- listeners ---------------------------------------------------------------------------------------------------------


class Watcher:
    """Notes the revisions that it is told of."""

    def __init__(self, job, log=None, name=""):
        self.job, self.log, self.name = job, [] if log is None else log, name
        self.numbers, self.figures = [], []

    def show_numbers(self):
        self.numbers.append(self.job.revision)
        self.log.append(("numbers", self.name))

    def show_figures(self):
        self.figures.append(self.job.revision)
        self.log.append(("figures", self.name))


def test_all_numbers_come_before_any_figure(job):
    log = []
    for name in ("a", "b"):
        job.listen(Watcher(job, log, name))
    job.edit(set_mass("1", 270))
    assert log == [("numbers", "a"), ("numbers", "b"), ("figures", "a"), ("figures", "b")]


def test_who_leaves_hears_no_more(job):
    stays, goes = Watcher(job), Watcher(job)
    job.listen(stays)
    job.listen(goes)
    job.leave(goes)
    job.edit(set_mass("1", 270))
    assert stays.figures == [job.revision]
    assert goes.numbers == []


def test_a_listener_that_falls_behind_ends_on_the_newest(job):
    class Slow(Watcher):
        def __init__(self, job):
            super().__init__(job)
            self.drawing, self.go_on = threading.Event(), threading.Event()

        def show_figures(self):
            self.drawing.set()
            assert self.go_on.wait(PATIENCE)
            super().show_figures()

    slow, after = Slow(job), Watcher(job)
    job.listen(slow)
    job.listen(after)
    last = job.revision + 4
    first = threading.Thread(target=job.edit, args=[set_mass("1", 270)])
    first.start()
    assert slow.drawing.wait(PATIENCE)
    others = [threading.Thread(target=job.edit, args=[set_mass("1", 271 + i)]) for i in range(3)]
    for thread in others:
        thread.start()
    until = time.monotonic() + PATIENCE
    while job.revision < last:  # they save, and wait to tell
        assert time.monotonic() < until
        time.sleep(0.01)
    slow.go_on.set()
    for thread in (first, *others):
        thread.join(PATIENCE)
        assert not thread.is_alive()
    assert slow.figures[-1] == after.figures[-1] == after.numbers[-1] == job.revision
    assert len(slow.figures) <= 3  # the figures in between are left out
    assert after.figures == [job.revision]


def test_a_listener_may_edit(job):
    class Mender(Watcher):
        def show_numbers(self):
            super().show_numbers()
            if self.job.payload("storeys")["state"] == "refused":
                self.job.edit(set_mass("1", 268.75))

    mender, after = Mender(job), Watcher(job)
    job.listen(mender)
    job.listen(after)
    job.edit(lambda reading: edits.set_text(reading, "1", "mass", "?"))
    assert job.payload("modes")["state"] == "ok"
    assert after.figures[-1] == mender.figures[-1] == job.revision


def test_twenty_edits_at_once_all_land(job, folder):
    watcher = Watcher(job)
    job.listen(watcher)
    levels, together = ("Roof", "4", "3", "2", "1"), threading.Barrier(20)
    cells = [(level, column) for level in levels for column in ("storey height", "mass", "stiffness x", "stiffness y")]
    values = {cell: round(200.5 + 3.25 * i, 2) for i, cell in enumerate(cells)}
    failed = []

    def type_in(level, column):
        try:
            together.wait(PATIENCE)
            job.edit(lambda reading: edits.set_number(reading, level, column, values[level, column]))
        except BaseException as error:
            failed.append(error)

    threads = [threading.Thread(target=type_in, args=cell, daemon=True) for cell in cells]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join(PATIENCE)
    assert not any(thread.is_alive() for thread in threads)
    assert failed == []
    rows = Job(folder).files.reading.rows
    assert [[float(cell) for cell in row[1:]] for row in rows] == [
        [values[level, c] for c in ("storey height", "mass", "stiffness x", "stiffness y")] for level in levels
    ]
    assert watcher.numbers[-1] == watcher.figures[-1] == job.revision
    assert replay(job.payloads()) == []


def test_states_that_change_from_threads_never_break_a_telling(job):
    """Right and wrong cells in turn, while others read: whoever tells sees one whole state."""

    class Reader(Watcher):
        def show_numbers(self):
            revision, payloads = self.job.now()
            assert (payloads["storeys"]["state"] == "ok") == (payloads["modes"]["result"] is not None)
            self.numbers.append(revision)

    reader, failed = Reader(job), []
    job.listen(reader)

    def type_in(text):
        try:
            for _ in range(4):
                job.edit(lambda reading: edits.set_text(reading, "2", "mass", text))
        except BaseException as error:
            failed.append(error)

    threads = [threading.Thread(target=type_in, args=[text], daemon=True) for text in ("251", "oops", "252", "-1")]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join(PATIENCE)
    assert not any(thread.is_alive() for thread in threads)
    assert failed == []
    assert reader.numbers[-1] == reader.figures[-1] == job.revision


def test_table_and_card_edited_together_are_one_revision(job, folder):
    revision, heard = job.revision, []

    class Heard:
        def show_numbers(self):
            heard.append((job.revision, first_period(job)))

        def show_figures(self):
            pass

    before = first_period(job)
    job.listen(Heard())
    job.edit_both(lambda files: (set_mass("Roof", 200.0)(files.reading), {("stiffness", "cracked", "factor_x"): 0.3}))
    assert heard == [(revision + 1, first_period(job))]
    assert first_period(job) > before
    assert "Roof,2.95,200," in (folder / "storeys.csv").read_text(encoding="utf-8")
    assert "factor_x = 0.3" in (folder / "job.toml").read_text(encoding="utf-8")


def test_nothing_is_edited_together_while_the_table_conflicts_with_its_file(job, folder):
    file = folder / "storeys.csv"
    file.write_text(file.read_text(encoding="utf-8").replace("141.5", "150"), encoding="utf-8")
    job.look()
    before = [path.read_bytes() for path in sorted(folder.iterdir())]
    with pytest.raises(InputError, match=r"storeys\.csv: changed on disk"):
        job.edit_both(lambda files: (files.reading.table, {("stiffness", "cracked", "factor_x"): 0.3}))
    assert [path.read_bytes() for path in sorted(folder.iterdir())] == before
