/** The bench's controls in the document: which there are, their hints, what was understood, and their faults. */

import { byId, h, setText } from "./dom.js";
import { DETECTOR_TYPE, takesPart } from "./bench.js";

/**
 * @typedef {import("./bench.js").Control} Control
 * @typedef {import("./bench.js").Texts} Texts
 * @typedef {import("./door.js").Fault} Fault
 * @typedef {import("./door.js").Field} Field
 * @typedef {HTMLInputElement | HTMLSelectElement | HTMLTextAreaElement} Input
 */

/** @returns {HTMLFormElement} */
export const form = () => /** @type {HTMLFormElement} */ (byId("bench-form"));

/** @returns {Input[]} every named control of the form, in order */
const inputs = () => /** @type {Input[]} */ ([...form().elements]).filter((element) => element.name);

/** @param {string} name @returns {Input | null} */
export const inputOf = (name) => /** @type {Input | null} */ (form().elements.namedItem(name));

/** What the markup says of each control. @returns {Control[]} */
export function controls() {
  return inputs().map((input) => ({ name: input.name, kind: kindOf(input), ...surroundings(input) }));
}

/** @param {Input} input @returns {Control["kind"]} */
function kindOf(input) {
  if (input instanceof HTMLSelectElement) return "choice";
  if (input instanceof HTMLTextAreaElement) return "table";
  return input.inputMode === "decimal" ? "number" : "text";
}

/** @param {Input} input @returns {Pick<Control, "when" | "groups">} */
function surroundings(input) {
  /** @type {Pick<Control, "when" | "groups">} */
  const found = { when: [], groups: [] };
  for (let at = /** @type {HTMLElement | null} */ (input); at; at = at.parentElement) {
    const { when, group, part } = at.dataset;
    if (when) found.when.push(/** @type {[string, string]} */ (when.split("=")));
    if (group ?? part) found.groups.unshift(/** @type {string} */ (group ?? part));
  }
  return found;
}

/** @returns {Texts} the first option of each list of choices */
export function firstChoices() {
  return Object.fromEntries(
    inputs()
      .filter((input) => input instanceof HTMLSelectElement)
      .map((input) => [input.name, /** @type {HTMLSelectElement} */ (input).options[0]?.value ?? ""]),
  );
}

/** Puts a hint, a line for what was understood, and a place for the fault beneath each control. @param {Field[]} fields */
export function addNotes(fields) {
  for (const input of inputs()) {
    const field = fields.find(({ pointer }) => pointer === input.name);
    const box = input.closest(".field, .table-input");
    if (!box) continue;
    // A placeholder says the unit, as long as nothing is typed.
    if (field && input instanceof HTMLInputElement) input.placeholder = field.unit;
    const hint = h("span", { class: "hint", id: `${input.id}-hint` }, field ? hintOf(field) : "");
    const understood = h("span", { class: "understood", id: `${input.id}-understood` });
    const fault = h("p", { class: "fault", id: `${input.id}-fault`, hidden: true });
    box.append(h("p", { class: "note" }, hint, understood), fault);
    input.setAttribute("aria-describedby", `${hint.id} ${understood.id}`);
  }
  for (const heading of form().querySelectorAll("[data-part] > h3")) {
    heading.after(h("p", { class: "fault", id: `${heading.id}-fault`, hidden: true }));
  }
}

/** @param {Field} field */
function hintOf({ unit, usual }) {
  const named = !unit || usual.includes(unit);
  return [named ? "" : unit, usual].filter(Boolean).join(", ");
}

/** Texts into the controls; a control that already says so is left alone, with its own undo. @param {Texts} texts */
export function fill(texts) {
  for (const input of inputs()) {
    const text = texts[input.name] ?? "";
    if (input.value !== text) input.value = text;
  }
}

/** Shows the chosen alternatives only. @param {Texts} texts */
export function showAlternatives(texts) {
  for (const element of /** @type {NodeListOf<HTMLElement>} */ (form().querySelectorAll("[data-when]"))) {
    const [name, value] = (element.dataset.when ?? "").split("=");
    element.hidden = texts[name ?? ""] !== value;
  }
}

/** Opens the boxes that are there for a question. @param {string} question */
export function openFor(question) {
  for (const box of /** @type {NodeListOf<HTMLDetailsElement>} */ (form().querySelectorAll("details[data-open-for]"))) {
    box.open = box.dataset.openFor === question;
  }
}

/** Marks what the question does not read. @param {string[]} pointers */
export function showUse(pointers) {
  for (const input of inputs()) input.closest(".field, .table-input")?.classList.toggle("idle", !used(input.name, pointers));
  for (const part of /** @type {NodeListOf<HTMLElement>} */ (form().querySelectorAll("[data-part]"))) {
    const idle = !pointers.some((pointer) => under(pointer, part.dataset.part ?? ""));
    part.classList.toggle("idle", idle);
  }
}

