// A mode shape that moves: u(t) = shape · cos(phase). Its ordinates come from Python, the page only draws them. It moves
// while it is seen and nobody has paused it; where the reader asks for reduced motion it stands still, with a slider.

const SVG = "http://www.w3.org/2000/svg";
const BOX = { height: 380, left: 136, right: 20, top: 16, bottom: 50 }; // px
const NARROW = { ...BOX, left: 76, right: 10 }; // without the names of the levels
const WIDTHS = [200, 640]; // px: drawn as wide as there is room, so that its words keep their size
const SPEEDS = ["2", "4", "8"]; // s
const CROWDED = 14; // px between levels below which not each is named

function draws(tag, attributes = {}, text = "") {
  const node = document.createElementNS(SVG, tag);
  for (const [name, value] of Object.entries(attributes)) node.setAttribute(name, value);
  if (text) node.textContent = text;
  return node;
}

function render({ model, el, signal }) {
  const root = make("div", "calcsheet calcsheet-live", { "data-block": model.get("block") });
  const note = make("p", "calcsheet-note", { role: "status" });
  const controls = make("div", "calcsheet-choices");
  const direction = chooser("direction", start);
  const mode = chooser("mode", start);
  const speed = chooser("one cycle in", () => {});
  const button = make("button", "calcsheet-button calcsheet-play", { type: "button" });
  const phase = make("label", "calcsheet-choice");
  const slider = make("input", "", { type: "range", min: "0", max: "360", step: "5", value: "0" });
  const degrees = make("output");
  const figure = make("figure");
  const svg = draws("svg", { role: "img", class: "calcsheet-motion" });
  const caption = make("figcaption");
  phase.append("phase", slider, degrees);
  controls.append(direction.label, mode.label, speed.label, button, phase);
  figure.append(svg, caption);
  root.append(note, controls, figure);
  speed.fill(SPEEDS.map((seconds) => [seconds, `${seconds} s`]));
  speed.select.value = "4";

  const still = window.matchMedia("(prefers-reduced-motion: reduce)");
  let wants = !still.matches; // whether the reader lets it move
  let seen = false;
  let turned = 0; // the phase, in turns
  let last = null; // time of the frame before, ms
  let frame = 0;
  let drawn = ""; // what the axes stand for
  let moving = null; // {line, dots, shape, x, y}

  function chooser(words, act) {
    const label = make("label", "calcsheet-choice");
    const select = make("select");
    select.addEventListener("change", act);
    label.append(words, select);
    let options = "";
    const fill = (pairs) => {
      if (options === JSON.stringify(pairs)) return;
      options = JSON.stringify(pairs);
      const before = select.value;
      select.replaceChildren(...pairs.map(([value, text]) => new Option(text, value)));
      if (pairs.some(([value]) => value === before)) select.value = before;
    };
    return { label, select, fill };
  }

  // ---- what is drawn once --------------------------------------------------------------------------------------------

  function start() {
    const { levels = [], models = [], unit = "" } = model.get("motion") ?? {};
    const { kind = "", text = "" } = model.get("note") ?? {};
    note.dataset.kind = kind;
    note.hidden = !text;
    setText(note, text);
    controls.hidden = figure.hidden = models.length === 0;
    if (models.length === 0) {
      moving = null;
      drawn = "";
      svg.replaceChildren();
      return go();
    }
    direction.fill(models.map(({ name }) => [name, name]));
    const chosen = models.find(({ name }) => name === direction.select.value);
    mode.fill(chosen.modes.map(({ period }, n) => [String(n), `${n + 1}, T = ${period} s`]));
    const n = Number(mode.select.value);
    const { period, shape } = chosen.modes[n];
    const width = Math.min(Math.max(figure.clientWidth, WIDTHS[0]), WIDTHS[1]);
    const wanted = JSON.stringify([width, levels, unit, chosen.name, n, period, shape]);
    if (wanted !== drawn) axes(width, levels, unit, chosen.name, n, period, shape);
    drawn = wanted;
    go();
  }

  function axes(width, levels, unit, name, n, period, shape) {
    const narrow = width < 360;
    const box = narrow ? NARROW : BOX;
    svg.setAttribute("viewBox", `0 0 ${width} ${box.height}`);
    svg.setAttribute("width", width);
    svg.setAttribute("height", box.height);
    const foot = levels[0].elevation;
    const top = levels.at(-1).elevation;
    const middle = (box.left + width - box.right) / 2;
    const reach = (width - box.right - box.left) / 2 / 1.12;
    const ground = box.height - box.bottom;
    const x = (u) => middle + reach * u;
    const y = (e) => ground - ((e - foot) / (top - foot)) * (ground - box.top);
    const heights = levels.map(({ elevation }) => y(elevation));
    const path = (factor) => shape.map((u, i) => `${x(factor * u).toFixed(1)},${heights[i].toFixed(1)}`).join(" ");

    const parts = [draws("line", { class: "axis", x1: box.left, x2: box.left, y1: box.top, y2: ground })];
    parts.push(draws("line", { class: "rest", x1: x(0), x2: x(0), y1: box.top, y2: ground }));
    let free = Infinity;
    levels.forEach(({ name: level, label }, i) => {
      const last = i === levels.length - 1;
      if (i > 0 && !last && (free - heights[i] < CROWDED || heights[i] - heights.at(-1) < CROWDED)) return;
      free = heights[i];
      const short = level.length <= 10 ? level : `${level.slice(0, 9)}…`;
      parts.push(draws("line", { class: "axis", x1: box.left - 4, x2: box.left, y1: heights[i], y2: heights[i] }));
      const words = narrow ? label : `${short}\u2002\u2002${label}`;
      parts.push(draws("text", { x: box.left - 8, y: heights[i] + 4, "text-anchor": "end" }, words));
    });
    parts.push(draws("line", { class: "ground", x1: box.left, x2: width - box.right, y1: ground, y2: ground }));
    for (let at = box.left + 8; at <= width - box.right; at += 12) {
      parts.push(draws("line", { class: "axis", x1: at, x2: at - 8, y1: ground, y2: ground + 7 })); // the fixed base
    }
    for (const u of [-1, 0, 1]) {
      const words = String(u).replace("-", "\u2212");
      parts.push(draws("text", { x: x(u), y: ground + 21, "text-anchor": "middle" }, words));
    }
    const across = `displacement in ${name}, largest = 1`;
    parts.push(draws("text", { x: middle, y: box.height - 8, "text-anchor": "middle" }, across));
    const turn = `rotate(-90 14 ${(box.top + ground) / 2})`;
    const upward = { x: 14, y: (box.top + ground) / 2, "text-anchor": "middle", transform: turn };
    parts.push(draws("text", upward, `${narrow ? "" : "level, "}elevation [${unit}]`));
    for (const factor of [1, -1]) parts.push(draws("polyline", { class: "extreme", points: path(factor) }));
    const line = draws("polyline", { class: "shape" });
    const dots = levels.length > 60 ? [] : shape.slice(1).map(() => draws("circle", { class: "level", r: 3.5 }));
    svg.replaceChildren(...parts, line, ...dots);
    svg.setAttribute("aria-label", `Mode ${n + 1} in ${name}, T = ${period} s: displacements of the levels over elevation, `
      + "between the extremes drawn dashed, above the fixed base");
    setText(caption, `Mode ${n + 1} in ${name}, T = ${period} s, whatever the cycle on the screen; dashed: its extremes.`);
    moving = { line, dots, path, shape, x, heights };
    place();
  }

  // ---- what is drawn each frame ---------------------------------------------------------------------------------------

  function place() {
    if (!moving) return;
    const factor = Math.cos(2 * Math.PI * turned);
    moving.line.setAttribute("points", moving.path(factor));
    moving.dots.forEach((dot, i) => {
      dot.setAttribute("cx", moving.x(factor * moving.shape[i + 1]).toFixed(1));
      dot.setAttribute("cy", moving.heights[i + 1].toFixed(1));
    });
  }

  function step(now) {
    if (!root.isConnected) return stop(); // its cell was cleared or run again
    if (last !== null) turned = (turned + (now - last) / 1000 / Number(speed.select.value)) % 1;
    last = now;
    place();
    frame = requestAnimationFrame(step);
  }

  function stop() {
    cancelAnimationFrame(frame);
    frame = 0;
    last = null;
  }

  /** Move or stand, as reader, page and screen have it now. */
  function go() {
    const moves = wants && seen && !document.hidden && moving !== null;
    if (moves && !frame) frame = requestAnimationFrame(step);
    if (!moves && frame) stop();
    root.dataset.moves = String(moves);
    button.hidden = speed.label.hidden = still.matches;
    setText(button, wants ? "pause" : "play");
    button.setAttribute("aria-label", wants ? "pause the motion" : "play the motion");
    phase.hidden = wants;
    if (!wants) {
      const now = String(Math.round(turned * 72) * 5);
      if (slider.value !== now) slider.value = now;
      setText(degrees, `${now}°`);
    }
  }

  button.addEventListener("click", () => {
    wants = !wants;
    go();
  });
  slider.addEventListener("input", () => {
    turned = Number(slider.value) / 360;
    setText(degrees, `${slider.value}°`);
    place();
  });
  still.addEventListener("change", () => {
    wants = wants && !still.matches;
    go();
  }, { signal });
  document.addEventListener("visibilitychange", go, { signal });
  const watcher = new IntersectionObserver((entries) => {
    seen = entries.at(-1).isIntersecting;
    go();
  });
  watcher.observe(figure);
  const sizes = new ResizeObserver(start);
  sizes.observe(figure);
  signal.addEventListener("abort", () => {
    watcher.disconnect();
    sizes.disconnect();
    stop();
  });

  keepKeys(root, () => {});
  // The notebook takes arrows and Enter from whatever is focused and no text field, unless that very element says no.
  root.addEventListener("focusin", (event) => event.target.setAttribute("data-lm-suppress-shortcuts", "true"));
  redrawOn(model, signal, ["motion", "note"], start);
  el.append(root);
  start();
  watchTwin(model, root, signal);
}

export default { render };
