/** A log on the page: how it was understood, and what came of it. */

import { doubts, facts, notes, tableView } from "../answer.js";
import { chartFigure } from "../chart/figure.js";
import { h } from "../dom.js";
import { marked } from "../numbers.js";
import { columnsView, countsLine, cutChoices, select } from "../tables.js";

/**
 * @typedef {import("../door.js").Log} Log
 * @typedef {import("../door.js").LogReading} LogReading
 * @typedef {import("../door.js").LogOutcome} LogOutcome
 * @typedef {import("../door.js").Mark} Mark
 * @typedef {Record<string, any>} Choices
 * @typedef {(choices: Choices | null) => void} Change
 */

/** Rows named one by one; of more, only how many. */
const MOST_ROWS = 12;

const SETTINGS = { file: "the file", bench: "the bench" };

/** How the file was understood, with the means to have it read otherwise. @param {LogOutcome} outcome @param {Choices} choices @param {Change} change */
export function understoodView({ value, faults = [], reading: refused }, choices, change) {
  const reading = value?.reading ?? refused;
  const wrong = faults.map(({ sentence }) => h("p", { class: "fault" }, sentence));
  const set = (/** @type {Choices} */ more) => change({ ...choices, ...more });
  const chosen = Object.keys(choices).length > 0;
  const forget = chosen && h("button", { type: "button", class: "quiet", "data-choice": "forget", click: () => change(null) }, "Recognise it anew");
  if (!reading) return h("div", { class: "read-as" }, wrong, forget);
  return h(
    "div",
    { class: "read-as" },
    countsLine(reading, value ? `${count(value.counts.rows)} rows` : "not read yet"),
    ...wrong,
    h("div", { class: "read-choices" }, cutChoices(reading, set), settingChoice(reading, choices, set)),
    columnsView(reading, choices, "log", set),
    statusChoices(reading, set),
    reading.cleaned.length > 0 && h("ul", { class: "cleaned" }, reading.cleaned.map((sentence) => h("li", {}, sentence))),
    value && badRows(value),
    forget,
  );
}

/** Only where the file says something that the bench could overrule. @param {LogReading} reading @param {Choices} choices @param {(more: Choices) => void} set */
function settingChoice(reading, choices, set) {
  const states = reading.stated_setting_nm !== null || reading.columns.some(({ role }) => role === "wavelength");
  return states && select("setting", "Wavelength setting from", SETTINGS, choices.setting ?? "file", (setting) => set({ setting }));
}

/** @param {LogReading} reading @param {(more: Choices) => void} set */
function statusChoices({ status }, set) {
  if (status.length === 0) return false;
  const boxes = status.map(({ word, rows, good }, index) => {
    const toggle = () => set({ good_status: status.filter((one) => (one.word === word ? !good : one.good)).map((one) => one.word) });
    const says = `${word === "" ? "nothing" : `“${word}”`} (${count(rows)} ${rows === 1 ? "row" : "rows"})`;
    return h("label", { class: "tick" }, h("input", { type: "checkbox", checked: good, change: toggle, "data-choice": `status-${index}`, autocomplete: "off" }), says);
  });
  return h("fieldset", { class: "statuses" }, h("legend", {}, "A row counts if its status says"), boxes);
}

/** @param {Log} log */
function badRows({ counts, reading: { bad_rows: listed } }) {
  const all = counts.bad + (listed.length > 0 ? counts.uncorrected : 0);
  if (all === 0) return false;
  const rows = listed.slice(0, MOST_ROWS).map(({ line, text, sentence }) => h("li", {}, `Line ${line}, “${text.slice(0, 60)}”: ${sentence}`));
  const more = all - rows.length;
  return h(
    "div",
    {},
    h("p", { class: "read-line" }, `${count(all)} ${all === 1 ? "row" : "rows"} cannot be read or corrected; they keep their place in the corrected file:`),
    h("ul", { class: "bad-rows" }, rows, more > 0 && h("li", {}, `and ${count(more)} more`)),
  );
}

/** What came of it. @param {Log} log @param {Mark} mark @param {() => void} save */
export function logView({ shown, curves }, mark, save) {
  const { figure, sentence, uncertainty } = shown.headline;
  const parts = [
    h("p", { class: "headline-text" }, h("span", { class: "log-figure" }, marked(figure, mark)), " ", marked(sentence, mark)),
    uncertainty !== "" && h("p", {}, marked(uncertainty, mark)),
    h("div", { class: "actions" }, h("button", { type: "button", id: "log-save", click: save }, "Save corrected CSV")),
    doubts(shown, mark),
    facts(shown, mark),
    ...curves.map((curve) => chartFigure(curve, mark)),
    ...shown.tables.map((table) => tableView(table, mark)),
    notes(shown, mark),
  ];
  return parts.filter((part) => part instanceof HTMLElement);
}

/** A count with its thousands apart. @param {number} number */
export const count = (number) => String(Math.round(number)).replace(/\B(?=(\d{3})+$)/g, "\u202f");
