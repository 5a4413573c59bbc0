"""The status of a record and what keeps it a draft."""

from __future__ import annotations

from collections.abc import Mapping

from calcsheet.steps.step import Payload

DRAFT, FOR_CHECKING = "DRAFT", "FOR CHECKING"


def held_back(payloads: Mapping[str, Payload]) -> tuple[str, ...]:
    """What keeps a record a DRAFT, a clause each; nothing where it may go for checking."""
    card, reasons = payloads["card"]["inputs"], []
    beyond = [e["what"] for p in payloads.values() for e in p["evidence"] if not e["within"]]
    if beyond:
        reasons.append(f"evidence beyond its limit: {'; '.join(beyond)}")
    unanswered = [
        c["key"]
        for p in payloads.values()
        for c in p["cautions"]
        if c["answer"] and not card["answers"].get(c["key"], "").strip()
    ]
    if unanswered:
        reasons.append(f"cautions that need an answer: {', '.join(unanswered)}")
    if not card["people"]["prepared"]["date"]:
        reasons.append("not signed by who prepared it: people.prepared has no date")
    return tuple(reasons)


def status_of(payloads: Mapping[str, Payload]) -> str:
    """DRAFT or FOR CHECKING: further words are for those who check and approve the issued record."""
    return DRAFT if held_back(payloads) else FOR_CHECKING
