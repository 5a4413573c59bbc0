// Two factors on the whole model, the periods under them, and buttons that adopt one.

function render({ model, el, signal }) {
  const root = make("div", "calcsheet calcsheet-live", { "data-block": model.get("block") });
  const title = make("p");
  title.textContent = "What if: nothing here is saved, or goes into the record, until it is adopted.";
  const choices = make("div", "calcsheet-choices");
  const note = make("p", "calcsheet-note", { role: "status" });
  const numbers = make("div", "calcsheet-scroll");
  const failed = make("p", "calcsheet-status", { role: "status", "data-kind": "unsaved" });
  root.append(title, choices, note, numbers, failed);
  let refusal = "";
  let asking = false; // one question at a time: the newest waits for its turn
  let next = null;
  let html = "";
  const link = connect(model, signal, () => drawFailed());

  const sliders = ["mass", "stiffness"].map((what) => {
    const label = make("label", "calcsheet-choice");
    const words = make("span");
    words.textContent = `all ${what === "mass" ? "masses" : "stiffnesses"} ×`;
    const slider = make("input", "", { type: "range", min: "0.5", max: "2", step: "0.01" });
    const shown = make("output");
    label.append(words, slider, shown);
    const adopt = make("button", "calcsheet-button", { type: "button" });
    adopt.textContent = what === "mass" ? "adopt into the table" : "adopt into the job card";
    const place = make("div", "calcsheet-choice");
    place.append(label, adopt);
    choices.append(place);
    slider.addEventListener("input", () => {
      setText(shown, Number(slider.value).toFixed(2));
      ask({ op: "factors", ...Object.fromEntries(sliders.map((each) => [each.what, Number(each.slider.value)])) });
    });
    adopt.addEventListener("click", () => adopt.getAttribute("aria-disabled") === "true" || ask({ op: "adopt", what }));
    return { what, slider, shown, adopt };
  });

  function ask(message) {
    if (asking) {
      next = message;
      return;
    }
    asking = true;
    link.send(message, (answer) => {
      asking = false;
      refusal = answer.ok || answer.lost ? "" : answer.message;
      const then = next;
      next = null;
      if (then) ask(then);
      else draw();
    });
  }

  function drawFailed() {
    setText(failed, link.silent ? "The kernel does not answer: what is shown here may be old." : refusal);
    failed.hidden = !failed.textContent;
  }

  function draw() {
    for (const { what, slider, shown, adopt } of sliders) {
      const factor = model.get("factors")[what] ?? 1;
      if (!asking && Number(slider.value) !== factor) slider.value = factor;
      setText(shown, Number(slider.value).toFixed(2));
      adopt.setAttribute("aria-disabled", String(factor === 1));
    }
    note.hidden = !model.get("note");
    setText(note, model.get("note"));
    if (html !== model.get("html")) numbers.innerHTML = html = model.get("html");
    drawFailed();
  }

  keepKeys(root, () => {});
  redrawOn(model, signal, ["factors", "html", "note"], draw);
  el.append(root);
  draw();
}

export default { render };
