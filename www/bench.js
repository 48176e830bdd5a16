/**
 * What a person typed: one flat object from control name to text. The name of a number's control is its pointer in
 * the bench. Nothing here touches the document.
 *
 * @typedef {import("./door.js").Bench} Bench
 * @typedef {Record<string, string>} Texts
 * @typedef {"number" | "choice" | "table" | "text"} Kind
 * @typedef {{ name: string, kind: Kind, when: [string, string][], groups: string[] }} Control
 */

import { DOUBTS, typedDoubts } from "./doubts/text.js";

/** Decides between a PIN and an avalanche detector; the bench itself says it by `avalanche` being there. */
export const DETECTOR_TYPE = "detector-type";

/** Under this name stand a table's choices (how its text is to be read), as JSON. @param {string} name */
export const choicesOf = (name) => `${name}#choices`;

/** Whose text it is by its name: that of a job such as `transfer/date`; blank for the bench's. @param {string} name */
export const areaOf = (name) => /^([a-z]+)\//.exec(name)?.[1] ?? "";

/** The texts of one's areas alone. @param {Texts} texts @param {(area: string) => boolean} wanted @returns {Texts} */
export const ofAreas = (texts, wanted) => Object.fromEntries(Object.entries(texts).filter(([name]) => wanted(areaOf(name))));

/** Whether a control takes part: every alternative it stands in is the chosen one. @param {Control} control @param {Texts} texts */
export function takesPart(control, texts) {
  return control.when.every(([name, value]) => texts[name] === value);
}

/**
 * The bench as typed, nested, texts as they are; `understand` of the core makes numbers of them.
 *
 * A group (a part, a certificate) in which nothing is typed is not there, whatever its lists of choices say.
 *
 * @param {Control[]} controls
 * @param {Texts} texts
 * @returns {Bench}
 */
export function typed(controls, texts) {
  const active = controls.filter((control) => control.name.startsWith("/") && takesPart(control, texts));
  /** @type {Set<string>} */
  const filled = new Set();
  for (const { name, kind, groups } of active) {
    if (kind !== "choice" && texts[name]?.trim()) for (const group of groups) filled.add(group);
  }
  /** @type {Bench} */
  const bench = { schema: "leastlight.bench/1" };
  for (const control of active) {
    const { name, kind } = control;
    const text = texts[name] ?? "";
    const empty = control.groups.find((group) => !filled.has(group));
    if (empty) place(bench, empty, null);
    else if (kind === "choice" && text === "") continue;
    else if (kind === "table") placeTable(bench, name, texts);
    else place(bench, name, text);
  }
  const doubts = typedDoubts(texts);
  if (doubts) bench.uncertainty = doubts;
  if (bench.detector && texts[DETECTOR_TYPE] !== "avalanche") bench.detector.avalanche = null;
  return bench;
}

/** `…/points` is what the bench keeps; as text it goes in as `…/table`. @param {Bench} bench @param {string} name @param {Texts} texts */
function placeTable(bench, name, texts) {
  const text = texts[name] ?? "";
  if (!text.trim()) return;
  const choices = parsedChoices(texts, name);
  place(bench, name.replace(/\/points$/, "/table"), { text, ...(choices && { choices }) });
}

/** @param {Texts} texts @param {string} name @returns {Record<string, any> | null} */
export function parsedChoices(texts, name) {
  const json = texts[choicesOf(name)];
  return json ? JSON.parse(json) : null;
}

/** @param {Bench} bench @param {string} pointer @param {unknown} value */
function place(bench, pointer, value) {
  const keys = pointer.slice(1).split("/");
  const last = /** @type {string} */ (keys.pop());
  /** @type {any} */
  let at = bench;
  for (const key of keys) at = at[key] ??= {};
  at[last] = value;
}

/** @param {Bench} bench @param {string} pointer @returns {any} */
export function valueAt(bench, pointer) {
  /** @type {any} */
  let at = bench;
  for (const key of pointer.slice(1).split("/")) at = at?.[key];
  return at ?? null;
}

/**
 * The texts that show a bench; the inverse of `typed` after `understand`.
 *
 * @param {Control[]} controls
 * @param {Bench} bench
 * @param {{ number(pointer: string, value: number): string, table(pointer: string): string, doubts(): object | null }} write a table by the pointer of what it stands for
 * @param {Texts} otherwise for choices that the bench leaves open
 * @returns {Texts}
 */
export function textsOf(controls, bench, write, otherwise) {
  /** @type {Texts} */
  const texts = {};
  for (const { name, kind } of controls) {
    const value = valueAt(bench, name);
    if (name === DETECTOR_TYPE) texts[name] = bench.detector?.avalanche ? "avalanche" : "pin";
    else if (kind === "table") texts[name] = write.table(name.replace(/\/points$/, ""));
    else if (value === null) texts[name] = kind === "choice" ? (otherwise[name] ?? "") : "";
    else if (typeof value === "number") texts[name] = write.number(name, value);
    else if (Array.isArray(value)) texts[name] = value.map((one) => write.number(name, one)).join("; ");
    else texts[name] = String(value);
  }
  const doubts = write.doubts();
  if (doubts) texts[DOUBTS] = JSON.stringify(doubts);
  return texts;
}
