/** Digital calibration certificates: a person confirms what is read, and says what is written beside the numbers. */

import { say } from "./copy.js";
import { core } from "./core.js";
import { administrationOf, ownerName } from "./dcc-administration.js";
import { byId, h, setText } from "./dom.js";
import { fileName, save as saveFile } from "./files.js";
import { change, state } from "./live.js";
import { marked, signed } from "./numbers.js";

/**
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Certificate} Certificate
 * @typedef {import("./door.js").DccReading} DccReading
 * @typedef {import("./door.js").Fault} Fault
 * @typedef {{ certificate: Certificate, identifier: string, item: string }} Confirmed
 */

const FORMS = { responsivity: "responsivity", correction_factor: "correction factor, true over shown", deviation: "deviation of the reading" };
const OPEN = /** @type {HTMLDialogElement} */ (byId("dcc-open"));
const SAVE = /** @type {HTMLDialogElement} */ (byId("dcc-save"));
const FORM = /** @type {HTMLFormElement} */ (byId("dcc-form"));

/** Units of the format as the trade writes them; others are shown as they stand in the file. @type {Record<string, string>} */
const UNITS = { "\\nano\\metre": "nm", "\\micro\\metre": "µm", "\\metre": "m", "\\ampere\\watt\\tothe{-1}": "A/W", "\\ampere\\per\\watt": "A/W", "\\percent": "%", "\\one": "plain numbers" };

/** No table begins like this. @param {string} text */
export const isXml = (text) => text.trimStart().startsWith("<");

/** Shows what a file states, and gives its certificate once a person confirms it. @param {string} text @param {string} from @param {(confirmed: Confirmed) => void} use */
export function openDcc(text, from, use) {
  showFound(text, from, {}, null, use);
  if (!OPEN.open) OPEN.showModal();
  document.getElementById("dcc-wavelength")?.focus();
}

/**
 * @param {string} text
 * @param {string} from
 * @param {Record<string, unknown>} choices
 * @param {DccReading | null} before what was read with other choices
 * @param {(confirmed: Confirmed) => void} use
 */
function showFound(text, from, choices, before, use) {
  const { value, faults = [] } = core.read_dcc(text, choices);
  const reading = value ?? before;
  // From the first choice on, what stands in the other lists is chosen too, and no longer a guess.
  const { wavelength = null, value: stated = null, form = null } = reading?.taken ?? {};
  const again = (/** @type {Record<string, unknown>} */ more) => showFound(text, from, { wavelength, value: stated, form, ...choices, ...more }, reading, use);
  const confirm = () => {
    if (!value?.certificate) return;
    OPEN.close();
    const { form, coverage_factor, points } = value.certificate;
    use({ certificate: { form, coverage_factor, points }, identifier: value.identifier, item: value.item });
    say(`Certificate ${value.identifier || from} taken over`);
  };
  const place = byId("dcc-found");
  const focused = /** @type {HTMLElement | null} */ (document.activeElement)?.id;
  place.replaceChildren(
    ...(reading ? aboutFile(reading, from) : [h("p", {}, from)]),
    ...(reading ? [columns(reading, choices, again)] : []),
    ...faults.map(({ sentence }) => h("p", { class: "fault", role: "alert" }, sentence)),
    ...(value ? preview(value) : []),
    ...(reading ? [h("div", { class: "actions" }, h("button", { type: "button", class: "main", id: "dcc-confirm", disabled: !value?.certificate, click: confirm }, "Use this certificate"))] : []),
  );
  if (focused && place.querySelector(`#${focused}`)) document.getElementById(focused)?.focus();
}

/** @param {DccReading} reading @param {string} from */
function aboutFile({ identifier, laboratory, item, end_date: date, schema_version: version, signed }, from) {
  const rows = Object.entries({ File: from, Number: identifier, Laboratory: laboratory, Item: item, Calibrated: date, Format: version && `version ${version}` });
  return [
    h("dl", { class: "about" }, rows.filter(([, says]) => says).map(([name, says]) => h("div", {}, h("dt", {}, name), h("dd", {}, says)))),
    ...(signed ? [h("p", { class: "doubt" }, "Signature present, not verified. Compare the numbers with a copy that you trust.")] : []),
  ];
}

