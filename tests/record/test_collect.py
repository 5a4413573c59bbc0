"""What a notebook holds for a record, and what makes it stale."""

from __future__ import annotations

import copy
import json
import os

import nbformat
import pytest

from calcsheet.blocks.twin import MIME
from calcsheet.record.collect import Content, Own, Shown, Words, collect, refuse_stale
from calcsheet.record.errors import RecordError, StaleError


@pytest.fixture
def notebook(static, in_folder, calculation):
    return static.executed(calculation)


def refusal(notebook) -> str:
    with pytest.raises(RecordError) as caught:
        collect(notebook)
    return str(caught.value)


def cell(notebook, start):
    return next(c for c in notebook.cells if c.source.startswith(start))


def test_parts_stand_in_the_notebooks_order(notebook):
    content = collect(notebook)
    assert [type(part) for part in content.parts] == [
        Words,
        Shown,
        Shown,
        Shown,
        Shown,
        Shown,
        Words,
    ]  # imports left out
    assert [part.view for part in content.parts[1:-1]] == ["card", "storeys", "modes", "mode plot", "participation"]
    assert content.parts[4].options == {"normalise": "largest", "values": "shown"}
    assert list(content.payloads) == ["card", "storeys", "modes", "participation"]


def test_own_cells_are_kept_with_what_they_show(static, in_folder, cells):
    content = collect(static.executed([*cells, "area = 3 * 7", "print(area)\narea", "modes", "# Words\n"]))
    own = [part for part in content.parts if isinstance(part, Own)]
    assert [part.source for part in own] == ["area = 3 * 7", "print(area)\narea"]
    assert sorted(o["text/plain"] for o in own[1].outputs) == ["21", "21\n"]


def test_a_cell_that_shows_a_block_and_prints_gives_both(static, in_folder, cells):
    content = collect(static.executed([*cells, 'print("see below")\nModePlot(modes, normalise="roof")']))
    own, shown = content.parts[-2:]
    assert own.outputs[0]["text/plain"] == "see below\n"
    assert shown.options["normalise"] == "roof"


def test_saved_and_read_again_it_holds_the_same(notebook, tmp_path):
    path = tmp_path / "saved.ipynb"
    nbformat.write(notebook, path)  # sorts the keys
    again = collect(nbformat.read(path, as_version=4))
    assert json.dumps(again.payloads) == json.dumps(collect(notebook).payloads)
    # a page's JavaScript writes 1.0 as 1
    text = path.read_text(encoding="utf-8")
    assert text.count(".0,\n") > 10
    path.write_text(text.replace(".0,\n", ",\n"), encoding="utf-8")
    assert json.dumps(collect(nbformat.read(path, as_version=4)).payloads) == json.dumps(again.payloads)


def test_without_a_card_there_is_no_record(static, in_folder, cells):
    assert refusal(static.executed(["1 + 1"])) == (
        "the notebook shows no JobCard, or was not run; show the job card in a cell and run all cells"
    )


def test_a_step_that_is_refused_or_waits_is_quoted(static, in_folder, cells):
    wrong = static.executed([*cells, 'storeys.set("3", "mass", -12)'])
    assert refusal(wrong) == 'Storeys, step "storeys", is refused: storeys.csv, level "3": mass -12 t; must be above 0'


def test_a_solver_without_its_set_is_quoted(static, in_folder, cells):
    wrong = static.executed([cells[0], cells[1], cells[2], 'modes = ModeSolver(storeys, stiffness="cracks")\nmodes'])
    assert refusal(wrong) == (
        'Natural modes, step "modes", is refused: stiffness set: got "cracks"; must be "gross" or "cracked"'
    )


def test_two_cells_that_ask_for_one_step_with_different_options_are_refused(static, in_folder, cells):
    twice = static.executed([*cells, "ModeSolver(storeys, keep=2)"])
    assert refusal(twice) == (
        'two cells ask for step "modes" with different options; give one of them its own name="\u2026"'
    )


def test_two_summaries_of_the_same_modes_need_a_name(static, in_folder, cells):
    second = "ParticipationSummary(modes, share=0.95{})"
    assert 'for step "participation"' in refusal(static.executed([*cells, second.format("")]))


def test_steps_of_their_own_names_and_the_same_asked_twice_are_collected(static, in_folder, cells):
    more = [
        "ModeSolver(storeys, share=0.9)",
        'ModeSolver(storeys, keep=2, name="two")',
        'ParticipationSummary(modes, share=0.95, name="at 95")',
    ]
    assert {"two", "at 95"} < set(collect(static.executed([*cells, *more])).payloads)


