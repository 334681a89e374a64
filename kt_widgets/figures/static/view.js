// One view of a linked page: it shows a body and lights up what belongs together.
//
// It talks to a model of three methods, get(name), set(name, value) and on("change:name", function), so the same
// file serves a live widget and a page without kernel. The values it knows:
//   body      HTML with inline SVG; every part that can be pointed at carries data-place="kind:index:..."
//   links     place -> the places that belong to it
//   focus     the place pointed at, or "";   selected  the place clicked, or ""
//   answered  counts the answers to what forms have sent
//   steps     the letters of all relators in order, each with cell, letter, edge, entry, caption, sums;   step  a position
// What else a body asks for: data-bind="name" shows a value as text, data-set="name" (form or select) sets one,
// data-when="name=value" shows a part only then, data-stepper is where the stepping goes, data-says where the words
// for what is lit go, data-act="svg" | "png" | "copy" are buttons. Focus and step change classes, nothing is redrawn.

const SVG = "http://www.w3.org/2000/svg";
const HIT_WIDTH = 12;
const TRACES = "[data-traces] [data-place^='letter:'], [data-traces] [data-place^='cell:']";
const KINDS = {
  entry: "entry", letter: "letter", edge: "edge", vertex: "vertex", cell: "cell", relator: "relator",
  generator: "generator", arc: "arc", crossing: "crossing", component: "component", face: "face", strand: "strand",
};
const PLURALS = { entry: "entries", vertex: "vertices" };
// Counted on the page: every widget has a copy of this module to itself.
const page = (globalThis[Symbol.for("kt-views")] ??= { views: 0 });

export function render({ model, el }) {
  return new View(model, el).close;
}

// A page without kernel: every element with data-view becomes a view; all share the one state given.
export function linkPage(root, state) {
  const values = { links: {}, steps: [], focus: "", selected: "", step: 0, ...state };
  const listeners = {};
  const get = (name) => values[name];
  const set = (name, value) => {
    if (values[name] === value) return;
    values[name] = value;
    for (const listener of listeners[`change:${name}`] ?? []) listener();
  };
  const on = (event, listener) => (listeners[event] ??= []).push(listener);
  for (const el of root.querySelectorAll("[data-view]")) {
    const body = el.innerHTML;
    el.textContent = "";
    render({ model: { get: (name) => (name === "body" ? body : get(name)), set, on }, el });
  }
  return { get, set, on };
}

// Words ---------------------------------------------------------------------------------------------------------

const superscript = (n) => String(n).replace(/[-0-9]/g, (c) => (c === "-" ? "⁻" : "⁰¹²³⁴⁵⁶⁷⁸⁹"[c]));
const lift = (k, what) => (k === "0" ? what : `t${k === "1" ? "" : superscript(k)} ${what}`);

// The indices of a place in words, and what several of one kind have in common: ["2", "of r1"].
function indexWords(place, links) {
  const [kind, ...at] = place.split(":");
  switch (kind) {
    case "edge": return [lift(at[1], at[0]), ""];
    case "vertex": return [lift(at[0], "e"), ""];
    case "cell": return [lift(at[1], `f${at[0]}`), ""];
    case "relator": return [`r${at[0]}`, ""];
    case "letter": return [at[1], ` of r${at[0]}`];
    case "entry": {
      // An entry of ∂2 that is 0 belongs to nothing, but each row has an entry of ∂1.
      const row = at[0] === "1" ? at[2] : at[1];
      const of = links[`entry:1:1:${row}`] ?? [];
      const generator = of.find((p) => p.startsWith("generator:"))?.split(":")[1] ?? `row ${row}`;
      return at[0] === "1" ? [`(e, ${generator})`, " of ∂1"] : [`(${generator}, r${at[2]})`, " of ∂2"];
    }
    default: return [at.join(", "), ""];
  }
}

function nameOf(place, links) {
  const kind = place.split(":")[0];
  return `${KINDS[kind] ?? kind} ${indexWords(place, links).join("")}`;
}

// What is lit, in words: "entry (a, r2) of ∂2: 1 − t — letters 1, 4 of r2; edges a, t a; arc 1; crossing 2".
function wordsFor(place, links, { name, value } = {}) {
  const groups = new Map();
  for (const other of links[place] ?? []) {
    const kind = other.split(":")[0];
    const [index, common] = indexWords(other, links);
    const key = kind + common;
    groups.set(key, { kind, common, indices: [...(groups.get(key)?.indices ?? []), index] });
  }
  const parts = [...groups.values()].map(({ kind, common, indices }) => {
    const noun = indices.length > 1 ? (PLURALS[kind] ?? `${KINDS[kind]}s`) : KINDS[kind];
    return `${noun} ${indices.join(", ")}${common}`;
  });
  const known = name ? `${KINDS[place.split(":")[0]]} ${name}` : nameOf(place, links);
  return known + (value ? `: ${value}` : "") + (parts.length ? ` — ${parts.join("; ")}` : "");
}

