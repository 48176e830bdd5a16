/** A curve as SVG, drawn for a given width. */

import { line as lineShape } from "d3-shape";
import { s } from "../dom.js";
import { scaleOf } from "./axis.js";
import { bestPlace, textWidth } from "./labels.js";
import { seriesOf } from "./series.js";

/**
 * @typedef {import("../door.js").Curve} Curve
 * @typedef {import("../door.js").Mark} Mark
 * @typedef {import("./axis.js").Scale} Scale
 * @typedef {import("./axis.js").Tick} Tick
 * @typedef {import("./labels.js").Box} Box
 * @typedef {{ x: number, y: number, px: number, py: number }} Seen a point on the paper
 * @typedef {{ svg: SVGElement, overlay: SVGElement, frame: Box, lines: { name: string, dots: boolean, points: Seen[] }[] }} Drawing
 */

const SIZE = 12;
/** As the style sheet keeps free for it. */
const HEIGHT = 280;
const KEY_LINE = 18;

/** @param {Curve} curve @param {number} width in px @param {Mark} mark @returns {Drawing} */
export function draw(curve, width, mark) {
  const key = legend(curve, width);
  const frame = { x: 58, y: key.height + 8, width: Math.max(width - 58 - 12, 80), height: HEIGHT - key.height - 54 };
  const x = scaleOf(curve.x, all(curve, "x"), [frame.x, frame.x + frame.width], Math.max(2, Math.floor(frame.width / 70)), mark);
  const y = scaleOf(curve.y, all(curve, "y"), [frame.y + frame.height, frame.y], Math.max(3, Math.floor(frame.height / 26)), mark);
  const lines = seriesOf(curve).map(({ name, dots, x: xs, y: ys }) => ({ name, dots, points: seen(xs, ys, x, y) }));
  const overlay = s("g", { class: "overlay" });
  const clip = `clip-${curve.name}`;
  const svg = s(
    "svg",
    { viewBox: `0 0 ${width} ${HEIGHT}`, width, height: HEIGHT, class: "chart" },
    s("defs", {}, s("clipPath", { id: clip }, s("rect", { ...frame }))),
    key.group,
    grid(x, y, frame),
    s("g", { "clip-path": `url(#${clip})` }, ...(curve.band ? bandPaths(curve.band, lines) : lines.map(({ dots, points }, i) => (dots ? dotsOf(points) : s("path", { class: `line line-${i % 4}`, d: pathOf(points) }))))),
    axisTexts(curve, x, y, frame),
    ...marks(curve, x, y, frame, lines),
    overlay,
  );
  return { svg, overlay, frame, lines: lines.map((one) => ({ ...one, points: one.points.filter((point) => within(point, frame)) })) };
}

/** @param {Curve} curve @param {"x" | "y"} axis */
function all(curve, axis) {
  const marked = curve.marks.map((mark) => (mark.axis === axis ? mark.at : mark[axis]));
  return [...seriesOf(curve).flatMap((one) => one[axis]), ...marked.filter((value) => typeof value === "number")];
}

/** @param {number[]} xs @param {number[]} ys @param {Scale} x @param {Scale} y @returns {Seen[]} */
function seen(xs, ys, x, y) {
  return xs
    .map((value, i) => ({ x: value, y: ys[i] ?? NaN, px: x.place(value), py: y.place(ys[i] ?? NaN) }))
    .filter(({ px, py }) => Number.isFinite(px) && Number.isFinite(py));
}

/** @param {Seen} point @param {Box} frame */
const within = ({ px, py }, frame) => px >= frame.x - 0.5 && px <= frame.x + frame.width + 0.5 && py >= frame.y - 0.5 && py <= frame.y + frame.height + 0.5;

/** @param {Seen[]} points */
const pathOf = (points) => lineShape(/** @type {(point: Seen) => number} */ (({ px }) => px), ({ py }) => py)(points) ?? "";

/** The area between two lines and its edges, in pieces where nothing is known in between. @param {import("../door.js").Band} band @param {{ points: Seen[] }[]} lines */
function bandPaths({ low, high, breaks }, lines) {
  const pieces = (/** @type {number} */ line) => {
    const points = lines[line]?.points ?? [];
    return [0, ...breaks].map((from, i) => points.slice(from, breaks[i] ?? points.length));
  };
  const lower = pieces(low);
  const area = pieces(high).map((piece, i) => pathOf([...piece, ...(lower[i] ?? []).toReversed()]));
  const edges = [low, high].map((line) => s("path", { class: "edge", d: pieces(line).map(pathOf).join("") }));
  return [s("path", { class: "band", d: area.join("") }), ...edges];
}

/** @param {Seen[]} points */
const dotsOf = (points) => s("g", { class: "dots" }, ...points.map(({ px, py }) => s("circle", { cx: r(px), cy: r(py), r: 3 })));

/** Names of the lines with a sample of each, in as many rows as they need. @param {Curve} curve @param {number} width */
function legend(curve, width) {
  const group = s("g", { class: "key" });
  const lines = seriesOf(curve);
  if (lines.length < 2 || curve.band) return { group, height: 4 };
  let [left, top] = [58, 12];
  lines.forEach(({ name, dots }, i) => {
    const needs = 34 + textWidth(name, SIZE) + 14;
    if (left > 58 && left + needs > width) [left, top] = [58, top + KEY_LINE];
    const sample = dots ? s("g", { class: "dots" }, s("circle", { cx: left + 13, cy: top, r: 3 })) : s("path", { class: `line line-${i % 4}`, d: `M${left} ${top}h26` });
    group.append(sample, s("text", { x: left + 33, y: top + 4 }, name));
    left += needs;
  });
  return { group, height: top + 8 };
}

