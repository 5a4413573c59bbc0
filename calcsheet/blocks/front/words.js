// Used by table.js; widgets.py puts this text before it. What the table says: refused values, the status, a conflict.

const LISTED = 5; // refused values in words below the table; the others are counted, and each has its words at its cell

/** `ui` is the table's; gives the nodes to place and what draws them. */
function makeWords(ui) {
  const errors = make("ul", "calcsheet-errors", { "aria-label": "refused values" });
  const more = make("p", "calcsheet-errors");
  const conflict = make("div", "calcsheet-conflict");
  const status = make("p", "calcsheet-status", { role: "status" });
  const bubble = make("div", "calcsheet-bubble", { role: "tooltip" });
  bubble.hidden = true;
  let compared = ""; // the differences that the page shows

  function messages() {
    const saying = [...ui.marked].filter((cell) => cell.text);
    const index = new Map(ui.grid.order.map((id, at) => [id, at]));
    saying.sort((a, b) => index.get(a.row) - index.get(b.row) || a.place - b.place);
    const wanted = saying.map((cell) => cell.message);
    if (wanted.length !== errors.children.length || wanted.some((li, at) => errors.children[at] !== li)) {
      errors.replaceChildren(...wanted);
    }
    wanted.forEach((li, at) => (li.hidden = at >= LISTED));
    errors.hidden = wanted.length === 0;
    more.hidden = wanted.length <= LISTED;
    setText(more, more.hidden ? "" : `and ${wanted.length - LISTED} more refused values, each marked in the table`);
    beside();
    state();
  }

  /** The words of a refused cell beside it, under the pointer or the focus. */
  function beside() {
    const cell = ui.hovered?.text ? ui.hovered : ui.active?.text && ui.active.mode ? ui.active : null;
    bubble.hidden = !cell;
    if (!cell) return;
    setText(bubble, cell.text);
    const [box, around] = [cell.td.getBoundingClientRect(), ui.root.getBoundingClientRect()];
    bubble.style.top = `${box.bottom - around.top + 2}px`;
    bubble.style.left = `${Math.max(0, Math.min(box.left - around.left, around.width - 340))}px`;
  }

  function state() {
    const served = ui.model.get("status") ?? {};
    const { silent } = ui.link;
    const unsaved = [...ui.marked].filter((cell) => cell.state === "unsaved").length;
    const waits = ui.asking > 0 || [...ui.marked].some((cell) => cell.state === "sent");
    if (served.text !== ui.over) ui.failure = "";
    const deaf = "the kernel does not answer. Restart it and run the notebook, then type again what is marked.";
    let [kind, text] = [served.kind ?? "saved", served.text ?? ""];
    if (unsaved) [kind, text] = ["unsaved", `NOT SAVED (${unsaved}): ${deaf}`];
    else if (ui.failure) [kind, text] = ["unsaved", silent ? `NOT SAVED, ${ui.failure}: ${deaf}` : ui.failure];
    else if (silent) [kind, text] = ["unsaved", "What you type now is NOT SAVED: the kernel does not answer. "
      + "Restart it and run the notebook."];
    else if (waits) [kind, text] = ["waiting", "saving …"];
    compare(served.kind === "conflict");
    if (status.dataset.kind !== kind) status.dataset.kind = kind;
    setText(status, text);
  }

  function compare(shown) {
    const { cells = [], more: others = 0 } = ui.model.get("differences") ?? {};
    const wanted = shown ? JSON.stringify([cells, others]) : "";
    if (compared === wanted) return;
    compared = wanted;
    conflict.replaceChildren();
    if (!shown) return;
    if (cells.length) {
      const listed = make("table", "values");
      listed.createCaption().textContent = "What differs";
      const line = (parent, tag, texts) => {
        const tr = make("tr");
        for (const text of texts) {
          const td = make(tr.childElementCount ? tag : "th", "calcsheet-left", { scope: tag === "th" ? "col" : "row" });
          if (td.tagName === "TD") td.removeAttribute("scope");
          td.textContent = text;
          tr.append(td);
        }
        parent.append(tr);
      };
      line(listed.createTHead(), "th", [ui.item(), "column", "here", "on disk"]);
      const lines = listed.createTBody();
      for (const { row, column, here, there } of cells) line(lines, "td", [row, column, here, there]);
      conflict.append(listed);
    }
    if (others) conflict.append(Object.assign(make("p"), { textContent: `and ${others} more` }));
    conflict.append(answer("load", "load the file"), answer("keep", "keep what is here"));
  }

  function answer(op, words) {
    const button = make("button", "calcsheet-button", { type: "button" });
    button.textContent = words;
    button.addEventListener("click", () => ui.ask({ op }, () => ui.goTo(ui.active), `"${words}" not done`));
    return button;
  }

  return { nodes: [errors, more, conflict, status, bubble], messages, beside, state };
}
