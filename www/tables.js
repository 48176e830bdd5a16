/** Beneath each box for pasted cells: how its text was read, and the means to have it read otherwise. */

import { h } from "./dom.js";
import { choicesOf, parsedChoices } from "./bench.js";

/**
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Reading} Reading
 * @typedef {import("./door.js").Column} Column
 * @typedef {(name: string, choices: Record<string, unknown> | null) => void} Change
 */

const DELIMITERS = { tab: "tabs", semicolon: "semicolons", comma: "commas", space: "spaces" };
const MARKS = { point: "point (1.5)", comma: "comma (1,5)" };
/** What a column may hold, and the units that go with it. @type {Record<string, { says: string, units: string[] }>} */
const ROLES = {
  wavelength: { says: "wavelength", units: ["nm", "µm"] },
  responsivity: { says: "responsivity", units: ["A/W", "mA/W"] },
  correction_factor: { says: "correction factor, true over shown", units: ["1", "%", "dB"] },
  deviation: { says: "deviation of the reading", units: ["%", "dB"] },
  expanded: { says: "expanded uncertainty", units: ["%", "dB", "A/W", "mA/W", "1"] },
  spectral_power: { says: "power", units: ["dBm/nm", "dBm", "dB", "W/nm", "mW/nm", "µW/nm", "nW/nm", "W", "mW", "µW", "nW", "pW", "1", "%"] },
  detector: { says: "which meter", units: [] },
  power: { says: "reading", units: ["dBm", "W", "mW", "µW", "nW", "pW"] },
  time: { says: "time", units: ["s"] },
  voltage: { says: "voltage", units: ["V", "mV"] },
  dark_current: { says: "dark current", units: ["A", "mA", "µA", "nA", "pA"] },
  current: { says: "current under light", units: ["A", "mA", "µA", "nA", "pA"] },
  bandwidth: { says: "bandwidth", units: ["Hz", "kHz", "MHz", "GHz"] },
  temperature: { says: "temperature", units: ["°C", "K"] },
  standard_uncertainty: { says: "standard uncertainty", units: ["%", "1", "A", "mA", "µA", "nA", "pA", "V", "mV", "Hz", "kHz", "MHz", "GHz"] },
  gain: { says: "gain", units: ["1"] },
  excess_noise_factor: { says: "excess noise factor", units: ["1"] },
  ignored: { says: "nothing that is read", units: [] },
};

/** What the columns of each kind of table may hold. @type {Record<string, string[]>} */
const COLUMNS = {
  certificate: ["wavelength", "responsivity", "correction_factor", "deviation", "expanded", "ignored"],
  responsivity: ["wavelength", "responsivity", "ignored"],
  spectrum: ["wavelength", "spectral_power", "ignored"],
  gains: ["voltage", "gain", "ignored"],
  noise_factors: ["gain", "excess_noise_factor", "ignored"],
  measured_currents: ["voltage", "dark_current", "current", "standard_uncertainty", "ignored"],
  measured_noise: ["gain", "excess_noise_factor", "standard_uncertainty", "ignored"],
  measured_bandwidths: ["gain", "bandwidth", "standard_uncertainty", "ignored"],
  measured_breakdowns: ["temperature", "voltage", "standard_uncertainty", "ignored"],
  readings: ["wavelength", "detector", "power", "time", "ignored"],
};

/** Units that their own sign does not explain. @type {Record<string, string>} */
const EXPLAINED = { 1: "1, linear", dB: "dB, relative" };

/** The same for the columns of a log. @type {typeof ROLES} */
const LOG_ROLES = {
  time: { says: "time", units: ["s", "ms", "min", "h"] },
  date: { says: "day", units: [] },
  power: { says: "reading", units: ["dBm", "W", "mW", "µW", "nW", "pW"] },
  power_unit: { says: "unit of the reading", units: [] },
  wavelength: { says: "wavelength setting", units: ["nm", "µm"] },
  range: { says: "range", units: [] },
  status: { says: "status", units: [] },
  ignored: { says: "nothing that is read", units: [] },
};

/** Rows named one by one; of more, only how many. */
const MOST_ROWS = 12;

