"""Files made to harm: a clear sentence or a report, in time, and nothing of them is run, fetched or written."""

from __future__ import annotations

import contextlib
import copy
import json
import random
import subprocess
import sys
import time

import pytest
from click.testing import CliRunner
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcsheet.cli import main
from calcsheet.record.check.finding import DIFFERS
from calcsheet.record.check.report import report_on
from calcsheet.record.document import settled
from calcsheet.record.errors import RecordError
from calcsheet.record.files import html_of, json_of
from calcsheet.record.recordfile import record_in

LONGEST = 10.0
"""Seconds that a hostile file may take (on a busy machine: twice)."""
VALUES = (
    None, True, False, 0, -1, 1, 2**53 - 1, 1e308, -1e308, 5e-324, 0.5, "", "x", "<script>alert(1)</script>", "{0}",
    "../../etc/passwd", "{0.__class__}", "%s", "\u0000", "\u202e", "$\\input{a}$", "a" * 5000, [], [[]], [None], [1e308],
    {}, {"kind": "x"},
)  # fmt: skip


def outcome(source, called="a.bin"):
    """What a check says of a file: a report, or one sentence; in time."""
    start = time.perf_counter()
    try:
        report = report_on(record_in(source, called), called)
        said = report.words()
        json.dumps(report.as_json())
    except RecordError as error:
        said = str(error)
        assert said.startswith(f"{called}: ")
        assert "\n" not in said
    assert time.perf_counter() - start < 2 * LONGEST
    assert "Traceback" not in said
    return said


def nodes(value, at=()):
    yield at
    if isinstance(value, dict):
        for key in value:
            yield from nodes(value[key], (*at, key))
    elif isinstance(value, list):
        for i in range(min(len(value), 4)):
            yield from nodes(value[i], (*at, i))


def put(data, path, value):
    for step in path[:-1]:
        data = data[step]
    data[path[-1]] = value


@given(st.data())
@settings(
    max_examples=70, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow]
)
def test_records_with_nodes_of_every_wrong_type(record, data):
    new = copy.deepcopy(record)
    for _ in range(data.draw(st.integers(1, 3))):
        paths = [path for path in nodes(new) if path]
        put(new, data.draw(st.sampled_from(paths)), copy.deepcopy(data.draw(st.sampled_from(VALUES))))
    if data.draw(st.booleans()):
        with contextlib.suppress(Exception):  # a forger's own troubles
            new = settled(new)
    try:
        source = json_of(new)
    except UnicodeEncodeError:
        return
    outcome(source)


def at(data, path):
    for step in path:
        data = data[step]
    return data


@pytest.mark.parametrize("seed", range(10))
def test_prints_of_records_with_other_numbers_and_texts(record, html, seed):
    """Of the right type, so that they pass the schema; the layout is this program's own, so the pages are made again."""
    chance = random.Random(seed)
    new = copy.deepcopy(record)
    for kind in (str, int | float, str, int | float):
        paths = [
            p for p in nodes(new) if len(p) > 1 and p[0] in ("payloads", "notebook") and isinstance(at(new, p), kind)
        ]
        values = [v for v in VALUES if isinstance(v, kind) and not isinstance(v, bool)]
        put(new, chance.choice(paths), chance.choice(values))
    inside = json.dumps(new).replace("&", r"\u0026").replace("<", r"\u003c").replace(">", r"\u003e")
    start = html.index('id="calcsheet-data">') + len('id="calcsheet-data">')
    outcome((html[:start] + inside + html[html.index("</script>", start) :]).encode())


@given(st.data())
@settings(
    max_examples=8, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow]
)
def test_html_cut_and_scrambled(html, data):
    text = html
    for _ in range(data.draw(st.integers(1, 3))):
        at, length = data.draw(st.integers(0, len(text))), data.draw(st.integers(0, 3000))
        other = data.draw(
            st.sampled_from(["", "<", ">", "</data>", "<script>", "<!--", '"', "<data value='/a'>", "\u0000"])
        )
        text = text[:at] + other + text[at + length :]
    outcome(text.encode(), "a.html")