// The one relator that a place belongs to, as a string, or null.
function relatorOf(place, links) {
  const [kind, ...at] = place.split(":");
  if (kind === "letter" || kind === "cell" || kind === "relator") return at[0];
  if (kind === "entry" && at[0] === "2") return at[2];
  if (kind !== "crossing") return null;
  const found = (links[place] ?? []).filter((p) => p.startsWith("relator:"));
  return found.length === 1 ? found[0].split(":")[1] : null;
}

// Preparing a body ------------------------------------------------------------------------------------------------

// Ids are made unique on the page: one body may be shown twice.
function prefixIds(root, prefix) {
  for (const node of root.querySelectorAll("*")) {
    if (node.id) node.id = prefix + node.id;
    for (const name of ["for", "aria-labelledby", "aria-describedby", "aria-controls"]) {
      const value = node.getAttribute(name);
      if (value) node.setAttribute(name, value.split(/\s+/).map((id) => prefix + id).join(" "));
    }
    for (const { name, value } of [...node.attributes]) {
      if (name.endsWith("href") && value.startsWith("#")) node.setAttribute(name, `#${prefix}${value.slice(1)}`);
      else if (value.includes("url(#")) node.setAttribute(name, value.replaceAll("url(#", `url(#${prefix}`));
    }
  }
}

// Under each line of a picture goes a wide transparent one: it catches the pointer, and carries the highlight.
function addHitStrokes(svg) {
  for (const line of svg.querySelectorAll("g[data-place] > path[fill='none']")) {
    const hit = document.createElementNS(SVG, "path");
    hit.setAttribute("d", line.getAttribute("d"));
    hit.setAttribute("class", "kt-hit");
    hit.setAttribute("stroke-width", HIT_WIDTH);
    line.before(hit);
  }
}

function element(name, attributes = {}, ...children) {
  const node = document.createElement(name);
  for (const [key, value] of Object.entries(attributes)) node.setAttribute(key, value);
  node.append(...children);
  return node;
}

function button(label, text, action) {
  const node = element("button", { type: "button", "aria-label": label }, text);
  node.addEventListener("click", action);
  return node;
}

// A selector that finds the same control or part again after a new build.
function whereIs(node) {
  if (node.dataset.place) return `[data-place="${node.dataset.place}"]`;
  const name = node.closest("[data-set]")?.dataset.set;
  return name ? `[data-set="${name}"]:not(form), form[data-set="${name}"] input` : "";
}

// Notebook shortcuts must not see the keys that are meant for the view.
function keepKeys(root) {
  for (const node of root.querySelectorAll("[tabindex], a[href], button, input, select, textarea, summary")) {
    node.setAttribute("data-lm-suppress-shortcuts", "true");
  }
}

// The view ----------------------------------------------------------------------------------------------------------

class View {
  constructor(model, el) {
    this.model = model;
    this.prefix = `view${(page.views += 1)}-`;
    this.root = element("div", { class: "kt-view" });
    this.live = element("div", { class: "kt-live", "aria-live": "polite" });
    this.heard = new Map();
    this.close = this.close.bind(this);
    el.append(this.root);

    this.listen("body", () => this.buildSoon());
    this.listen("links", () => this.lightUp());
    this.listen("focus", () => this.lightUp());
    this.listen("selected", () => this.selectionChanged());
    this.listen("steps", () => this.buildSoon());
    this.listen("step", () => this.showStep());
    this.listen("answered", () => this.root.classList.remove("kt-waiting"));
    this.root.addEventListener("pointerover", (event) => this.pointAt(this.placeAt(event.target)));
    this.root.addEventListener("pointerleave", () => this.pointAt(""));
    this.root.addEventListener("focusin", (event) => this.entered(event.target));
    this.root.addEventListener("focusout", () => this.set("focus", ""));
    this.root.addEventListener("click", (event) => this.clicked(event));
    this.root.addEventListener("keydown", (event) => this.key(event));
    this.build();
  }

  get(name) {
    return this.model.get(name);
  }

  set(name, value) {
    if (this.get(name) === value) return;
    this.model.set(name, value);
    this.model.save_changes?.();
  }

