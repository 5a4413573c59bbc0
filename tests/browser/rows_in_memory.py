"""A small handler behind the two widgets, for the browser tests alone: it holds invented rows in memory.

The tests copy this file beside their notebook.
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
START = [
    ("Roof", "3.10", "184.0"),
    ("5", "3.30", "241.5"),
    ("4", "3.30", "241.5"),
    ("Gallery", "2.75", "96.4"),
    ("2", "4.60", "268.9"),
]
numbers = count(1)
seen = []
looks = []
handles = []


def row(level, height="3.00", mass="1.0"):
    return {"id": str(next(numbers)), "level": level, "height": height, "mass": mass}


rows = [row(*start) for start in START]


def wrong(row):
    try:
        right = float(row["mass"]) > 0
    except ValueError:
        right = False
    return "" if right else f'storeys.csv, level "{row["level"]}": mass {row["mass"]} t; must be above 0'


def place(id):
    return next(i for i, row in enumerate(rows) if row["id"] == id)


def table():
    good = not any(wrong(row) for row in rows)
    shown = []
    elevation = 0.0
    for row in reversed(rows):
        elevation += float(row["height"] or 0)
        cells = {**row, "elevation": f"{elevation:.2f}"}
        shown.insert(0, {"id": row["id"], "cells": cells, "errors": {"mass": wrong(row)}})
    totals = {"level": "total", "mass": f"{sum(float(row['mass']) for row in rows):.1f}"} if good else {}
    return {"columns": COLUMNS, "item": "level", "caption": "storeys.csv", "rows": shown, "totals": totals}


def answer(message):
    op = message["op"]
    if op == "look":
        looks.append(message)
        return None
    seen.append(message)
    if op == "set" and message["text"] == "777":
        return "storeys.csv is open in another program; not saved"
    if op == "set":
        rows[place(message["row"])][message["key"]] = message["text"]
    elif op == "insert":
        rows.insert(0 if message["row"] is None else place(message["row"]) + 1, row("new"))
    elif op == "delete":
        del rows[place(message["row"]) : place(message["last"]) + 1]
    elif op in ("undo", "redo"):
        return f"nothing to {op}"
    elif op == "clear":
        for each in rows[place(message["row"]) : place(message["last"]) + 1]:
            each.update(dict.fromkeys(message["keys"], ""))
    elif op == "paste":
        paste(place(message["row"]), message["key"], message["text"])
    renew()
    return None


def paste(top, key, text):
    keys = [column["key"] for column in COLUMNS]
    for i, line in enumerate(text.splitlines(), start=top):
        if i == len(rows):
            rows.append(row(f"new {i}"))
        rows[i].update(zip(keys[keys.index(key) :], line.split("\t"), strict=False))


def choose(message):
    if message["value"] == "none":
        return "one shape at least must be shown"
    view.choices = [{**view.choices[0], "value": message["value"]}]
    return None


def svg():
    bars = [
        f'<text y="{22 + 22 * i}" font-size="13">{row["level"]}</text>'
        f'<rect x="60" y="{10 + 22 * i}" height="14" width="{float(row["mass"])}" fill="#1f3a5f"/>'
        for i, row in enumerate(rows)
    ]
    return f'<svg xmlns="http://www.w3.org/2000/svg" width="400" height="150">{"".join(bars)}</svg>'


def shares():
    total = sum(float(row["mass"]) for row in rows)
    lines = "".join(f"<tr><th>{row['level']}</th><td>{100 * float(row['mass']) / total:.2f}</td></tr>" for row in rows)
    return (
        f'<p id="total">{total:.1f} t</p><table class="values"><thead><tr><th>level</th><th>share [%]</th></tr>'
        f"</thead><tbody>{lines}</tbody></table>"
    )


def renew():
    storeys.table = table()
    storeys.revision += 1
    storeys.status = {"kind": "saved", "text": f"saved, revision {storeys.revision}"}
    faults = [wrong(row) for row in rows if wrong(row)]
    if faults:
        view.note = {"kind": "waiting", "text": f"waits for {faults[0]}"}
    else:
        view.note = {}
        view.html = shares()
        view.figures = [{"name": "bars", "alt": "mass by level", "svg": svg()}]
    view.revision += 1
    for handle, widget in handles:
        handle.update(twin(widget), raw=True)


def twin(widget):
    lines = "".join(f"<tr><th>{row['level']}</th><td>{row['mass']}</td></tr>" for row in rows)
    html = (
        f'<div class="calcsheet calcsheet-twin" data-block="{widget.block}" data-revision="{widget.revision}">'
        f"<style>{front('calcsheet.css', 'twin.css')}</style><h3>{widget.block}, stored</h3>"
        '<table class="values"><thead><tr><th>level</th><th>mass [t]</th></tr></thead>'
        f"<tbody>{lines}</tbody></table></div>"
    )
    return {"text/html": html, "text/plain": widget.block}


def show(widget):
    display(widget)
    handles.append((display(twin(widget), raw=True, display_id=True), widget))


storeys = TableWidget(answer, block="storeys")
options = [{"value": value, "label": value} for value in ("roof", "unit mass", "none")]
choice = {"key": "normalise", "label": "largest value", "value": "roof", "options": options}
view = ViewWidget(choose, block="shares", choices=[choice])
renew()