def test_html_cut_short_and_put_together_from_two(html):
    assert "no element" in outcome(html[: len(html) // 2].encode())
    assert "2 elements" in outcome((html + html).encode())
    assert "differs" in outcome(html.replace("</body>", "<p>1</p></body>").encode())


def test_a_pdf_cut_short(pdf):
    for share in (0.01, 0.3, 0.9, 0.999):
        outcome(pdf[: int(len(pdf) * share)], "a.pdf")


@pytest.mark.parametrize("seed", range(6))
def test_a_pdf_scrambled(pdf, seed):
    chance, source = random.Random(seed), bytearray(pdf)
    for _ in range(40):
        source[chance.randrange(10, len(source))] = chance.randrange(256)
    said = outcome(bytes(source), "a.pdf")
    assert "differs" in said or "can't be read" in said or "a.pdf: " in said


@pytest.mark.parametrize(
    "source",
    [
        b"%PDF-1.7\n" + b"1 0 obj <<" * 30_000,
        b"%PDF-1.7\n" + b"[" * 300_000,
        b"%PDF-1.7\nxref\n0 99999999\ntrailer << /Root 1 0 R /Prev 9 >>\nstartxref\n9\n%%EOF",
        b"<html>" + b"<!--" * 500_000,
        b"<html>" + b"<a " * 500_000,
        b'<html><script id="calcsheet-data">' * 20_000,
        b"{" * 500_000,
        b'{"payloads": ' + b"[" * 500_000,
        b'{"payloads": {}, "format": 2}',
        b'{"payloads": null, "format": 1}',
        b'{"payloads": {"card": null}, "format": 1, "notebook": []}',
        b'{"payloads": {"card": {"cautions": [1], "inputs": 3}}, "format": 1, "notebook": [[]]}',
    ],
    ids=lambda source: source[:24].decode(),
)
def test_files_that_are_hard_to_read(source):
    assert outcome(source)


def test_texts_of_a_record_are_text_wherever_they_are_printed(record, document):
    """Markup in every text that an engineer can type: none of it is markup in print."""
    new = copy.deepcopy(record)
    evil = "<img src=x onerror=alert(1)><script>alert(1)</script>{0}\"'&"
    card, storeys = new["payloads"]["card"]["inputs"], new["payloads"]["storeys"]["inputs"]
    for key in ("project", "title", "number", "reason", "purpose"):
        card["job"][key] = evil
    card["people"]["prepared"]["name"] = card["assumptions"][0]["text"] = card["directions"]["x"] = evil
    storeys["level"] = [evil + str(i) for i in range(3)]
    new["notebook"][0]["words"] = f"# {evil}\n\n{evil} [a](javascript:alert(1)) ![b](http://example.org/b.png)"
    new["notebook"][-1] |= {
        "own": evil,
        "outputs": [{"text/html": evil + "<table onclick=alert(1)><td>1</td></table>"}],
    }
    new["programme"] = new["versions"]["numpy"] = evil
    new["comments"] = []
    seen = document(html_of(settled(new)))
    names = [name for name, _ in seen.tags]
    assert names.count("script") == 1
    assert not [a for _, attributes in seen.tags for a in attributes if a.startswith("on")]
    led = [attributes[name] or "" for _, attributes in seen.tags for name in ("href", "src") if name in attributes]
    assert [link for link in led if not link.startswith(("#", "data:", "https://doi.org/"))] == []


def test_the_command_gives_exit_codes_and_no_traceback(html, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    cases = {
        "good.html": (html, 0),
        "bad.html": (html.replace("Maud", "Maude", 1), 1),
        "none.html": ("<p>x</p>", 2),
        "junk": ("junk", 2),
    }
    for name, (text, code) in cases.items():
        (tmp_path / name).write_text(text, encoding="utf-8")
        for option in ([], ["--json"]):
            ran = CliRunner().invoke(main, ["check", name, *option])
            assert ran.exit_code == code, ran.output
            assert ran.exception is None or isinstance(ran.exception, SystemExit)
            if code == 2:
                assert ran.output.startswith(f"calcsheet: {name}: ")
                assert len(ran.output.splitlines()) == 1
            elif option:
                assert json.loads(ran.output)["verdict"] == ("agrees" if code == 0 else DIFFERS)
    assert CliRunner().invoke(main, ["check", "nothing.html"]).exit_code == 2
    assert {path.name for path in tmp_path.iterdir()} == {*cases}


def test_the_command_from_the_shell(html, tmp_path):
    (tmp_path / "a.html").write_text(html.replace(">Maud", ">Maude", 1), encoding="utf-8")
    command = [sys.executable, "-c", "from calcsheet.cli import main; main()", "check", "a.html"]
    ran = subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, timeout=300)
    assert ran.returncode == 1
    assert 'should be "Maud Ferreira"' in ran.stdout
    assert ran.stderr == ""


@pytest.mark.parametrize("piece", ["<b>", "<script>", "**a", "[a](", "> ", "$a "])
def test_texts_that_are_slow_to_print_are_not_printed_again(record, html, piece):
    """Half a megabyte of what readers of markdown and HTML are slow with, in words and in an output."""
    new = copy.deepcopy(record)
    new["notebook"][0]["words"] = piece * (500_000 // len(piece))
    new["notebook"][-1]["outputs"] = [{"text/html": piece * (500_000 // len(piece))}]
    inside = json.dumps(settled(new)).replace("&", r"\u0026").replace("<", r"\u003c").replace(">", r"\u003e")
    start = html.index('id="calcsheet-data">') + len('id="calcsheet-data">')
    said = outcome((html[:start] + inside + html[html.index("</script>", start) :]).encode())
    assert "printed numbers are those of the data" in said
    assert "at most 100000 of each are printed again" in said
