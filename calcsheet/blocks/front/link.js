// Shared by table.js and view.js: widgets.py puts this text before either, since anywidget loads one module a widget.

const PATIENCE = 4000; // ms; an answer takes about 0.1 s, so silence this long means that nobody listens
const PAGE = Math.random().toString(36).slice(2, 8); // several pages may watch one kernel, and answers reach them all

let counted = 0;
const fresh = () => `${PAGE}-${++counted}`;

function make(tag, className, attributes = {}) {
  const node = document.createElement(tag);
  if (className) node.className = className;
  // Looked for on the node with the focus itself: its own keys must not delete a cell of the notebook.
  if (["button", "input", "select"].includes(tag)) node.setAttribute("data-lm-suppress-shortcuts", "true");
  for (const [name, value] of Object.entries(attributes)) node.setAttribute(name, value);
  return node;
}

function setText(node, text) {
  if (node.textContent !== text) node.textContent = text;
}

/** Messages to the kernel. `heard()` is called whenever `silent` changes. */
function connect(model, signal, heard) {
  const waiting = new Map();
  const link = { silent: false, send, ping };
  let lastHeard = 0;

  function silence(silent) {
    if (link.silent === silent) return;
    link.silent = silent;
    heard();
  }

  // `settle` is told of silence after PATIENCE, and still of the true answer if that comes late.
  function post(id, message, settle) {
    const giveUp = () => {
      settle({ ok: false, lost: true, message: "" });
      silence(true);
    };
    const timer = setTimeout(giveUp, PATIENCE);
    waiting.set(id, (answer) => {
      clearTimeout(timer);
      settle(answer);
    });
    try {
      model.send(message);
    } catch (error) {
      console.warn("calcsheet: the kernel can't be reached", error);
      clearTimeout(timer);
      giveUp();
    }
  }

  function send(message, settle) {
    const seq = fresh();
    post(seq, { ...message, seq }, settle);
  }

  function ping() {
    if (Date.now() - lastHeard < PATIENCE) return;
    const n = fresh();
    post(n, { op: "ping", n }, () => {});
  }

  const receive = (message) => {
    const settle = waiting.get(message.seq ?? message.n);
    if (!settle) return; // another page's
    waiting.delete(message.seq ?? message.n);
    lastHeard = Date.now();
    silence(false);
    // The state sent just before this answer is applied asynchronously: let it land first.
    setTimeout(() => settle({ ok: true, message: "", ...message }), 0);
  };
  model.on("msg:custom", receive);
  signal.addEventListener("abort", () => model.off("msg:custom", receive));
  return link;
}

/** Call `draw` once for all the trait changes of one turn. */
function redrawOn(model, signal, names, draw) {
  let due = false;
  const later = () => {
    if (due) return;
    due = true;
    setTimeout(() => {
      due = false;
      if (!signal.aborted) draw();
    }, 0);
  };
  for (const name of names) model.on(`change:${name}`, later);
  signal.addEventListener("abort", () => names.forEach((name) => model.off(`change:${name}`, later)));
  return later;
}

/** The notebook's keys must not fire while the engineer types; saving must still work. */
function keepKeys(root, commit) {
  root.setAttribute("data-lm-suppress-shortcuts", "true");
  root.addEventListener("keydown", (event) => {
    event.stopPropagation();
    if ((event.ctrlKey || event.metaKey) && !event.altKey && event.key.toLowerCase() === "s") {
      event.preventDefault();
      commit();
      const { key, code, keyCode, ctrlKey, metaKey, shiftKey } = event;
      const again = { key, code, keyCode, ctrlKey, metaKey, shiftKey, bubbles: true, cancelable: true };
      root.closest(".jp-Notebook")?.dispatchEvent(new KeyboardEvent("keydown", again));
    }
  });
  for (const name of ["keyup", "keypress", "copy", "cut", "paste", "contextmenu"]) {
    root.addEventListener(name, (event) => event.stopPropagation());
  }
}

/** After a page reload the kernel no longer reaches the stored copy beside the widget: say so when it lags. */
function watchTwin(model, root, signal) {
  const banner = make("p", "calcsheet-banner", { role: "status" });
  banner.hidden = true;
  root.prepend(banner);
  let timer;
  const look = () => {
    const twin = root.closest(".jp-OutputArea-child")?.nextElementSibling?.querySelector(".calcsheet-twin");
    const stored = twin?.dataset.revision;
    banner.hidden = stored === undefined || Number(stored) === model.get("revision");
    setText(banner, banner.hidden ? "" : "The outputs stored in this notebook are older than what is shown here: "
      + "run all cells again before you save it.");
  };
  const soon = () => {
    clearTimeout(timer);
    timer = setTimeout(look, 1500); // the copy is updated after the widget
  };
  model.on("change:revision", soon);
  signal.addEventListener("abort", () => {
    clearTimeout(timer);
    model.off("change:revision", soon);
  });
  soon();
}