  listen(name, action) {
    this.model.on(`change:${name}`, action);
    this.heard.set(`change:${name}`, [...(this.heard.get(`change:${name}`) ?? []), action]);
  }

  close() {
    for (const [event, actions] of this.heard) for (const action of actions) this.model.off?.(event, action);
    this.root.remove();
  }

  get links() {
    return this.get("links") ?? {};
  }

  get steps() {
    return this.get("steps") ?? [];
  }

  // Values that change together, as when another diagram is entered, lead to one new build.
  buildSoon() {
    if (this.waiting) return;
    this.waiting = true;
    queueMicrotask(() => {
      this.waiting = false;
      this.build();
    });
  }

  build() {
    const active = this.root.contains(document.activeElement) ? whereIs(document.activeElement) : "";
    this.root.innerHTML = this.get("body") ?? "";
    this.pictures = new Map([...this.root.querySelectorAll("svg")].map((svg) => [svg, svg.outerHTML]));
    prefixIds(this.root, this.prefix);
    this.pictures.forEach((_, svg) => {
      svg.setAttribute("role", "group");
      addHitStrokes(svg);
    });
    this.index();
    this.stepper = this.buildStepper();
    this.bindValues();
    keepKeys(this.root);
    this.root.append(this.live);
    this.showStep();
    if (active) this.root.querySelector(active)?.focus();
  }

  // Parts by place; the first visible part of each place can have the keyboard's focus, one at a time by tab.
  index() {
    this.parts = new Map();
    for (const part of this.root.querySelectorAll("[data-place]")) {
      const place = part.dataset.place;
      if (!(place.split(":")[0] in KINDS)) continue;
      if (!this.parts.has(place)) {
        this.parts.set(place, []);
        part.setAttribute("tabindex", "-1");
        if (!part.hasAttribute("role")) part.setAttribute("role", "button");
        if (part instanceof SVGElement) part.setAttribute("aria-label", nameOf(place, this.links));
      }
      this.parts.get(place).push(part);
    }
    this.stops = [...this.parts.values()].map((parts) => parts[0]);
    this.stops.sort((a, b) => (a.compareDocumentPosition(b) & Node.DOCUMENT_POSITION_FOLLOWING ? -1 : 1));
    this.tabStop(this.stops[0]);
  }

  bindValues() {
    const follow = (name, action) => {
      if (!this.heard.has(`change:${name}`)) this.listen(name, () => this.showValues());
      this.bound.push(action);
    };
    this.bound = [];
    for (const node of this.root.querySelectorAll("[data-bind]")) {
      follow(node.dataset.bind, () => {
        node.textContent = this.get(node.dataset.bind) ?? "";
        node.hidden = !node.textContent;
      });
    }
    for (const node of this.root.querySelectorAll("[data-when]")) {
      const [name, value] = node.dataset.when.split("=");
      follow(name, () => { node.hidden = String(this.get(name)) !== value; });
    }
    for (const node of this.root.querySelectorAll("[data-set]")) {
      const name = node.dataset.set;
      const field = node.matches("form") ? node.querySelector("input, textarea") : node;
      if (this.get(name) == null) this.set(name, field.value);
      follow(name, () => { if (field.value !== this.get(name)) field.value = this.get(name) ?? ""; });
      node.addEventListener(node.matches("form") ? "submit" : "change", (event) => {
        event.preventDefault();
        // What a form sends is worked out by the kernel, which may take some seconds.
        if (node.matches("form") && this.get(name) !== field.value) this.root.classList.add("kt-waiting");
        this.set(name, field.value);
      });
    }
    this.showValues();
  }

  showValues() {
    for (const action of this.bound) action();
  }

  // Focus and selection ---------------------------------------------------------------------------------------------

  placeAt(node) {
    const place = node.closest?.("[data-place]")?.dataset.place ?? "";
    return this.parts.has(place) ? place : "";
  }

  // Only a place under the pointer takes the focus; moving over empty ground leaves a focus from the keys alone.
  pointAt(place) {
    if (place === this.pointed) return;
    this.pointed = place;
    this.announce(place);
    this.set("focus", place);
  }

  entered(node) {
    const place = this.placeAt(node);
    if (!place) return;
    this.tabStop(node.closest("[data-place]"));
    this.announce(place);
    this.set("focus", place);
  }

  clicked(event) {
    const act = event.target.closest("[data-act]");
    if (act && this.root.contains(act)) return this.act(act);
    const place = this.placeAt(event.target);
    if (place && window.getSelection().isCollapsed) this.select(place);
    return undefined;
  }

