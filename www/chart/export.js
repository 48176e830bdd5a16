/** A chart taken away: as numbers, or as a drawing that is always light. */

import { spreadsheet } from "../numbers.js";
import { axisName } from "./draw.js";
import { seriesOf } from "./series.js";

/**
 * @typedef {import("../door.js").Curve} Curve
 * @typedef {import("../door.js").Mark} Mark
 */

const STYLE = `
text { font: 12px system-ui, sans-serif; fill: #26221c; }
.tick { fill: #5f594f; } .axis { fill: #26221c; } .mark-name { fill: #26221c; font-weight: 600; }
.grid { stroke: #e3ded4; fill: none; } .minor { stroke: #f1eee7; } .frame { stroke: #8b8478; fill: none; }
.line { fill: none; stroke-width: 2; }
.line-0 { stroke: #b06a00; } .line-1 { stroke: #466a80; stroke-dasharray: 7 4; }
.line-2 { stroke: #26221c; stroke-dasharray: 2 3; } .line-3 { stroke: #7a4b7d; stroke-dasharray: 9 3 2 3; }
.band { fill: #b06a00; fill-opacity: .35; stroke: #b06a00; } .edge { fill: none; stroke: #b06a00; }
.dots { fill: none; stroke: #26221c; stroke-width: 1.5; }
.mark { stroke: #5f594f; stroke-dasharray: 4 4; fill: none; } .mark-point { fill: #fff; stroke: #26221c; stroke-width: 2; }
`;

/** @param {SVGElement} svg @param {string} title @returns {string} */
export function svgText(svg, title) {
  const copy = /** @type {SVGElement} */ (svg.cloneNode(true));
  copy.querySelector(".overlay")?.replaceChildren();
  for (const name of [...copy.getAttributeNames()]) if (name.startsWith("aria-") || ["role", "tabindex", "class"].includes(name)) copy.removeAttribute(name);
  const text = new XMLSerializer().serializeToString(copy);
  const escaped = title.replace(/&/g, "&amp;").replace(/</g, "&lt;");
  return text.replace(/>/, `><title>${escaped}</title><style>${STYLE}</style><rect width="100%" height="100%" fill="#fff"/>`);
}

/** @param {Curve} curve @returns {{ columns: string[], rows: number[][] | null, long: [string, number, number][] }} */
export function dataOf(curve) {
  const lines = seriesOf(curve);
  const [first] = lines;
  const shared = lines.every(({ x }) => x.length === first?.x.length && x.every((value, i) => value === first.x[i]));
  const long = lines.flatMap(({ name, x, y }) => x.map((value, i) => /** @type {[string, number, number]} */ ([name, value, y[i] ?? NaN])));
  if (!first || !shared) return { columns: ["line", axisName(curve.x), axisName(curve.y)], rows: null, long };
  const columns = [axisName(curve.x), ...lines.map(({ name }) => (lines.length > 1 ? `${name}, ${axisName(curve.y)}` : axisName(curve.y)))];
  return { columns, rows: first.x.map((value, i) => [value, ...lines.map(({ y }) => y[i] ?? NaN)]), long };
}

/** All points with all their digits, for a spreadsheet. @param {Curve} curve @param {Mark} mark */
export function tsv(curve, mark) {
  const { columns, rows, long } = dataOf(curve);
  const cells = rows ?? long;
  return [columns, ...cells.map((row) => row.map((cell) => (typeof cell === "number" ? spreadsheet(cell, mark) : cell)))]
    .map((row) => row.join("\t"))
    .join("\n");
}
