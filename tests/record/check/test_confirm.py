"""The second route, held against closed forms, and against stored numbers that were changed."""

from __future__ import annotations

import copy
import math

import numpy as np
import pytest

from calcsheet.record.check.confirm import second_route
from calcsheet.record.check.finding import AGREES, DIFFERS, NOT_ASSESSED
from calcsheet.record.check.flexible import flexibility


def test_a_record_is_confirmed_with_figures(record):
    found = list(second_route(record["payloads"]))
    assert {f.verdict for f in found} == {AGREES}
    text = "\n".join(f.text for f in found)
    for said in (
        "all 3 frequencies",
        "residual of the 3 shapes",
        "effective mass of mode 1",
        "roof displacement",
        "V\u2081 =",
    ):
        assert text.count(said) == 2, said  # x and y


def uniform(n, k=5e4, m=100.0, ratio=1.0):
    """Payloads of a uniform chain from its closed form; frequencies times `ratio`.

    ω_r = 2√(k/m) sin((2r − 1)π / (2(2n + 1))), φ_ir ∝ sin(i(2r − 1)π/(2n + 1)) (Blevins, Formulas for Natural Frequency and
    Mode Shape, from memory; it satisfies (K − ω²M)φ = 0 row by row).
    """
    r, i = np.arange(1, n + 1), np.arange(1, n + 1)
    omega = 2.0 * math.sqrt(k / m) * np.sin((2 * r - 1) * math.pi / (2 * (2 * n + 1)))
    phi = np.sin(np.outer(i, (2 * r - 1) * math.pi / (2 * n + 1)))
    psi = phi / np.sqrt(m * (phi**2).sum(axis=0))
    lateral = {"x": {"kind": "storey chain", "storey": [k] * n}}
    given = {
        "mass": [m] * n,
        "elevation": [3.0 * j for j in i.tolist()],
        "base_elevation": 0.0,
        "stiffness": [{"name": "a", "lateral": lateral}],
    }
    result = {
        "stiffness": "a",
        "models": [{"name": "x", "modes": {"omega": (omega * ratio).tolist(), "psi": psi.tolist()}}],
    }
    return {
        "storeys": {"kind": "storeys", "inputs": given},
        "modes": {"kind": "modes", "needs": {"storeys": "storeys"}, "result": result},
    }


@pytest.mark.parametrize("n", [1, 2, 5, 30, 120])
def test_the_closed_form_of_a_uniform_chain_is_confirmed(n):
    (finding,) = second_route(uniform(n))
    assert finding.verdict == AGREES
    assert f"all {n} frequencies" in finding.text


def test_above_the_limit_the_first_frequency_is_confirmed(monkeypatch):
    monkeypatch.setattr("calcsheet.record.check.confirm.SOLVED", 4)
    (finding,) = second_route(uniform(6))
    assert finding.verdict == AGREES
    assert "the first 1 of 6 frequencies" in finding.text
    assert DIFFERS in {f.verdict for f in second_route(uniform(6, ratio=1.0 + 1e-5))}


def test_frequencies_off_by_a_little_are_named():
    found = [f for f in second_route(uniform(5, ratio=1.0 + 3e-6)) if f.verdict == DIFFERS]
    assert [f.place for f in found if "/omega/" in f.place] == [
        f"/modes/result/models/0/modes/omega/{n}" for n in range(5)
    ]


def test_a_mode_left_out_and_a_shape_of_another_are_found():
    payloads = uniform(5)
    modes = payloads["modes"]["result"]["models"][0]["modes"]
    modes["omega"] = modes["omega"][1:]
    modes["psi"] = [row[1:] for row in modes["psi"]]
    assert DIFFERS in {f.verdict for f in second_route(payloads)}
    payloads = uniform(5)
    modes = payloads["modes"]["result"]["models"][0]["modes"]
    modes["psi"][2][1] *= 1.00001
    assert any(f.place.endswith("/psi") for f in second_route(payloads) if f.verdict == DIFFERS)


@pytest.mark.parametrize(
    ("path", "at"),
    [
        (("modes", "result", "models", 1, "modes", "omega", 2), "/modes/result/models/1/modes/omega/2"),
        (("modes", "result", "models", 0, "modes", "psi", 0, 1), "/modes/result/models/0/modes/psi"),
        (
            ("participation", "result", "directions", 0, "effective_mass", 0),
            "/participation/result/directions/0/effective_mass/0",
        ),
        (
            ("participation", "result", "directions", 1, "cumulative", 2),
            "/participation/result/directions/1/cumulative/2",
        ),
        (("participation", "result", "directions", 1, "gamma", 1), "/participation/result/directions/1/gamma/1"),
        (("demand", "result", "directions", 0, "ordinate", 0), "/peaks/result/directions/0"),
        (("peaks", "result", "directions", 0, "ordinate", 0), "/peaks/result/directions/0/ordinate/0"),
        (("peaks", "result", "directions", 0, "shear", 0, 0), "/peaks/result/directions/0/shear/0/0"),
        (("peaks", "result", "directions", 1, "moment", 2, 0), "/peaks/result/directions/1/moment/2/0"),
        (
            ("peaks", "result", "directions", 1, "forces", "displacement", 2),
            "/peaks/result/directions/1/forces/displacement/2",
        ),
        (("storeys", "inputs", "mass", 0), "/modes/result/models/0/modes"),
    ],
)
def test_a_stored_number_that_is_off_is_named(record, path, at):
    payloads = copy.deepcopy(record["payloads"])
    *way, last = path
    place = payloads
    for step in way:
        place = place[step]
    place[last] *= 1.0 + 1e-4
    assert any(f.place.startswith(at) for f in second_route(payloads) if f.verdict == DIFFERS)


def test_a_record_without_modes_is_not_assessed():
    assert [f.verdict for f in second_route({})] == [NOT_ASSESSED]


def test_modes_left_out_are_carried_by_the_residual(demand_job):
    for residual in ("last ordinate", "none"):
        job = demand_job(
            "EN", ('elements = "ductile"', f'elements = "ductile"\nresidual = "{residual}"'), keep=1, name=residual
        )
        found = list(second_route(job.payloads()))
        assert {f.verdict for f in found} == {AGREES}
        assert any("of the modal displacements" in f.text for f in found)


@pytest.mark.parametrize("kind", ["stiffness matrix", "flexibility matrix"])
def test_matrices_are_confirmed(kind):
    payloads = uniform(7)
    given = payloads["storeys"]["inputs"]["stiffness"][0]["lateral"]
    found = flexibility(given["x"])
    given["x"] = {"kind": kind, "matrix": (found if kind.startswith("flex") else np.linalg.inv(found)).tolist()}
    (finding,) = second_route(payloads)
    assert finding.verdict == AGREES


def test_it_uses_nothing_of_the_core():
    import ast
    from pathlib import Path

    from calcsheet.record.check import confirm

    tree = ast.parse(Path(confirm.__file__).read_text(encoding="utf-8"))
    names = {node.module for node in ast.walk(tree) if isinstance(node, ast.ImportFrom) and node.module}
    assert not [name for name in names if name.startswith(("calcsheet.core", "calcsheet.steps", "scipy"))]