  select(place) {
    this.set("selected", this.get("selected") === place ? "" : place);
  }

  announce(place) {
    if (place) this.live.textContent = this.words(place);
  }

  words(place) {
    return wordsFor(place, this.links, this.parts.get(place)?.[0].dataset);
  }

  tabStop(part) {
    for (const stop of this.stops) stop.setAttribute("tabindex", stop === part ? "0" : "-1");
  }

  visibleStops() {
    return this.stops.filter((stop) => stop.getClientRects().length && !stop.closest(".kt-away"));
  }

  key(event) {
    if (event.key === "Enter" && event.target.matches("form[data-set] input")) {
      // A notebook may keep Enter from submitting a form.
      event.preventDefault();
      event.target.form.requestSubmit();
      return;
    }
    const part = event.target.closest?.("[data-place]");
    if (!part || !this.stops.includes(part) || event.ctrlKey || event.metaKey || event.altKey) return;
    const next = this.neighbour(part, event.key);
    if (next) next.focus();
    else if (event.key === "Enter" || event.key === " ") this.select(part.dataset.place);
    else if (event.key === "Escape") this.set("selected", "");
    else return;
    event.preventDefault();
    event.stopPropagation();
  }

  // Left and right go through the parts in order; up and down along a column of a table, else to the next kind.
  neighbour(part, key) {
    const stops = this.visibleStops();
    const here = stops.indexOf(part);
    const back = key === "ArrowLeft" || key === "ArrowUp";
    if (key === "Home") return stops[0];
    if (key === "End") return stops.at(-1);
    if (!key.startsWith("Arrow")) return null;
    const cell = part.closest("td, th");
    if (key === "ArrowLeft" || key === "ArrowRight") return stops[here + (back ? -1 : 1)] ?? part;
    const order = back ? stops.slice(0, here).reverse() : stops.slice(here + 1);
    const kind = (stop) => stop.dataset.place.split(":")[0];
    if (cell) return order.find((stop) => stop.closest("td, th")?.cellIndex === cell.cellIndex) ?? part;
    const other = order.find((stop) => kind(stop) !== kind(part));
    return (back && other && stops.find((stop) => kind(stop) === kind(other))) || other || part;
  }

  selectionChanged() {
    const selected = this.get("selected");
    if (this.stepper && selected) this.stepTo(selected);
    this.lightUp();
  }

  lightUp() {
    const selected = this.get("selected");
    const place = this.get("focus") || selected;
    const near = new Set(this.links[place] ?? []);
    for (const [name, parts] of this.parts) {
      for (const part of parts) {
        part.classList.toggle("kt-focus", name === place);
        part.classList.toggle("kt-linked", near.has(name));
        part.classList.toggle("kt-selected", name === selected);
      }
      const state = parts[0].getAttribute("role") === "button" ? "aria-pressed" : "aria-selected";
      parts[0].setAttribute(state, String(name === selected));
    }
    const says = place ? this.words(place) : "";
    for (const node of this.root.querySelectorAll("[data-says]")) node.textContent = says || node.dataset.says;
    this.showTrace();
  }

  // Stepping through the letters ----------------------------------------------------------------------------------------

  get stepNow() {
    const steps = this.steps;
    return steps.length ? Math.min(Math.max(this.get("step") ?? 0, 0), steps.length - 1) : -1;
  }

  // The positions of the steps that read one relator.
  range(cell) {
    const steps = this.steps;
    const first = steps.findIndex((step) => step.cell === cell);
    let last = first;
    while (last + 1 < steps.length && steps[last + 1].cell === cell) last += 1;
    return [first, last];
  }

  stepTo(place) {
    const letter = this.steps.findIndex((step) => step.letter === place);
    const relator = relatorOf(place, this.links);
    const start = this.steps.findIndex((step) => step.cell.split(":")[1] === relator);
    if (letter >= 0) this.set("step", letter);
    else if (start >= 0 && this.steps[this.stepNow].cell.split(":")[1] !== relator) this.set("step", start);
  }

