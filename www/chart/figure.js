/** A chart with all that belongs to it: title, drawing, cursor, its numbers, and ways to take them away. */

import { h } from "../dom.js";
import { copy } from "../copy.js";
import { save } from "../files.js";
import { readOff } from "../numbers.js";
import { draw } from "./draw.js";
import { moved, nearest, reading, showCursor } from "./cursor.js";
import { dataOf, svgText, tsv } from "./export.js";

/**
 * @typedef {import("../door.js").Curve} Curve
 * @typedef {import("../door.js").Mark} Mark
 * @typedef {import("./draw.js").Drawing} Drawing
 * @typedef {import("./cursor.js").Position} Position
 */

/** Where the cursor of each chart stood, so that it stays while a field is being changed. @type {Map<string, Position>} */
const positions = new Map();

/** The charts whose numbers are unfolded, for the same reason. @type {Set<string>} */
const unfolded = new Set();

/** @param {Curve} curve @param {Mark} mark @returns {HTMLElement} */
export function chartFigure(curve, mark) {
  const paper = h("div", { class: "paper" });
  const readout = h("p", { class: "readout" }, "Point at the chart, or focus it and use the arrow keys.");
  /** @type {Drawing | null} */
  let drawing = null;
  const redraw = (/** @type {number} */ width) => {
    const focused = paper.contains(document.activeElement);
    drawing = draw(curve, Math.max(width, 240), mark);
    paper.replaceChildren(drawing.svg);
    listen(curve, drawing, readout, mark);
    if (focused) drawing.svg.focus({ preventScroll: true });
  };
  onWidth(paper, redraw);
  return h(
    "figure",
    { class: "chart-figure" },
    h("figcaption", {}, h("h3", {}, curve.title), readout),
    paper,
    h(
      "div",
      { class: "chart-tools" },
      dataView(curve, mark),
      h("button", { type: "button", class: "quiet", click: () => copy(tsv(curve, mark), `the data of “${curve.title}”`) }, "Copy data"),
      h("button", { type: "button", class: "quiet", click: () => drawing && save(`leastlight-${curve.name}.svg`, "image/svg+xml", svgText(drawing.svg, curve.title)) }, "Save SVG"),
    ),
  );
}

/** Calls back with the width now and whenever it changes. @param {HTMLElement} element @param {(width: number) => void} use */
function onWidth(element, use) {
  let last = 0;
  new ResizeObserver(([entry]) => {
    const width = Math.floor(entry?.contentRect.width ?? 0);
    if (width === last || width === 0) return;
    last = width;
    use(width);
  }).observe(element);
}

/** @param {Curve} curve @param {Drawing} drawing @param {HTMLElement} readout @param {Mark} mark */
function listen(curve, drawing, readout, mark) {
  const { svg } = drawing;
  const label = `${curve.title}. Left and right walk along the line${drawing.lines.length > 1 ? ", up and down change the line" : ""}.`;
  for (const [name, value] of Object.entries({ tabindex: "0", role: "slider", "aria-label": label, "aria-valuemin": "0" })) svg.setAttribute(name, value);
  const show = (/** @type {Position | null} */ position) => {
    showCursor(drawing, position);
    const [line, index] = [position?.line ?? 0, position?.index ?? 0];
    svg.setAttribute("aria-valuemax", String(Math.max((drawing.lines[line]?.points.length ?? 1) - 1, 0)));
    svg.setAttribute("aria-valuenow", String(index));
    svg.setAttribute("aria-valuetext", reading(curve, drawing, { line, index }, mark));
    if (position) {
      readout.textContent = reading(curve, drawing, position, mark);
      positions.set(curve.name, position);
    }
  };
  svg.addEventListener("pointermove", (event) => {
    const box = svg.getBoundingClientRect();
    const scale = Number(svg.getAttribute("width")) / (box.width || 1);
    show(nearest(drawing, (event.clientX - box.left) * scale, (event.clientY - box.top) * scale));
  });
  svg.addEventListener("keydown", (event) => {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const to = moved(drawing, positions.get(curve.name) ?? { line: 0, index: 0 }, event.key);
    if (!to) return;
    event.preventDefault();
    show(to);
  });
  svg.addEventListener("focus", () => show(positions.get(curve.name) ?? { line: 0, index: 0 }));
  const kept = positions.get(curve.name);
  show(kept && drawing.lines[kept.line]?.points[kept.index] ? kept : null);
}

/** The numbers, made when they are first looked at. @param {Curve} curve @param {Mark} mark */
function dataView(curve, mark) {
  const box = h("div", { class: "scroll data", tabindex: 0, role: "region", "aria-label": `Data: ${curve.title}` });
  const details = h("details", { open: unfolded.has(curve.name) }, h("summary", {}, "Data"), box);
  details.addEventListener("toggle", () => {
    if (details.open) unfolded.add(curve.name);
    else unfolded.delete(curve.name);
    if (!details.open || box.firstChild) return;
    const { columns, rows, long } = dataOf(curve);
    const cell = (/** @type {string | number} */ value) => h("td", {}, typeof value === "number" ? readOff(value, 6, mark) : value);
    box.append(
      h(
        "table",
        { class: "plain" },
        h("thead", {}, h("tr", {}, columns.map((text) => h("th", { scope: "col" }, text)))),
        h("tbody", {}, (rows ?? long).map((row) => h("tr", {}, row.map(cell)))),
      ),
    );
  });
  return details;
}
