/** Where the names of marks go, so that they lie on nothing. Pure geometry, in px. */

/**
 * @typedef {{ x: number, y: number, width: number, height: number }} Box
 * @typedef {{ x: number, y: number }} Point
 */

/** @param {string} text @param {number} size in px; widths of a usual sans-serif face, on the safe side */
export const textWidth = (text, size) => [...text].length * size * 0.56 + 2;

/**
 * The candidate that lies inside the frame and on the least.
 *
 * @param {Point[]} candidates top left corners, the dearest first
 * @param {{ width: number, height: number }} label
 * @param {Box} frame
 * @param {Box[]} taken by other labels; never overlapped while there is a choice
 * @param {Point[]} inked points of the curves
 * @returns {Box}
 */
export function bestPlace(candidates, label, frame, taken, inked) {
  const boxes = candidates.map(({ x, y }) => ({ ...held(x, y, label, frame), ...label }));
  const costs = boxes.map((box) => taken.filter((other) => overlap(box, other)).length * 1000 + inked.filter((point) => inside(point, box)).length);
  const best = costs.indexOf(Math.min(...costs));
  return boxes[best] ?? { x: frame.x, y: frame.y, ...label };
}

/** @param {number} x @param {number} y @param {{ width: number, height: number }} label @param {Box} frame @returns {Point} */
function held(x, y, label, frame) {
  return {
    x: Math.max(frame.x, Math.min(x, frame.x + frame.width - label.width)),
    y: Math.max(frame.y, Math.min(y, frame.y + frame.height - label.height)),
  };
}

/** @param {Box} a @param {Box} b */
export function overlap(a, b) {
  return a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height && b.y < a.y + a.height;
}

/** @param {Point} point @param {Box} box */
function inside(point, box) {
  return point.x >= box.x - 2 && point.x <= box.x + box.width + 2 && point.y >= box.y - 1 && point.y <= box.y + box.height + 1;
}
