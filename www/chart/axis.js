/** Axes: from the core's numbers to places on the paper, with ticks. */

import { scaleLinear, scaleLog } from "d3-scale";
import { marked, signed } from "../numbers.js";

/**
 * @typedef {import("../door.js").Axis} Axis
 * @typedef {import("../door.js").Mark} Mark
 * @typedef {{ at: number, text: string, power: number | null, minor: boolean }} Tick a decade carries its power of ten
 * @typedef {{ place: (value: number) => number, ticks: Tick[], low: number, high: number, log: boolean }} Scale
 */

/**
 * @param {Axis} axis
 * @param {number[]} values what must be seen
 * @param {[number, number]} range from the low to the high end, in px
 * @param {number} room how many labels fit
 * @param {Mark} mark
 * @returns {Scale}
 */
export function scaleOf(axis, values, range, room, mark) {
  const log = axis.scale === "log";
  const usable = values.filter((value) => Number.isFinite(value) && (!log || value > 0));
  const [least, greatest] = [axis.min ?? Math.min(...usable), axis.max ?? Math.max(...usable)];
  const [low, high] = apart(Number.isFinite(least) ? least : log ? 1 : 0, Number.isFinite(greatest) ? greatest : 1, log);
  const scale = (log ? scaleLog() : scaleLinear()).domain([low, high]).range(range);
  const decades = log ? Math.log10(high / low) : 0;
  const ticks = log && decades >= 1.3 ? decadeTicks(low, high, room, mark) : evenTicks(scaleLinear().domain([low, high]).ticks(room), mark);
  return { place: (value) => scale(value), ticks, low, high, log };
}

/** An axis needs a length. @param {number} low @param {number} high @param {boolean} log @returns {[number, number]} */
function apart(low, high, log) {
  if (low < high) return [low, high];
  if (log) return [low / 2, low * 2];
  const half = Math.abs(low) * 0.05 || 1;
  return [low - half, low + half];
}

/** @param {number[]} values @param {Mark} mark @returns {Tick[]} */
function evenTicks(values, mark) {
  const decimals = Math.max(0, ...values.map((value) => (String(value).split(".")[1] ?? "").length));
  return values.map((at) => ({ at, text: marked(signed(at.toFixed(Math.min(decimals, 6))), mark), power: null, minor: false }));
}

/** Decades, thinned to the room there is; 2 and 5 between them where there is much room. @param {number} low @param {number} high @param {number} room @param {Mark} mark @returns {Tick[]} */
function decadeTicks(low, high, room, mark) {
  const [first, last] = [Math.ceil(Math.log10(low) - 1e-9), Math.floor(Math.log10(high) + 1e-9)];
  const step = [1, 2, 3, 4, 5, 6, 10, 20, 50].find((one) => (last - first) / one <= room) ?? 100;
  const short = first >= -2 && last <= 4;
  /** @type {Tick[]} */
  const ticks = [];
  for (let power = first - 1; power <= last; power += 1) {
    const decade = Number(`1e${power}`);
    const named = power % step === 0;
    if (power >= first) ticks.push({ at: decade, text: short && named ? marked(String(decade), mark) : "", power: short || !named ? null : power, minor: !named });
    if (step > 1) continue;
    for (const digit of [2, 3, 4, 5, 6, 7, 8, 9]) {
      const at = Number(`${digit}e${power}`);
      const spoken = short && last - first < 3 && (digit === 2 || digit === 5);
      if (at >= low && at <= high) ticks.push({ at, text: spoken ? marked(String(at), mark) : "", power: null, minor: !spoken });
    }
  }
  return ticks;
}