/** What each box shows, so that it is only drawn anew when that changes. @type {WeakMap<Element, string>} */
const drawn = new WeakMap();

/** The last way each table was read: what to show while its text cannot be read. @type {Map<string, Reading>} */
const last = new Map();

/**
 * @param {HTMLElement} form whose boxes these are
 * @param {Texts} texts
 * @param {Record<string, Reading>} readings by the pointer of what the table stands for
 * @param {Change} change
 */
export function showTables(form, texts, readings, change) {
  for (const box of /** @type {NodeListOf<HTMLElement>} */ (form.querySelectorAll("[data-table]"))) {
    const name = box.dataset.table ?? "";
    const place = /** @type {HTMLElement | null} */ (box.querySelector(".read-as"));
    if (!place) continue;
    const now = readings[name.replace(/\/points$/, "")];
    if (now) last.set(name, now);
    const reading = now ?? last.get(name);
    const filled = (texts[name] ?? "").trim() !== "";
    place.hidden = !filled || !reading;
    unfold(box, filled);
    if (!filled) last.delete(name);
    if (!filled || !reading) continue;
    const choices = parsedChoices(texts, name);
    const key = JSON.stringify([reading, choices, !!now]);
    if (drawn.get(place) === key) continue;
    drawn.set(place, key);
    redraw(place, view(reading, choices, !!now, box.dataset.reads ?? "", (to) => change(name, to)));
  }
}

/** A folded box opens when something comes into it; after that it is the person's. @type {WeakSet<Element>} */
const seenFilled = new WeakSet();

/** @param {Element} box @param {boolean} filled */
function unfold(box, filled) {
  if (filled && !seenFilled.has(box)) box.closest("details")?.setAttribute("open", "");
  if (filled) seenFilled.add(box);
  else seenFilled.delete(box);
}

/** Draws anew and leaves the focus where it was. @param {HTMLElement} place @param {HTMLElement[]} content */
export function redraw(place, content) {
  const focused = /** @type {HTMLElement | null} */ (document.activeElement);
  const key = focused && place.contains(focused) ? focused.dataset.choice : undefined;
  place.replaceChildren(...content);
  if (key) /** @type {HTMLElement | null} */ (place.querySelector(`[data-choice="${key}"]`))?.focus();
}

/**
 * @param {Reading} reading
 * @param {Record<string, any> | null} choices
 * @param {boolean} current whether the text was read this way just now
 * @param {string} kind
 * @param {(choices: Record<string, unknown> | null) => void} change
 * @returns {HTMLElement[]}
 */
function view(reading, choices, current, kind, change) {
  const set = (/** @type {Record<string, unknown>} */ more) => change({ ...choices, ...more });
  return [
    countsLine(reading, current && reading.rows_read > 0 ? `${reading.rows_read} rows` : "not read now"),
    h("div", { class: "read-choices" }, cutChoices(reading, set)),
    columnsView(reading, choices, kind, set),
    ...sentences(reading),
    ...(choices ? [h("button", { type: "button", class: "quiet", "data-choice": "forget", click: () => change(null) }, "Recognise it anew")] : []),
  ];
}

/** @param {Reading} reading @param {string} rows how many were read */
export function countsLine(reading, rows) {
  const header = reading.header_line ? `header in line ${reading.header_line}` : "no header";
  const skipped = Number(reading.skipped_lines);
  const counts = [rows, header, skipped > 0 && `${skipped} lines before the table skipped`];
  return h("p", { class: "read-line" }, h("b", {}, "Read as: "), counts.filter(Boolean).join(", "));
}

/** @param {Reading} reading @param {(more: Record<string, unknown>) => void} set */
export const cutChoices = (reading, set) => [
  select("delimiter", "Cells parted by", DELIMITERS, reading.delimiter, (delimiter) => set({ delimiter })),
  select("decimal_mark", "Decimal mark", MARKS, reading.decimal_mark, (decimal_mark) => set({ decimal_mark })),
];

