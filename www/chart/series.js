/** What a chart shows against its axes: its lines, and the measured points among its marks. */

/**
 * @typedef {import("../door.js").Curve} Curve
 * @typedef {import("../door.js").Line & { dots: boolean }} Series
 */

/** @param {Curve} curve @returns {Series[]} */
export function seriesOf({ lines, marks }) {
  const dots = marks.flatMap(({ name, x, y }) => (Array.isArray(x) && Array.isArray(y) ? [{ name, x, y, dots: true }] : []));
  return [...lines.map((line) => ({ ...line, dots: false })), ...dots];
}
