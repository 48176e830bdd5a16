/**
 * The notebook: answers kept with the bench they came from. Nothing here touches the document.
 *
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Answer} Answer
 * @typedef {import("./door.js").Bench} Bench
 * @typedef {{ id: string, when: string, question: string, asks: string, title: string, note: string, version: string, texts: Texts, bench: Bench, answer: Answer }} Kept
 */

/** The format of a notebook file. */
export const SCHEMA = "leastlight.notebook/1";

/** @param {Kept[]} kept @param {string} version @returns {string} the text of a notebook file */
export const fileText = (kept, version) => JSON.stringify({ schema: SCHEMA, version, kept }, null, 2);

/** Whether a text claims to be a notebook file. @param {string} text */
export function claims(text) {
  try {
    return String(JSON.parse(text)?.schema ?? "").startsWith("leastlight.notebook/");
  } catch {
    return false;
  }
}

/** @param {string} text @returns {{ kept: Kept[] } | { sentence: string }} what a notebook file holds, or why it cannot be read */
export function read(text) {
  /** @type {any} */
  let file;
  try {
    file = JSON.parse(text);
  } catch (error) {
    return { sentence: `This is not the text of a notebook file: ${/** @type {Error} */ (error).message}.` };
  }
  if (file?.schema !== SCHEMA) return { sentence: `This program reads notebooks of the format “${SCHEMA}”; “${file?.schema}” was given.` };
  const kept = Array.isArray(file.kept) ? file.kept : [];
  const whole = sound(kept);
  if (whole.length < kept.length) return { sentence: `${kept.length - whole.length} of the ${kept.length} answers in this notebook are damaged; none was taken.` };
  return { kept: whole };
}

/** The entries of a list that are whole. @param {unknown} list @returns {Kept[]} */
export const sound = (list) => (Array.isArray(list) ? list.filter(isKept) : []);

/** @param {any} entry @returns {entry is Kept} */
function isKept(entry) {
  const texts = [entry?.id, entry?.when, entry?.question, entry?.asks, entry?.title, entry?.note];
  const shown = entry?.answer?.shown;
  return (
    texts.every((text) => typeof text === "string") &&
    isMap(entry.texts) && Object.values(entry.texts).every((text) => typeof text === "string") &&
    isMap(entry.bench) &&
    typeof shown?.headline?.figure === "string" && Array.isArray(shown.facts)
  );
}

/** @param {unknown} value */
const isMap = (value) => typeof value === "object" && value !== null && !Array.isArray(value);

/** Entries of a file beside those that are there; the same entry is not taken twice. @param {Kept[]} here @param {Kept[]} more @returns {Kept[]} */
export function joined(here, more) {
  const known = new Set(here.map(({ id }) => id));
  return [...here, ...more.filter(({ id }) => !known.has(id))].sort((a, b) => (a.when < b.when ? 1 : -1));
}

/**
 * Two answers side by side.
 *
 * @param {Kept} a
 * @param {Kept} b
 * @returns {{ facts: [string, string, string][], inputs: [string, string, string][] }}
 */
export function compared(a, b) {
  const facts = (/** @type {Kept} */ kept) => new Map([["Answer", kept.answer.shown.headline.figure], ...kept.answer.shown.facts.map(({ name, figure }) => /** @type {[string, string]} */ ([name, figure]))]);
  return { facts: sideBySide(facts(a), facts(b)), inputs: sideBySide(given(a.texts), given(b.texts)).filter(([, left, right]) => left !== right) };
}

/** @param {Texts} texts */
const given = (texts) => new Map(Object.entries(texts).filter(([name, text]) => name.startsWith("/") && !name.includes("#") && text));

/** @param {Map<string, string>} a @param {Map<string, string>} b @returns {[string, string, string][]} */
function sideBySide(a, b) {
  return [...new Set([...a.keys(), ...b.keys()])].map((name) => [name, a.get(name) ?? "–", b.get(name) ?? "–"]);
}