/** Which quantity is what. @param {DccReading} reading @param {Record<string, unknown>} choices @param {(more: Record<string, unknown>) => void} again */
function columns({ quantities, taken }, choices, again) {
  const span = (/** @type {number | null} */ first, /** @type {number | null} */ last) => (first === null ? "" : first === last || last === null ? ` ${figure(first)}` : ` ${figure(first)} … ${figure(last)}`);
  const named = (/** @type {string[]} */ kinds) =>
    quantities
      .filter(({ kind }) => kinds.includes(kind))
      .map(({ index, name, ref_type: type, place, unit, first, last, count }) => /** @type {[string, string]} */ ([String(index), `${name || type || `quantity ${index + 1}`}, ${count} in ${UNITS[unit] ?? unit}:${span(first, last)}${place ? ` (${place})` : ""}`]));
  const shown = (/** @type {"wavelength" | "value" | "expanded" | "form"} */ key) => /** @type {any} */ (choices[key] ?? taken[key]);
  const chosen = (/** @type {number | string | null | undefined} */ index) => String(index ?? "");
  const values = named(["responsivity", "ratio"]);
  const stated = quantities.find(({ index: one }) => one === shown("value"))?.has_uncertainty;
  const uncertainty = chosen(shown("expanded"));
  const attached = stated ? "as stated with the values" : "none is stated with the values";
  const expanded = (/** @type {string} */ value) => again({ expanded: value === "none" ? value : value === "" ? null : Number(value) });
  return h(
    "div",
    { class: "confirm" },
    h("p", { class: "small" }, "There is no agreed vocabulary for these certificates, so this is a guess from units and names. Confirm it or choose."),
    pick("dcc-wavelength", "Wavelength", [["", "choose…"], ...named(["length"])], chosen(shown("wavelength")), (value) => again({ wavelength: value === "" ? null : Number(value) })),
    // What another value is must be told anew.
    pick("dcc-value", "Value", [["", "choose…"], ...values], chosen(shown("value")), (value) => again({ value: value === "" ? null : Number(value), form: null })),
    pick("dcc-form-of-value", "which is a", [["", "choose…"], ...Object.entries(FORMS)], shown("form") ?? "", (value) => again({ form: value || null })),
    pick("dcc-expanded", "Uncertainty", [["", attached], ...values, ["none", "take none"]], uncertainty, expanded),
  );
}

/** @param {string} id @param {string} label @param {[string, string][]} options @param {string} value @param {(value: string) => void} choose */
function pick(id, label, options, value, choose) {
  const items = options.map(([name, says]) => h("option", { value: name, selected: name === value }, says));
  const select = h("select", { id, autocomplete: "off", change: (/** @type {Event} */ event) => choose(/** @type {HTMLSelectElement} */ (event.target).value) }, items);
  return h("div", { class: "field" }, h("label", { for: id }, label), select);
}

/** With the digits it has, and not those of a conversion. @param {number} value */
const figure = (value) => marked(signed(String(Number(value.toPrecision(8)))), state.mark);

/** The points that would be taken. @param {DccReading} reading */
function preview({ certificate, notes }) {
  if (!certificate) return [list("notes", notes)];
  const { form, coverage_factor: k, points, bad_points: bad } = certificate;
  const heads = ["Wavelength / nm", form === "responsivity" ? "Responsivity / (A/W)" : "Correction factor", `U${k ? ` (k = ${marked(String(k), state.mark)})` : ""} / %`];
  const cells = points.map(({ wavelength_nm: nm, value, expanded_percent: percent }) => h("tr", {}, [nm, value, percent].map((one) => h("td", {}, one === null || one === undefined ? "–" : figure(one)))));
  return [
    h(
      "div",
      { class: "scroll preview", tabindex: 0, role: "region", "aria-label": "Points of the certificate" },
      h("table", { class: "plain" }, h("thead", {}, h("tr", {}, heads.map((text) => h("th", { scope: "col" }, text)))), h("tbody", {}, cells)),
    ),
    ...(k || points.every(({ expanded_percent: percent }) => percent === null || percent === undefined) ? [] : [h("p", { class: "small" }, "The file states no coverage factor: type it beside the certificate afterwards.")]),
    list("bad-rows", bad.map(({ number, sentence }) => `Number ${number} is left out: ${sentence}`)),
    list("cleaned", notes),
  ];
}

