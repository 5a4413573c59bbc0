// A view that is read: choices, words or numbers, figures. Python has made and escaped the HTML.

const HIDES = ["waiting", "refused"]; // with these notes no number may stand as if it were current

function render({ model, el, signal }) {
  const root = make("div", "calcsheet calcsheet-live", { "data-block": model.get("block") });
  const choices = make("div", "calcsheet-choices");
  const note = make("p", "calcsheet-note", { role: "status" });
  const numbers = make("div", "calcsheet-scroll");
  const figures = make("div", "calcsheet-figures");
  const failed = make("p", "calcsheet-status", { role: "status", "data-kind": "unsaved" });
  root.append(choices, note, numbers, figures, failed);

  const selects = new Map(); // key -> {label, select, drawn}
  const shown = new Map(); // name -> {figure, image, wanted}
  let html = "";
  let refusal = "";
  const link = connect(model, signal, () => drawFailed());

  function drawFailed() {
    const text = link.silent ? "The kernel does not answer: what is shown here may be old. Restart it and run the notebook." : refusal;
    setText(failed, text);
    failed.hidden = !text;
  }

  function choose(key, select) {
    refusal = "";
    link.send({ op: "choose", key, value: select.value }, (answer) => {
      if (!answer.ok && !answer.lost) refusal = answer.message;
      drawChoices(); // Python has the say: shows its value again if it refused or is gone
      drawFailed();
    });
  }

  function makeChoice(key) {
    const label = make("label", "calcsheet-choice");
    const words = make("span");
    const select = make("select");
    select.addEventListener("change", () => choose(key, select));
    label.append(words, select);
    return { label, words, select, drawn: "" };
  }

  function drawChoices() {
    const wanted = model.get("choices") ?? [];
    for (const { key, label, value, options } of wanted) {
      if (!selects.has(key)) selects.set(key, makeChoice(key));
      const choice = selects.get(key);
      setText(choice.words, label);
      const drawn = JSON.stringify(options);
      if (choice.drawn !== drawn) {
        choice.select.replaceChildren(...options.map((option) => new Option(option.label, option.value)));
        choice.drawn = drawn;
      }
      if (choice.select.value !== value) choice.select.value = value;
    }
    const nodes = wanted.map(({ key }) => selects.get(key).label);
    if (nodes.length !== choices.children.length || nodes.some((node, index) => choices.children[index] !== node)) {
      choices.replaceChildren(...nodes);
    }
    choices.hidden = nodes.length === 0;
  }

  function makeFigure() {
    const figure = make("figure");
    const image = make("img");
    figure.append(image);
    return { figure, image, wanted: "" };
  }

  async function drawFigure(entry, { alt, svg }) {
    entry.image.alt = alt;
    if (entry.wanted === svg) return;
    entry.wanted = svg;
    const next = make("img", "", { alt });
    next.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(svg)}`;
    await next.decode().catch(() => {}); // drawn before it is shown, so the page doesn't flicker
    if (entry.wanted !== svg) return; // a newer one has come meanwhile
    entry.image.replaceWith(next);
    entry.image = next;
  }

  function draw() {
    const { kind = "", text = "" } = model.get("note") ?? {};
    const hides = HIDES.includes(kind);
    note.dataset.kind = kind;
    note.hidden = !text;
    setText(note, text);

    const wantedHtml = hides ? "" : model.get("html");
    if (html !== wantedHtml) numbers.innerHTML = wantedHtml;
    html = wantedHtml;

    const wanted = hides ? [] : model.get("figures") ?? [];
    for (const name of shown.keys()) if (!wanted.some((figure) => figure.name === name)) shown.delete(name);
    for (const figure of wanted) {
      if (!shown.has(figure.name)) shown.set(figure.name, makeFigure());
      const entry = shown.get(figure.name);
      entry.figure.classList.toggle("calcsheet-redrawing", (figure.revision ?? Infinity) < model.get("revision"));
      drawFigure(entry, figure);
    }
    const nodes = wanted.map(({ name }) => shown.get(name).figure);
    if (nodes.length !== figures.children.length || nodes.some((node, index) => figures.children[index] !== node)) {
      figures.replaceChildren(...nodes);
    }
    drawChoices();
    drawFailed();
  }

  keepKeys(root, () => {});
  redrawOn(model, signal, ["html", "figures", "note", "choices", "revision"], draw);
  el.append(root);
  draw();
  watchTwin(model, root, signal);
}

export default { render };