  buildStepper() {
    const place = this.root.querySelector("[data-stepper]");
    if (!place || !this.steps.length) return null;
    const cells = [...new Set(this.steps.map((step) => step.cell))];
    const choice = element("select", { "aria-label": "relator to be read" });
    for (const cell of cells) choice.append(element("option", { value: cell }, `r${cell.split(":")[1]}`));
    const slider = element("input", { type: "range", step: "1", "aria-label": "letters read" });
    const caption = element("p", { class: "kt-caption", "aria-live": "polite" });
    const sum = element("p", { class: "kt-sum kt-math" });
    const move = (by) => this.set("step", Math.min(Math.max(this.stepNow + by, 0), this.steps.length - 1));
    choice.addEventListener("change", () => this.set("step", this.range(choice.value)[0]));
    slider.addEventListener("input", () => {
      this.set("step", this.range(this.steps[this.stepNow].cell)[0] + Number(slider.value));
    });
    const controls = element("div", { class: "kt-controls" }, choice, button("previous letter", "◂", () => move(-1)),
      slider, button("next letter", "▸", () => move(1)));
    place.replaceChildren(controls, caption, sum);
    return { choice, slider, caption, sum };
  }

  showStep() {
    const now = this.stepNow;
    const step = this.steps[now];
    if (this.stepper && step) {
      const { choice, slider, caption, sum } = this.stepper;
      const [first, last] = this.range(step.cell);
      choice.value = step.cell;
      slider.max = last - first;
      slider.value = now - first;
      slider.setAttribute("aria-valuetext", `${now - first} of ${last - first}: ${step.caption}`);
      caption.textContent = step.caption;
      sum.textContent = step.sum_text;
    }
    const read = new Set();
    for (let i = now; step && this.steps[i]?.cell === step.cell; i -= 1) {
      if (this.steps[i].letter) read.add(this.steps[i].letter);
    }
    const arcs = (this.links[step?.letter] ?? []).filter((place) => place.startsWith("arc:"));
    const current = new Set(step?.letter ? [step.letter, step.edge, step.entry, ...arcs] : []);
    for (const [name, parts] of this.parts) {
      for (const part of parts) {
        part.classList.toggle("kt-now", current.has(name));
        part.classList.toggle("kt-read", read.has(name));
      }
    }
    this.reading = read.size > 0;
    this.lightUp();
  }

  // A picture with data-traces holds those of several relators and shows one: of the place lit, else of the step.
  showTrace() {
    const place = this.get("focus") || this.get("selected");
    const shown = (place && relatorOf(place, this.links)) || this.steps[this.stepNow]?.cell.split(":")[1] || "1";
    this.shown = shown;
    this.root.classList.toggle("kt-stepping", this.reading && shown === this.steps[this.stepNow].cell.split(":")[1]);
    for (const part of this.root.querySelectorAll(TRACES)) {
      part.classList.toggle("kt-away", part.dataset.place.split(":")[1] !== shown);
    }
  }

  // Export ----------------------------------------------------------------------------------------------------------------

  async act(node) {
    const kind = node.dataset.act;
    const name = node.dataset.name ?? "figure";
    if (kind === "copy") {
      await copyText(node.dataset.text);
      this.live.textContent = `${node.textContent}: copied`;
      node.classList.add("kt-done");
      setTimeout(() => node.classList.remove("kt-done"), 1200);
    } else {
      const text = this.svgText(node.closest("figure").querySelector("svg"));
      if (kind === "svg") download(`${name}.svg`, new Blob([text], { type: "image/svg+xml" }));
      else download(`${name}.png`, await pngOf(text));
    }
  }

  // The picture as it was made, with the one trace that is shown.
  svgText(svg) {
    const box = element("div", svg.closest("[data-traces]") ? { "data-traces": "" } : {});
    box.innerHTML = this.pictures.get(svg);
    for (const part of box.querySelectorAll(TRACES)) {
      if (part.dataset.place.split(":")[1] !== this.shown) part.remove();
    }
    return new XMLSerializer().serializeToString(box.firstElementChild);
  }
}

async function copyText(text) {
  if (navigator.clipboard) return navigator.clipboard.writeText(text);
  const field = element("textarea", { style: "position: fixed; opacity: 0" });
  field.value = text;
  document.body.append(field);
  field.select();
  document.execCommand("copy");
  field.remove();
  return undefined;
}

function download(name, blob) {
  const link = element("a", { href: URL.createObjectURL(blob), download: name });
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 1000);
}

async function pngOf(text) {
  const image = new Image();
  image.src = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(text)}`;
  await image.decode();
  const canvas = element("canvas", { width: image.naturalWidth * 3, height: image.naturalHeight * 3 });
  const context = canvas.getContext("2d");
  context.fillStyle = "#ffffff";
  context.fillRect(0, 0, canvas.width, canvas.height);
  context.drawImage(image, 0, 0, canvas.width, canvas.height);
  return new Promise((resolve) => canvas.toBlob(resolve, "image/png"));
}
