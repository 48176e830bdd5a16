/** Calibrating a meter against another: a job in the place of a question, with texts of its own. */

import { FACTOR, READINGS, REFERENCE, asked, isPlain, ownerName } from "./comparison.js";
import { listContributions } from "./contributions.js";
import { say } from "./copy.js";
import { core } from "./core.js";
import { isXml, openDcc, saveDcc } from "./dcc.js";
import { byId, h, setText } from "./dom.js";
import { labelOf, worthSaying } from "./fields.js";
import { fileName, opens, save as saveFile, takesDrops } from "./files.js";
import { change, changeChoices, jobs, putCertificate, state, understoodBench } from "./live.js";
import { closed } from "./history.js";
import { forgetting, showTables } from "./tables.js";

/**
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Fault} Fault
 * @typedef {import("./door.js").Transfer} Transfer
 * @typedef {import("./door.js").Certificate} Certificate
 * @typedef {HTMLInputElement | HTMLSelectElement | HTMLTextAreaElement} Input
 */

const FORM = /** @type {HTMLFormElement} */ (byId("transfer-form"));

/** The last result that was good. @type {Transfer | null} */
let last = null;

/** @returns {Input[]} the controls that bear a name of this job, in order */
const inputs = () => /** @type {Input[]} */ ([...FORM.elements]).filter(({ name }) => name?.startsWith("transfer/"));

function follow() {
  const { readings, bench, choices } = asked(state.texts);
  listContributions(state.texts, change);
  const { understood, tables, faults, transfer } = core.follow_transfer(readings, bench, choices, state.mark);
  offerLabels(faults, transfer);
  for (const input of inputs().filter(({ name }) => isPlain(name))) {
    const text = state.texts[input.name] ?? (input instanceof HTMLSelectElement ? (input.options[0]?.value ?? "") : "");
    if (input.value !== text) input.value = text;
  }
  showTables(FORM, state.texts, { [REFERENCE]: tables["/meter/certificate"], [READINGS]: tables["/readings"] }, changeChoices);
  const waits = showFaults(faults);
  for (const input of inputs()) {
    const pointer = Object.keys(understood).find((one) => ownerName(one) === input.name);
    const line = document.getElementById(`${input.id}-understood`);
    if (line) setText(line, worthSaying(input.value, (pointer && understood[pointer]) || ""));
  }
  if (transfer) last = transfer;
  return { answer: transfer && { shown: transfer.shown, curves: [], certificate: transfer.certificate, history: transfer.history }, waits };
}

/** The labels of the table, of which one is the reference. @param {Fault[]} faults @param {Transfer | null} transfer */
function offerLabels(faults, transfer) {
  const chosen = state.texts["transfer/reference"] ?? "";
  const wanted = faults.find(({ pointer }) => pointer === "/choices/reference")?.allowed;
  const labels = Array.isArray(wanted) ? wanted : transfer ? [transfer.reference, transfer.test] : [];
  const all = [...new Set([...labels.toSorted(), ...(chosen ? [chosen] : [])])];
  const select = /** @type {HTMLSelectElement} */ (byId("transfer-reference"));
  const options = ["", ...all];
  if (options.join("\n") === [...select.options].map(({ value }) => value).join("\n")) return;
  select.replaceChildren(...options.map((label) => h("option", { value: label }, label || "told by its name")));
}

/** @param {Fault[]} faults @returns {import("./live.js").Wait[]} */
function showFaults(faults) {
  /** @type {Map<string, Fault[]>} */
  const by = new Map();
  for (const fault of faults) {
    const name = ownerName(fault.pointer);
    by.set(name, [...(by.get(name) ?? []), fault]);
  }
  for (const input of inputs()) {
    const place = document.getElementById(`${input.id}-fault`);
    const own = by.get(input.name);
    if (!place) continue;
    place.hidden = !own;
    place.classList.toggle("missing", !!own?.every(({ code }) => code === "missing"));
    setText(place, own ? [...new Set(own.map(({ sentence }) => sentence))].join(" ") : "");
    // What is only not there yet is no mistake.
    if (own?.some(({ code }) => code !== "missing")) input.setAttribute("aria-invalid", "true");
    else input.removeAttribute("aria-invalid");
  }
  return [...by.keys()].map((name) => ({ name: labelOf(name), focus: () => document.getElementsByName(name)[0]?.focus() }));
}

