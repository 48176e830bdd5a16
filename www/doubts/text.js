/**
 * What is known of the bench's doubts: one text among the others, JSON in the very form that the core understands, with
 * amounts as they were typed. Nothing here touches the document.
 *
 * @typedef {import("../bench.js").Texts} Texts
 * @typedef {Record<string, string> & { pointer: string }} Doubt
 * @typedef {{ trials: string, seed: string, adaptive: boolean }} Trials
 * @typedef {{ of: string | null, inputs: Doubt[], correlations: [number, number, string][], coverage_probability: number, monte_carlo: Trials }} Doubts
 */

/** Under this name the text stands. */
export const DOUBTS = "/uncertainty";

/** @type {Trials} */
const TRIALS = { trials: "1000000", seed: "1", adaptive: false };

/** @param {Texts} texts @returns {Doubts} */
export function doubtsOf(texts) {
  const found = sound(texts[DOUBTS] ?? "");
  return { of: null, inputs: [], correlations: [], coverage_probability: 0.95, ...found, monte_carlo: { ...TRIALS, ...found.monte_carlo } };
}

/** What a store or a file of somebody else's making holds may be anything. @param {string} text @returns {Partial<Doubts>} */
function sound(text) {
  try {
    const found = JSON.parse(text || "{}");
    const lists = [found.inputs ?? [], found.correlations ?? []];
    const good = found !== null && typeof found === "object" && !Array.isArray(found) && lists.every(Array.isArray) && lists[0].every((/** @type {any} */ one) => typeof one?.pointer === "string") && lists[1].every(Array.isArray);
    return good ? found : {};
  } catch {
    return {};
  }
}

/** @param {Texts} texts @param {Doubts} doubts @returns {Texts} */
export const withDoubts = (texts, doubts) => ({ ...texts, [DOUBTS]: JSON.stringify(doubts) });

/** The ways to state a doubt: what the core calls the amount, and how it is spread. @type {Record<string, { says: string, key: string, distribution: string }>} */
export const WAYS = {
  rectangular: { says: "± limits, rectangular", key: "half_width", distribution: "rectangular" },
  triangular: { says: "± limits, triangular", key: "half_width", distribution: "triangular" },
  arcsine: { says: "± limits, arcsine", key: "half_width", distribution: "arcsine" },
  standard: { says: "standard u", key: "standard", distribution: "normal" },
  expanded: { says: "expanded U, k =", key: "expanded", distribution: "normal" },
  readings: { says: "repeated readings", key: "readings", distribution: "normal" },
};

const KEYS = ["half_width", "standard", "expanded", "readings"];

/** @param {Doubt} doubt @returns {string} one of the ways */
export function wayOf(doubt) {
  const key = amountKey(doubt);
  const way = Object.entries(WAYS).find(([, one]) => one.key === key && one.distribution === (doubt.distribution ?? one.distribution));
  return way?.[0] ?? Object.entries(WAYS).find(([, one]) => one.key === key)?.[0] ?? "standard";
}

/** @param {Doubt} doubt */
export const amountKey = (doubt) => KEYS.find((key) => key in doubt) ?? "half_width";

/** The same doubt stated in another way. @param {Doubt} doubt @param {string} way @returns {Doubt} */
export function restated(doubt, way) {
  const amount = doubt[amountKey(doubt)] ?? "";
  const others = Object.fromEntries(Object.entries(doubt).filter(([key]) => !KEYS.includes(key) && key !== "coverage_factor"));
  const { key, distribution } = /** @type {{ key: string, distribution: string }} */ (WAYS[way]);
  return /** @type {Doubt} */ (/** @type {unknown} */ ({ ...others, [key]: amount, distribution, ...(key === "expanded" ? { coverage_factor: doubt.coverage_factor ?? "2" } : {}) }));
}

/** @param {Doubts} doubts @param {number} index @returns {Doubts} without one, and without its correlations */
export function without(doubts, index) {
  const moved = (/** @type {number} */ i) => (i > index ? i - 1 : i);
  return {
    ...doubts,
    inputs: doubts.inputs.filter((_, i) => i !== index),
    correlations: doubts.correlations.filter(([i, j]) => i !== index && j !== index).map(([i, j, r]) => [moved(i), moved(j), r]),
  };
}

/**
 * Doubts in the place of those that concerned the same numbers.
 *
 * @param {Doubts} doubts
 * @param {Doubt[]} inputs
 * @param {[number, number, number][]} correlations of the new ones among themselves
 * @returns {Doubts}
 */
export function instead(doubts, inputs, correlations) {
  const again = new Set(inputs.map(({ pointer }) => pointer));
  const places = doubts.inputs.flatMap(({ pointer }, index) => (again.has(pointer) ? [index] : []));
  const kept = places.toReversed().reduce(without, doubts);
  const first = kept.inputs.length;
  const shifted = correlations.map(([i, j, r]) => /** @type {[number, number, string]} */ ([first + i, first + j, String(r)]));
  return { ...kept, inputs: [...kept.inputs, ...inputs], correlations: [...kept.correlations, ...shifted] };
}

/**
 * As the core takes it: what a person left blank is not there.
 *
 * @param {Texts} texts
 * @returns {Record<string, unknown> | null}
 */
export function typedDoubts(texts) {
  if (!texts[DOUBTS]) return null;
  const { inputs, ...rest } = doubtsOf(texts);
  const filled = (/** @type {Doubt} */ doubt) => Object.fromEntries(Object.entries(doubt).filter(([key, text]) => key === amountKey(doubt) || text !== ""));
  return { ...rest, inputs: inputs.map(filled) };
}

/**
 * A short text for the mark at a field; empty where the number is not in doubt.
 *
 * @param {Doubts} doubts
 * @param {string} pointer
 */
export function shortly(doubts, pointer) {
  const amounts = doubts.inputs.filter((doubt) => doubt.pointer === pointer).map((doubt) => (amountKey(doubt) === "readings" ? "readings" : doubt[amountKey(doubt)] ?? ""));
  return amounts.filter(Boolean).join(", ");
}
