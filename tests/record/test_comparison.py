"""Two records compared from the shell: exit codes, words, data, refusals."""

from __future__ import annotations

import json
from pathlib import Path

import nbformat
import pytest
from click.testing import CliRunner

from calcsheet.cli import main
from calcsheet.job.errors import InputError
from calcsheet.record.comparison import comparison
from calcsheet.record.issue import issue
from calcsheet.steps.compare import Changes
from calcsheet.steps.replay import replay
from calcsheet.steps.serial import from_json

FIRST_FORMAT = Path(__file__).parent / "data/format-1"


@pytest.fixture
def compare():
    def run(*arguments):
        return CliRunner().invoke(main, ["compare", *map(str, arguments)], prog_name="calcsheet")

    return run


@pytest.fixture
def records(demand_job, plain_record, tmp_path):
    """Two records of one job, the second with heavier masses, in the job's folder of issued ones."""
    made = []
    for revision, mass in (("A", "100"), ("B", "112.5")):
        job = demand_job("EN", card=[('revision = "A"', f'revision = "{revision}"')], name=revision)
        job.edit(lambda reading, mass=mass: _with_mass(reading, mass))
        place = tmp_path / "tower/issued" / revision
        place.mkdir(parents=True)
        made.append(place / f"HR-21-rev-{revision}.json")
        made[-1].write_text(json.dumps(plain_record(job)), encoding="utf-8")
    return made


def _with_mass(reading, mass):
    from calcsheet.job.edits import set_text

    return set_text(reading, "Roof", "mass", mass)


def test_what_differs_is_said(compare, records):
    result = compare(*records)
    assert result.exit_code == 1, result.output
    lines = result.stdout.splitlines()
    assert lines[0] == "revision A of 2026-03-09, FOR CHECKING → revision B of 2026-03-09, FOR CHECKING"
    assert "  level Roof: mass 100.0 t → 112.5 t" in lines
    assert "Mass above the effective base 300.0 t → 312.5 t +4.2 %" in [" ".join(line.split()) for line in lines]


def test_the_same_is_exit_code_0(compare, records):
    result = compare(records[0], records[0])
    assert (result.exit_code, result.stderr) == (0, "")
    assert result.stdout.splitlines()[1:] == [
        "No conclusion flipped.", "No headline result changed.", "No input changed.",
    ]  # fmt: skip


def test_revisions_of_a_job_folder(compare, records):
    folder = records[0].parents[2]
    assert compare(folder, "A", "B").stdout == compare(*records).stdout
    result = compare(folder, "A", "Z")
    assert (result.exit_code, result.stdout) == (2, "")
    assert result.stderr == 'calcsheet: against: got revision "Z"; must be one of those issued: "A", "B"\n'


def test_plain_data(compare, records):
    result = compare(*records, "--json")
    assert result.exit_code == 1
    data = json.loads(result.stdout)
    assert data["same"] is False
    assert (data["before"]["revision"], data["now"]["revision"]) == ("A", "B")
    changes = from_json(Changes, data["changes"])
    assert [(c.one.level, c.one.key) for c in changes.inputs] == [("Roof", "mass")]
    same = json.loads(compare(records[0], records[0], "--json").stdout)
    assert same["same"] is True


def test_a_record_of_the_first_format_as_html_and_as_json(compare):
    html, data = (next(FIRST_FORMAT.glob(f"*.{kind}")) for kind in ("html", "json"))
    result = compare(html, data)
    assert result.exit_code == 0, result.output
    assert result.stdout.startswith("revision A of 2026-11-16, FOR CHECKING → ")


@pytest.mark.parametrize("count", [0, 1, 3])
def test_how_it_is_called(compare, records, count):
    result = compare(*[*records, records[0]][:count])
    assert (result.exit_code, result.stdout) == (2, "")
    assert "must be two records, or a job folder and two of its issued revisions" in result.stderr


@pytest.mark.parametrize("content", ["", "{", "[]", "{}", '{"payloads": {}}', '{"payloads": {"card": 3}}'])
def test_what_can_not_be_read_is_exit_code_2(compare, records, tmp_path, content):
    bad = tmp_path / "bad.json"
    bad.write_text(content, encoding="utf-8")
    result = compare(bad, records[0])
    assert (result.exit_code, result.stdout) == (2, "")
    (line,) = result.stderr.splitlines()
    assert line.startswith("calcsheet: ")
    assert "bad.json" in line
    assert isinstance(result.exception, SystemExit)


def test_units_that_are_none_are_refused(records):
    record = json.loads(records[1].read_text(encoding="utf-8"))
    record["payloads"]["card"]["inputs"]["units"]["system"] = "furlongs"
    records[1].write_text(json.dumps(record), encoding="utf-8")
    with pytest.raises(InputError, match=r'^revision B, units.system: got "furlongs"; must be "SI" or "US"$'):
        comparison([str(path) for path in records])


def test_a_revised_job_is_issued_with_what_changed(quick_kernel, job_folder, calculation, new_notebook, document):
    folder = job_folder()
    nbformat.write(new_notebook(calculation), folder / "calc.ipynb")
    first = issue(folder, to=("html",))
    assert "What changed" not in document(first.files[0].read_text(encoding="utf-8")).headings
    for file, old, new in (
        ("job.toml", 'revision = "A"', 'revision = "B"'),
        ("storeys.csv", "Roof,2.95,141.5", "Roof,2.95,155.5"),
    ):
        text = (folder / file).read_text(encoding="utf-8")
        (folder / file).write_text(text.replace(old, new), encoding="utf-8")
    second = issue(folder, to=("html",))
    html = second.files[0].read_text(encoding="utf-8")
    assert "What changed" in document(html).headings
    assert '<data value="/earlier/inputs/facts/inputs/' in html
    assert "fingerprints {" not in html  # the facts held are no options of a step
    record = json.loads(second.files[-1].read_text(encoding="utf-8"))
    assert replay(record["payloads"]) == []
    changes = comparison([str(folder), "A", "B"]).changes
    assert [(c.one.level, c.before.number, c.now.number) for c in changes.inputs] == [("Roof", 141.5, 155.5)]


def leaves(value, path=()):
    if isinstance(value, dict | list):
        for key, item in value.items() if isinstance(value, dict) else enumerate(value):
            yield (*path, key)
            yield from leaves(item, (*path, key))


def test_a_record_that_holds_anything_is_compared_or_refused(records):
    """Every seventh node of a record in turn replaced by a value of another type: no traceback, whatever it is."""
    record = json.loads(records[1].read_text(encoding="utf-8"))
    for payload in record["payloads"].values():  # what is not read here
        payload["lines"], payload["evidence"], payload["cautions"] = [], payload["evidence"][:1], []
    record["payloads"].pop("peaks")
    for name in ("curve", "curve_period", "ordinate_relations", "static_force_relations"):
        for item in record["payloads"]["demand"]["result"]["directions"]:
            item[name] = []
    text, said, refused = json.dumps(record), 0, 0
    for i, (*path, last) in enumerate(list(leaves(record))[::7]):
        broken = json.loads(text)
        node = broken
        for key in path:
            node = node[key]
        node[last] = (None, "\u001b[1m", -1e308, [], {"a": [1]}, True, 0)[i % 7]
        records[1].write_text(json.dumps(broken), encoding="utf-8")
        try:
            found = comparison([str(path) for path in records])
        except InputError as error:
            refused += "no record that can be compared" in str(error) or "units.system" in str(error)
            continue
        assert all(line.isprintable() for line in found.text.splitlines())
        json.dumps(found.data, allow_nan=False)
        said += 1
    assert said > 50
    assert refused > 5
