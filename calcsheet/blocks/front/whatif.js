// Factors on the whole model: a slider and a number field each. One question is on its way at a time and the newest
// value follows it, so that neither dragging nor typing ever waits. Python has made and escaped the HTML.

function render({ model, el, signal }) {
  const root = make("div", "calcsheet calcsheet-live", { "data-block": model.get("block") });
  const title = make("p", "calcsheet-title");
  const notice = make("p", "below");
  const inputs = make("div", "calcsheet-factors", { role: "group" });
  const error = make("p", "calcsheet-errors", { id: `calcsheet-${fresh()}`, role: "alert" });
  const buttons = make("div", "calcsheet-row");
  const reset = make("button", "calcsheet-button", { type: "button" });
  const adopt = make("button", "calcsheet-button", { type: "button" });
  const confirm = make("div", "calcsheet-confirm", { role: "group", tabindex: "-1" });
  const sentence = make("p", "", { id: `calcsheet-${fresh()}` });
  const yes = make("button", "calcsheet-button", { type: "button" });
  const no = make("button", "calcsheet-button", { type: "button" });
  const note = make("p", "calcsheet-note", { role: "status" });
  const short = make("p", "calcsheet-short", { role: "status" });
  const numbers = make("div", "calcsheet-scroll", { role: "region", "aria-label": "saved and what-if values" });
  const status = make("p", "calcsheet-status", { role: "status" });
  title.id = `calcsheet-${fresh()}`;
  inputs.setAttribute("aria-labelledby", title.id);
  confirm.setAttribute("aria-labelledby", sentence.id);
  error.hidden = confirm.hidden = true;
  setText(title, "What if");
  setText(reset, "back to 1");
  setText(adopt, "adopt …");
  setText(yes, "adopt into the files");
  setText(no, "leave the files as they are");
  buttons.append(reset, adopt);
  const choice = make("div", "calcsheet-row");
  choice.append(yes, no);
  confirm.append(sentence, choice);
  root.append(title, notice, inputs, error, buttons, confirm, status, note, short, numbers);

  const rows = new Map(); // key -> {row, words, slider, field}
  let wanted = null; // factors that wait until the question on its way is answered
  let asking = false;
  let html = "";
  let refusal = "";
  const link = connect(model, signal, () => drawStatus());

  const least = () => model.get("least");
  const most = () => model.get("most");
  // A number field gives "" for what is no number; Number("") would be 0.
  const read = (field) => (field.value === "" ? NaN : Number(field.value));
  const allowed = (value) => value >= least() && value <= most();

  function makeRow(key) {
    const id = `calcsheet-${fresh()}`;
    const row = make("div", "calcsheet-factor");
    const words = make("label", "", { for: id });
    const slider = make("input", "", { type: "range", min: least(), max: most(), step: "0.01" });
    const field = make("input", "calcsheet-number", { id, type: "number", min: least(), max: most(), step: "0.01" });
    row.append(words, slider, field);
    field.value = slider.value = "1";
    slider.addEventListener("input", () => {
      field.value = slider.value;
      changed();
    });
    field.addEventListener("input", () => {
      if (allowed(read(field))) slider.value = field.value;
      changed();
    });
    field.addEventListener("change", () => drawErrors(true));
    return { row, words, slider, field };
  }

  /** Ask about what the fields hold, where all of it is allowed; half-typed numbers wait for their next key. */
  function changed() {
    confirm.hidden = true;
    drawErrors(false);
    const factors = {};
    for (const [key, { field }] of rows) {
      if (!allowed(read(field))) return;
      factors[key] = read(field);
    }
    wanted = factors;
    ask();
  }

  function ask() {
    if (asking || !wanted) return;
    asking = true;
    const factors = wanted;
    wanted = null;
    numbers.setAttribute("aria-busy", "true");
    link.send({ op: "factors", ...factors }, (answer) => {
      asking = false;
      refusal = answer.ok || answer.lost ? "" : answer.message;
      if (wanted) ask();
      else draw();
    });
    drawStatus();
  }

  /** Name what is not allowed once its field is left: nobody is corrected in mid-number. */
  function drawErrors(left) {
    const wrong = [];
    for (const { field, words } of rows.values()) {
      if (!left || allowed(read(field))) {
        field.removeAttribute("aria-invalid");
        field.removeAttribute("aria-describedby");
      } else {
        field.setAttribute("aria-invalid", "true");
        field.setAttribute("aria-describedby", error.id);
        wrong.push(`${words.textContent}: must be a number from ${least()} to ${most()}`);
      }
    }
    setText(error, wrong.join("; "));
    error.hidden = wrong.length === 0;
  }

  function drawFields() {
    const fields = model.get("fields") ?? [];
    const factors = model.get("factors") ?? {};
    for (const { key, label } of fields) {
      if (!rows.has(key)) rows.set(key, makeRow(key));
      const { words, slider, field } = rows.get(key);
      setText(words, label);
      slider.setAttribute("aria-label", `${label}, slider`);
      // What the engineer is at stays: Python's value is shown once nothing is on its way and nothing is half-typed.
      if (asking || wanted || !allowed(read(field))) continue;
      const value = String(factors[key] ?? 1);
      if (read(field) !== Number(value)) field.value = slider.value = value;
    }
    const nodes = fields.map(({ key }) => rows.get(key).row);
    if (nodes.length !== inputs.children.length || nodes.some((node, index) => inputs.children[index] !== node)) {
      inputs.replaceChildren(...nodes);
    }
    for (const key of rows.keys()) if (!fields.some((field) => field.key === key)) rows.delete(key);
  }

  function drawStatus() {
    const silent = "The kernel does not answer: what is shown here may be old. Restart it and run the notebook.";
    const text = link.silent ? silent : refusal || model.get("done") || "";
    status.dataset.kind = link.silent || refusal ? "unsaved" : "saved";
    setText(status, text);
    status.hidden = !text;
    const nothing = asking || wanted !== null || link.silent || !model.get("adopting");
    adopt.setAttribute("aria-disabled", String(nothing)); // not "disabled": the focus stays where it is
  }

  function draw() {
    drawFields();
    setText(notice, model.get("notice"));
    const { kind = "", text = "" } = model.get("note") ?? {};
    note.dataset.kind = kind;
    note.hidden = !text;
    setText(note, text);
    setText(short, model.get("short"));
    short.hidden = !model.get("short");
    if (html !== model.get("html")) numbers.innerHTML = model.get("html");
    html = model.get("html");
    if (!asking) numbers.setAttribute("aria-busy", "false");
    if (sentence.textContent !== model.get("adopting")) close(false);
    drawStatus();
  }

  function close(back) {
    if (confirm.hidden) return;
    const had = confirm.contains(document.activeElement);
    confirm.hidden = true;
    if (back || had) adopt.focus();
  }

  reset.addEventListener("click", () => {
    for (const { slider, field } of rows.values()) field.value = slider.value = "1";
    changed();
  });

  adopt.addEventListener("click", () => {
    if (adopt.getAttribute("aria-disabled") === "true") return;
    setText(sentence, model.get("adopting"));
    confirm.hidden = false;
    confirm.focus(); // its sentence is read out; Tab leads to the two answers
  });

  yes.addEventListener("click", () => {
    const said = sentence.textContent;
    refusal = "";
    close(true);
    link.send({ op: "adopt", sentence: said }, (answer) => {
      if (answer.lost) refusal = "No answer yet: whether this was adopted shows in the storey table and its file.";
      else refusal = answer.ok ? "" : answer.message;
      draw();
    });
  });

  no.addEventListener("click", () => close(true));
  confirm.addEventListener("keydown", (event) => {
    if (event.key === "Escape") close(true);
  });

  // Where it is too narrow for its tables, it can be scrolled by keyboard.
  const sizes = new ResizeObserver(() => {
    if (numbers.scrollWidth > numbers.clientWidth) numbers.setAttribute("tabindex", "0");
    else numbers.removeAttribute("tabindex");
  });
  sizes.observe(numbers);
  signal.addEventListener("abort", () => sizes.disconnect());

  keepKeys(root, () => {});
  // The notebook takes arrows and Enter from whatever is focused and no text field, unless that very element says no.
  root.addEventListener("focusin", (event) => event.target.setAttribute("data-lm-suppress-shortcuts", "true"));
  redrawOn(model, signal, ["fields", "factors", "html", "short", "adopting", "done", "note", "revision"], draw);
  el.append(root);
  draw();
  watchTwin(model, root, signal);
}

export default { render };
