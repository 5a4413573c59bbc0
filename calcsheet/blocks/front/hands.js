// Used by table.js; widgets.py puts this text before it. Keys, mouse and clipboard in the cells of the table.

const STEPS = {
  ArrowUp: [-1, 0],
  ArrowDown: [1, 0],
  ArrowLeft: [0, -1],
  ArrowRight: [0, 1],
  PageUp: [-10, 0],
  PageDown: [10, 0],
  Home: [0, -1],
  End: [0, 1],
};
const ROWS = { ArrowUp: ["up", "above"], ArrowDown: ["down", "below"] };

function listenToKeys(ui) {
  const { body, grid, range } = ui;
  let tabbed; // column where a run of Tabs began: Enter goes back to it

  body.addEventListener("keydown", (event) => {
    const cell = event.target.cell;
    if (!cell || event.isComposing || !pressed(event, cell)) return;
    event.preventDefault();
    ui.words.messages();
  });
  body.addEventListener("mousedown", () => (tabbed = undefined));
  body.addEventListener("input", (event) => {
    if (event.target.cell?.mode === "ready") event.target.cell.enter("enter");
  });

  /** Whether a key was ours. */
  function pressed(event, cell) {
    const { key, shiftKey: shift, altKey: alt } = event;
    const ctrl = event.ctrlKey || event.metaKey;
    const typing = cell.mode !== "ready";
    const began = tabbed;
    if (key in STEPS || key === "Enter" || key === "Escape") tabbed = undefined;
    if (key === "F1") ui.acts.help();
    else if (key === "F2") cell.enter(typing ? "ready" : "edit");
    else if (key === "Enter") {
      cell.commit();
      cell.enter("ready");
      if (!ctrl && !alt) ui.go(grid.order.indexOf(cell.row) + (shift ? -1 : 1), began ?? cell.place);
    } else if (key === "Tab") {
      cell.commit();
      const to = next(cell, shift ? -1 : 1);
      if (!to) return false;
      tabbed = began ?? cell.place;
      ui.go(...to);
    } else if (key === "Escape") escape(cell, typing);
    else if (ctrl && !alt && key.length === 1) return letter(key.toLowerCase(), shift, cell);
    else if (alt && key in ROWS) ui.acts[ROWS[key][shift ? 1 : 0]]();
    else if (alt && (key === "Delete" || key === "Backspace")) ui.acts.remove();
    else if (alt) return false;
    else if (key in STEPS) return walk(event, cell, typing);
    else if ((key === "Delete" || key === "Backspace") && !typing) ui.acts.clear("not cleared");
    else return false;
    return true;
  }

  function escape(cell, typing) {
    if (typing || cell.state !== "kept") {
      cell.restore();
      cell.enter("ready");
    } else if (!range.single) ui.goTo(cell);
    else ui.tools.enter();
  }

  function letter(key, shift, cell) {
    if (cell.typed || (key === "a" && cell.mode !== "ready")) return false; // the browser's own, within the text
    if (key === "a") range.all();
    else if (key === "d") ui.acts.fill();
    else if (key === "y" || (key === "z" && shift)) ui.acts.redo();
    else if (key === "z") ui.acts.undo();
    else return false;
    return true;
  }

  function walk(event, cell, typing) {
    const { key, shiftKey: shift } = event;
    const far = event.ctrlKey || event.metaKey;
    const [down, right] = STEPS[key];
    const ends = key === "Home" || key === "End";
    if (typing && (shift || far || ends || (right && cell.mode === "edit"))) return false; // the caret's
    const [index, place] = shift ? [range.indexOf(range.to), range.to.place] : [grid.order.indexOf(cell.row), cell.place];
    const edge = (at, by, count) => (by === 0 ? at : by < 0 ? 0 : count - 1);
    let to = [index + down, place + right];
    if (ends || far) {
      const row = edge(index, ends && far ? right : down, grid.order.length);
      to = [row, edge(place, right, grid.columns.length)];
    }
    cell.commit();
    if (shift) ui.reach(...to);
    else ui.go(...to);
    return true;
  }

  /** The next cell to type into; none at the ends of the table, where Tab leaves it. */
  function next(cell, by) {
    const width = grid.columns.length;
    for (let at = grid.order.indexOf(cell.row) * width + cell.place + by; at >= 0 && at < grid.order.length * width; at += by) {
      if (grid.columns[at % width].editable) return [Math.floor(at / width), at % width];
    }
    return null;
  }
}

function listenToMouse(ui, signal) {
  const { body, grid } = ui;
  const cellOf = (target) => target?.closest?.("th, td")?.firstElementChild?.cell;
  const extend = (cell) => ui.reach(grid.order.indexOf(cell.row), cell.place);

  body.addEventListener("mousedown", (event) => {
    const cell = cellOf(event.target);
    const inText = cell === ui.active && cell?.mode && cell.mode !== "ready";
    if (!cell || event.button !== 0 || (inText && !event.shiftKey)) return;
    event.preventDefault();
    if (event.shiftKey && body.contains(document.activeElement)) return extend(cell);
    ui.goTo(cell);
    const drag = (moved) => {
      const over = cellOf(document.elementFromPoint(moved.clientX, moved.clientY));
      if (over && body.contains(over.td)) extend(over);
    };
    document.addEventListener("mousemove", drag, { signal });
    document.addEventListener("mouseup", () => document.removeEventListener("mousemove", drag), { once: true, signal });
  });
  body.addEventListener("dblclick", (event) => {
    const cell = cellOf(event.target);
    if (cell?.editable && cell.mode === "ready") cell.enter("edit");
  });
  const hover = (cell) => {
    ui.hovered = cell;
    ui.words.beside();
  };
  body.addEventListener("mouseover", (event) => hover(cellOf(event.target)));
  body.addEventListener("mouseleave", () => hover(undefined));
}

function listenToClipboard(ui) {
  const { body, grid, range } = ui;
  for (const name of ["copy", "cut"]) {
    body.addEventListener(name, (event) => {
      if (ui.active?.mode !== "ready") return; // part of a text: the browser's own
      event.preventDefault();
      event.clipboardData.setData("text/plain", range.copied);
      if (name === "cut") ui.acts.clear("not cut");
    });
  }
  body.addEventListener("paste", (event) => {
    const cell = event.target.cell;
    const text = event.clipboardData.getData("text/plain");
    if (!cell || (cell.mode !== "ready" && !/[\t\r\n]/.test(text.trimEnd()))) return; // into a text: the browser's own
    event.preventDefault();
    cell.restore();
    cell.enter("ready");
    const { top, bottom, left, right } = range.box;
    const column = grid.columns[left];
    if (!column.editable) return ui.fail(`${bare(column.heading)} is calculated: nothing can be pasted over it`);
    const size = { rows: bottom - top + 1, columns: right - left + 1 };
    ui.ask({ op: "paste", row: grid.order[top], key: column.key, text, ...size }, null, "paste");
  });
}