/** @param {string} kind @param {string[]} sentences */
const list = (kind, sentences) => h("ul", { class: `small ${kind}`, hidden: sentences.length === 0 }, sentences.map((sentence) => h("li", {}, sentence)));

/** What is to be saved. @type {{ certificate: Certificate, history: string[] } | null} */
let toSave = null;

/** Asks for what a file needs beside a certificate, and saves it. @param {Certificate} certificate @param {{ history?: string[], known?: Texts }} [beside] what a calibration already knows */
export function saveDcc(certificate, { history = [], known = {} } = {}) {
  toSave = { certificate, history };
  for (const input of inputs()) {
    const first = input instanceof HTMLSelectElement ? (input.options[0]?.value ?? "") : "";
    // What belongs to this calibration goes before what was typed for another.
    input.value = known[input.name] || state.texts[input.name] || first;
  }
  const lines = byId("dcc-history");
  lines.hidden = history.length === 0;
  setText(lines, history.length > 0 ? `Written beside the method: ${history.join("; ")}.` : "");
  showFaults([]);
  SAVE.showModal();
}

/** @returns {(HTMLInputElement | HTMLSelectElement)[]} */
const inputs = () => /** @type {any[]} */ ([...FORM.elements]).filter(({ name }) => name?.startsWith("dcc/"));

const typedTexts = () => Object.fromEntries(inputs().map(({ name, value }) => [name, value]));

/** What was typed is kept for the next certificate. */
function keepTyped() {
  change({ ...state.texts, ...typedTexts() }, null, "Details of the digital certificate");
}

/** @param {Event} event */
function write(event) {
  event.preventDefault();
  if (!toSave) return;
  const texts = typedTexts();
  const bench = { schema: "leastlight.bench/1", meter: { certificate: toSave.certificate } };
  const { value, faults = [] } = core.write_dcc(bench, administrationOf(texts, toSave.history), state.mark);
  showFaults(faults);
  if (value === undefined) {
    /** @type {HTMLElement | null} */ (FORM.querySelector('[aria-invalid="true"]'))?.focus();
    return;
  }
  saveFile(`${fileName(texts["dcc/unique_identifier"] ?? "")}.dcc.xml`, "application/xml", value);
  SAVE.close();
  say("The digital certificate was saved");
}

/** @param {Fault[]} faults */
function showFaults(faults) {
  const names = inputs().map(({ name }) => name);
  for (const input of inputs()) {
    const own = faults.filter(({ pointer }) => ownerName(pointer, names) === input.name);
    const place = byId(`${input.id}-fault`);
    place.hidden = own.length === 0;
    place.classList.toggle("missing", own.every(({ code }) => code === "missing"));
    setText(place, own.map(({ sentence }) => sentence).join(" "));
    if (own.length > 0) input.setAttribute("aria-invalid", "true");
    else input.removeAttribute("aria-invalid");
  }
  const others = faults.filter(({ pointer }) => ownerName(pointer, names) === null);
  const place = byId("dcc-save-faults");
  place.hidden = others.length === 0;
  setText(place, others.map(({ sentence }) => sentence).join(" "));
}

/** Makes both dialogs alive. */
export function prepareDcc() {
  for (const dialog of [OPEN, SAVE]) dialog.querySelector("[data-close]")?.addEventListener("click", () => dialog.close());
  for (const input of inputs()) {
    const fault = `${input.id}-fault`;
    input.closest(".field")?.append(h("p", { class: "fault", id: fault, hidden: true }));
    input.setAttribute("aria-describedby", fault);
  }
  FORM.addEventListener("submit", write);
  SAVE.addEventListener("close", keepTyped);
}
