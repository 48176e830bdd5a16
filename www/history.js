/**
 * Undo and redo for the whole bench: a list of named steps, each with what it changed.
 *
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {Record<string, [before: string, after: string]>} Changes
 * @typedef {{ name: string, changes: Changes, open: string | null }} Step
 * @typedef {{ past: Step[], future: Step[] }} History
 */

/** More steps than anyone walks back; keeps the store small. */
const LONGEST = 200;

/** @returns {History} */
export const emptyHistory = () => ({ past: [], future: [] });

/** @param {Texts} before @param {Texts} after @returns {Changes} */
export function changesBetween(before, after) {
  /** @type {Changes} */
  const changes = {};
  for (const key of new Set([...Object.keys(before), ...Object.keys(after)])) {
    const [was, is] = [before[key] ?? "", after[key] ?? ""];
    if (was !== is) changes[key] = [was, is];
  }
  return changes;
}

/**
 * History after a change. Keystrokes in one field are one step, as long as that step is open.
 *
 * @param {History} history
 * @param {Texts} before
 * @param {Texts} after
 * @param {(changes: Changes) => string} describe names the step
 * @param {string | null} open the field being typed in, or null for a step that stands alone
 * @returns {History}
 */
export function recorded(history, before, after, describe, open) {
  const last = history.past.at(-1);
  const merge = open !== null && last?.open === open;
  const base = merge ? rewound(before, last.changes) : before;
  const changes = changesBetween(base, after);
  const past = merge ? history.past.slice(0, -1) : history.past;
  if (Object.keys(changes).length === 0) return { past, future: merge ? [] : history.future };
  const step = { name: describe(changes), changes, open };
  return { past: [...past, step].slice(-LONGEST), future: [] };
}

/** The next keystroke begins a new step. @param {History} history @returns {History} */
export function closed(history) {
  const last = history.past.at(-1);
  if (!last || last.open === null) return history;
  return { ...history, past: [...history.past.slice(0, -1), { ...last, open: null }] };
}

/** @param {Texts} texts @param {Changes} changes @returns {Texts} */
const rewound = (texts, changes) => replaced(texts, changes, 0);

/** @param {Texts} texts @param {Changes} changes @param {0 | 1} side @returns {Texts} */
function replaced(texts, changes, side) {
  const out = { ...texts };
  for (const [key, pair] of Object.entries(changes)) out[key] = pair[side];
  return out;
}

/** @param {History} history @param {Texts} texts @returns {{ history: History, texts: Texts, step: Step } | null} */
export function undone(history, texts) {
  const step = history.past.at(-1);
  if (!step) return null;
  const future = [{ ...step, open: null }, ...history.future];
  return { history: { past: history.past.slice(0, -1), future }, texts: rewound(texts, step.changes), step };
}

/** @param {History} history @param {Texts} texts @returns {{ history: History, texts: Texts, step: Step } | null} */
export function redone(history, texts) {
  const [step, ...future] = history.future;
  if (!step) return null;
  return { history: { past: [...history.past, step], future }, texts: replaced(texts, step.changes, 1), step };
}