def test_one_cell_run_again_with_new_options_is_collected(static, in_folder, cells):
    notebook = static.executed(cells)
    number = next(i for i, source in enumerate(cells) if "ModeSolver(" in source and "import" not in source)
    notebook.cells[number].source = cells[number].replace("share=0.9", "share=0.8")
    static.run(notebook.cells[number].source, f"executed-{number}")
    for i, one in enumerate(notebook.cells):  # as the front end saves them: other twins have followed
        one.outputs = [nbformat.from_dict(o) for o in static.outputs[f"executed-{i}"]]
    assert collect(notebook).payloads["modes"]["inputs"]["share"] == 0.8


def test_a_cell_changed_and_not_run_again_is_stale(notebook):
    cell(notebook, "ModePlot").source = 'ModePlot(modes, normalise="roof", values="shown")'
    assert refusal(notebook) == "the notebook is stale: cell 6 was changed and not run again"


def test_blank_lines_at_the_end_of_a_cell_are_no_change(notebook):
    cell(notebook, "ModePlot").source += "\n"
    collect(notebook)


def test_a_twin_of_older_results_is_stale(notebook, static, cells):
    older = copy.deepcopy(cell(notebook, "ModePlot").outputs)
    static.run('storeys.set("Roof", "mass", 150)')
    fresh = static.executed(cells)
    cell(fresh, "ModePlot").outputs = older
    assert refusal(fresh) == "the notebook is stale: cell 5 shows older results than the job card holds; run all cells"


def test_an_error_that_was_let_pass_is_quoted(notebook):
    output = nbformat.v4.new_output("error", ename="ValueError", evalue="no", traceback=[])
    cell(notebook, "ParticipationSummary").outputs = [output]
    assert refusal(notebook) == "cell 7 failed when the notebook was run: ValueError: no"


def test_a_notebook_of_another_version_is_refused(notebook):
    other = copy.deepcopy(notebook)
    cell(other, "storeys").outputs[0]["data"][MIME]["format"] = 7
    assert refusal(other) == "the notebook was run by another version of calcsheet (twin format 7)"
    cell(notebook, "job").outputs[0]["data"][MIME]["payloads"]["modes"]["kind"] = "drifts"
    assert refusal(notebook) == "the notebook was run by another version of calcsheet (step drifts)"


def test_files_that_changed_since_are_named(notebook, in_folder):
    content = collect(notebook)
    refuse_stale(content, in_folder)
    table, card = in_folder / "storeys.csv", in_folder / "job.toml"
    text = table.read_text()
    table.write_text(text.replace("141.5", "141.6"))
    with pytest.raises(RecordError, match=r"the notebook is stale: storeys\.csv or job\.toml in this folder"):
        refuse_stale(content, in_folder)
    table.write_text(text.replace("141.5", "141.50"))  # the same number
    refuse_stale(content, in_folder)
    card.write_text(card.read_text().replace("First issue", "Second issue"))
    with pytest.raises(RecordError, match=r"the notebook is stale: job\.toml in this folder"):
        refuse_stale(content, in_folder)
    os.remove(card)
    with pytest.raises(RecordError, match=r"Job card is refused: no job\.toml in"):
        refuse_stale(content, in_folder)


def test_empty_entries_of_another_version_are_no_change(notebook, in_folder):
    content = collect(notebook)
    given = content.payloads["card"]["inputs"]
    later = given | {"imports": {}, "later": {"floors": {}, "storeys": []}, "people": given["people"] | {"seen": None}}
    refuse_stale(Content((), {**content.payloads, "card": content.payloads["card"] | {"inputs": later}}), in_folder)
    later["later"] = {"floors": {"a": 1}}
    with pytest.raises(StaleError, match=r"job\.toml in this folder isn't what it shows \(later\); run all its cells"):
        refuse_stale(Content((), {**content.payloads, "card": content.payloads["card"] | {"inputs": later}}), in_folder)


def test_a_wrong_card_is_named_before_what_follows_from_it(notebook, in_folder):
    content = collect(notebook)
    basis = {"kind": "basis", "state": "ok", "inputs": {"system": "any"}}
    content = Content(content.parts, {**content.payloads, "basis": basis})
    with pytest.raises(StaleError, match="the basis in this folder isn't what it shows"):
        refuse_stale(content, in_folder)
    card = in_folder / "job.toml"
    card.write_text(card.read_text().replace('system = "SI"', 'system = "XY"'))
    with pytest.raises(RecordError, match=r"Job card is refused: job\.toml, units\.system: got \"XY\""):
        refuse_stale(content, in_folder)