/** @param {Scale} x @param {Scale} y @param {Box} frame */
function grid(x, y, frame) {
  const [left, top, right, bottom] = [frame.x, frame.y, frame.x + frame.width, frame.y + frame.height];
  return s(
    "g",
    {},
    ...x.ticks.map(({ at, minor }) => s("path", { class: minor ? "grid minor" : "grid", d: `M${r(x.place(at))} ${top}V${bottom}` })),
    ...y.ticks.map(({ at, minor }) => s("path", { class: minor ? "grid minor" : "grid", d: `M${left} ${r(y.place(at))}H${right}` })),
    s("path", { class: "frame", d: `M${left} ${top}V${bottom}H${right}` }),
  );
}

/** @param {number} value */
const r = (value) => Math.round(value * 10) / 10;

/** @param {Tick} tick @param {Record<string, string | number>} at */
function tickText({ text, power }, at) {
  if (power === null) return s("text", { ...at, class: "tick" }, text);
  return s("text", { ...at, class: "tick" }, "10", s("tspan", { dy: -5, "font-size": 9 }, String(power).replace("-", "−")));
}

/** @param {Curve} curve @param {Scale} x @param {Scale} y @param {Box} frame */
function axisTexts(curve, x, y, frame) {
  const bottom = frame.y + frame.height;
  const named = (/** @type {Tick} */ tick) => tick.text !== "" || tick.power !== null;
  const middle = frame.y + frame.height / 2;
  return s(
    "g",
    {},
    ...x.ticks.filter(named).map((tick) => tickText(tick, { x: x.place(tick.at), y: bottom + 17, "text-anchor": "middle" })),
    ...y.ticks.filter(named).map((tick) => tickText(tick, { x: frame.x - 7, y: y.place(tick.at) + 4, "text-anchor": "end" })),
    s("text", { class: "axis", x: frame.x + frame.width / 2, y: bottom + 36, "text-anchor": "middle" }, axisName(curve.x)),
    s("text", { class: "axis", x: 12, y: middle, "text-anchor": "middle", transform: `rotate(-90 12 ${middle})` }, axisName(curve.y)),
  );
}

/** @param {import("../door.js").Axis} axis */
export const axisName = ({ label, unit }) => (unit ? `${label} (${unit})` : label);

/** @param {Curve} curve @param {Scale} x @param {Scale} y @param {Box} frame @param {{ points: Seen[] }[]} lines @returns {SVGElement[]} */
function marks(curve, x, y, frame, lines) {
  /** @type {Box[]} */
  const taken = [];
  const inked = lines.flatMap(({ points }) => points.map(({ px, py }) => ({ x: px, y: py })));
  return curve.marks.flatMap((mark) => {
    const label = { width: textWidth(mark.name, SIZE), height: 16 };
    const { shape, candidates } = markShape(mark, x, y, frame, label);
    if (!shape) return [];
    const box = bestPlace(candidates, label, frame, taken, inked);
    taken.push(box);
    return [shape, s("text", { class: "mark-name", x: box.x + 1, y: box.y + 12 }, mark.name)];
  });
}

/** @param {import("../door.js").CurveMark} mark @param {Scale} x @param {Scale} y @param {Box} frame @param {{ width: number, height: number }} label */
function markShape(mark, x, y, frame, label) {
  const [right, bottom] = [frame.x + frame.width, frame.y + frame.height];
  if (mark.axis === "y" && mark.at !== undefined) {
    const at = y.place(mark.at);
    if (!(at >= frame.y - 1 && at <= bottom + 1)) return { shape: null, candidates: [] };
    const across = [right - label.width - 4, frame.x + 6, frame.x + frame.width / 2];
    return {
      shape: s("path", { class: "mark", d: `M${frame.x} ${r(at)}H${right}` }),
      candidates: across.flatMap((left) => [{ x: left, y: at - label.height - 1 }, { x: left, y: at + 2 }]),
    };
  }
  if (mark.axis === "x" && mark.at !== undefined) {
    const at = x.place(mark.at);
    if (!(at >= frame.x - 1 && at <= right + 1)) return { shape: null, candidates: [] };
    const down = [frame.y + 3, bottom - label.height - 3, frame.y + frame.height / 2];
    return {
      shape: s("path", { class: "mark", d: `M${r(at)} ${frame.y}V${bottom}` }),
      candidates: down.flatMap((top) => [{ x: at + 5, y: top }, { x: at - label.width - 5, y: top }]),
    };
  }
  if (Array.isArray(mark.x) || Array.isArray(mark.y)) return { shape: null, candidates: [] };
  const [px, py] = [x.place(mark.x ?? NaN), y.place(mark.y ?? NaN)];
  if (!within({ x: 0, y: 0, px, py }, frame)) return { shape: null, candidates: [] };
  const sides = [px + 9, px - label.width - 9];
  return {
    shape: s("circle", { class: "mark-point", cx: px, cy: py, r: 4.5 }),
    candidates: [py - label.height - 6, py + 6, py - label.height / 2].flatMap((top) => sides.map((left) => ({ x: left, y: top }))),
  };
}
