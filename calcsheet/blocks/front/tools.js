// Used by table.js; widgets.py puts this text before it. Buttons above the table, and the list of its keys.

const MAC = /Mac|iPhone|iPad/.test(navigator.platform);
const KEYS = [
  ["arrows, Tab, Enter", "go from cell to cell"],
  ["a letter or digit", "replace what the cell holds"],
  ["F2, double click", "edit in the cell"],
  ["Escape", "take back what is being typed; then: leave the table for its buttons"],
  ["Shift + arrows, Shift + click, drag", "choose a range; Ctrl + A all of it"],
  ["Ctrl + arrows, Home, End", "go to the edge of the table; with Shift choose up to it"],
  ["Ctrl + C, X, V", "copy, cut, paste; also from and to a spreadsheet"],
  ["Delete", "clear the range"],
  ["Ctrl + D", "fill the range down from its first row"],
  ["Ctrl + Z, Ctrl + Y", "undo, redo"],
  ["Alt + \u2191 \u2193", "move the rows of the range up or down"],
  ["Alt + Shift + \u2191 \u2193", "add a row above or below"],
  ["Alt + Delete", "delete the rows of the range"],
  ["Ctrl + S", "save the notebook (the table saves itself)"],
  ["F1", "show or hide this list"],
];

/** `acts`: name -> function. Returns {bar, help, update, enter}. */
function makeTools(acts, leave) {
  const bar = make("div", "calcsheet-tools", { role: "toolbar", "aria-label": "edit the table" });
  const help = make("table", "calcsheet-keys", { id: `calcsheet-${fresh()}` });
  help.hidden = true;
  help.append(make("caption"), make("tbody"));
  help.caption.textContent = MAC ? "keys (for Ctrl take Command, for Alt take Option)" : "keys";
  for (const [keys, what] of KEYS) {
    const tr = make("tr");
    tr.append(make("th", "", { scope: "row" }), make("td"));
    tr.cells[0].textContent = keys;
    tr.cells[1].textContent = what;
    help.tBodies[0].append(tr);
  }

  const buttons = new Map();
  const add = (name, keys) => {
    const button = make("button", "calcsheet-button", { type: "button", tabindex: buttons.size ? "-1" : "0" });
    button.title = keys;
    button.addEventListener("mousedown", (event) => event.preventDefault()); // the focus stays in its cell
    button.addEventListener("click", () => button.getAttribute("aria-disabled") === "true" || acts[name]());
    buttons.set(name, button);
    bar.append(button);
  };
  add("undo", "Ctrl + Z");
  add("redo", "Ctrl + Y");
  add("above", "Alt + Shift + \u2191");
  add("below", "Alt + Shift + \u2193");
  add("remove", "Alt + Delete");
  add("up", "Alt + \u2191");
  add("down", "Alt + \u2193");
  add("fill", "Ctrl + D");
  add("help", "F1");
  acts.help = () => {
    help.hidden = !help.hidden;
    buttons.get("help").setAttribute("aria-expanded", String(!help.hidden));
  };
  buttons.get("help").setAttribute("aria-expanded", "false");
  buttons.get("help").setAttribute("aria-controls", help.id);

  const all = [...buttons.values()];
  const enter = (button = all.find((each) => each.tabIndex === 0)) => {
    for (const each of all) each.tabIndex = each === button ? 0 : -1;
    button.focus();
  };
  bar.addEventListener("keydown", (event) => {
    const step = { ArrowRight: 1, ArrowLeft: -1 }[event.key];
    if (step) enter(all[(all.indexOf(event.target) + step + all.length) % all.length]);
    else if (event.key === "Escape" || event.key === "ArrowDown") leave();
    else if (event.key === "F1") acts.help();
    else return;
    event.preventDefault();
  });

  function update(item, history, rows) {
    const words = {
      undo: "undo",
      redo: "redo",
      above: `add ${item} above`,
      below: `add ${item} below`,
      remove: `delete ${item}`,
      up: "move up",
      down: "move down",
      fill: "fill down",
      help: "keys ?",
    };
    const idle = { undo: !history.undo, redo: !history.redo };
    for (const [name, button] of buttons) {
      setText(button, words[name]);
      button.setAttribute("aria-disabled", String(idle[name] ?? (rows === 0 && !["below", "help"].includes(name))));
    }
    buttons.get("undo").title = `Ctrl + Z${history.undo ? `: ${history.undo}` : ""}`;
    buttons.get("redo").title = `Ctrl + Y${history.redo ? `: ${history.redo}` : ""}`;
  }
  return { bar, help, update, enter };
}
