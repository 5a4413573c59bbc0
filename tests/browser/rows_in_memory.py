"""A small handler behind the two widgets, for the tests alone: it holds invented rows in memory.

The browser tests copy this file beside their notebook.
"""

from itertools import count
from IPython.display import display
from calcsheet.blocks.widgets import TableWidget, ViewWidget, front

COLUMNS = [
    {"key": "level", "heading": "level", "editable": True, "align": "left"},
    {"key": "height", "heading": "storey height [m]", "editable": True},
    {"key": "mass", "heading": "mass [t]", "editable": True},
    {"key": "elevation", "heading": "elevation [m]", "editable": False},
]
numbers = count(1)
rows = [
    {"id": str(next(numbers)), "level": name, "height": h, "mass": m}
    for name, h, m in [("Roof", "3.10", "184.0"), ("5", "3.30", "241.5"), ("4", "3.30", "241.5"),
                       ("Gallery", "2.75", "96.4"), ("2", "4.60", "268.9")]
]
seen = []

def wrong(text):
    try:
        return "" if float(text) > 0 else f"mass {text} t; must be above 0"
    except ValueError:
        return f'mass "{text}"; must be a number above 0'

def place(row):
    return next(i for i, r in enumerate(rows) if r["id"] == row)

def table():
    good = all(not wrong(r["mass"]) for r in rows)
    elevations, z = [], 0.0
    for r in reversed(rows):
        z += float(r["height"] or 0)
        elevations.insert(0, f"{z:.2f}")
    return {
        "columns": COLUMNS, "item": "level", "caption": "storeys.csv",
        "rows": [{"id": r["id"], "cells": r | {"elevation": z},
                  "errors": {"mass": f'storeys.csv, level "{r["level"]}": {wrong(r["mass"])}'} if wrong(r["mass"]) else {}}
                 for r, z in zip(rows, elevations)],
        "totals": {"level": "total", "mass": f"{sum(float(r['mass']) for r in rows):.1f}"} if good else {},
    }

def answer(message):
    seen.append(message)
    op = message["op"]
    if op == "set":
        if message["text"] == "777":
            return "storeys.csv is open in another program; not saved"
        rows[place(message["row"])][message["key"]] = message["text"]
    elif op == "insert":
        at = 0 if message["row"] is None else place(message["row"]) + 1
        rows.insert(at, {"id": str(next(numbers)), "level": "new", "height": "3.00", "mass": "1.0"})
    elif op == "delete":
        del rows[place(message["row"])]
    elif op == "paste":
        keys = [c["key"] for c in COLUMNS]
        at, left = place(message["row"]), keys.index(message["key"])
        for i, line in enumerate(message["text"].splitlines()):
            if at + i == len(rows):
                rows.append({"id": str(next(numbers)), "level": f"new {i}", "height": "3.00", "mass": "1.0"})
            for key, text in zip(keys[left:], line.split("\t")):
                rows[at + i][key] = text
    elif op == "load":
        seen.append("loaded")
    renew()

def svg():
    bars = "".join(f'<rect x="60" y="{10 + 22 * i}" height="14" width="{float(r["mass"])}" fill="#1f3a5f"/>'
                   f'<text x="0" y="{22 + 22 * i}" font-size="13">{r["level"]}</text>' for i, r in enumerate(rows))
    return f'<svg xmlns="http://www.w3.org/2000/svg" width="400" height="150">{bars}</svg>'

def renew():
    storeys.table = table()
    storeys.revision += 1
    bad = next((r for r in rows if wrong(r["mass"])), None)
    storeys.status = {"kind": "saved", "text": f"saved, revision {storeys.revision}"}
    if bad:
        view.note = {"kind": "waiting", "text": f'waits for storeys.csv, level "{bad["level"]}": {wrong(bad["mass"])}'}
    else:
        total = sum(float(r["mass"]) for r in rows)
        body = "".join(f"<tr><th>{r['level']}</th><td>{100 * float(r['mass']) / total:.2f}</td></tr>" for r in rows)
        view.html = (f'<p id="total">{total:.1f} t</p><table class="values"><thead><tr><th>level</th><th>share [%]</th></tr>'
                     f'</thead><tbody>{body}</tbody></table>')
        view.note = {}
        view.figures = [{"name": "bars", "alt": "mass by level", "svg": svg()}]
    view.revision += 1
    for handle, widget in handles:
        handle.update(twin(widget), raw=True)

def twin(widget):
    style = front("calcsheet.css", "twin.css")
    total = "; ".join(r["mass"] for r in rows)
    html = (f'<div class="calcsheet calcsheet-twin" data-block="{widget.block}" data-revision="{widget.revision}">'
            f'<style>{style}</style><h3>{widget.block}, stored</h3><table class="values"><thead><tr><th>level</th>'
            f'<th>mass [t]</th></tr></thead><tbody>'
            + "".join(f'<tr><th>{r["level"]}</th><td>{r["mass"]}</td></tr>' for r in rows) + '</tbody></table></div>')
    return {"text/html": html, "text/plain": total}

def choose(message):
    seen.append(message)
    if message["value"] == "none":
        return "one shape at least must be shown"
    view.choices = [view.choices[0] | {"value": message["value"]}]

handles = []
def show(widget):
    display(widget)
    handles.append((display(twin(widget), raw=True, display_id=True), widget))

storeys = TableWidget(answer, block="storeys")
view = ViewWidget(choose, block="shares", choices=[{"key": "normalise", "label": "largest value", "value": "roof",
    "options": [{"value": v, "label": v} for v in ("roof", "unit mass", "none")]}])
renew()
