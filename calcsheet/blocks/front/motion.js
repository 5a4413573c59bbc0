// Used by view.js; widgets.py puts this text before it. A mode swinging, drawn from the ordinates that Python gives. It
// rests until it is asked to play, so that whoever wants no motion sees none.

const SWING = 2000; // ms, whatever the period: real ones are too quick to follow
const [WIDE, HIGH, REACH, EDGE] = [240, 280, 80, 12];

/** `motion`: list of {name, elevations, modes: [{label, shape}]}, base first, shapes at most 1. */
function makeMotion(signal) {
  const node = make("div", "calcsheet-motion");
  const choices = make("div", "calcsheet-choices");
  const label = make("label", "calcsheet-choice");
  const select = make("select");
  const words = make("span");
  words.textContent = "moving picture of";
  label.append(words, select);
  const play = make("button", "calcsheet-button", { type: "button", "aria-pressed": "false" });
  const said = make("span");
  said.textContent = "one swing in 2 s, whatever the period";
  choices.append(label, play, said);
  const draw = (tag, attributes) => {
    const part = document.createElementNS("http://www.w3.org/2000/svg", tag);
    for (const [name, value] of Object.entries(attributes)) part.setAttribute(name, value);
    svg.append(part);
    return part;
  };
  const svg = document.createElementNS("http://www.w3.org/2000/svg", "svg");
  svg.setAttribute("viewBox", `0 0 ${WIDE} ${HIGH}`);
  svg.setAttribute("width", WIDE);
  svg.setAttribute("role", "img");
  draw("line", { x1: WIDE / 2, x2: WIDE / 2, y1: EDGE, y2: HIGH - EDGE, stroke: "#595959", "stroke-dasharray": "2 4" });
  draw("line", { x1: WIDE / 2 - 30, x2: WIDE / 2 + 30, y1: HIGH - EDGE, y2: HIGH - EDGE, stroke: "#1f3a5f", "stroke-width": 2 });
  const line = draw("path", { fill: "none", stroke: "#1f3a5f", "stroke-width": 2 });
  node.append(choices, svg);

  let motion = [];
  let dots = [];
  let began = 0; // of the swing; 0 while it rests
  const chosen = () => motion.flatMap((each) => each.modes.map((mode) => ({ ...mode, elevations: each.elevations })))[select.value];

  function show(part) {
    const mode = chosen();
    if (!mode) return;
    const [low, high] = [mode.elevations[0], mode.elevations.at(-1)];
    const at = mode.shape.map((value, i) => [
      WIDE / 2 + REACH * value * part,
      HIGH - EDGE - ((HIGH - 2 * EDGE) * (mode.elevations[i] - low)) / (high - low),
    ]);
    line.setAttribute("d", `M${at.map((point) => point.map((v) => v.toFixed(1)).join(" ")).join("L")}`);
    while (dots.length > at.length) dots.pop().remove();
    while (dots.length < at.length) dots.push(draw("circle", { r: 3, fill: "#1f3a5f" }));
    at.forEach(([x, y], i) => {
      dots[i].setAttribute("cx", x.toFixed(1));
      dots[i].setAttribute("cy", y.toFixed(1));
    });
  }

  function step(now) {
    if (!began || signal.aborted || !svg.isConnected) return rest();
    show(Math.cos((2 * Math.PI * (now - began)) / SWING));
    requestAnimationFrame(step);
  }

  function rest() {
    began = 0;
    play.textContent = "play";
    play.setAttribute("aria-pressed", "false");
    show(1);
  }

  play.addEventListener("click", () => {
    if (began) return rest();
    began = performance.now();
    play.textContent = "rest";
    play.setAttribute("aria-pressed", "true");
    requestAnimationFrame(step);
  });
  select.addEventListener("change", () => update(motion));

  function update(given) {
    motion = given;
    node.hidden = motion.length === 0;
    const labels = motion.flatMap((each) => each.modes.map((mode) => mode.label));
    const kept = select.value;
    if ([...select.options].map((option) => option.text).join("\n") !== labels.join("\n")) {
      select.replaceChildren(...labels.map((text, i) => new Option(text, i)));
      if (labels[kept] !== undefined) select.value = kept;
    }
    svg.setAttribute("aria-label", chosen() ? `shape of ${chosen().label}` : "");
    if (!began) rest();
  }
  return { node, update };
}
