"""View of the job card."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from typing import Any

from calcsheet.render.table import Column, facts, table, words
from calcsheet.render.view import Rendered, View
from calcsheet.steps.step import Payload

SYSTEMS = {"SI": "kN, m, t", "US": "kip, ft, in"}


def render(payloads: Mapping[str, Payload], key: str, options: Mapping[str, Any]) -> Rendered:
    card = payloads[key]["inputs"]
    job = card["job"]
    rows = [
        ("project", escape(job["project"])),
        ("calculation", f"{escape(job['number'])}: {escape(job['title'])}"),
        ("revision", f"{escape(job['revision'])}, {escape(job['date'])}. {escape(job['reason'])}"),
        ("purpose", escape(job["purpose"])),
        ("prepared by", person(card["people"]["prepared"])),
        ("units", SYSTEMS[card["units"]["system"]]),
        *((f"direction {d}", escape(text)) for d, text in card["directions"].items() if text),
        ("model", escape(card["model"]["kind"])),
    ]
    return Rendered(facts([(label, value) for label, value in rows if value.strip()]))


def person(who: Mapping[str, Any]) -> str:
    """HTML of a name with qualification and registration."""
    return ", ".join(escape(who[k]) for k in ("name", "qualification", "registration") if who[k])


def assumptions(card: Mapping[str, Any]) -> str:
    """Table of the assumptions, each with its ground and who is to confirm it."""
    rows = card["assumptions"]
    if not rows:
        return "<p>None stated.</p>"
    return table(
        (
            Column("no.", tuple(str(i) for i in range(1, len(rows) + 1))),
            words("assumption", [a["text"] for a in rows]),
            words("ground", [a["ground"] for a in rows]),
            words("to be confirmed by", [a["confirm_by"] or "\u2013" for a in rows]),
        ),
        kind="words",
    )


def origins(card: Mapping[str, Any]) -> str:
    """Table of the origin of each input table."""
    rows = card["origins"]
    if not rows:
        return "<p>Not stated.</p>"
    return table(
        (
            words("table", list(rows)),
            words("source", [o["source"] for o in rows.values()]),
            words("revision", [o["revision"] for o in rows.values()]),
            words("date", [o["date"] or "" for o in rows.values()]),
            words("note", [o["note"] for o in rows.values()]),
        ),
        kind="words",
    )


CARD = View("card", "Job card", "card", render)
