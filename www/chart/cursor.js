/** Reading a chart, by pointer or by arrow keys. */

import { s } from "../dom.js";
import { readOff } from "../numbers.js";

/**
 * @typedef {import("../door.js").Curve} Curve
 * @typedef {import("../door.js").Mark} Mark
 * @typedef {import("./draw.js").Drawing} Drawing
 * @typedef {{ line: number, index: number }} Position
 */

/**
 * @param {Curve} curve
 * @param {Drawing} drawing
 * @param {Position} position
 * @param {Mark} mark
 * @returns {string} the point in words
 */
export function reading(curve, drawing, { line, index }, mark) {
  const point = drawing.lines[line]?.points[index];
  if (!point) return "";
  const named = drawing.lines.length > 1 ? `${drawing.lines[line]?.name}: ` : "";
  const value = (/** @type {import("../door.js").Axis} */ axis, /** @type {number} */ number) =>
    `${axis.label} ${readOff(number, axis.scale === "log" ? 3 : 4, mark)}${axis.unit ? ` ${axis.unit}` : ""}`;
  return `${named}${value(curve.x, point.x)}, ${value(curve.y, point.y)}`;
}

/** @param {Drawing} drawing @param {Position | null} position */
export function showCursor({ overlay, frame, lines }, position) {
  const point = position && lines[position.line]?.points[position.index];
  if (!point) return overlay.replaceChildren();
  overlay.replaceChildren(
    s("path", { class: "hair", d: `M${point.px} ${frame.y}V${frame.y + frame.height}M${frame.x} ${point.py}H${frame.x + frame.width}` }),
    s("circle", { class: `dot dot-${position.line % 4}`, cx: point.px, cy: point.py, r: 4.5 }),
  );
}

/** The point of any line that is nearest to a place on the paper. @param {Drawing} drawing @param {number} px @param {number} py @returns {Position | null} */
export function nearest({ lines }, px, py) {
  /** @type {{ position: Position, distance: number } | null} */
  let best = null;
  lines.forEach(({ points }, line) => {
    const index = nearestIndex(points, px);
    const point = points[index];
    // Across counts twice: a person aims along the axis first.
    const distance = point ? Math.hypot(2 * (point.px - px), point.py - py) : Infinity;
    if (point && (!best || distance < best.distance)) best = { position: { line, index }, distance };
  });
  return /** @type {{ position: Position } | null} */ (best)?.position ?? null;
}

/** @param {{ px: number }[]} points @param {number} px */
function nearestIndex(points, px) {
  let best = 0;
  points.forEach((point, i) => {
    if (Math.abs(point.px - px) < Math.abs((points[best]?.px ?? Infinity) - px)) best = i;
  });
  return best;
}

/** Where a key leads. @param {Drawing} drawing @param {Position} from @param {string} key @returns {Position | null} null for a key that means nothing here */
export function moved({ lines }, from, key) {
  const last = (lines[from.line]?.points.length ?? 1) - 1;
  const to = (/** @type {number} */ index) => ({ line: from.line, index: Math.max(0, Math.min(last, index)) });
  if (key === "ArrowRight") return to(from.index + 1);
  if (key === "ArrowLeft") return to(from.index - 1);
  if (key === "PageUp") return to(from.index + 10);
  if (key === "PageDown") return to(from.index - 10);
  if (key === "Home") return to(0);
  if (key === "End") return to(last);
  if (key !== "ArrowUp" && key !== "ArrowDown") return null;
  const line = (from.line + (key === "ArrowDown" ? 1 : lines.length - 1)) % lines.length;
  const px = lines[from.line]?.points[from.index]?.px ?? 0;
  return { line, index: nearestIndex(lines[line]?.points ?? [], px) };
}