/** @param {Reading} reading @param {Record<string, any> | null} choices @param {string} kind @param {(more: Record<string, unknown>) => void} set */
export function columnsView(reading, choices, kind, set) {
  const known = kind === "log" ? LOG_ROLES : ROLES;
  const roles = kind === "log" ? Object.keys(known) : (COLUMNS[kind] ?? []);
  const names = Object.fromEntries(roles.map((role) => [role, known[role]?.says ?? role]));
  const choose = (/** @type {Column} */ column, /** @type {Partial<Column>} */ to) => {
    const { index, role, unit } = { ...column, ...to };
    // What another column was chosen for, and this one is now, the other one is no more.
    const stays = (/** @type {Column} */ other) => other.index !== index && (other.role !== role || role === "ignored");
    const others = /** @type {Column[]} */ (choices?.columns ?? []).filter(stays);
    const fits = known[role]?.units.includes(unit ?? "");
    set({ columns: [...others, { index, role, ...(fits ? { unit } : {}) }] });
  };
  const rows = reading.columns.map((column) => {
    const name = `Column ${column.index + 1}`;
    // A time as ISO 8601 writes it has its units in itself.
    const hasUnit = column.role !== "time" || /** @type {any} */ (reading).times === "elapsed";
    const units = hasUnit ? (known[column.role]?.units ?? []) : [];
    return h(
      "tr",
      {},
      h("th", { scope: "row" }, column.header || name),
      h("td", {}, bare(`role-${column.index}`, `${name} holds`, names, column.role, (role) => choose(column, { role }))),
      h("td", {}, units.length > 0 && bare(`unit-${column.index}`, `Unit of column ${column.index + 1}`, unitNames(units, column, kind), column.unit ?? "", (unit) => choose(column, { unit }))),
    );
  });
  const heads = ["Column", "holds", "in"].map((text) => h("th", { scope: "col" }, text));
  return h("table", { class: "read-columns" }, h("thead", {}, h("tr", {}, heads)), h("tbody", {}, rows));
}

/** Where the text names no unit, a person must. @param {string[]} units @param {Column} column @param {string} kind @returns {Record<string, string>} */
function unitNames(units, column, kind) {
  const says = (/** @type {string} */ unit) => (kind === "spectrum" ? (EXPLAINED[unit] ?? unit) : unit);
  // The unit 1 looks like an index, and indices go first in an object.
  return { ...(column.unit ? {} : { "": "choose…" }), ...Object.fromEntries(units.map((unit) => [unit, says(unit)])) };
}

/** What was made of the text, and the rows that are no points. @param {Reading} reading */
function sentences({ cleaned, bad_rows: bad }) {
  const rows = bad.slice(0, MOST_ROWS).map(({ line, text, sentence }) => h("li", {}, `Line ${line}, “${text.slice(0, 60)}”: ${sentence}`));
  const more = bad.length - rows.length;
  return [
    ...(cleaned.length > 0 ? [h("ul", { class: "cleaned" }, cleaned.map((sentence) => h("li", {}, sentence)))] : []),
    ...(bad.length > 0
      ? [h("p", { class: "read-line" }, `${bad.length} ${bad.length === 1 ? "row is" : "rows are"} left out:`), h("ul", { class: "bad-rows" }, rows, more > 0 && h("li", {}, `and ${more} more`))]
      : []),
  ];
}

/** @param {string} key @param {string} label @param {Record<string, string>} options @param {string} value @param {(value: string) => void} change */
export function select(key, label, options, value, change) {
  return h("label", {}, h("span", {}, label), bare(key, null, options, value, change));
}

/** @param {string} key @param {string | null} label @param {Record<string, string>} options @param {string} value @param {(value: string) => void} change */
function bare(key, label, options, value, change) {
  const choose = (/** @type {Event} */ event) => change(/** @type {HTMLSelectElement} */ (event.target).value);
  const open = value in options ? [] : [["", "choose…"]];
  const items = [...open, ...Object.entries(options)].map(([name, says]) => h("option", { value: name, selected: name === value }, says));
  return h("select", { "data-choice": key, "aria-label": label, change: choose, autocomplete: "off" }, items);
}

/** The texts without a table's choices: they were made for another text. @param {Texts} texts @param {string} name @returns {Texts} */
export function forgetting(texts, name) {
  const { [choicesOf(name)]: _, ...others } = texts;
  return others;
}
