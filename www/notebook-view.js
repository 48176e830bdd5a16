/** The notebook on the page. */

import { h } from "./dom.js";
import { compared } from "./notebook.js";
import { marked } from "./numbers.js";

/**
 * @typedef {import("./notebook.js").Kept} Kept
 * @typedef {import("./door.js").Mark} Mark
 * @typedef {{ reopen(kept: Kept): void, remove(kept: Kept): void, note(kept: Kept, text: string): void, compare(kept: Kept, on: boolean): void, restore(): void }} Deeds
 */

/**
 * @param {Kept[]} all newest first
 * @param {string[]} chosen ids of those to compare
 * @param {boolean} removed whether one was just taken out
 * @param {Mark} mark
 * @param {Deeds} deeds
 * @param {(name: string) => string} label
 * @returns {HTMLElement[]}
 */
export function notebookView(all, chosen, removed, mark, deeds, label) {
  const back = removed && h("p", { class: "small" }, "One answer was removed. ", h("button", { type: "button", class: "quiet", id: "restore", click: deeds.restore }, "Put it back"));
  const none = all.length === 0 && h("p", { class: "small" }, "Nothing kept yet. “Keep this answer” puts an answer here, with the bench it came from and the time.");
  const [a, b] = chosen.map((id) => all.find((kept) => kept.id === id));
  const table = a && b && comparison(a, b, mark, label);
  const list = h("ol", { class: "kept" }, all.map((kept) => entry(kept, chosen, mark, deeds)));
  return [back, none, table, all.length > 0 && list].filter((part) => part instanceof HTMLElement);
}

/** @param {Kept} kept @param {string[]} chosen @param {Mark} mark @param {Deeds} deeds */
function entry(kept, chosen, mark, deeds) {
  const { headline } = kept.answer.shown;
  const name = `${kept.title || "untitled bench"}, ${headline.figure}`;
  const full = chosen.length >= 2 && !chosen.includes(kept.id);
  const note = h("input", { type: "text", autocomplete: "off", placeholder: "Note", "aria-label": `Note on ${name}` });
  note.value = kept.note;
  note.addEventListener("change", () => deeds.note(kept, note.value));
  const compare = (/** @type {Event} */ event) => deeds.compare(kept, /** @type {HTMLInputElement} */ (event.target).checked);
  return h(
    "li",
    {},
    h("p", { class: "kept-asks" }, kept.asks),
    h("p", { class: "kept-figure" }, marked(headline.figure, mark)),
    h("p", { class: "small" }, `${kept.title || "untitled bench"}, `, h("time", { datetime: kept.when }, localTime(kept.when))),
    note,
    h(
      "p",
      { class: "kept-tools" },
      h("button", { type: "button", class: "quiet", "aria-label": `Reopen the bench of ${name}`, click: () => deeds.reopen(kept) }, "Reopen"),
      h("button", { type: "button", class: "quiet", "aria-label": `Remove ${name}`, click: () => deeds.remove(kept) }, "Remove"),
      h("label", { class: "tick" }, h("input", { type: "checkbox", checked: chosen.includes(kept.id), disabled: full, change: compare, "aria-label": `Compare ${name}` }), "compare"),
    ),
  );
}

/** @param {string} iso */
function localTime(iso) {
  const [day, time] = [new Date(iso).toLocaleDateString("sv"), new Date(iso).toLocaleTimeString("sv")];
  return `${day} ${time.slice(0, 5)}`;
}

/** @param {Kept} a @param {Kept} b @param {Mark} mark @param {(name: string) => string} label */
function comparison(a, b, mark, label) {
  const { facts, inputs } = compared(a, b);
  const row = (/** @type {(name: string) => string} */ says) => (/** @type {[string, string, string]} */ [name, left, right]) =>
    h("tr", { class: left === right ? "same" : "" }, h("th", { scope: "row" }, says(name)), h("td", {}, marked(left, mark)), h("td", {}, marked(right, mark)));
  const short = (/** @type {string} */ text) => (text.length > 40 ? `${text.slice(0, 38)}…` : text);
  const heads = [a, b].map((kept) => h("th", { scope: "col" }, kept.note || localTime(kept.when)));
  return h(
    "div",
    { class: "scroll", tabindex: 0, role: "region", "aria-label": "Two answers compared" },
    h(
      "table",
      { class: "plain compared" },
      h("caption", {}, "Two answers compared"),
      h("thead", {}, h("tr", {}, h("td", {}), heads)),
      h("tbody", {}, facts.map(row((name) => name))),
      h("tbody", {}, h("tr", {}, h("th", { colspan: 3, scope: "rowgroup" }, inputs.length > 0 ? "Inputs that differ" : "All inputs are the same")), inputs.map(([name, left, right]) => row(label)([name, short(left), short(right)]))),
    ),
  );
}
