// A table that is typed in: a native <input> in each editable cell. It holds no data of its own: Python owns the
// rows, the page shows them and keeps what has been typed until Python has answered.

const bare = (heading) => heading.replace(/\s*\[.*?\]\s*$/, "");

function render({ model, el, signal }) {
  const root = make("div", "calcsheet calcsheet-live", { "data-block": model.get("block") });
  const scroller = make("div", "calcsheet-scroll");
  const grid = make("table", "values calcsheet-typed");
  const [caption, head, body, foot] = ["caption", "thead", "tbody", "tfoot"].map((tag) => make(tag));
  const addFirst = make("button", "calcsheet-button", { type: "button" });
  const errors = make("ul", "calcsheet-errors", { "aria-label": "refused values" });
  const status = make("p", "calcsheet-status", { role: "status" });
  grid.append(caption, head, body, foot);
  scroller.append(grid);
  root.append(scroller, addFirst, errors, status);

  const rows = new Map(); // id -> {tr, cells: Map(key -> Cell | td)}
  let drawn = ""; // the columns that the page stands for
  let failure = ""; // of the last row operation
  const link = connect(model, signal, () => drawStatus());

  const allCells = () => [...rows.values()].flatMap((row) => [...row.cells.values()].filter((cell) => cell instanceof Cell));
  const table = () => model.get("table");
  const item = () => table().item ?? "row";

  function commit(cell) {
    const round = cell.wait();
    link.send({ op: "set", row: cell.row, key: cell.key, text: cell.sent }, (answer) => {
      cell.settle(round, answer);
      drawMessages();
    });
    drawMessages();
  }

  // Insert, delete, paste and the answers to a conflict: nothing on the page changes before Python has answered.
  function ask(message, done, words) {
    failure = "";
    link.send(message, (answer) => {
      failure = answer.ok ? "" : answer.lost ? `${words}: not saved` : answer.message;
      if (answer.ok) {
        draw();
        done?.();
      }
      drawStatus();
    });
    drawStatus();
  }

  function makeRow(id, columns) {
    const row = { tr: make("tr"), cells: new Map() };
    columns.forEach((column, index) => {
      const td = make(index === 0 ? "th" : "td", `calcsheet-${column.align ?? "right"}`);
      if (index === 0) td.scope = "row";
      if (column.editable) {
        const cell = new Cell(id, column, commit);
        td.append(cell.input);
        row.cells.set(column.key, cell);
      } else row.cells.set(column.key, td);
      row.tr.append(td);
    });
    const buttons = make("td", "calcsheet-buttons");
    row.add = make("button", "calcsheet-button", { type: "button" });
    row.remove = make("button", "calcsheet-button", { type: "button" });
    row.add.textContent = "+";
    row.add.addEventListener("click", () => ask({ op: "insert", row: id }, () => focusBeside(row.tr), `${item()} not added`));
    armed(row.remove, () => {
      const beside = row.tr.nextElementSibling ?? row.tr.previousElementSibling;
      ask({ op: "delete", row: id }, () => firstInput(beside)?.focus(), `${item()} not removed`);
    });
    buttons.append(row.add, row.remove);
    row.tr.append(buttons);
    return row;
  }

  const firstInput = (tr) => tr?.querySelector(".calcsheet-input");
  const focusBeside = (tr) => firstInput(tr ? tr.nextElementSibling : body.firstElementChild)?.focus();

  // A removed level is gone from the file at once, so the button asks once more.
  function armed(button, act) {
    const reset = () => {
      button.textContent = "\u2212";
      button.armed = false;
    };
    reset();
    button.addEventListener("blur", reset);
    button.addEventListener("click", () => {
      if (button.armed) {
        reset();
        act();
      } else {
        button.armed = true;
        button.textContent = "remove?";
        button.focus();
      }
    });
  }

  function drawHead(columns) {
    head.replaceChildren();
    body.replaceChildren();
    rows.clear();
    const tr = make("tr");
    for (const column of columns) {
      const th = make("th", `calcsheet-${column.align ?? "right"}`, { scope: "col" });
      th.textContent = column.heading;
      tr.append(th);
    }
    tr.append(make("td"));
    head.append(tr);
  }

  function draw() {
    const { columns = [], rows: served = [], totals = {} } = table();
    const wanted = JSON.stringify(columns);
    if (wanted !== drawn) drawHead(columns);
    drawn = wanted;
    setText(caption, table().caption ?? "");

    const ids = new Set(served.map((row) => row.id));
    for (const [id, row] of rows) {
      if (ids.has(id)) continue;
      row.tr.remove();
      rows.delete(id);
    }
    served.forEach(({ id, cells, errors: wrong = {} }, index) => {
      if (!rows.has(id)) rows.set(id, makeRow(id, columns));
      const row = rows.get(id);
      // Moving a node would take the focus from it: only new rows and true moves are placed.
      if (body.children[index] !== row.tr) body.insertBefore(row.tr, body.children[index] ?? null);
      const name = cells[columns[0]?.key] || `${index + 1}`;
      for (const [place, column] of columns.entries()) {
        const cell = row.cells.get(column.key);
        const text = cells[column.key] ?? "";
        const label = place === 0 ? `${bare(column.heading)}, row ${index + 1}` : `${bare(column.heading)}, ${item()} ${name}`;
        if (cell instanceof Cell) cell.serve(text, wrong[column.key] ?? "", label);
        else setText(cell, text);
      }
      row.add.title = `add ${item()} below`;
      row.remove.title = `remove ${item()}`;
      row.add.setAttribute("aria-label", `add ${item()} below ${name}`);
      row.remove.setAttribute("aria-label", `remove ${item()} ${name}, press twice`);
    });

    drawFoot(columns, totals);
    drawWidths(columns, served);
    addFirst.hidden = served.length > 0 || columns.length === 0;
    setText(addFirst, `add the first ${item()}`);
    drawMessages();
  }

  function drawFoot(columns, totals) {
    const shown = Object.keys(totals).length > 0;
    if (!shown || foot.firstElementChild?.childElementCount !== columns.length + 1) foot.replaceChildren();
    if (!shown) return;
    if (!foot.firstElementChild) {
      const cells = columns.map((column, index) => make(index === 0 ? "th" : "td", `calcsheet-${column.align ?? "right"}`));
      cells[0].scope = "row";
      const tr = make("tr");
      tr.append(...cells, make("td"));
      foot.append(tr);
    }
    columns.forEach((column, index) => setText(foot.firstElementChild.children[index], totals[column.key] ?? ""));
  }

  function drawWidths(columns, served) {
    columns.forEach((column, index) => {
      const longest = Math.max(5, ...served.map((row) => (row.cells[column.key] ?? "").length));
      head.firstElementChild.children[index].style.minWidth = `${Math.min(longest, 40) + 2}ch`;
    });
  }

  function drawMessages() {
    const wanted = allCells().filter((cell) => cell.message.textContent).map((cell) => cell.message);
    if (wanted.length !== errors.children.length || wanted.some((li, index) => errors.children[index] !== li)) {
      errors.replaceChildren(...wanted);
    }
    errors.hidden = wanted.length === 0;
    drawStatus();
  }

  function drawStatus() {
    const served = model.get("status") ?? {};
    const unsaved = allCells().filter((cell) => cell.state === "unsaved").length;
    const waits = allCells().some((cell) => cell.state === "sent");
    const deaf = "the kernel does not answer. Restart it and run the notebook, then type again what is marked.";
    let [kind, text] = [served.kind ?? "saved", served.text ?? ""];
    if (unsaved) [kind, text] = ["unsaved", `NOT SAVED (${unsaved}): ${deaf}`];
    else if (failure) [kind, text] = ["unsaved", link.silent ? `NOT SAVED, ${failure}: ${deaf}` : failure];
    else if (link.silent) [kind, text] = ["unsaved", "What you type now is NOT SAVED: the kernel does not answer. "
      + "Restart it and run the notebook."];
    else if (waits) [kind, text] = ["waiting", "saving …"];
    if (status.dataset.kind === kind && status.firstChild?.textContent === text) return;
    status.dataset.kind = kind;
    status.replaceChildren(text);
    if (kind === "conflict") status.append(answerButton("load", "load the file"), answerButton("keep", "keep what is here"));
  }

  function answerButton(op, words) {
    const button = make("button", "calcsheet-button", { type: "button" });
    button.textContent = words;
    button.addEventListener("click", () => ask({ op }, null, `"${words}" not done`));
    return button;
  }

  addFirst.addEventListener("click", () => ask({ op: "insert", row: null }, () => focusBeside(null), `${item()} not added`));

  // The file may have been edited elsewhere: Python is asked to look whenever the engineer comes to the table, or back
  // to the page. From cell to cell a ping is enough to know that somebody listens.
  const look = () => link.send({ op: "look" }, () => {});
  window.addEventListener("focus", look, { signal });
  body.addEventListener("focusin", (event) => (body.contains(event.relatedTarget) ? link.ping() : look()));

  body.addEventListener("focusout", (event) => {
    // Another window took the focus: the engineer is reading a drawing, half-way through a number.
    if (document.activeElement === event.target) return;
    event.target.cell?.commit();
  });

  body.addEventListener("keydown", (event) => {
    const cell = event.target.cell;
    if (!cell || event.isComposing) return;
    if (event.key === "Escape") cell.restore();
    else if (event.key === "Enter") step(cell, event.shiftKey ? -1 : 1);
    else if (event.key === "ArrowDown" || event.key === "ArrowUp") step(cell, event.key === "ArrowUp" ? -1 : 1);
    else return;
    event.preventDefault();
    drawMessages();
  });

  function step(cell, by) {
    cell.commit();
    const tr = cell.input.closest("tr");
    const to = by > 0 ? tr.nextElementSibling : tr.previousElementSibling;
    const next = to?.children[cell.input.parentElement.cellIndex].firstElementChild ?? cell.input;
    next.focus();
    next.select();
  }

  body.addEventListener("paste", (event) => {
    const cell = event.target.cell;
    const text = event.clipboardData.getData("text/plain");
    if (!cell || !/[\t\r\n]/.test(text.trimEnd())) return; // one value: the browser's own paste, which can be undone
    event.preventDefault();
    cell.restore();
    ask({ op: "paste", row: cell.row, key: cell.key, text }, null, "paste");
  });

  keepKeys(root, () => document.activeElement?.cell?.commit());
  redrawOn(model, signal, ["table", "status"], draw);
  el.append(root);
  draw();
  watchTwin(model, root, signal);
}

export default { render };