/** @param {string} name @param {string[]} pointers */
function used(name, pointers) {
  // What decides whether there is an avalanche is used where any number of one is.
  if (name === DETECTOR_TYPE) return pointers.some((field) => under(field, "/detector/avalanche") || under("/detector/avalanche", field));
  return pointers.some((field) => under(name, field));
}

/** @param {string} pointer */
const parent = (pointer) => pointer.slice(0, pointer.lastIndexOf("/")) || "/none";

/** @param {string} pointer @param {string} ancestor */
export const under = (pointer, ancestor) => pointer === ancestor || pointer.startsWith(`${ancestor}/`);

/** @param {Texts} texts @param {Record<string, string>} understood */
export function showUnderstood(texts, understood) {
  for (const input of inputs()) {
    const line = document.getElementById(`${input.id}-understood`);
    if (line) setText(line, worthSaying(texts[input.name] ?? "", understood[input.name] ?? ""));
  }
}

/** Nothing where it would only repeat what stands in the field. @param {string} text @param {string} understood */
export function worthSaying(text, understood) {
  const bare = (/** @type {string} */ one) => one.replace(/[\s\u2212+-]/g, "").replace(",", ".").toLowerCase();
  const [said, heard] = [bare(text), bare(understood)];
  if (!heard || heard === said) return "";
  const rest = heard.startsWith(said) ? heard.slice(said.length) : null;
  return rest !== null && /^[^\d=.×]*$/.test(rest) ? "" : understood;
}

/**
 * The control or the part that owns a fault: the nearest one up the pointer.
 *
 * @param {string} pointer
 * @param {Control[]} all
 * @param {Texts} texts
 * @returns {{ input: Input | null, place: HTMLElement, name: string } | null}
 */
export function ownerOf(pointer, all, texts) {
  for (let at = pointer; at.length > 1; at = parent(at)) {
    const control =
      all.find(({ name }) => name === at) ??
      all.find(({ name }) => name === `${at}/points` || name === `${at}/kind` || at === `${parent(name)}/table`);
    const input = control && takesPart(control, texts) ? inputOf(control.name) : null;
    const place = input && document.getElementById(`${input.id}-fault`);
    if (input && place) return { input, place, name: labelOf(input.name) };
    const part = document.getElementById(`part-${at.slice(1)}-fault`);
    if (part) return { input: null, place: part, name: labelOf(at) };
    if (at.lastIndexOf("/") === 0) break;
  }
  return null;
}

/** "Source: wavelength", for a sentence. @param {string} name */
export function labelOf(name) {
  const input = inputOf(name);
  const part = document.getElementById(`part-${name.split("/")[1]}`)?.textContent ?? "";
  const label = input?.labels?.[0]?.textContent?.trim() ?? (input ? name : "");
  if (!part) return label || name;
  return label ? `${part}: ${label.charAt(0).toLowerCase()}${label.slice(1)}` : part;
}

/**
 * Puts each fault at its field.
 *
 * @param {Fault[]} faults
 * @param {Control[]} all
 * @param {Texts} texts
 * @returns {Fault[]} those that no field and no part owns
 */
export function showFaults(faults, all, texts) {
  /** @type {Map<HTMLElement, { input: Input | null, faults: Fault[] }>} */
  const places = new Map();
  const homeless = faults.filter((fault) => {
    const owner = ownerOf(fault.pointer, all, texts);
    if (!owner) return true;
    const there = places.get(owner.place) ?? { input: owner.input, faults: [] };
    places.set(owner.place, { ...there, faults: [...there.faults, fault] });
    return false;
  });
  for (const place of /** @type {NodeListOf<HTMLElement>} */ (document.querySelectorAll("#bench .fault, #title-fault"))) {
    const found = places.get(place);
    place.hidden = !found;
    place.classList.toggle("missing", !!found?.faults.every(({ code }) => code === "missing"));
    setText(place, found ? [...new Set(found.faults.map(({ sentence }) => sentence))].join(" ") : "");
  }
  // A fault within a closed box would not be seen.
  for (const place of places.keys()) {
    for (let box = place.closest("details"); box; box = box.parentElement?.closest("details") ?? null) box.open = true;
  }
  const wrong = new Map([...places.values()].map(({ input, faults: own }) => [input, own]));
  for (const input of inputs()) describe(input, wrong.get(input));
  return homeless;
}

/** @param {Input} input @param {Fault[] | undefined} faults */
function describe(input, faults) {
  if (!document.getElementById(`${input.id}-hint`)) return;
  const notes = `${input.id}-hint ${input.id}-understood`;
  if (faults) {
    input.setAttribute("aria-invalid", "true");
    input.setAttribute("aria-describedby", `${notes} ${input.id}-fault`);
  } else {
    input.removeAttribute("aria-invalid");
    input.setAttribute("aria-describedby", notes);
  }
}
