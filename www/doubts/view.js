/** The doubts as they are edited, beneath the headline that they widen. */

import { amountKey, doubtsOf, restated, WAYS, wayOf, withDoubts, without } from "./text.js";
import { byId, h, setText } from "../dom.js";
import { under } from "../fields.js";

/**
 * @typedef {import("../bench.js").Texts} Texts
 * @typedef {import("./text.js").Doubt} Doubt
 * @typedef {import("./text.js").Doubts} Doubts
 * @typedef {import("../door.js").Fault} Fault
 * @typedef {import("../door.js").Question} Question
 * @typedef {import("../door.js").UsualDoubt} UsualDoubt
 *
 * @typedef {object} Around
 * @property {Texts} texts
 * @property {Question} question
 * @property {{ pointer: string, label: string }[]} numbers those of this question that stand on the bench now
 * @property {UsualDoubt[]} usual
 * @property {Fault[]} faults those of the doubts
 * @property {Record<string, string>} understood
 * @property {(texts: Texts, open: string | null, name: string) => void} change
 */

const COVERAGES = { 0.95: "95 %", 0.9545: "95.45 %", 0.99: "99 %", 0.9: "90 %" };

/** What the rows look like but for their texts; they are drawn anew only when this changes. */
let drawn = "";

/** @type {Around} */
let now;

/** @param {Around} around */
export function showDoubts(around) {
  now = around;
  const doubts = doubtsOf(around.texts);
  const mine = doubts.inputs.map((doubt, index) => ({ doubt, index })).filter(({ doubt }) => concerns(doubt.pointer));
  const others = doubts.inputs.length - mine.length;
  setText(byId("doubts-count"), summary(mine.length, others));
  const shape = JSON.stringify([
    around.question.name,
    around.numbers,
    doubts.inputs.map((doubt) => [doubt.pointer, wayOf(doubt)]),
    doubts.correlations.map(([i, j]) => [i, j]),
    doubts.correlations.length,
    doubts.of,
    doubts.coverage_probability,
  ]);
  if (shape !== drawn) {
    drawn = shape;
    redraw(doubts, mine);
  }
  fill(doubts);
  showWrong(around.faults, doubts);
}

/** @param {string} pointer */
const concerns = (pointer) => now.question.fields.some((field) => under(pointer, field));

/** @param {number} count @param {number} others */
function summary(count, others) {
  const said = count === 0 ? "nothing yet" : count === 1 ? "1 doubt" : `${count} doubts`;
  return others > 0 ? `${said}; ${others} more for other questions` : said;
}

/** @param {Doubts} doubts @param {{ doubt: Doubt, index: number }[]} mine */
function redraw(doubts, mine) {
  const place = byId("doubts-rows");
  const focused = /** @type {HTMLElement | null} */ (document.activeElement);
  const key = focused && place.contains(focused) ? focused.dataset.key : undefined;
  place.replaceChildren(
    ...mine.map(({ doubt, index }) => row(doubt, index)),
    settings(doubts),
    correlations(doubts, mine.map(({ index }) => index)),
  );
  if (key) /** @type {HTMLElement | null} */ (place.querySelector(`[data-key="${key}"]`))?.focus();
}

/** @param {(doubts: Doubts) => Doubts} edit @param {string | null} open @param {string} name of the step */
function edit(edit, open, name) {
  now.change(withDoubts(now.texts, edit(doubtsOf(now.texts))), open, name);
}

/** @param {number} index @param {(doubt: Doubt) => Doubt} to @param {string | null} open @param {string} name */
function editOne(index, to, open, name) {
  edit((doubts) => ({ ...doubts, inputs: doubts.inputs.map((doubt, i) => (i === index ? to(doubt) : doubt)) }), open, name);
}

/** @param {Doubt} doubt @param {number} index */
function row(doubt, index) {
  const way = wayOf(doubt);
  const label = nameOf(doubt);
  const text = (/** @type {string} */ key, /** @type {string} */ says, /** @type {string} */ placeholder, /** @type {string} */ className) =>
    h(key === "readings" ? "textarea" : "input", {
      ...(key === "readings" ? { rows: 3 } : { type: "text", inputmode: key === "name" ? "text" : "decimal" }),
      class: className,
      "data-key": `${index}-${key}`,
      "data-of": `/uncertainty/inputs/${index}/${key}`,
      "aria-label": `${label}: ${says}`,
      "aria-describedby": `doubt-${index}-note`,
      placeholder,
      autocomplete: "off",
      spellcheck: "false",
      input: (/** @type {Event} */ event) =>
        editOne(index, (one) => ({ ...one, [key]: /** @type {HTMLInputElement} */ (event.target).value }), `/uncertainty#${index}-${key}`, `Doubt of ${label}`),
    });
  const key = amountKey(doubt);
  return h(
    "div",
    { class: "doubt-row", role: "group", "aria-label": `Doubt: ${label}` },
    text("name", "name", numberLabel(doubt.pointer), "doubt-name"),
    text(key, key === "readings" ? "readings, one a line" : "how much", key === "readings" ? "−20.13\n−20.15\n−20.12" : "0.3 % or 0.02 dB", "doubt-amount"),
    h(
      "div",
      { class: "doubt-way" },
      choice(`${index}-way`, `${label}: stated as`, Object.fromEntries(Object.entries(WAYS).map(([name, { says }]) => [name, says])), way, (to) =>
        editOne(index, (one) => restated(one, to), null, `Doubt of ${label}: ${WAYS[to]?.says}`),
      ),
      way === "expanded" && text("coverage_factor", "coverage factor k", "k", "doubt-small"),
    ),
    way !== "readings" ? h("label", { class: "doubt-times" }, h("span", {}, "×"), text("times", "how many times, such as years or kelvins", "1", "doubt-small")) : h("span"),
    way !== "readings" ? h("label", { class: "doubt-times" }, h("span", {}, "ν"), text("degrees_of_freedom", "degrees of freedom", "∞", "doubt-small")) : h("span"),
    h("button", { type: "button", class: "quiet", "data-key": `${index}-remove`, "aria-label": `Remove the doubt: ${label}`, click: () => remove(index, label) }, "Remove"),
    h("p", { class: "note", id: `doubt-${index}-note` }),
    h("p", { class: "fault", id: `doubt-${index}-fault`, hidden: true }),
  );
}

