"""Kinds of caution: every one that is raised is explained, and none is explained in vain."""

from __future__ import annotations

import ast
from pathlib import Path

import pytest

import calcsheet
from calcsheet.steps.cautions import CAUTIONS, migrated_answer, migrated_caution
from calcsheet.steps.serial import from_json, to_json
from calcsheet.steps.step import Caution, Number


def raised() -> set[str]:
    """The kinds of all cautions made anywhere in the package."""
    found = set()
    for path in Path(calcsheet.__file__).parent.rglob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and node.func.id == "Caution":
                given = {keyword.arg: keyword.value for keyword in node.keywords}
                kind = node.args[0] if node.args else given["kind"]
                assert isinstance(kind, ast.Constant), f"{path.name}, line {node.lineno}: the kind must stand there"
                found.add(kind.value)
    return found


def test_every_kind_raised_is_explained_and_every_explanation_is_used():
    assert raised() == set(CAUTIONS)


@pytest.mark.parametrize("kind", CAUTIONS)
def test_explanations_are_one_sentence_each(kind):
    for sentence in (CAUTIONS[kind].why, CAUTIONS[kind].usual):
        assert sentence[0].isupper()
        assert sentence.endswith(".")
        assert sentence.count(". ") == 0
        assert 25 <= len(sentence) <= 130


def test_an_unknown_kind_is_refused():
    with pytest.raises(ValueError, match=r'^kind of caution: got "hunch"; must be one of qualified-engineer, '):
        Caution("hunch", "Something is odd.")


def test_the_key_is_kind_and_subject():
    assert Caution("left-out", "All else.").key == "left-out"
    assert Caution("drift-exceeds", "Too far.", subject="x").key == "drift-exceeds-x"


def test_plain_json_and_back():
    caution = Caution("drift-exceeds", "{0} too far", (Number(0.01, "displacement", "result/d"),), True, "x")
    plain = to_json(caution)
    assert plain == {
        "kind": "drift-exceeds",
        "text": "{0} too far",
        "numbers": [{"value": 0.01, "quantity": "displacement", "at": "result/d"}],
        "answer": True,
        "subject": "x",
    }
    assert from_json(Caution, plain) == caution


@pytest.mark.parametrize(
    ("key", "kind", "subject"),
    [
        ("left-out", "left-out", ""),
        ("no-origin-storeys.csv", "no-origin", "storeys.csv"),
        ("mass-basis-2", "mass-basis", "2"),
        ("screen-x-1", "screen", "x-1"),
        ("no-second-order-y", "no-second-order", "y"),
        ("jump-stiffness-y-(gross)-3", "jump", "stiffness-y-(gross)-3"),
    ],
)
def test_a_caution_of_the_first_format(key, kind, subject):
    old = {"key": key, "text": "As it was.", "numbers": [], "answer": False}
    new = migrated_caution(old)
    assert new == {"kind": kind, "subject": subject, "text": "As it was.", "numbers": [], "answer": False}
    assert from_json(Caution, new).key == key


@pytest.mark.parametrize("key", ["left", "left-outside", "hunch-x", ""])
def test_a_key_of_no_known_kind_is_refused(key):
    with pytest.raises(ValueError, match=f'^caution "{key}": of no known kind$'):
        migrated_caution({"key": key, "text": "", "numbers": [], "answer": False})


def test_an_answer_of_the_first_format_is_nobodys():
    assert migrated_answer("Seen.") == {"text": "Seen.", "by": "", "date": None, "finding": ""}
