// A table that is typed in: a native <input> in each cell. It holds no data of its own: Python owns the rows and what can
// be undone, the page shows them and keeps what has been typed until Python has answered.

const bare = (heading) => heading.replace(/\s*\[.*?\]\s*$/, "");
const LONG = 60; // rows from which the table scrolls under its headings
const clamp = (value, count) => Math.max(0, Math.min(value, count - 1));

function render({ model, el, signal }) {
  const root = make("div", "calcsheet calcsheet-live", { "data-block": model.get("block") });
  const scroller = make("div", "calcsheet-scroll");
  const sheet = make("table", "values calcsheet-typed", { role: "grid", "aria-multiselectable": "true" });
  const [caption, head, body, foot] = ["caption", "thead", "tbody", "tfoot"].map((tag) => make(tag));
  const addFirst = make("button", "calcsheet-button", { type: "button" });
  sheet.append(caption, head, body, foot);
  scroller.append(sheet);

  const rows = new Map(); // id -> {tr, cells}
  const grid = { order: [], columns: [], cellAt: (index, place) => rows.get(grid.order[index])?.cells[place] };
  const range = new Range(grid);
  const table = () => model.get("table");
  const item = () => table().item ?? "row";
  let drawn = ""; // the columns that the page stands for
  const ui = {
    ...{ model, root, body, grid, range, item, ask, fail, go, goTo, reach },
    link: connect(model, signal, () => ui.words.state()),
    marked: new Set(), // cells with something to say
    active: null, // the cell with the focus, or that had it last
    hovered: undefined,
    failure: "", // of the last edit of more than a cell
    over: "", // the status that the failure stands over: once it changes the failure is old
    asking: 0, // such edits that Python has not answered yet
    acts: {
      undo: () => ask({ op: "undo" }, null, "undo"),
      redo: () => ask({ op: "redo" }, null, "redo"),
      above: () => insert(range.box.top),
      below: () => insert(grid.order.length && range.box.bottom + 1),
      remove() {
        ask({ op: "delete", ...range.asked }, () => goTo(ui.active), `${item()} not deleted`);
        range.start(range.box.top, range.from.place); // what is asked next must not count the rows that go
      },
      up: () => ask({ op: "move", by: -1, ...range.asked }, null, `${item()} not moved`),
      down: () => ask({ op: "move", by: 1, ...range.asked }, null, `${item()} not moved`),
      clear: (words) => ask({ op: "clear", ...range.asked }, null, words),
      fill: () => ask({ op: "fill", ...range.filled }, null, "fill down"),
    },
  };
  ui.words = makeWords(ui);
  ui.tools = makeTools(ui.acts, () => goTo(ui.active));
  root.append(ui.tools.bar, scroller, addFirst, ...ui.words.nodes, ui.tools.help);

  const hooks = {
    commit(cell) {
      const round = cell.wait();
      ui.link.send({ op: "set", row: cell.row, key: cell.key, text: cell.sent }, (answer) => {
        cell.settle(round, answer);
        ui.words.messages();
      });
      ui.words.messages();
    },
    marked(cell) {
      if (cell.text || cell.state !== "kept") ui.marked.add(cell);
      else ui.marked.delete(cell);
    },
  };

  // ---- asking -------------------------------------------------------------------------------------------------------

  // Edits of more than a cell, undo, and the answers to a conflict: nothing on the page changes before Python has answered.
  function ask(message, done, words) {
    ui.active?.commit();
    if (message.keys?.length === 0) return fail("calculated columns can't be changed");
    ui.asking += 1;
    fail("");
    let waits = true;
    ui.link.send(message, (answer) => {
      if (waits) ui.asking -= 1;
      waits = false; // an answer may still come after silence
      if (answer.ok) {
        draw();
        done?.();
      }
      fail(answer.ok ? "" : answer.lost ? `${words}: not saved` : answer.message);
    });
  }

  function fail(words) {
    ui.failure = words;
    ui.over = model.get("status")?.text;
    ui.words.state();
  }

  function insert(index) {
    const { top, bottom } = range.box;
    const count = grid.order.length ? bottom - top + 1 : 1;
    ask({ op: "insert", row: grid.order[index - 1] ?? null, count }, () => go(index, 0), `${item()} not added`);
  }

  // ---- drawing ------------------------------------------------------------------------------------------------------

  function makeRow(id) {
    const tr = make("tr");
    const cells = grid.columns.map((column, place) => new Cell(id, place, column, hooks));
    for (const cell of cells) if (!cell.editable) cell.td.setAttribute("aria-readonly", "true");
    tr.append(...cells.map((cell) => cell.td));
    return { tr, cells };
  }

  function drawHead(columns) {
    head.replaceChildren();
    body.replaceChildren();
    rows.clear();
    ui.marked.clear();
    const tr = make("tr");
    for (const column of columns) {
      const th = make("th", `calcsheet-${column.align ?? "right"}`, { scope: "col" });
      th.textContent = column.heading;
      th.classList.toggle("calcsheet-computed", !column.editable);
      tr.append(th);
    }
    head.append(tr);
  }

  function draw() {
    const { columns = [], rows: served = [], totals = {} } = table();
    const held = body.contains(document.activeElement);
    grid.columns = columns;
    const wanted = JSON.stringify(columns);
    if (wanted !== drawn) drawHead(columns);
    drawn = wanted;
    setText(caption, table().caption ?? "");

    grid.order = served.map((row) => row.id);
    const ids = new Set(grid.order);
    for (const [id, row] of rows) {
      if (ids.has(id)) continue;
      row.tr.remove();
      rows.delete(id);
      for (const cell of row.cells) ui.marked.delete(cell);
    }
    served.forEach(({ id, cells, errors: wrong = {} }, index) => {
      if (!rows.has(id)) rows.set(id, makeRow(id));
      const row = rows.get(id);
      if (body.rows[index] !== row.tr) place(row.tr, index); // only new rows and true moves
      const name = cells[columns[0]?.key] || `${index + 1}`;
      for (const [at, column] of columns.entries()) {
        const label = `${bare(column.heading)}, ${at === 0 ? `row ${index + 1}` : `${item()} ${name}`}`;
        row.cells[at].serve(cells[column.key] ?? "", wrong[column.key] ?? "", label);
      }
    });

    drawFoot(columns, totals);
    drawWidths(columns, served);
    scroller.classList.toggle("calcsheet-long", served.length > LONG);
    addFirst.hidden = served.length > 0 || columns.length === 0;
    setText(addFirst, `add the first ${item()}`);
    if (!ui.active || !body.contains(ui.active.td)) {
      ui.active = grid.cellAt(range.indexOf(range.from), range.from.place) ?? null;
      if (ui.active) ui.active.input.tabIndex = 0;
      if (held) goTo(ui.active); // the focus must not fall back to the notebook
    }
    range.paint();
    ui.tools.update(item(), model.get("history") ?? {}, served.length);
    ui.words.messages();
  }

  // Moving a node takes the focus from it.
  function place(tr, index) {
    const focused = tr.contains(document.activeElement) ? document.activeElement.cell : null;
    const { mode } = focused ?? {};
    const { selectionStart, selectionEnd } = focused?.input ?? {};
    body.insertBefore(tr, body.rows[index] ?? null);
    if (!focused) return;
    focused.input.focus();
    focused.enter(mode);
    if (mode !== "ready") focused.input.setSelectionRange(selectionStart, selectionEnd);
  }

  function drawFoot(columns, totals) {
    const shown = Object.keys(totals).length > 0;
    if (!shown || foot.firstElementChild?.childElementCount !== columns.length) foot.replaceChildren();
    if (!shown) return;
    if (!foot.firstElementChild) {
      const cells = columns.map((column, index) => make(index === 0 ? "th" : "td", `calcsheet-${column.align ?? "right"}`));
      cells[0].scope = "row";
      const tr = make("tr");
      tr.append(...cells);
      foot.append(tr);
    }
    columns.forEach((column, index) => setText(foot.firstElementChild.children[index], totals[column.key] ?? ""));
  }

  function drawWidths(columns, served) {
    columns.forEach((column, index) => {
      let longest = 5;
      for (const row of served) longest = Math.max(longest, (row.cells[column.key] ?? "").length);
      const width = `${Math.min(longest, 40) + 2}ch`;
      const { style } = head.firstElementChild.children[index];
      if (style.minWidth !== width) style.minWidth = width;
    });
  }

  // ---- walking ------------------------------------------------------------------------------------------------------

  function goTo(cell) {
    if (cell) go(grid.order.indexOf(cell.row), cell.place);
  }

  function go(index, at) {
    const cell = grid.cellAt(clamp(index, grid.order.length), clamp(at, grid.columns.length));
    if (!cell) return;
    range.start(grid.order.indexOf(cell.row), cell.place);
    if (document.activeElement === cell.input) cell.enter("ready");
    else cell.input.focus();
  }

  function reach(index, at) {
    range.reach(clamp(index, grid.order.length), clamp(at, grid.columns.length));
    grid.cellAt(range.to.index, range.to.place)?.td.scrollIntoView({ block: "nearest", inline: "nearest" });
  }

  // The file may have been edited elsewhere: Python is asked to look whenever the engineer comes to the table, or back
  // to the page. From cell to cell a ping is enough to know that somebody listens.
  const look = () => ui.link.send({ op: "look" }, () => {});
  window.addEventListener("focus", look, { signal });
  body.addEventListener("focusin", (event) => {
    if (body.contains(event.relatedTarget)) ui.link.ping();
    else look();
    const cell = event.target.cell;
    if (!cell) return;
    if (ui.active && ui.active !== cell) ui.active.input.tabIndex = -1;
    ui.active = cell;
    cell.input.tabIndex = 0;
    if (!cell.mode) cell.enter("ready");
    if (!range.starts(cell)) range.start(grid.order.indexOf(cell.row), cell.place);
    ui.words.beside();
  });
  body.addEventListener("focusout", (event) => {
    // Another window took the focus: the engineer is reading a drawing, half-way through a number.
    if (document.activeElement === event.target) return;
    event.target.cell?.commit();
    event.target.cell?.enter("");
    ui.words.beside();
  });
  addFirst.addEventListener("click", () => insert(0));

  listenToKeys(ui);
  listenToMouse(ui, signal);
  listenToClipboard(ui);
  keepKeys(root, () => ui.active?.commit());
  redrawOn(model, signal, ["table", "status", "history", "differences"], draw);
  el.append(root);
  draw();
  watchTwin(model, root, signal);
}

export default { render };