/** @param {number} index @param {string} label */
function remove(index, label) {
  edit((doubts) => without(doubts, index), null, `No doubt of ${label}`);
  byId("doubts-add").focus();
}

/** @param {string} pointer */
const numberLabel = (pointer) => now.numbers.find((number) => number.pointer === pointer)?.label ?? pointer;

/** @param {Doubt} doubt */
const nameOf = (doubt) => doubt.name || numberLabel(doubt.pointer);

/** @param {Doubts} doubts */
function settings(doubts) {
  const of = Object.fromEntries(now.question.uncertain);
  const first = now.question.uncertain[0]?.[0] ?? "";
  return h(
    "div",
    { class: "doubt-settings" },
    Object.keys(of).length > 1 &&
      h("label", {}, h("span", {}, "Uncertainty of"), choice("of", null, of, doubts.of && doubts.of in of ? doubts.of : first, (to) => edit((all) => ({ ...all, of: to === first ? null : to }), null, `Uncertainty of ${of[to]}`))),
    h("label", {}, h("span", {}, "Interval to cover"), choice("coverage", null, COVERAGES, String(doubts.coverage_probability), (to) => edit((all) => ({ ...all, coverage_probability: Number(to) }), null, `Interval to cover ${to}`))),
    h("p", { class: "fault", id: "doubts-fault", hidden: true }),
  );
}

/** @param {Doubts} doubts @param {number[]} mine */
function correlations(doubts, mine) {
  const names = Object.fromEntries(mine.map((index) => [String(index), nameOf(/** @type {Doubt} */ (doubts.inputs[index]))]));
  const rows = doubts.correlations.map(([i, j, r], place) => {
    if (!mine.includes(i) || !mine.includes(j)) return false;
    const set = (/** @type {0 | 1 | 2} */ at, /** @type {string} */ to, /** @type {string | null} */ open) =>
      edit((all) => ({ ...all, correlations: all.correlations.map((pair, k) => (k === place ? /** @type {[number, number, string]} */ (pair.map((cell, l) => (l === at ? (at === 2 ? to : Number(to)) : cell))) : pair)) }), open, "Correlation");
    return h(
      "div",
      { class: "correlation" },
      choice(`r${place}-0`, "First of two correlated doubts", names, String(i), (to) => set(0, to, null)),
      h("span", {}, "and"),
      choice(`r${place}-1`, "Second of two correlated doubts", names, String(j), (to) => set(1, to, null)),
      h("span", {}, "r ="),
      h("input", { type: "text", inputmode: "decimal", class: "doubt-small", "data-key": `r${place}-2`, "data-correlation": place, "aria-label": "Correlation coefficient", placeholder: "0.5", autocomplete: "off", input: (/** @type {Event} */ event) => set(2, /** @type {HTMLInputElement} */ (event.target).value, `/uncertainty#r${place}`), value: r }),
      h("button", { type: "button", class: "quiet", click: () => edit((all) => ({ ...all, correlations: all.correlations.filter((_, k) => k !== place) }), null, "No correlation") }, "Remove"),
    );
  });
  const add = () => edit((all) => ({ ...all, correlations: [...all.correlations, [/** @type {number} */ (mine[0]), /** @type {number} */ (mine[1]), "0"]] }), null, "Correlation");
  return h(
    "div",
    { class: "correlations" },
    rows,
    mine.length > 1 && h("button", { type: "button", class: "quiet", "data-key": "correlate", click: add }, "Correlate two of them…"),
    h("p", { class: "fault", id: "correlations-fault", hidden: true }),
  );
}