/** What can be done with a result. */
const deeds = () => [
  h("button", { type: "button", class: "main", "data-deed": true, click: putOnBench }, "Put on the bench"),
  h("button", { type: "button", "data-deed": true, click: saveCsv }, "Save CSV"),
  h("button", { type: "button", "data-deed": true, "aria-haspopup": "dialog", click: saveAsDcc }, "Save as DCC…"),
];

function putOnBench() {
  if (!last) return;
  putCertificate(last.certificate, `Certificate by comparison, ${state.texts["transfer/date"] ?? ""}`);
  say("The new certificate is on the bench; undo takes it back");
}

const saveCsv = () => last && saveFile(`${fileName(state.texts["transfer/test_device"] ?? "")}.certificate.csv`, "text/csv", last.csv);

function saveAsDcc() {
  if (!last) return;
  const { history, reference, coverage_probability: probability, certificate } = last;
  const date = state.texts["transfer/date"] ?? "";
  saveDcc(certificate, {
    history: history.lines,
    known: {
      "dcc/begin_date": date,
      "dcc/end_date": date,
      "dcc/item/name": state.texts["transfer/test_device"] ?? "",
      "dcc/coverage_probability": String(probability),
      "dcc/reference/name": history.reference_device || reference,
      "dcc/reference/certificate": history.reference_certificate,
    },
  });
}

/** Texts with another certificate of the reference. @param {string} text @param {number | null} k */
const withReference = (text, k) => ({ ...forgetting(state.texts, REFERENCE), [REFERENCE]: text, [FACTOR]: k ? core.write_number("/meter/certificate/coverage_factor", k, state.mark) : "" });

function takeFromBench() {
  const { bench } = understoodBench();
  const certificate = bench.meter?.certificate;
  if (!certificate) return say("There is no certificate on the bench");
  change(withReference(core.write_table("/meter/certificate", bench, state.mark).value ?? "", certificate.coverage_factor), null, "Reference: the certificate on the bench");
}

/** A file or a pasted text for one of the boxes. @param {HTMLTextAreaElement} area @param {string} text @param {string} from */
function take(area, text, from) {
  if (area.name === REFERENCE && isXml(text)) {
    openDcc(text, from, ({ certificate, identifier, item }) => {
      const table = core.write_table("/meter/certificate", { meter: { certificate } }, state.mark).value ?? "";
      const said = { "transfer/reference_certificate": identifier, "transfer/reference_device": item };
      change({ ...withReference(table, certificate.coverage_factor), ...said }, null, `Reference: certificate ${identifier} from ${from}`);
    });
    return;
  }
  change({ ...forgetting(state.texts, area.name), [area.name]: text }, null, `${labelOf(area.name)} from ${from}`);
  say(`Read ${from}`);
}

/** Makes the job known and its controls alive. */
export function prepareTransfer() {
  jobs.set("transfer", { asks: "Calibrate a meter against another", panel: byId("transfer"), follow, deeds });
  for (const input of inputs()) {
    const box = input.closest(".field, .table-input");
    const notes = [h("span", { class: "understood", id: `${input.id}-understood` })];
    box?.append(h("p", { class: "note" }, notes), h("p", { class: "fault", id: `${input.id}-fault`, hidden: true }));
    input.setAttribute("aria-describedby", `${input.id}-understood ${input.id}-fault`);
  }
  FORM.addEventListener("input", (event) => {
    const input = /** @type {Input} */ (event.target);
    if (!isPlain(input.name)) return;
    const { name, value } = input;
    if (name === REFERENCE && isXml(value)) {
      input.value = state.texts[name] ?? "";
      take(/** @type {HTMLTextAreaElement} */ (input), value, "the clipboard");
      return;
    }
    const others = value.trim() === "" ? forgetting(state.texts, name) : state.texts;
    change({ ...others, [name]: value }, input instanceof HTMLSelectElement ? null : name);
  });
  FORM.addEventListener("focusout", () => (state.history = closed(state.history)));
  FORM.addEventListener("submit", (event) => event.preventDefault());
  for (const button of /** @type {NodeListOf<HTMLElement>} */ (FORM.querySelectorAll("[data-open-table]"))) {
    const area = /** @type {HTMLTextAreaElement} */ (byId(button.dataset.openTable ?? ""));
    opens(button, `${area.id}-file`, (text, file) => take(area, text, file));
    takesDrops(area, (text, file) => take(area, text, file));
  }
  byId("transfer-from-bench").addEventListener("click", takeFromBench);
}