/** Texts into the inputs; one that already says so is left alone, with its own undo. @param {Doubts} doubts */
function fill(doubts) {
  for (const input of /** @type {NodeListOf<HTMLInputElement>} */ (byId("doubts-rows").querySelectorAll("[data-of]"))) {
    const [, , , index, key] = (input.dataset.of ?? "").split("/");
    const text = doubts.inputs[Number(index)]?.[key ?? ""] ?? "";
    if (input.value !== text) input.value = text;
  }
  for (const input of /** @type {NodeListOf<HTMLInputElement>} */ (byId("doubts-rows").querySelectorAll("[data-correlation]"))) {
    const text = String(doubts.correlations[Number(input.dataset.correlation)]?.[2] ?? "");
    if (input.value !== text) input.value = text;
  }
}

/** @param {Fault[]} faults @param {Doubts} doubts */
function showWrong(faults, doubts) {
  const places = /** @type {NodeListOf<HTMLElement>} */ (byId("doubts-rows").querySelectorAll(".fault"));
  for (const place of places) {
    const own = faults.filter(({ pointer }) => placeOf(pointer) === place.id);
    place.hidden = own.length === 0;
    place.classList.toggle("missing", own.length > 0 && own.every(({ code }) => code === "missing"));
    setText(place, own.map(({ sentence }) => sentence).join(" "));
  }
  for (const input of /** @type {NodeListOf<HTMLElement>} */ (byId("doubts-rows").querySelectorAll("[data-of]"))) {
    const pointer = input.dataset.of ?? "";
    const wrong = faults.some((fault) => under(fault.pointer, pointer) && fault.code !== "missing");
    if (wrong) input.setAttribute("aria-invalid", "true");
    else input.removeAttribute("aria-invalid");
  }
  for (const note of /** @type {NodeListOf<HTMLElement>} */ (byId("doubts-rows").querySelectorAll(".doubt-row > .note"))) {
    const index = Number(note.id.split("-")[1]);
    const doubt = doubts.inputs[index];
    const usual = now.usual.find(({ name, pointer }) => name === doubt?.name && pointer === doubt?.pointer);
    const understood = Object.entries(now.understood).find(([pointer]) => pointer === `/uncertainty/inputs/${index}/readings`)?.[1];
    setText(note, [doubt && `Of ${numberLabel(doubt.pointer)}`, understood, usual?.note].filter(Boolean).join(". "));
  }
}

/** The id of the place where a fault of the doubts is told. @param {string} pointer */
export function placeOf(pointer) {
  const [, , list, index] = pointer.split("/");
  const row = list === "inputs" && index ? `doubt-${index}-fault` : list === "correlations" ? "correlations-fault" : "doubts-fault";
  return document.getElementById(row) ? row : "doubts-fault";
}

/** @param {string} key @param {string | null} label @param {Record<string, string>} options @param {string} value @param {(value: string) => void} change */
function choice(key, label, options, value, change) {
  const entries = value in options ? options : { [value]: value, ...options };
  return h(
    "select",
    { "data-key": key, "aria-label": label, change: (/** @type {Event} */ event) => change(/** @type {HTMLSelectElement} */ (event.target).value) },
    Object.entries(entries).map(([name, says]) => h("option", { value: name, selected: name === value }, says)),
  );
}

/** What may be added: the usual ones first, then any number of the question. */
export function showOffers() {
  const select = /** @type {HTMLSelectElement} */ (byId("doubts-add"));
  const there = new Set(now.numbers.map(({ pointer }) => pointer));
  const usual = now.usual.filter(({ question, pointer }) => question === now.question.name && there.has(pointer));
  const key = JSON.stringify([now.question.name, now.numbers]);
  if (select.dataset.drawn === key) return;
  select.dataset.drawn = key;
  const option = (/** @type {string} */ value, /** @type {string} */ says) => h("option", { value }, says);
  select.replaceChildren(
    option("", "Add a doubt…"),
    h("optgroup", { label: "Usual here (common practice)" }, usual.map((one) => option(`usual:${now.usual.indexOf(one)}`, `${one.name}${one.amount ? `, ±${one.amount}` : ""}${one.times ? ` × ${one.times}` : ""}`))),
    h("optgroup", { label: "Any number of this bench" }, now.numbers.map(({ pointer, label }) => option(pointer, label))),
  );
}

/** Adds a doubt of a number, or a usual one, and goes there. @param {string} what a pointer, or `usual:` and a place in the list */
export function addDoubt(what) {
  const usual = what.startsWith("usual:") ? now.usual[Number(what.slice(6))] : undefined;
  /** @type {Doubt} */
  const doubt = usual
    ? /** @type {Doubt} */ ({ pointer: usual.pointer, name: usual.name, [usual.stated]: usual.amount, distribution: usual.distribution, ...(usual.times ? { times: usual.times } : {}) })
    : { pointer: what, name: "", half_width: "", distribution: "rectangular" };
  const index = doubtsOf(now.texts).inputs.length;
  /** @type {HTMLDetailsElement} */ (byId("doubts")).open = true;
  edit((doubts) => ({ ...doubts, inputs: [...doubts.inputs, doubt] }), null, `Doubt of ${nameOf(doubt)}`);
  const input = /** @type {HTMLInputElement | null} */ (document.querySelector(`[data-key="${index}-${amountKey(doubt)}"]`));
  input?.focus();
  input?.select();
}
